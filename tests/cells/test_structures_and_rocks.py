"""Structures, rocks, gaps, contacts, traces and colours."""

from __future__ import annotations

import pytest

from logkit.tables.cells import (
    read_bioturbation_cell,
    read_colour,
    read_contact,
    read_fossils,
    read_gap,
    read_lithology,
    read_marker,
    read_photos,
    read_samples,
    read_structures,
)
from logkit.vocabulary import vocabulary


def terms(text: str, codes: str = "fluvial") -> list[str]:
    """Structure ids of a cell, in order."""
    cell = read_structures(text, codes).value
    return [s.term for s in cell.structures] if cell else []


@pytest.mark.parametrize("id", vocabulary("structures").ids)
def test_labels_and_ids_of_structures_read_back(id: str) -> None:
    """The words logkit writes for a structure read back as that structure alone, sure and without a question."""
    for words in (vocabulary("structures")[id].label, id):
        reading = read_structures(words)
        assert reading.value is not None
        assert [(s.term, s.sure) for s in reading.value.structures] == [(id, True)]
        assert not [r for r in reading.remarks if r.level != "note"]


@pytest.mark.parametrize("id", vocabulary("lithologies").ids)
def test_labels_and_ids_of_rocks_read_back(id: str) -> None:
    """The words logkit writes for a rock read back as that rock without remarks."""
    for words in (vocabulary("lithologies")[id].label, id):
        reading = read_lithology(words)
        assert reading.value is not None
        assert reading.value.lithology == id
        assert reading.remarks == ()


@pytest.mark.parametrize("id", vocabulary("gaps").ids)
def test_labels_and_ids_of_gaps_read_back(id: str) -> None:
    """The words logkit writes for a gap read back as that gap."""
    assert read_gap(vocabulary("gaps")[id].label).value == id
    assert read_gap(id).value == id


@pytest.mark.parametrize("id", vocabulary("contacts").ids)
def test_labels_and_ids_of_contacts_read_back(id: str) -> None:
    """The words logkit writes for a contact read back as that contact."""
    for words in (vocabulary("contacts")[id].label, id):
        contact = read_contact(words).value
        assert contact is not None
        assert contact.kind == id


@pytest.mark.parametrize("id", vocabulary("fossils").ids)
def test_labels_and_ids_of_fossils_read_back(id: str) -> None:
    """The words logkit writes for a fossil read back as that fossil."""
    assert read_fossils(id).value == (id,)


@pytest.mark.parametrize(
    ("text", "letters"),
    [("Ta", "a"), ("Ta-c", "abc"), ("Tbc", "bc"), ("Ta-e", "abcde"), ("Tabcde", "abcde"), ("Tc/e", "ce"),
     ("Tb,d-e", "bde")],
)  # fmt: skip
def test_divisions(text: str, letters: str) -> None:
    """Division letters, ranges and lists, in order upward."""
    cell = read_structures(text).value
    assert cell is not None
    assert [s.code for s in cell.structures] == [f"T{c}" for c in letters]
    assert cell.upward == (len(letters) > 1)


def test_codes_depend_on_the_table() -> None:
    """S1 is unknown to the fluvial table, which says where it is known; it is read with its own table."""
    refused = read_structures("S1")
    assert refused.value is None
    assert "lowe_1982" in refused.remarks[-1].remedy
    assert terms("S1", "turbidity") == ["plane_lamination"]
    assert read_structures("Sm", "fluvial_1978").value is None
    assert terms("Sm", "fluvial_later") == ["massive"]


def test_an_unknown_table_of_codes_is_an_error_remark() -> None:
    """Cells never raise: a table that does not exist is said with the nearest."""
    reading = read_structures("St", "fluvia")
    assert reading.value is None
    assert reading.remarks[0].nearest == "fluvial"


def test_case_parts_codes_from_words() -> None:
    """`Sh` is a code; `sh` may be shale or subhorizontal and is asked."""
    assert not [r for r in read_structures("Sh").remarks if r.level == "question"]
    asked = [r for r in read_structures("sh").remarks if r.level == "question"]
    assert asked[0].choices == ("subhorizontal lamination", "shale")


@pytest.mark.parametrize("text", ["lam", "c", "m", "pl", "gr"])
def test_ambiguous_words_ask_and_stay_unsure(text: str) -> None:
    """An ambiguous word gives its first reading as unsure and asks."""
    reading = read_structures(text)
    assert reading.value is not None
    assert not reading.value.structures[0].sure
    assert [r.code for r in reading.remarks] == ["word.ambiguous"]


@pytest.mark.parametrize(
    ("text", "upward"),
    [("p-lam → rip", True), ("plane beds passing up into ripples", True), ("Sr > Sh", True), ("p-lam, rip", False),
     ("p-lam at base, rip at top", True), ("rip at top, p-lam at base", True), ("p-lam then rip", True)],
)  # fmt: skip
def test_order_is_upward_only_when_written(text: str, upward: bool) -> None:
    """Arrows and words of sequence give an order; a comma does not."""
    cell = read_structures(text).value
    assert cell is not None
    assert cell.upward == upward
    if "at top" in text:
        assert [s.term for s in cell.structures] == ["plane_lamination", "current_ripples"]


