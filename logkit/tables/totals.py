"""Rows that are no beds but end a table: totals, sums and end marks. Each is left out and said.

Only the telling of such rows belongs here, by their words or by their number; beds are made elsewhere.
"""

from __future__ import annotations

import math
import re
from collections.abc import Mapping, Sequence

from logkit.tables.draft import Draft
from logkit.tables.sheet import Collector

_WORDS = re.compile(
    r"(?:grand\s+|sub-?)?totals?(?:\s+(?:thickness|height|depth|m|cm|ft))?|sums?|Σ|t\.?d\.?"
    r"|end\s+of\s+(?:log|section|core|hole)|top\s+of\s+section|base\s+of\s+hole",
    re.I,
)
_DESCRIBES = frozenset(
    {"lithology", "grain", "grain_base", "grain_top", "d50", "structures", "largest", "gap"}
)


def is_end_row(cells: Mapping[str, str], every: Sequence[str]) -> bool:
    """True when some cell of a row says that it is a total or an end mark, and nothing describes a bed.

    Parameters
    ----------
    cells : canonical column -> text; every : all cells of the row, also those of unknown columns
    """
    if any(not _is_word(cells[name]) for name in cells.keys() & _DESCRIBES):
        return False
    return any(_is_word(text) for text in every if text)


def _is_word(text: str) -> bool:
    return _WORDS.fullmatch(text.strip(" :.=")) is not None


def leave_out_sum(drafts: list[Draft], found: Collector) -> None:
    """Take out a last row that holds nothing but the sum of the thicknesses above it; it is asked about."""
    if len(drafts) < 3:
        return
    last, above = drafts[-1], drafts[:-1]
    if (
        last.thickness is None
        or last.name
        or last.gap
        or last.cells.keys() - {"thickness", "section", "notes"}
    ):
        return
    total = sum(d.thickness.metres for d in above if d.thickness is not None)
    if any(d.name for d in above) and math.isclose(last.thickness.metres, total, rel_tol=0.01):
        found.add("question", "row.sum", "the row holds nothing but the sum of the thicknesses above; it is left out",
                  "delete the row, or name the bed", row=last.row, column="thickness",
                  cell=last.cells.get("thickness", ""), section=last.section,
                  choices=("a total, left out", "a bed"))  # fmt: skip
        drafts.pop()
