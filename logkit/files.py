"""Files: written at once or not at all, read with a clear word when they cannot be. Nothing of geology.

Every output of logkit goes through `write_atomic`; no module opens a file for writing on its own.
"""

from __future__ import annotations

import contextlib
import errno
import os
import stat
import tempfile
from pathlib import Path
from typing import IO

from logkit.errors import LogkitError, nearest

LARGEST_INPUT = 256 * 1024 * 1024
"""Bytes of the largest file that is read; a table of beds is a thousand times smaller."""

_BLOCK = 2**20

_REASONS = {
    errno.ENOSPC: ("the disk is full", "Make room or choose another place."),
    errno.EDQUOT: ("the disk quota is used up", "Make room or choose another place."),
    errno.EROFS: ("the disk is read-only", "Choose another place."),
    errno.EACCES: ("permission is denied", "Choose a place you may write to, or change its permissions."),
    errno.EPERM: ("permission is denied", "Choose a place you may write to, or change its permissions."),
    errno.ENOENT: ("the folder does not exist", "Make the folder first."),
    errno.ENOTDIR: ("part of the path is a file, not a folder", "Correct the path."),
    errno.ENAMETOOLONG: ("the name is too long", "Choose a shorter name."),
    errno.EISDIR: ("it is a folder", "Give the name of a file in it."),
    errno.EPIPE: ("the program reading the output has stopped", "Run it again without closing the pipe."),
    errno.EIO: ("the disk reports an error", "Check the disk."),
}


def write_atomic(path: str | Path, data: bytes | str) -> Path:
    """Write a whole file: into a temporary file beside it, flushed to disk, then renamed over the old one.

    Parameters
    ----------
    path : file to write; an existing file keeps its permissions
    data : contents; text is written as UTF-8 with the line ends it has

    Returns
    -------
    The path written.

    Raises
    ------
    LogkitError : the file cannot be written (no folder, no permission, disk full); the old file is untouched
    """
    target = Path(path)
    body = data.encode("utf-8") if isinstance(data, str) else data
    if "\0" in str(target):
        raise LogkitError(
            f"Cannot write {str(target)!r}: the name holds a null character.", "Correct the name."
        )
    if target.is_symlink():
        target = target.resolve()  # a link stays a link; what it points to is replaced
    if target.is_dir():
        raise write_problem(path, OSError(errno.EISDIR, "is a folder"))
    temporary = ""
    try:
        handle, temporary = tempfile.mkstemp(
            prefix=f".{target.name[:40]}.", suffix=".part", dir=target.parent
        )
        with os.fdopen(handle, "wb") as file:
            file.write(body)
            file.flush()
            os.fsync(file.fileno())
        os.chmod(temporary, _mode(target))
        os.replace(temporary, target)
    except OSError as problem:
        _remove(temporary)
        raise write_problem(path, problem) from None
    except BaseException:  # an interrupt as well must leave nothing behind
        _remove(temporary)
        raise
    _sync_folder(target.parent)
    return Path(path)


def write_problem(path: str | Path, problem: OSError) -> LogkitError:
    """The error a person can act on for a failed write."""
    reason, remedy = _REASONS.get(
        problem.errno or 0, (problem.strerror or str(problem), "Choose another place.")
    )
    return LogkitError(f"Cannot write {path}: {reason}.", remedy)


def read_bytes(path: str | Path) -> bytes:
    """The contents of a file.

    Raises
    ------
    LogkitError : there is no such file, it is a folder, it may not be read, or it is far too large
    """
    source = Path(path)
    try:
        found = source.stat()
        if stat.S_ISDIR(found.st_mode):
            raise LogkitError(f"{path} is a folder, not a file.", "Give the name of a table in it.")
        if found.st_size > LARGEST_INPUT:
            raise LogkitError(
                f"{path} has {found.st_size // 2**20} MB, too much for a table.", "Is it the right file?"
            )
        with source.open("rb") as file:
            body = read_stream(file)
    except FileNotFoundError:
        raise LogkitError(f"There is no file {path}.", _similar(source)) from None
    except (OSError, ValueError) as problem:
        reason = getattr(problem, "strerror", None) or str(problem)
        raise LogkitError(f"Cannot read {path}: {reason}.", "Check the name and the permissions.") from None
    return body


def read_stream(stream: IO[bytes]) -> bytes:
    """Everything a stream holds, as standard input or a named pipe.

    Raises
    ------
    LogkitError : it holds more than any table, or never ends
    """
    parts: list[bytes] = []
    size = 0
    while part := stream.read(_BLOCK):
        parts.append(part)
        size += len(part)
        if size > LARGEST_INPUT:
            raise LogkitError("The input never ends or is too large for a table.", "Is it the right file?")
    return b"".join(parts)


def _similar(source: Path) -> str:
    """A hint at a file with nearly the same name."""
    try:
        names = [entry.name for entry in source.parent.iterdir()]
    except OSError:
        return f"The folder {source.parent} does not exist either."
    match = nearest(source.name, names)
    return f"Did you mean {source.parent / match}?" if match else "Check the name."


def _mode(target: Path) -> int:
    """Permissions of the file replaced, or those a new file gets."""
    try:
        return stat.S_IMODE(target.stat().st_mode)
    except OSError:
        mask = os.umask(0)
        os.umask(mask)
        return 0o666 & ~mask


def _remove(temporary: str) -> None:
    if temporary:
        with contextlib.suppress(OSError):
            os.unlink(temporary)


def _sync_folder(folder: Path) -> None:
    """Make the rename itself last through a power cut, where the system allows it."""
    with contextlib.suppress(OSError):
        handle = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)
