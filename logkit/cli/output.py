"""Writing a table of results by the ending of its file, at once or not at all."""

from __future__ import annotations

import json
from io import BytesIO
from pathlib import Path
from typing import Any

from logkit import __version__
from logkit.cli.console import _finite
from logkit.files import write_atomic


def write_frame(frame: Any, output: str, caution: str) -> None:
    """Write a pandas frame as csv, json or parquet; the caution goes into the file's header.

    Raises
    ------
    LogkitError : the file cannot be written
    """
    ending = Path(output).suffix.lower()
    if ending == ".json":
        body = {"logkit": __version__, "caution": caution, "rows": _finite(frame.to_dict(orient="records"))}
        write_atomic(output, json.dumps(body, ensure_ascii=False, indent=1) + "\n")
    elif ending == ".parquet":
        buffer = BytesIO()
        frame.attrs["caution"] = caution
        frame.to_parquet(buffer, index=False)
        write_atomic(output, buffer.getvalue())
    else:
        write_atomic(output, f"# logkit {__version__}. {caution}\n" + frame.to_csv(index=False))
