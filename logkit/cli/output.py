"""Writing a table of results by the ending of its file, at once or not at all."""

from __future__ import annotations

import json
from collections.abc import Sequence
from io import BytesIO
from pathlib import Path
from typing import Any

from logkit import __version__
from logkit.cli.console import finite
from logkit.files import write_atomic
from logkit.tables.write import separated


def write_rows(rows: Sequence[dict[str, Any]], output: str, caution: str) -> None:
    """Write rows with the same keys as csv, json or parquet; the caution goes into the file's header.

    Data frames are only made for parquet, since loading them takes longer than most logs.

    Raises
    ------
    LogkitError : the file cannot be written
    """
    ending = Path(output).suffix.lower()
    if ending == ".json":
        body = {"logkit": __version__, "caution": caution, "rows": finite(rows)}
        write_atomic(output, json.dumps(body, ensure_ascii=False, indent=1) + "\n")
    elif ending == ".parquet":
        write_atomic(output, _parquet(rows, caution))
    else:
        table = [list(rows[0]), *(list(row.values()) for row in rows)] if rows else []
        write_atomic(output, f"# logkit {__version__}. {caution}\n" + separated(table, ","))


def _parquet(rows: Sequence[dict[str, Any]], caution: str) -> bytes:
    import pandas as pd

    frame = pd.DataFrame(list(rows))
    empty = [name for name in frame if frame[name].isna().all()]  # columns without a value are of numbers
    frame = frame.astype(dict.fromkeys(empty, float))
    frame.attrs["caution"] = caution
    buffer = BytesIO()
    frame.to_parquet(buffer, index=False)
    return buffer.getvalue()
