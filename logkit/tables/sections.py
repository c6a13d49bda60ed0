"""Rows of a sheet into drafts, and drafts into sections. What the cells mean is read in `rows`."""

from __future__ import annotations

import json
from itertools import groupby

from logkit.tables.draft import Draft
from logkit.tables.headings import Headings
from logkit.tables.sheet import Collector, Row, Sheet
from logkit.tables.text import plain_cell
from logkit.tables.totals import is_end_row


def rows_to_drafts(sheet: Sheet, headings: Headings, found: Collector) -> list[Draft]:
    """A draft for each row that holds anything; rows too long for the headings are refused."""
    drafts: list[Draft] = []
    width = len(headings.row.cells)
    words = frozenset(cell.casefold() for cell in headings.row.cells if cell)
    known = [(c.index, c.name) for c in headings.columns if c.name]
    named = [(c.index, c.name or c.heading or f"column {c.index + 1}") for c in headings.columns]
    for row in sheet.rows:
        if row.is_blank:
            continue
        cells = row.cells
        if any(cells[width:]) and headings.columns[-1].name == "notes" and sheet.separator:
            found.add("note", "row.notes_joined", "the notes hold the separator of the table; its parts are joined",
                      "put the notes into quotation marks", row=row.number, column="notes")  # fmt: skip
            mark = sheet.separator.strip() or " "
            cells = (*cells[: width - 1], f"{mark} ".join(cell for cell in cells[width - 1 :] if cell))
        if any(cells[width:]):
            extra = " | ".join(cell for cell in cells[width:] if cell)
            found.add("error", "row.too_long",
                      f"the row has {len(cells)} cells under {width} headings",
                      "put cells that hold the separator (a decimal comma?) into quotation marks",
                      row=row.number, cell=extra)  # fmt: skip
        elif _is_repeated_heading(row, words):
            found.add("note", "row.heading_again", "the headings stand here again; the row is left out", "",
                      row=row.number, cell=" | ".join(c for c in cells if c))  # fmt: skip
            continue
        texts = {name: cells[i] for i, name in known if i < len(cells) and cells[i]}
        if is_end_row(texts, cells):
            found.add("note", "row.total", "a row of totals or an end mark is not a bed; it is left out", "",
                      row=row.number, cell=" | ".join(c for c in cells if c))  # fmt: skip
            continue
        written = tuple([(name, cells[i]) for i, name in named if i < len(cells) and cells[i]])
        draft = Draft(row.number, texts.get("bed", ""), texts.get("section", ""), texts, written)
        if "as_written" in texts:
            draft.written = _original(draft, found)
        draft.unplaced = bool(any(cells[width:]))
        drafts.append(draft)
    return drafts


def _is_repeated_heading(row: Row, headings: frozenset[str]) -> bool:
    cells = [cell for cell in row.cells if cell]
    return len(cells) > 2 and all(cell.casefold() in headings for cell in cells)


def _original(draft: Draft, found: Collector) -> tuple[tuple[str, str], ...]:
    """What the person wrote, from the column that logkit keeps it in."""
    try:
        pairs = json.loads(draft.cells["as_written"])
        if isinstance(pairs, dict) and all(isinstance(v, str) for v in pairs.values()):
            return tuple(pairs.items())
    except (ValueError, RecursionError):
        pass
    found.add("note", "details.unreadable", "the original wording cannot be read back; the cells stand for it", "",
              row=draft.row, column="as_written", cell=draft.cells["as_written"], section=draft.section)  # fmt: skip
    return draft.written


def split_sections(
    drafts: list[Draft], header_section: str, found: Collector
) -> list[tuple[str, list[Draft]]]:
    """Drafts by section in the order they come; an empty cell belongs to the section above.

    A section that comes again after another one is asked about; its rows are read together.
    """
    if not any(d.section for d in drafts):
        for d in drafts:
            d.section = header_section
        return [(header_section, drafts)]
    before, carried = header_section, 0
    for d in drafts:
        if d.section == plain_cell(header_section):
            d.section = header_section
        if not d.section:
            carried += 1
            d.section = before
        before = d.section
    if carried:
        rows = "row has no section and belongs" if carried == 1 else "rows have no section and belong"
        found.add("note", "section.carried", f"{carried} {rows} to the one above", "",
                  column="section")  # fmt: skip
    groups: dict[str, list[Draft]] = {}
    for name, rows_of in groupby(drafts, key=lambda d: d.section):
        block = list(rows_of)
        if name in groups:
            found.add("question", "section.mixed", f"rows of section {name!r} come again after another section",
                      "keep the rows of a section together", row=block[0].row, column="section", cell=name,
                      choices=("one section, rows joined", "a slip in the section cell"), section=name)  # fmt: skip
        groups.setdefault(name, []).extend(block)
    return list(groups.items())
