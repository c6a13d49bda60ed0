"""Dates where a size or a length stood: spreadsheets turn `1-2` or `5/6` into one. Never read, always refused."""

from __future__ import annotations

import re

from logkit.tables.cells.reading import Remark, error, quoted

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
    return _DATE.match(text.strip()) is not None


def date_remark(text: str) -> Remark | None:
    """The refusal of a date, or None when the text is not one."""
    if not is_date(text):
        return None
    return error(
        "cell.date",
        f"{quoted(text)} is a date; a spreadsheet probably turned a range into it",
        "format the column as text and type the value again",
    )
