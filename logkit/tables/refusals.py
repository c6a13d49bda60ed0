"""Cells that no reader should get: dates that a spreadsheet made of sizes, and texts too long to be shorthand.

Only what is refused before reading belongs here; what a cell means is read in `rows`.
"""

from __future__ import annotations

from logkit.tables.draft import Draft, Manner
from logkit.tables.sheet import Collector, column_letters

PLACES = frozenset({"thickness", "base", "top", "position", "from", "to"})
"""Columns that say where a row lies."""

MEASURED = PLACES | {
    "grain", "grain_base", "grain_top", "d50", "largest", "set_thickness", "set_count", "ripple_wavelength",
    "ripple_height", "wave_period", "relief", "palaeocurrent", "flow_depth", "slope", "bioturbation",
}  # fmt: skip
"""Columns in which a date can only be a number or a size that the spreadsheet has changed."""

LONGEST_NUMBERS, LONGEST_WORDS = 300, 1000
"""Characters of cells that hold measures, and of cells that hold words; notes may have any length."""

_TEXTS = frozenset({"notes", "confidence", "as_written", "details", "section"})


def refuse_cells(draft: Draft, manner: Manner, found: Collector) -> None:
    """Take out of a draft the cells that cannot be read, with an error for each."""
    for column, text in list(draft.cells.items()):
        if len(text) <= LONGEST_NUMBERS or column in _TEXTS:
            continue
        if len(text) > (LONGEST_NUMBERS if column in MEASURED or column == "bed" else LONGEST_WORDS):
            _refuse(draft, column, found, "cell.too_long",
                    f"the cell has {len(text)} characters, too many to be read as shorthand",
                    "move the text to the notes column", text)  # fmt: skip
    if not manner.dates:
        return
    for column, index in manner.places.items():
        if column in MEASURED and column in draft.cells and (draft.row, index) in manner.dates:
            text = draft.cells[column]
            address = f"{column_letters(index)}{draft.row}" if manner.addressed else ""
            _refuse(draft, column, found, "cell.date",
                    f"cell {address} holds the date {text}; a spreadsheet probably made it from a range",
                    "format the column as text and type the value again",
                    f"{address}: {text}".lstrip(": "))  # fmt: skip


def _refuse(
    draft: Draft, column: str, found: Collector, code: str, message: str, remedy: str, cell: str
) -> None:
    found.add("error", code, message, remedy, row=draft.row, column=column, cell=cell,
              section=draft.section, bed=draft.name)  # fmt: skip
    del draft.cells[column]
    draft.unplaced |= column in PLACES