def test_places_of_structures() -> None:
    """Parts of the bed behind @ or in brackets; parts that are none are refused."""
    cell = read_structures("trough x-bed @0-0.4, ripples [40-100%]").value
    assert cell is not None
    assert [(s.base_fraction, s.top_fraction) for s in cell.structures] == [(0, 0.4), (0.4, 1)]
    assert any(r.code == "structures.extent" for r in read_structures("ripples @0.6-0.2").remarks)


def test_a_slip_beside_a_known_word_is_asked() -> None:
    """`trouh x-bed` is cross-bedding, and asks for trough cross-bedding."""
    reading = read_structures("trouh x-bed")
    assert [r.choices for r in reading.remarks] == [("cross-bedding", "trough cross-bedding")]


def test_unknown_words_alone_are_refused() -> None:
    """A cell without any known word is an error with the nearest term and the allowed ones."""
    reading = read_structures("riples")
    assert reading.value is None
    assert reading.remarks[-1].nearest
    assert "trough cross-bedding" in reading.remarks[-1].allowed


def test_other_words_in_a_structures_cell() -> None:
    """Traces, grades, rocks and qualifiers beside structures are kept, nothing is dropped silently."""
    cell = read_structures("HCS λ1.1m BI 2-3 Oph.").value
    assert cell is not None
    assert cell.bioturbation is not None
    assert cell.fossils == ("ophiomorpha",)
    notes = read_structures("large ripples, zzzqy").remarks
    assert any("zzzqy" in r.message for r in notes)


def test_rocks_with_sizes_and_qualifiers() -> None:
    """`calc f sst` is sandstone, calcareous, fine; a class that is the rock is not a size beside it."""
    cell = read_lithology("calc f sst").value
    assert cell is not None
    assert (cell.lithology, cell.qualifiers, cell.grain[0].size.label) == ("sandstone", ("calcareous",), "f")
    silt = read_lithology("sandy silt").value
    assert silt is not None
    assert (silt.lithology, silt.qualifiers) == ("silt", ("sandy",))


def test_two_rocks_are_asked_unless_interbedded() -> None:
    """A list of rocks asks for the main one; interbedded rocks are heterolithic."""
    assert read_lithology("sst, mdst").remarks[0].choices[0] == "sandstone"
    cell = read_lithology("interbedded slst/mdst").value
    assert cell is not None
    assert cell.lithology == "heterolithic"


def test_unknown_rocks_name_the_nearest() -> None:
    """`sandstome` is refused with sandstone as nearest; `sh` in this column is shale."""
    assert read_lithology("sandstome").remarks[0].nearest == "sandstone"
    shale = read_lithology("sh").value
    assert shale is not None
    assert shale.lithology == "shale"


@pytest.mark.parametrize(
    ("text", "id"),
    [("NE", "no_exposure"), ("no exposure", "no_exposure"), ("NR", "lost_core"), ("lost core 2.6 ft", "lost_core"),
     ("covered", "covered"), ("fault", "fault"), ("faulted sst", None), ("sst", None), ("", None)],
)  # fmt: skip
def test_gaps(text: str, id: str | None) -> None:
    """Words for no data are gaps, rocks are not, and neither is an error here."""
    assert read_gap(text).value == id
    assert read_gap(text).remarks == ()


@pytest.mark.parametrize(
    ("text", "kind", "relief", "zone"),
    [("sharp", "sharp", None, None), ("scoured 20cm", "erosive", 0.2, None), ("ero, relief 35", "erosive", 0.35, None),
     ("gradational over 10 cm", "gradational", None, 0.1), ("grad", "gradational", None, None),
     ("sharp erosive", "erosive", None, None), ("loaded", "loaded", None, None), ("NE", "not_seen", None, None)],
)  # fmt: skip
def test_contacts(text: str, kind: str, relief: float | None, zone: float | None) -> None:
    """Kind, relief of an erosive base, distance of a gradational one."""
    contact = read_contact(text, "cm").value
    assert contact is not None
    assert contact.kind == kind
    assert contact.relief_m == (None if relief is None else pytest.approx(relief))
    assert contact.zone_m == (None if zone is None else pytest.approx(zone))


def test_an_unknown_contact_names_the_nearest() -> None:
    """`shrap` is refused with sharp as nearest."""
    assert read_contact("shrap").remarks[-1].nearest == "sharp"


@pytest.mark.parametrize(
    ("text", "low", "high", "scheme"),
    [("BI 2-3", 2, 3, "taylor_goldring"), ("3", 3, 3, "taylor_goldring"), ("ii3", 3, 3, "ichnofabric"),
     ("30%", 30, 30, "percent"), ("none", 0, 0, "taylor_goldring"), ("TG 6", 6, 6, "taylor_goldring")],
)  # fmt: skip
def test_bioturbation(text: str, low: float, high: float, scheme: str) -> None:
    """Grades on named schemes, never mixed."""
    cell = read_bioturbation_cell(text).value
    assert cell is not None
    assert cell.bioturbation is not None
    assert (cell.bioturbation.low, cell.bioturbation.high, cell.bioturbation.scheme) == (low, high, scheme)


