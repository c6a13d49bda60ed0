"""The vocabularies: what is in them, how words are compared, and that mistakes in data are named with a line."""

from __future__ import annotations

import pytest

from logkit.errors import DataFileError, UnknownNameError
from logkit.references import all_references
from logkit.vocabulary import (
    VOCABULARIES,
    ambiguities,
    code_table,
    code_tables,
    lexicon,
    normal,
    vocabulary,
)
from logkit.vocabulary.ambiguity import build_ambiguities
from logkit.vocabulary.codes import build_tables
from logkit.vocabulary.loading import parse_toml
from logkit.vocabulary.terms import build_vocabulary

STRUCTURES = {
    "tr x-bed": "trough_cross_bedding", "trough cross-bedded": "trough_cross_bedding", "xb": "cross_bedding",
    "x-bedding": "cross_bedding", "planar x-beds": "planar_cross_bedding", "x-lam": "ripple_cross_lamination",
    "rip xl": "ripple_cross_lamination", "HCS": "hummocky", "scs": "swaley", "p-lam": "plane_lamination",
    "// lam": "plane_lamination", "mass": "massive", "structureless": "massive", "bioturb": "bioturbated",
    "UPB": "upper_plane_lamination", "wave ripples": "wave_ripples", "sym rip": "wave_ripples", "flutes": "flutes",
    "mudcracks": "mud_cracks", "rip-up clasts": "mud_chips", "conv lam": "convolute", "rootlets": "roots",
    "dish & pillar": "dish_structures", "la xb": "low_angle_cross_bedding", "parting lin": "parting_lineation",
}  # fmt: skip
ROCKS = {
    "ss": "sandstone", "sst": "sandstone", "mdst": "mudstone", "slst": "siltstone", "clyst": "claystone",
    "cgl": "conglomerate", "lst": "limestone", "dol": "dolostone", "pbly sst": "pebbly_sandstone",
    "grst": "grainstone", "anhy": "anhydrite", "cht": "chert", "blk sh": "black_shale", "gwke": "greywacke",
}  # fmt: skip


@pytest.mark.parametrize("name", VOCABULARIES)
def test_every_vocabulary_loads_and_finds_its_own_words(name: str) -> None:
    """Label, id and every synonym of a term lead back to that term."""
    terms = vocabulary(name)
    assert len(terms) == len(terms.ids) > 0
    for term in terms.values():
        for words in (term.id, term.label, *term.synonyms):
            if normal(words):
                assert terms.find(words) is term, words


@pytest.mark.parametrize(("written", "id"), STRUCTURES.items())
def test_field_words_for_structures(written: str, id: str) -> None:
    """What geologists type for a structure is found."""
    found = vocabulary("structures").find(written)
    assert found is not None
    assert found.id == id


@pytest.mark.parametrize(("written", "id"), ROCKS.items())
def test_field_words_for_rocks(written: str, id: str) -> None:
    """What geologists type for a rock is found."""
    found = vocabulary("lithologies").find(written)
    assert found is not None
    assert found.id == id


def test_words_are_compared_without_case_hyphens_and_plural() -> None:
    """The many ways of writing the same words come out alike."""
    assert normal("Trough X-Beds") == normal("trgh cross bedded") == "trough cross bedding"
    assert normal("current ripples") == normal("CURR. RIP")


def test_nearest_term_of_a_slip() -> None:
    """A slip of the pen is answered with the nearest label; noise with nothing."""
    assert vocabulary("structures").nearest("troug cros-bedding") == "trough cross-bedding"
    assert vocabulary("lithologies").nearest("sandstome") == "sandstone"
    assert vocabulary("lithologies").nearest("qqqq") is None


def test_unknown_names_list_the_known() -> None:
    """A vocabulary or an id that does not exist is answered with the nearest one."""
    with pytest.raises(UnknownNameError, match="structures"):
        vocabulary("structure")
    with pytest.raises(UnknownNameError) as caught:
        vocabulary("gaps")["no_exposur"]
    assert caught.value.nearest == "no_exposure"


