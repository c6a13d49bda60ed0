"""A finding: something the reader or a check has to say about a log, tied to row, column and cell."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Level = Literal["error", "question", "note"]
LEVELS: tuple[Level, ...] = ("error", "question", "note")


@dataclass(frozen=True, slots=True)
class Finding:
    """One thing to say about a log.

    Attributes
    ----------
    level : "error" (cannot be used), "question" (read one way, could be another), "note" (normalised)
    message : what was found, one sentence without a full stop
    remedy : what the person can do, one sentence without a full stop
    code : stable short id of the kind of finding, `thickness.unit_slip`
    file, sheet : where; empty when the log came from memory
    row : row number as the person sees it in the file (1 is the first line), None for the whole file
    column : canonical column name, "" for the whole row
    cell : text of the cell as written
    allowed : what may stand there, for vocabularies and short lists
    nearest : the known term most like the one written
    choices : the readings a question chooses between, the one taken first
    section, bed : section and bed it belongs to, "" when none
    """

    level: Level
    message: str
    remedy: str = ""
    code: str = ""
    file: str = ""
    sheet: str = ""
    row: int | None = None
    column: str = ""
    cell: str = ""
    allowed: tuple[str, ...] = ()
    nearest: str = ""
    choices: tuple[str, ...] = ()
    section: str = ""
    bed: str = ""

    def __str__(self) -> str:
        place = ", ".join(
            part
            for part in (
                self.file + (f" [{self.sheet}]" if self.sheet else ""),
                f"row {self.row}" if self.row is not None else "",
                self.column,
            )
            if part
        )
        cell = f" {self.cell!r}:" if self.cell else ""
        hint = f" Nearest known: {self.nearest}." if self.nearest else ""
        remedy = f" {self.remedy}." if self.remedy else ""
        return f"{place}:{cell} {self.message}.{hint}{remedy}".lstrip(": ")
