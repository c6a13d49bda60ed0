"""Where shipped folders are: inside the installed package, or beside it in a checkout."""

from __future__ import annotations

from pathlib import Path

from logkit.errors import LogkitError

PACKAGE = Path(__file__).resolve().parent


def shipped(folder: str, checkout: str | None = None) -> Path:
    """Path of a folder that ships inside the wheel.

    Parameters
    ----------
    folder : path inside the package when installed from a wheel ("styles")
    checkout : path from the repository's root in an editable install, `folder` by default

    Raises
    ------
    LogkitError : the installation is incomplete
    """
    for place in (PACKAGE / folder, PACKAGE.parent / (checkout or folder)):
        if place.exists():
            return place
    raise LogkitError(f"The installation lacks {folder!r}.", "Install logkit again.")