def test_ambiguous_words_offer_their_readings() -> None:
    """`sh`, `lam`, `c` and `m` have at least two readings each; the reader's own vocabulary ranks first."""
    words = ambiguities()
    for written in ("sh", "lam", "c", "m"):
        assert len(words[written].meanings) >= 2
    ranked = words["sh"].ranked(("structures",))
    assert ranked[0].words == "subhorizontal lamination"
    assert words["sh"].ranked(("lithologies",))[0].words == "shale"


def test_scan_takes_the_longest_phrase() -> None:
    """Of overlapping phrases the longest is taken, unknown words stay, fillers are marked."""
    pieces = lexicon("structures").scan("some wave ripples, zzz")
    assert [p.written for p in pieces] == ["some", "wave ripples", "zzz"]
    assert pieces[0].filler
    assert pieces[1].term is not None
    assert pieces[1].term.id == "wave_ripples"
    assert pieces[2].term is None
    assert not pieces[2].filler


def test_structures_of_indicators_exist() -> None:
    """Every structure an indicator is measured on is in the vocabulary, and belongs to one indicator."""
    seen: dict[str, str] = {}
    for term in vocabulary("indicators").values():
        assert term.sense in ("direction", "axis")
        assert term.nature in ("plane", "line")
        for id in term.structures:
            assert id in vocabulary("structures")
            assert seen.setdefault(id, term.id) == term.id


def test_imbrication_points_upstream() -> None:
    """Imbrication is marked as dipping against the flow, cross-bedding is not."""
    assert vocabulary("indicators")["imbrication"].upstream
    assert not vocabulary("indicators")["cross_bedding"].upstream


def test_code_tables_have_sources_and_admitted_sizes() -> None:
    """Each table names a reference; St admits medium sand, not silt; the later table adds codes."""
    for table in code_tables().values():
        assert table.source in all_references()
        assert table.codes
    trough = code_table("fluvial_1978").codes["St"]
    assert trough.admits(0.25, 0.5)
    assert not trough.admits(0.004, 0.0625)
    assert "Sm" not in code_table("fluvial_1978").codes
    assert code_table("fluvial").codes["Sm"].table == "fluvial_later"
    assert code_table("fluvial").nearest("Stt") == "St"


GOOD = '[one]\nlabel = "one"\nsource = "s"\n'


@pytest.mark.parametrize(
    ("text", "line", "what"),
    [
        (GOOD + 'colr = "x"\n', 4, "unknown field 'colr'"),
        ('[one]\nlabel = "one"\n', 1, "source is missing"),
        (GOOD + 'synonyms = "two"\n', 4, "synonyms must be a list of words"),
        (
            GOOD + '[two]\nlabel = "two"\nsource = "s"\nsynonyms = ["ONE"]\n',
            7,
            "stands for 'one' and for 'two'",
        ),
        ("[one\n", 1, "not TOML"),
    ],
)
def test_a_mistake_in_a_vocabulary_is_named_with_its_line(text: str, line: int, what: str) -> None:
    """The error carries file and line and says what is wrong."""
    with pytest.raises(DataFileError, match=what) as caught:
        build_vocabulary("gaps", parse_toml(text, "gaps.toml"))
    assert caught.value.line == line
    assert caught.value.file == "gaps.toml"


@pytest.mark.parametrize(
    ("text", "what"),
    [
        (
            '[t]\ntitle = "t"\nsource = "s"\n[t.codes]\nX = { structures = ["nope"] }\n',
            "there is no term 'nope'",
        ),
        ('[t]\ntitle = "t"\n', "title or source is missing"),
        ('[t]\ntitle = "t"\nsource = "s"\nincludes = ["u"]\n', "includes 'u'"),
    ],
)
def test_a_mistake_in_a_code_table_is_named(text: str, what: str) -> None:
    """Unknown terms, missing fields and missing includes are refused."""
    with pytest.raises(DataFileError, match=what):
        build_tables(parse_toml(text, "codes.toml"))


def test_a_mistake_in_the_ambiguous_words_is_named() -> None:
    """A reading that names a term that does not exist is refused with the nearest one."""
    text = '[x]\nwritten = ["x"]\nreadings = [{ words = "a", terms = ["lithologies:sandston"] }, { words = "b" }]\n'
    with pytest.raises(DataFileError, match="sandston") as caught:
        build_ambiguities(parse_toml(text, "ambiguous.toml"))
    assert "sandstone" in caught.value.remedy
