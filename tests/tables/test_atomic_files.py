"""Files are written whole or not at all; what stands in the way is said in words."""

from __future__ import annotations

import errno
import os
import stat
from pathlib import Path

import pytest

from logkit.errors import LogkitError
from logkit.files import read_bytes, write_atomic


def test_new_and_replaced_files(tmp_path: Path) -> None:
    """Text becomes UTF-8, bytes stay; an old file is replaced and keeps its permissions; nothing is left beside."""
    path = tmp_path / "a.txt"
    assert write_atomic(path, "ångström\n") == path
    assert path.read_bytes() == "ångström\n".encode()
    path.chmod(0o640)
    write_atomic(path, b"\x00\x01")
    assert path.read_bytes() == b"\x00\x01"
    assert stat.S_IMODE(path.stat().st_mode) == 0o640
    assert [p.name for p in tmp_path.iterdir()] == ["a.txt"]


def test_a_link_stays_a_link(tmp_path: Path) -> None:
    """Writing through a link replaces what it points to."""
    (tmp_path / "real.txt").write_text("old")
    link = tmp_path / "link.txt"
    link.symlink_to("real.txt")
    write_atomic(link, "new")
    assert link.is_symlink()
    assert (tmp_path / "real.txt").read_text() == "new"


@pytest.mark.parametrize("code", [errno.ENOSPC, errno.EIO, errno.EDQUOT, errno.EROFS, errno.EACCES])
def test_a_full_or_locked_disk_leaves_the_old_file(
    code: int, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """When the disk fails while writing, the old file is whole and no part is left behind."""
    path = tmp_path / "a.txt"
    path.write_text("old")

    def fail(handle: int) -> None:
        raise OSError(code, os.strerror(code))

    monkeypatch.setattr(os, "fsync", fail)
    with pytest.raises(LogkitError, match="Cannot write") as caught:
        write_atomic(path, "new")
    assert caught.value.remedy
    assert path.read_text() == "old"
    assert [p.name for p in tmp_path.iterdir()] == ["a.txt"]


def test_an_interrupt_leaves_the_old_file(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """Stopping the program while it writes leaves the old file and nothing else."""
    path = tmp_path / "a.txt"
    path.write_text("old")

    def stop(source: str, target: Path) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr(os, "replace", stop)
    with pytest.raises(KeyboardInterrupt):
        write_atomic(path, "new")
    assert [(p.name, p.read_text()) for p in tmp_path.iterdir()] == [("a.txt", "old")]


def test_places_that_cannot_be_written(tmp_path: Path) -> None:
    """A missing folder, a folder in place of a file and a file in place of a folder are named."""
    (tmp_path / "file").write_text("")
    with pytest.raises(LogkitError, match="the folder does not exist"):
        write_atomic(tmp_path / "none" / "a.txt", "x")
    with pytest.raises(LogkitError, match="it is a folder"):
        write_atomic(tmp_path, "x")
    with pytest.raises(LogkitError, match="part of the path is a file"):
        write_atomic(tmp_path / "file" / "a.txt", "x")
    with pytest.raises(LogkitError, match="null character"):
        write_atomic(tmp_path / "a\0b", "x")


def test_reading(tmp_path: Path) -> None:
    """Bytes are read whole; missing files name the nearest; an endless device is refused."""
    path = tmp_path / "section.csv"
    path.write_bytes(b"abc")
    assert read_bytes(path) == b"abc"
    with pytest.raises(LogkitError, match=r"Did you mean .*section\.csv\?"):
        read_bytes(tmp_path / "secton.csv")
    with pytest.raises(LogkitError, match="does not exist either"):
        read_bytes(tmp_path / "none" / "a.csv")
    with pytest.raises(LogkitError, match="never ends or is too large"):
        read_bytes("/dev/zero")
