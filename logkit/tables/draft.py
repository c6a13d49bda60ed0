"""A bed between file and log: its cells, what they mean, and a position that is not settled yet.

Only the records that pass between the steps of reading belong here.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from logkit.tables.cells.core import CoreNote
from logkit.tables.cells.lengths import Length
from logkit.tables.cells.pattern import Pattern


@dataclass(frozen=True, slots=True)
class Manner:
    """How the cells of a sheet are to be read.

    Attributes
    ----------
    unit : length unit of the sheet for cells that name none, None unknown
    units : canonical column -> unit of its heading, or the unit assumed for it
    scale : grain-size scale
    codes : table of facies codes
    dates : (row, column index) of cells held as dates; places : canonical column -> column index
    """

    unit: str | None = None
    units: Mapping[str, str | None] = field(default_factory=dict)
    scale: str = "wentworth"
    codes: str = "fluvial"
    dates: frozenset[tuple[int, int]] = frozenset()
    places: Mapping[str, int] = field(default_factory=dict)
    addressed: bool = False

    def unit_of(self, column: str) -> str | None:
        """Unit for numbers without one in a column."""
        return self.units.get(column) or self.unit


@dataclass(slots=True)
class Draft:
    """One row on its way to a bed.

    Attributes
    ----------
    row : row in the file; name, section : as written
    cells : canonical column -> text; written : all cells, also those of unknown columns
    fields : fields of `Bed` that the cells give
    gap : reason of a gap, "" for a bed
    thickness, base, top : as written; first, last : heights or depths in the order of the rows
    height : a running height or depth alone
    low, high : the two numbers of a span
    pattern : a counted pattern in place of a thickness
    core : what was cut and recovered
    unplaced : True when a position was written that cannot be read
    """

    row: int | None
    name: str = ""
    section: str = ""
    cells: dict[str, str] = field(default_factory=dict)
    written: tuple[tuple[str, str], ...] = ()
    fields: dict[str, Any] = field(default_factory=dict)
    gap: str = ""
    thickness: Length | None = None
    base: Length | None = None
    top: Length | None = None
    first: Length | None = None
    last: Length | None = None
    height: Length | None = None
    low: Length | None = None
    high: Length | None = None
    pattern: Pattern | None = None
    core: CoreNote | None = None
    unplaced: bool = False
    asked_unit: bool = False
    start_m: float = float("nan")
    end_m: float = float("nan")

    @property
    def placed(self) -> bool:
        """True once start and end are settled."""
        return self.start_m == self.start_m and self.end_m == self.end_m

    @property
    def label(self) -> str:
        """How the row is called in a message."""
        if self.name:
            return (
                f"gap {self.name}"
                if self.gap and not self.name.startswith("gap")
                else (self.name if self.gap else f"bed {self.name}")
            )
        return "the gap" if self.gap else "the bed"