@pytest.mark.parametrize("text", ["BI 7", "ii0", "120%", "zzz"])
def test_grades_outside_their_scheme_are_refused(text: str) -> None:
    """A grade its scheme does not have is an error."""
    assert any(r.level == "error" for r in read_bioturbation_cell(text).remarks) or text == "zzz"
    assert read_bioturbation_cell("ii0").value is None


@pytest.mark.parametrize(
    ("text", "names"),
    [
        ("S7-S9, KG-12", ("S7", "S8", "S9", "KG-12")),
        ("101-103", ("101", "102", "103")),
        ("K1-112", ("K1-112",)),
        ("S7-9", ("S7-9",)),
        ("AB-12-AB-14", ("AB-12", "AB-13", "AB-14")),
        ("S9-S7", ("S9-S7",)),
        ("1-2000", ("1-2000",)),
    ],
)
def test_a_range_of_samples_has_the_same_letters_on_both_sides(text: str, names: tuple[str, ...]) -> None:
    """A site with a number behind it is the name of one sample."""
    assert read_samples(text).value == names


@pytest.mark.parametrize(
    ("text", "names"),
    [
        ("231-34", ("231", "232", "233", "234")),
        ("IMG_0231-33", ("IMG_0231", "IMG_0232", "IMG_0233")),
        ("IMG_1-IMG_2", ("IMG_1", "IMG_2")),
        ("P1-112", ("P1-112",)),
        ("K1-112", ("K1-112",)),
    ],
)
def test_a_range_of_photos_is_of_plain_numbers_or_of_one_camera(text: str, names: tuple[str, ...]) -> None:
    """A name with a short number and a hyphen is one photo."""
    assert read_photos(text).value == names


def test_small_cells() -> None:
    """Samples, photos, markers and colours as people write them."""
    assert read_photos("IMG_2031, 2033").value == ("IMG_2031", "2033")
    assert read_marker("Bentonite A?").value == ("Bentonite A", False)
    assert read_marker("Coal 1").value == ("Coal 1", True)
    colour = read_colour("5yr4/4 moist").value
    assert colour is not None
    assert (colour.text, colour.munsell) == ("5yr4/4 moist", "5YR 4/4")
    assert read_colour("N5 medium grey").remarks == ()


def test_trends_and_contacts_in_a_structures_cell_are_said() -> None:
    """What belongs into another column is named with that column, and is no structure."""
    reading = read_structures("ripples, fining up, sharp base")
    assert reading.value is not None
    assert [s.term for s in reading.value.structures] == ["current_ripples"]
    assert [r.code for r in reading.remarks] == ["structures.trend", "structures.contact"]
    assert not [r for r in read_structures("coarsening up").remarks if r.level == "error"]


def test_doubted_divisions_are_unsure() -> None:
    """A division in brackets makes the sequence unsure."""
    cell = read_structures("Ta(b)c").value
    assert cell is not None
    assert [(s.code, s.sure) for s in cell.structures] == [("Ta", False), ("Tb", False), ("Tc", False)]


def test_cross_bedding_named_twice_is_one_structure() -> None:
    """`cross-bedded (trough)` is trough cross-bedding, not both."""
    assert terms("cross-bedded (trough)") == ["trough_cross_bedding"]


def test_a_range_of_wavelengths_gives_its_middle_with_a_note() -> None:
    """The geometric middle is taken and said."""
    reading = read_structures("HCS λ 0.8-1.2 m")
    assert reading.value is not None
    assert reading.value.ripple_wavelength_m == pytest.approx(0.98, abs=0.001)
    assert [r.code for r in reading.remarks] == ["ripples.range"]


def test_range_words_beside_a_rock() -> None:
    """`fine to medium sst` is a range and asks; `lst (packstone)` is one rock; a lone size is a size."""
    reading = read_lithology("fine to medium sst")
    assert reading.value is not None
    assert [s.size.label for s in reading.value.grain] == ["f-m"]
    assert reading.remarks[0].choices == ("range f-m", "f → m graded upward")
    packstone = read_lithology("lst (packstone)")
    assert packstone.value is not None
    assert packstone.value.lithology == "packstone"
    assert packstone.remarks == ()
    size = read_lithology("vfs").value
    assert size is not None
    assert size.grain[0].size.label == "vf"


@pytest.mark.parametrize("text", ["-", "–", "?", "n/a", " -- "])
def test_marks_for_nothing_are_empty_cells(text: str) -> None:
    """A dash or `n/a` says nothing, so there is neither value nor remark."""
    for reader in (read_structures, read_lithology, read_contact, read_colour):
        reading = reader(text)
        assert reading.value is None
        assert reading.remarks == ()
