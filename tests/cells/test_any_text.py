"""Whatever stands in a cell, a reader gives a value or remarks, and never raises."""

from __future__ import annotations

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from logkit.tables import cells
from logkit.tables.cells import Reading
from logkit.tables.cells.reading import clean

READERS = {
    "length": lambda t: cells.read_length(t, "cm"),
    "length without unit": cells.read_length,
    "span": lambda t: cells.read_span(t, "cm"),
    "grain": cells.read_grain,
    "grain iso": lambda t: cells.read_grain(t, "iso14688"),
    "size": cells.read_size,
    "largest": cells.read_largest,
    "sorting": cells.read_sorting,
    "lithology": cells.read_lithology,
    "gap": cells.read_gap,
    "structures": cells.read_structures,
    "structures of turbidites": lambda t: cells.read_structures(t, "turbidity", "cm"),
    "sets": cells.read_sets,
    "contact": cells.read_contact_cell,
    "currents": cells.read_currents,
    "attitude": cells.read_attitude,
    "bioturbation": cells.read_bioturbation_cell,
    "colour": cells.read_colour,
    "fossils": cells.read_fossils,
    "samples": cells.read_samples,
    "photos": cells.read_photos,
    "marker": cells.read_marker,
    "number": lambda t: cells.read_number(t, 0, 90),
    "interval": lambda t: cells.read_interval(t, "m"),
    "slope": cells.read_interval,
    "pattern": lambda t: cells.read_pattern(t, "cm"),
    "core note": cells.read_core_note,
}
OPTIONAL = {"gap", "core note"}
"""Readers for which a text that is not theirs is no error."""

SHORTHAND = st.lists(
    st.sampled_from(
        [
            "f",
            "m",
            "c",
            "vf",
            "vfL",
            "fU",
            "mU-cL",
            "→",
            ">",
            "-",
            "/",
            "(",
            ")",
            "?",
            "@",
            "0.3",
            "45",
            "1,2",
            "1'6\"",
            "cm",
            "m",
            "mm",
            "phi",
            "22/140",
            "N30E",
            "40SE",
            "St",
            "Sh",
            "Ta-c",
            "sets",
            "n=4",
            "MPS",
            "D50",
            "rip",
            "xl",
            "climb",
            "18°",
            "BI",
            "2-3",
            "Oph.",
            "NE",
            "sst",
            "mdst",
            "sh",
            "lam",
            "6",
            "x",
            "(8",
            "vfs",
            "/",
            "4",
            "mdst)",
            "poss",
            "relief",
            "35",
            "λ",
            "10YR",
            "6/4",
            "N5",
            "ph",
            "231-34",
            "S7",
            "∞",
            "NaN",
            "1e999",
            "-1",
            "0",
            "½",
            "²",
            "<b>",
            "\x00",
            "\u202e",
            "01-May",
        ]
    ),
    max_size=9,
).flatmap(lambda words: st.sampled_from(["", " ", ","]).map(lambda gap: gap.join(words)))


def check(name: str, text: str) -> None:
    """Read a text and look at what comes back."""
    reading = READERS[name](text)
    assert isinstance(reading, Reading)
    for remark in reading.remarks:
        assert remark.message
        assert remark.code
        assert all(c.isprintable() for c in remark.message)
        if remark.level == "error":
            assert remark.remedy
        if remark.level == "question":
            assert len(remark.choices) >= 2
    if reading.value is None and clean(text) and name not in OPTIONAL and any(c.isalnum() for c in text):
        assert any(remark.level == "error" for remark in reading.remarks), reading


@pytest.mark.parametrize("name", READERS)
@given(text=st.one_of(SHORTHAND, st.text(max_size=30)))
@example(text="")
@example(text="   ")
@example(text="9" * 900)
@example(text="f " * 450)
@example(text="1/0")
@example(text="a\x00b\u202e<script>")
@settings(max_examples=60, deadline=None)
def test_any_text_is_read_or_refused(name: str, text: str) -> None:
    """No text raises; a text that gives no value gives an error; every remark is complete and printable."""
    check(name, text)


@pytest.mark.parametrize("name", sorted(set(READERS) - OPTIONAL))
def test_texts_too_long_for_shorthand_are_refused(name: str) -> None:
    """A page of prose in a cell is refused with the advice to move it."""
    reading = READERS[name]("fine sand " * 500)
    assert reading.value is None
    assert [r.code for r in reading.remarks] == ["cell.too_long"]


def test_reading_is_pure() -> None:
    """The same text gives the same reading, from the cache or not."""
    first = cells.read_structures("St sets 8-22 n=4", "fluvial", "cm")
    cells.read_structures.cache_clear()
    assert cells.read_structures("St sets 8-22 n=4", "fluvial", "cm") == first
