"""A report before it has a form: sections of paragraphs, tables and figures, the same for pdf, html and docx.

Nothing here knows how a log is read or how a page is set.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Any, Literal


@dataclass(frozen=True, slots=True)
class Paragraph:
    """One paragraph of plain text; `kind` decides how it is set."""

    text: str
    kind: Literal["body", "lead", "caution", "small"] = "body"


@dataclass(frozen=True, slots=True)
class Heading:
    """A heading inside a section."""

    text: str


@dataclass(frozen=True, slots=True)
class Column:
    """A table column: heading, unit ("" for none) and alignment."""

    name: str
    unit: str = ""
    align: Literal["left", "right"] = "left"

    @property
    def label(self) -> str:
        """Heading with its unit."""
        return f"{self.name} ({self.unit})" if self.unit else self.name


@dataclass(frozen=True, slots=True)
class Table:
    """A table of text cells, with the caption that says what is shown, how and from where.

    rows : texts of the cells; a row of a single text runs across the table and names the rows under it
    keys : for each row the id of what it is about (a bed's key), "" for none; links table and column
    """

    id: str
    caption: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[str, ...], ...]
    keys: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Figure:
    """A picture as SVG text, one a sheet.

    kind : "column" (fills a page), "panel" (wide) or "chart"
    alt : description for those who cannot see it
    """

    id: str
    caption: str
    alt: str
    svg: str
    width_mm: float
    height_mm: float
    kind: Literal["column", "panel", "chart"] = "chart"


@dataclass(frozen=True, slots=True)
class Terms:
    """A list of terms with their explanations."""

    entries: tuple[tuple[str, str], ...]


Block = Paragraph | Heading | Table | Figure | Terms


@dataclass(frozen=True, slots=True)
class Section:
    """A section: `id` is one of the names a user can choose."""

    id: str
    title: str
    blocks: tuple[Block, ...]


@dataclass(frozen=True, slots=True)
class Document:
    """The whole report.

    facts : header data as (label, text)
    date : day of the last log (ISO 8601), "" when no log says it
    beds, ledgers : for the html page, a record of every bed and what they share: see `logkit.report.page`
    """

    title: str
    subtitle: str
    facts: tuple[tuple[str, str], ...]
    sections: tuple[Section, ...]
    organisation: str = ""
    logo: tuple[str, bytes] | None = None
    caution: str = ""
    beds: tuple[dict[str, Any], ...] = field(default=())
    ledgers: dict[str, Any] = field(default_factory=dict)
    authors: tuple[str, ...] = ()
    date: str = ""

    def tables(self) -> Iterator[Table]:
        """Every table in order."""
        for section in self.sections:
            for block in section.blocks:
                if isinstance(block, Table):
                    yield block

    def figures(self) -> Iterator[Figure]:
        """Every figure in order."""
        for section in self.sections:
            for block in section.blocks:
                if isinstance(block, Figure):
                    yield block


def captions(document: Document) -> dict[str, str]:
    """`Table 1` and `Figure 1` … by id, numbered in the order they stand."""
    names = {table.id: f"Table {i}" for i, table in enumerate(document.tables(), 1)}
    names |= {figure.id: f"Figure {i}" for i, figure in enumerate(document.figures(), 1)}
    return names
