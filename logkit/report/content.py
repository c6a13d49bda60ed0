"""From logs with their results to a document: which sections there are and what stands in them."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable, Sequence
from pathlib import Path
from typing import Any

from logkit.errors import LogkitError
from logkit.model import CAUTION
from logkit.report import parts_flow, parts_log, parts_methods, parts_trends
from logkit.report.document import Block, Document, Section
from logkit.report.page import all_records, ledger_data
from logkit.report.settings import SECTIONS, ReportSettings
from logkit.report.wells import Well, facts_of
from logkit.report.wording import Units
from logkit.words import counted, joined

LARGEST_LOGO = 2_000_000
ISO_DATE = re.compile(r"\d{4}-(0[1-9]|1[0-2])-(0[1-9]|1\d|2[0-8])")
"""Days that every month has; another date is left out of the metadata."""


def build_document(wells: Sequence[Well], settings: ReportSettings, *, for_page: bool = False) -> Document:
    """The report of one or more logs.

    Parameters
    ----------
    wells : logs with their results
    settings : what the person chose
    for_page : for the html page: with the record of every bed, without columns, which the page shows itself

    Raises
    ------
    LogkitError : there is no log, or the logo cannot be used
    """
    if not wells:
        raise LogkitError("There is no log to report.", "Name one or more tables of beds.")
    units = Units(settings.units == "feet")
    builders = _builders(list(wells), settings, units)
    sections = []
    for id in settings.sections:
        if id == "columns" and for_page:
            continue
        blocks = tuple(builders[id]())
        if blocks:
            sections.append(Section(id, SECTIONS[id], blocks))
    names = [well.name for well in wells]
    first = wells[0].log
    title = settings.title or (first.header.title or names[0] if len(wells) == 1 else joined(names))
    return Document(
        title=title,
        subtitle=_subtitle(wells),
        facts=facts_of(first, units)
        if len(wells) == 1
        else tuple((w.name, _one_line(w, units)) for w in wells),
        sections=tuple(sections),
        organisation=settings.organisation,
        logo=_logo(settings.logo),
        caution=CAUTION,
        beds=tuple(all_records(wells, units)) if for_page else (),
        ledgers=ledger_data(wells, units) if for_page else {},
        date=max(
            (well.log.header.date for well in wells if ISO_DATE.fullmatch(well.log.header.date)), default=""
        ),
        authors=tuple(dict.fromkeys(w.log.header.logged_by for w in wells if w.log.header.logged_by)),
    )


def _builders(
    wells: list[Well], settings: ReportSettings, units: Units
) -> dict[str, Callable[[], Iterable[Block]]]:
    def each(part: Callable[..., Iterable[Block]], *arguments: Any) -> Callable[[], list[Block]]:
        return lambda: [block for well in wells if well.log.beds for block in part(well, *arguments)]

    def several(part: Callable[..., Iterable[Block]]) -> Callable[[], Iterable[Block]]:
        return lambda: part(wells, settings) if len(wells) > 1 else ()

    def panel(*arguments: Any) -> Iterable[Block]:
        from logkit.report.parts_wells import panel

        return panel(*arguments)

    def comparison(*arguments: Any) -> Iterable[Block]:
        from logkit.report.parts_wells import comparison

        return comparison(*arguments)

    return {
        "summary": each(parts_flow.summary, units),
        "columns": each(parts_log.columns, settings),
        "panel": several(panel),
        "comparison": several(comparison),
        "history": each(parts_flow.history, units),
        "beds": lambda: [parts_log.bed_table(well, units) for well in wells],
        "grading": each(parts_trends.grading, units),
        "currents": each(parts_trends.currents),
        "states": each(parts_flow.states),
        "findings": lambda: [block for well in wells for block in parts_log.findings(well)],
        "methods": lambda: parts_methods.methods(wells),
        "references": lambda: parts_methods.references(wells),
        "limits": parts_methods.limits,
        "ledger": each(parts_flow.ledgers, units),
    }


def _subtitle(wells: Sequence[Well]) -> str:
    beds = sum(len(well.log.real_beds) for well in wells)
    if len(wells) == 1:
        header = wells[0].log.header
        place = f", {header.location}" if header.location else ""
        return f"Sedimentary log with flow history{place}"
    return f"{counted(len(wells), 'log')} with flow history, {counted(beds, 'bed')}"


def _one_line(well: Well, units: Units) -> str:
    header = well.log.header
    words = [
        counted(len(well.log.real_beds), "bed"),
        units.height_words(well.log.thickness_m),
        header.location,
    ]
    return ", ".join(word for word in words if word)


def _logo(path: str) -> tuple[str, bytes] | None:
    if not path:
        return None
    file = Path(path)
    ending = file.suffix.lower()
    if ending not in (".svg", ".png"):
        raise LogkitError(
            f"The logo {path} is not an svg or png file.", "Give a picture in one of these forms."
        )
    try:
        data = file.read_bytes()
    except OSError as problem:
        raise LogkitError(f"The logo {path} cannot be read: {problem.strerror}.", "Check the path.") from None
    if len(data) > LARGEST_LOGO:
        raise LogkitError(f"The logo {path} is larger than 2 MB.", "Give a smaller picture.")
    return f"logo{ending}", data
