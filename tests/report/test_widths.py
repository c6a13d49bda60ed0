"""Widths of table columns on paper."""

import re

from hypothesis import given, settings
from hypothesis import strategies as st

from logkit.drawing.metrics import width_mm
from logkit.report.document import Column, Table
from logkit.report.widths import BREAK, JOINED_DASH, PADDING_MM, breakable, fit

CELLS = st.text(alphabet="abcdefgh -_/().0123456789–", max_size=60)


def table(*rows: tuple[str, ...]) -> Table:
    """A table of these rows."""
    return Table("t", "caption", tuple(Column(f"c{i}") for i in range(len(rows[0]))), rows)


@settings(max_examples=60, deadline=None)
@given(st.integers(1, 12).flatmap(lambda n: st.lists(st.tuples(*[CELLS] * n), min_size=1, max_size=8)))
def test_every_word_fits_its_column(rows: list[tuple[str, ...]]) -> None:
    """No piece that cannot be broken is wider than its column, and the table not wider than the page."""
    how = fit(table(*rows), 174.0, 261.0)
    assert sum(how.widths_mm) <= (261.0 if how.wide else 174.0) + 0.1
    for row in rows:
        for cell, width in zip(row, how.widths_mm, strict=True):
            for piece in re.split(rf"[ {BREAK}]|(?<=[-–])(?!\u2060)", breakable(cell, how.longest)):
                assert width_mm(piece.replace("\u2060", ""), how.size_pt) <= width - PADDING_MM + 0.1


@given(CELLS)
def test_breaking_changes_nothing_that_is_seen(text: str) -> None:
    """Without the invisible signs the text is as it was."""
    assert breakable(text, 6).replace(BREAK, "").replace("\u2060", "") == text


def test_ranges_stay_together() -> None:
    """The dash of a range of numbers is glued to both."""
    assert breakable("0.12–0.35 mm", 24) == f"0.12{JOINED_DASH}0.35 mm"


def test_short_tables_keep_their_size() -> None:
    """A table with room is not stretched to the page and keeps the largest type."""
    how = fit(table(("a", "b"), ("cc", "d")), 174.0, 261.0)
    assert how.size_pt == 6.6
    assert sum(how.widths_mm) < 20


def test_lines_across_do_not_widen_a_column() -> None:
    """A row of one text runs across all columns and has no say in the first one's width."""
    assert (
        fit(Table("t", "", (Column("a"), Column("b")), (("x" * 20,), ("1", "2"))), 174.0, 261.0).widths_mm[0]
        < 12
    )
