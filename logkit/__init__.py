"""logkit: from a typed table of beds to a checked, drawn and hydraulically read sedimentary log.

The public functions are loaded on first use, so that `import logkit` costs next to nothing.

Examples
--------
>>> import logkit
>>> log = logkit.read_log("examples/river/tarrow_bend.csv")     # doctest: +SKIP
>>> history = logkit.infer_flow(log)                            # doctest: +SKIP
>>> logkit.draw_column(log, history).save("column.pdf")         # doctest: +SKIP
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from logkit.compare import compare_logs, draw_panel, export
    from logkit.drawing import draw_column
    from logkit.flow import infer_flow
    from logkit.model import Log
    from logkit.report import write_report
    from logkit.tables import log_from_frame, read_log, read_logs
    from logkit.trends import find_trends

__version__ = "0.1.0"

_PUBLIC = {
    "Log": "logkit.model",
    "read_log": "logkit.tables",
    "read_logs": "logkit.tables",
    "log_from_frame": "logkit.tables",
    "infer_flow": "logkit.flow",
    "find_trends": "logkit.trends",
    "draw_column": "logkit.drawing",
    "compare_logs": "logkit.compare",
    "draw_panel": "logkit.compare",
    "export": "logkit.compare",
    "write_report": "logkit.report",
}

__all__ = [
    "Log", "compare_logs", "draw_column", "draw_panel", "export", "find_trends", "infer_flow",
    "log_from_frame", "read_log", "read_logs", "write_report",
]  # fmt: skip


def __getattr__(name: str) -> Any:
    if name in _PUBLIC:
        value = getattr(import_module(_PUBLIC[name]), name)
        globals()[name] = value
        return value
    raise AttributeError(f"module 'logkit' has no attribute {name!r}")


def __dir__() -> list[str]:
    return sorted({*globals(), *_PUBLIC})
