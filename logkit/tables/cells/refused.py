"""What no reader reads: dates, which spreadsheets make of `1-2` or `5/6`, and texts too long to be shorthand."""

from __future__ import annotations

import re

from logkit.tables.cells.reading import Remark, error, quoted

LONGEST_CELL = 1000
"""Characters of a cell that are read as shorthand."""

_MONTH = r"(?:jan|feb|mar|apr|may|jun|jul|aug|sep|sept|oct|nov|dec)[a-z]*"
_DATE = re.compile(
    rf"""^(?:\d{{4}}-\d{{1,2}}-\d{{1,2}}(?:[T ]\d{{1,2}}:\d{{2}}(?::\d{{2}}(?:\.\d+)?)?)?
        |\d{{1,2}}[/.]\d{{1,2}}[/.]\d{{4}}
        |\d{{1,2}}[- ]{_MONTH}(?:[- ]\d{{2,4}})?
        |{_MONTH}[- ]\d{{1,4}}(?:[-, ]+\d{{2,4}})?)$""",
    re.X | re.I,
)


def is_date(text: str) -> bool:
    """True for text that a spreadsheet writes for a date."""
    return _DATE.match(text.strip()[:40]) is not None


def refusal(text: str) -> Remark | None:
    """The error on a cell that is a date or too long to be shorthand, None when it may be read."""
    if len(text) > LONGEST_CELL:
        return error(
            "cell.too_long",
            f"the cell has {len(text)} characters, more than the {LONGEST_CELL} that are read as shorthand",
            "move the text to the notes column",
        )
    if not is_date(text):
        return None
    return error(
        "cell.date",
        f"{quoted(text)} is a date; a spreadsheet probably turned a range into it",
        "format the column as text and type the value again",
    )
