"""Where the font files are. A missing font is replaced without a word by a renderer, so it is looked for here."""

from __future__ import annotations

from functools import cache
from importlib.util import find_spec
from pathlib import Path

from logkit.errors import LogkitError


@cache
def font_folder() -> Path:
    """Folder with the DejaVu Sans files: matplotlib, which logkit needs anyway, ships them.

    Raises
    ------
    LogkitError : the installation is incomplete
    """
    spec = find_spec("matplotlib")
    for place in (spec.submodule_search_locations or []) if spec else []:
        folder = Path(place) / "mpl-data/fonts/ttf"
        if (folder / "DejaVuSans.ttf").exists():
            return folder
    raise LogkitError("The font files of matplotlib are missing.", "Install matplotlib again.")
