"""Wells side by side: datum, ties, alignment, comparison tables, panel, hand-over set.

This page only names what is public; the work is in the modules. May use every layer below.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

from logkit.compare.companions import Companions, find_companions, read_shifts, read_survey
from logkit.compare.comparison import Comparison, compare_logs
from logkit.compare.curves import Curve, read_curves
from logkit.compare.placing import PlacedLog
from logkit.compare.shifts import ShiftTable
from logkit.compare.suggestions import SuggestedTie
from logkit.compare.survey import Survey
from logkit.compare.ties import Tie

if TYPE_CHECKING:
    from logkit.compare.handover import export
    from logkit.compare.las import las_text
    from logkit.compare.many import ManyWells, WellDone, process_wells
    from logkit.compare.panel import draw_panel

_LATER = {
    "draw_panel": "logkit.compare.panel",
    "export": "logkit.compare.handover",
    "las_text": "logkit.compare.las",
    "ManyWells": "logkit.compare.many",
    "WellDone": "logkit.compare.many",
    "process_wells": "logkit.compare.many",
}
"""Names whose modules load pandas or the drawing; loaded when asked for."""

__all__ = [
    "Companions", "Comparison", "Curve", "ManyWells", "PlacedLog", "ShiftTable", "SuggestedTie", "Survey", "Tie",
    "WellDone", "compare_logs", "draw_panel", "export", "find_companions", "las_text", "process_wells",
    "read_curves", "read_shifts", "read_survey",
]  # fmt: skip


def __getattr__(name: str) -> Any:
    if name in _LATER:
        value = getattr(import_module(_LATER[name]), name)
        globals()[name] = value
        return value
    raise AttributeError(f"module 'logkit.compare' has no attribute {name!r}")
