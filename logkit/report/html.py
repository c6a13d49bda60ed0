"""A document as one HTML file that explains itself: no network, all text inert, the column as navigation."""

from __future__ import annotations

import base64
import hashlib
import json
import re
from collections.abc import Sequence
from importlib.resources import files
from typing import Any

from markupsafe import Markup, escape

from logkit import __version__
from logkit.report.document import Block, Document, Figure, Heading, Paragraph, Table, Terms, captions

PICTURE_TYPES = {"svg": "image/svg+xml", "png": "image/png"}


def document_html(document: Document, columns: Sequence[Figure]) -> str:
    """The document as HTML text.

    Parameters
    ----------
    columns : the columns that serve as navigation, their bed groups marked with `data-bed`
    """
    from jinja2 import Environment

    folder = files("logkit.report").joinpath("data")
    script = folder.joinpath("report.js").read_text(encoding="utf-8")
    environment = Environment(autoescape=True, trim_blocks=True, lstrip_blocks=True)
    template = environment.from_string(folder.joinpath("report.html.j2").read_text(encoding="utf-8"))
    names = captions(document)
    return template.render(
        doc=document,
        version=__version__,
        css=Markup(folder.joinpath("report.css").read_text(encoding="utf-8")),
        script=Markup(script),
        script_hash=base64.b64encode(hashlib.sha256(script.encode()).digest()).decode(),
        logo=_picture(document.logo),
        filters=filter_words(document.beds),
        explorer=[Markup(_inline(f.svg, f"c{i}-")) for i, f in enumerate(columns)],
        data=Markup(inert_json({"beds": document.beds, **document.ledgers})),
        render=lambda block: _render(block, names),
    )


def inert_json(value: Any) -> str:
    """JSON that cannot end the script element it stands in, whatever was typed into a cell."""
    text = json.dumps(value, ensure_ascii=False, separators=(",", ":"))
    return text.replace("&", "\\u0026").replace("<", "\\u003c").replace(">", "\\u003e")


def filter_words(beds: tuple[dict[str, Any], ...]) -> dict[str, list[str]]:
    """For each kind of tag the words that occur, in order of the alphabet."""
    words: dict[str, set[str]] = {}
    for bed in beds:
        for kind, tags in bed["tags"].items():
            words.setdefault(kind, set()).update(tags)
    return {kind: sorted(tags) for kind, tags in words.items() if tags}


def _picture(logo: tuple[str, bytes] | None) -> str:
    if logo is None:
        return ""
    name, data = logo
    kind = PICTURE_TYPES[name.rsplit(".", 1)[-1]]
    return f"data:{kind};base64,{base64.b64encode(data).decode()}"


def _inline(svg: str, prefix: str) -> str:
    """SVG for use inside HTML: without the XML prologue, ids made unique by a prefix."""
    start = svg.index("<svg")
    body = svg[start:]
    body = re.sub(r'\bid="([^"]+)"', rf'id="{prefix}\1"', body)
    body = re.sub(r"url\(#([^)]+)\)", rf"url(#{prefix}\1)", body)
    return re.sub(r'(xlink:)?href="#([^"]+)"', rf'href="#{prefix}\2"', body)


def _render(block: Block, names: dict[str, str]) -> Markup:
    match block:
        case Paragraph(text, kind):
            tag = {"caution": "div", "lead": "p", "body": "p", "small": "p"}[kind]
            return Markup(f'<{tag} class="{kind}">{escape(text)}</{tag}>')
        case Heading(text):
            return Markup(f"<h3>{escape(text)}</h3>")
        case Terms(entries):
            rows = "".join(f"<dt>{escape(term)}</dt><dd>{escape(meaning)}</dd>" for term, meaning in entries)
            return Markup(f'<dl class="facts">{rows}</dl>')
        case Table():
            return _table(block, names)
        case Figure():
            picture = _inline(block.svg, f"{block.id}-")
            mark = ' class="history"' if block.id.startswith("history") else ""
            caption = f"<figcaption><b>{names[block.id]}.</b> {escape(block.caption)}</figcaption>"
            label = f'role="img" aria-label="{escape(block.alt)}"'
            return Markup(f'<figure{mark}><div class="picture" {label}>{picture}</div>{caption}</figure>')


def _table(table: Table, names: dict[str, str]) -> Markup:
    sides = [' class="right"' if column.align == "right" else "" for column in table.columns]
    head = "".join(
        f'<th scope="col"{side}>{escape(column.label)}</th>'
        for column, side in zip(table.columns, sides, strict=True)
    )
    lines = []
    for i, row in enumerate(table.rows):
        if len(row) == 1 < len(table.columns):
            lines.append(
                f'<tr class="across"><th scope="rowgroup" colspan="{len(table.columns)}">{escape(row[0])}</th></tr>'
            )
            continue
        key = table.keys[i] if table.keys else ""
        mark = f' data-bed="{escape(key)}"' if key else ""
        cells = "".join(f"<td{side}>{escape(cell)}</td>" for cell, side in zip(row, sides, strict=True))
        lines.append(f"<tr{mark}>{cells}</tr>")
    button = (
        f'<div class="bar"><button type="button" class="copy" data-table="t-{table.id}" '
        f'aria-label="Copy as CSV: {names[table.id]}">Copy as CSV</button><span role="status"></span></div>'
    )
    return Markup(
        f'<div class="table">{button}<table id="t-{table.id}"><caption><b>{names[table.id]}.</b> '
        f"{escape(table.caption)}</caption><thead><tr>{head}</tr></thead><tbody>{''.join(lines)}</tbody>"
        "</table></div>"
    )
