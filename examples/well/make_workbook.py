"""Writes kestrel_1.xlsx from kestrel_1_rows.tsv: header sheet, merged cells, a sheet of in-bed sizes.

The rows are the source to edit; the workbook is what a core describer would hand over. Run it again after
a change: the same rows give the same cells.
"""

from __future__ import annotations

import csv
from datetime import datetime
from pathlib import Path

from openpyxl import Workbook
from openpyxl.styles import Alignment, Font

HERE = Path(__file__).parent
SECTION = "Kestrel-1"

HEADER = (
    ("title", "Kestrel-1, cores 1 to 6"),
    ("note", "invented well: the place, the core and every reading are made up to show what logkit does"),
    ("section", SECTION),
    ("location", "Ferrow Sound, block 7 (invented)"),
    ("coordinates", "E 512300 N 84210 (local grid, invented)"),
    ("logged_by", "M. Aldous"),
    ("date", "2022-11-21"),
    ("direction", "down"),
    ("unit", "ft"),
    ("setting", "tidal"),
    ("water_temperature_c", 12),
    ("salinity", 25),
    ("kb_elevation", "82 ft"),
    ("depth_reference", "driller's depth below kelly bushing"),
    ("thickness_type", "measured"),
    ("bedding", "095/3"),
    ("grain_method", "binocular microscope and comparison card"),
)

HEADINGS = {
    "bed": "Bed",
    "top": "Top (ft)",
    "base": "Base (ft)",
    "lithology": "Lithology",
    "grain": "Grain size",
    "structures": "Structures",
    "set_thickness": "Set thickness (ft)",
    "contact": "Base contact",
    "palaeocurrent": "Palaeocurrent",
    "bioturbation": "Bioturbation",
    "colour": "Colour",
    "samples": "Samples",
    "marker": "Marker",
    "notes": "Notes",
}

SIZES = (
    # bed, height in bed (ft), d50, d10, d90 (mm), grains counted
    ("61", 0.3, 0.78, 0.50, 1.20, 100),
    ("61", 0.8, 0.62, 0.41, 0.92, 100),
    ("61", 1.4, 0.45, 0.30, 0.66, 100),
    ("26", 0.2, 0.35, 0.23, 0.55, 100),
    ("26", 0.5, 0.33, 0.22, 0.50, 100),
    ("26", 0.8, 0.34, 0.22, 0.52, 100),
)


def rows() -> list[dict[str, str]]:
    """The beds as typed, top down."""
    with (HERE / "kestrel_1_rows.tsv").open(encoding="utf-8") as file:
        return list(csv.DictReader((line for line in file if not line.startswith("#")), delimiter="\t"))


def number(text: str) -> float | str:
    """A number where the cell holds one, so that the sheet has real numbers in it."""
    try:
        return float(text)
    except ValueError:
        return text


def write(path: Path) -> Path:
    """Write the workbook."""
    book = Workbook()
    book.properties.created = book.properties.modified = datetime(2022, 11, 21)
    sheet = book.active
    sheet.title = "header"
    for key_and_value in HEADER:
        sheet.append(key_and_value)
    beds = book.create_sheet("beds")
    table = rows()
    beds.append(["Section", *HEADINGS.values()])
    for row in table:
        cells = [number(row[name]) if name in ("top", "base") else row[name] or None for name in HEADINGS]
        beds.append([SECTION, *cells])
    for cell in beds[1]:
        cell.font = Font(bold=True)
    merge_runs(beds, 1, [SECTION] * len(table))
    merge_runs(beds, 2 + list(HEADINGS).index("colour"), [row["colour"] for row in table])
    sizes = book.create_sheet("sizes")
    sizes.append(
        ["section", "bed", "height_in_bed (ft)", "d50 (mm)", "d10 (mm)", "d90 (mm)", "count", "method"]
    )
    for reading in SIZES:
        sizes.append([SECTION, *reading, "microscope"])
    book.save(path)
    return path


def merge_runs(sheet, column: int, values: list[str]) -> None:  # type: ignore[no-untyped-def]
    """Merge equal neighbours of a column, as a person does who dislikes repeating a word."""
    start = 0
    for i in range(1, len(values) + 1):
        if i < len(values) and values[i] == values[start]:
            continue
        if i - start > 1 and values[start]:
            sheet.merge_cells(start_row=start + 2, end_row=i + 1, start_column=column, end_column=column)
            sheet.cell(start + 2, column).alignment = Alignment(vertical="top")
        start = i


if __name__ == "__main__":
    print(write(HERE / "kestrel_1.xlsx"))
