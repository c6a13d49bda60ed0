"""The report: one PDF, one HTML file that explains itself, or a DOCX to edit, from the same results."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

from logkit.errors import ArgumentError

if TYPE_CHECKING:
    from logkit.flow import FlowHistory
    from logkit.model import Log
    from logkit.trends import Trends

__all__ = ["write_report"]


def write_report(
    logs: Log | Sequence[Log],
    path: str | Path,
    *,
    histories: Sequence[FlowHistory | None] | None = None,
    trends: Sequence[Trends | None] | None = None,
    settings: str | Path | None = None,
    **options: Any,
) -> Path:
    """Write the report of one or more logs.

    Parameters
    ----------
    logs : one log or several
    path : file to write; its ending says how: pdf, html or docx
    histories, trends : results of each log, worked out when not given
    settings : TOML file with the choices of `logkit.report.settings.ReportSettings`
    options : the same choices by name (sections, units, style, scale, organisation, logo, datum, archive, title)

    Returns
    -------
    path of the file, written at once or not at all

    Raises
    ------
    ArgumentError, DataFileError : a wrong choice, with the nearest right one
    LogkitError : the file cannot be written
    """
    from logkit.files import write_atomic
    from logkit.report.content import build_document
    from logkit.report.settings import make_settings
    from logkit.report.wells import make_well

    target = Path(path)
    ending = target.suffix.lower()
    if ending not in (".pdf", ".html", ".docx"):
        raise ArgumentError("path", str(path), "a file ending in .pdf, .html or .docx")
    chosen = make_settings(settings, **options)
    several = list(logs) if isinstance(logs, Sequence) else [logs]
    none: list[None] = [None] * len(several)
    wells = [make_well(*parts) for parts in zip(several, histories or none, trends or none, strict=True)]
    document = build_document(wells, chosen, for_page=ending == ".html")
    if ending == ".pdf":
        from logkit.report.pdf import document_pdf

        write_atomic(target, document_pdf(document, paper=chosen.page, archive=chosen.archive))
    elif ending == ".html":
        from logkit.report.html import document_html
        from logkit.report.page import page_columns

        columns = [figure for well in wells for figure in page_columns(well, chosen)]
        write_atomic(target, document_html(document, columns))
    else:
        from logkit.report.docx import document_docx

        write_atomic(target, document_docx(document))
    return target
