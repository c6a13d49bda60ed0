"""Which rows are gaps: words for no exposure, lost core and the like, in whichever cell people put them.

Only the recognising belongs here; a gap that fills a hole between positions comes from `positions`.
"""

from __future__ import annotations

import re

from logkit.tables.cells.rock import read_gap
from logkit.tables.draft import Draft

_TRAILING_LENGTH = re.compile(
    r"^(?P<word>[^\d~]*[^\d\s~.,;:=(-])\s*[,;:=(-]*\s*(?P<length>[~<>]?\s*\d.*?)\)?$", re.S
)
_LEADING_LENGTH = re.compile(
    r"^(?P<length>[~<>]?\d[\d.,]*\s*(?:mm|cm|m|ft|in|'|\")?)\s*(?:of\s+)?(?P<word>[^\d].*)$", re.I | re.S
)


def gap_reason(text: str) -> str | None:
    """Vocabulary id of the reason for a gap, None when the text is not about one."""
    reason: str | None = read_gap(text).value
    return reason


def gap_with_length(text: str) -> tuple[str, str]:
    """Reason and length of a thickness cell such as `NE 0,6m` or `0.6 m covered`; ("", text) when it is no gap."""
    if text[0].isdigit():
        match = _LEADING_LENGTH.match(text)
        reason = gap_reason(match["word"]) if match else None
        return (reason, match["length"].strip()) if match and reason else ("", text)
    match = _TRAILING_LENGTH.match(text)
    reason = gap_reason(text) or (gap_reason(match["word"].strip(" ,;:-")) if match else None)
    if reason:
        return reason, match["length"] if match else ""
    return "", text


def find_gap(draft: Draft) -> None:
    """Mark a row as a gap when a cell that should describe a bed says so; that cell is then not read further.

    The bed and notes cells count only where nothing else describes the row.
    """
    columns = ["lithology", "grain", "structures"]
    if not any(draft.cells.get(column) for column in columns):
        columns = ["bed", "notes"]
    for column in columns:
        text = draft.cells.get(column)
        if not text or (column == "notes" and draft.pattern is not None):
            continue
        reason = gap_reason(text)
        if reason is None:
            continue
        draft.gap = reason
        if column != "notes":
            del draft.cells[column]
        if column == "bed":
            draft.name = ""
        return
