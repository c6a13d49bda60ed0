"""An empty table to type into: header lines to fill, headings with units, one row to copy."""

from __future__ import annotations

from pathlib import Path

from logkit.tables.write import SIZES_HEADINGS, write_tables

HEADER = (
    ("title", ""), ("section", ""), ("location", ""), ("coordinates", ""), ("coordinate_datum", ""),
    ("logged_by", ""), ("date", ""), ("direction", "up"), ("unit", "cm"), ("setting", "unknown"),
    ("bedding", ""), ("declination", ""), ("size_scale", "wentworth"), ("grain_method", ""),
)  # fmt: skip
"""Header keys and what stands behind them until a person fills them in."""

HEADINGS_AND_EXAMPLE = (
    ("bed", "1"), ("thickness (cm)", "45"), ("lithology", "sandstone"), ("grain", "mU→fL"),
    ("largest (mm)", ""), ("sorting", "well sorted"), ("structures", "trough cross-bedding"),
    ("set_thickness (cm)", "8-22 n=4"), ("contact", "erosive"), ("relief (cm)", "3"), ("palaeocurrent", ""),
    ("bioturbation", "TG 1"), ("colour", "10YR 6/4"), ("fossils", ""), ("samples", "S1"), ("photos", ""),
    ("marker", ""), ("confidence", ""), ("notes", "example row: overwrite it"),
)  # fmt: skip
"""Headings and the example row under them."""


def new_table(path: str | Path) -> Path:
    """Write an empty table with headings, units and one example row, which reads without findings.

    Parameters
    ----------
    path : `.csv`, `.tsv` or `.xlsx`

    Raises
    ------
    LogkitError : the ending is not known or the file cannot be written
    """
    headings = [heading for heading, _ in HEADINGS_AND_EXAMPLE]
    example = [cell for _, cell in HEADINGS_AND_EXAMPLE]
    return write_tables(Path(path), HEADER, [headings, example], [SIZES_HEADINGS])
