"""The parts of a report that need several wells: the panel and the comparison tables."""

from __future__ import annotations

from collections.abc import Iterator
from functools import lru_cache

from logkit.compare import Comparison, compare_logs, draw_panel
from logkit.report.document import Block, Column, Figure, Paragraph, Table
from logkit.report.settings import ReportSettings
from logkit.report.wells import Well
from logkit.report.wording import Units, frame_cell
from logkit.words import counted, joined

WIDEST_MM = 390.0


def panel(wells: list[Well], settings: ReportSettings) -> Iterator[Block]:
    """The wells side by side, hung on the datum."""
    comparison = compare(tuple(wells), settings.datum)
    drawing = draw_panel(comparison, style=settings.style)
    sheet = drawing.sheets[0]
    shrink = min(1.0, WIDEST_MM / sheet.width)
    names = joined([well.name for well in wells])
    shown = f"1:{drawing.scale:g}" if drawing.scale else "the scale printed on it"
    note = f", printed at {shrink:.0%} of that" if shrink < 1 else ""
    yield Figure(
        "panel",
        f"{names} side by side, at {shown}{note}. Solid ties join markers seen in both wells, dashed and queried "
        "ties as their line says; nothing is tied inside a gap. Flow ribbons share one velocity axis, P10–P90. "
        "Source: bed tables and comparison tables.",
        f"Panel of {counted(len(wells), 'well')}: {names}.",
        drawing.svg(),
        sheet.width * shrink,
        sheet.height * shrink,
        "panel",
    )


def comparison(wells: list[Well], settings: ReportSettings) -> Iterator[Block]:
    """What differs between the wells, in sentences and tables."""
    result = compare(tuple(wells), settings.datum)
    units = Units(settings.units == "feet")
    for sentence in result.summary():
        yield Paragraph(units.words(sentence))
    for name, frame in result.tables().items():
        if not len(frame):
            continue
        columns = [str(c) for c in frame.columns]
        yield Table(
            f"compare-{name.replace('_', '-').replace(' ', '-')}",
            f"{name.replace('_', ' ').capitalize()} of the wells. Source: bed tables; gaps are left out unless "
            "the column says otherwise.",
            tuple(
                Column(c.replace("_", " "), align="left" if frame[c].dtype.kind in "OUT" else "right")
                for c in columns
            ),
            tuple(tuple(frame_cell(v) for v in row) for row in frame.itertuples(index=False, name=None)),
        )


@lru_cache(maxsize=2)
def compare(wells: tuple[Well, ...], datum: str) -> Comparison:
    """The comparison behind both parts, made once; wells are compared by identity."""
    return compare_logs(
        [well.log for well in wells],
        datum=datum or None,
        histories=[well.history for well in wells],
        trends=[well.trends for well in wells],
    )
