"""Writes the table of advance widths that text placement uses, from the DejaVu Sans files that come with matplotlib.

Run it again when the fonts change: `python tests/drawing/make_advances.py`. Nothing imports it.
"""

from __future__ import annotations

from pathlib import Path

import matplotlib
from matplotlib.ft2font import FT2Font, LoadFlags

FACES = {"regular": "DejaVuSans.ttf", "bold": "DejaVuSans-Bold.ttf"}
RANGES = (
    (0x20, 0x7E), (0xA0, 0x17F), (0x370, 0x3FF), (0x400, 0x45F), (0x2000, 0x206F),
    (0x2070, 0x209F), (0x2100, 0x21FF), (0x2200, 0x22FF), (0x25A0, 0x25FF),
)  # fmt: skip
TARGET = Path(__file__).parents[2] / "logkit/drawing/data/advances.toml"


def advances(path: Path, first: int, last: int) -> list[int]:
    """Advance widths in font units, 0 for characters the font does not have."""
    face = FT2Font(str(path))
    characters = face.get_charmap()
    widths = []
    for code in range(first, last + 1):
        if code in characters:
            glyph = face.load_glyph(characters[code], flags=LoadFlags.NO_SCALE)
            widths.append(int(glyph.horiAdvance))
        else:
            widths.append(0)
    return widths


def main() -> None:
    """Write the table."""
    folder = Path(matplotlib.get_data_path()) / "fonts/ttf"
    lines = [
        "# Advance widths of DejaVu Sans in 1/2048 em. A key is the first code point of a run; 0 means the font",
        "# lacks the character. Written by tests/drawing/make_advances.py; do not edit by hand.",
        "units_per_em = 2048",
    ]
    for face, file in FACES.items():
        lines.append(f"\n[{face}]")
        for first, last in RANGES:
            run = " ".join(str(width) for width in advances(folder / file, first, last))
            lines.append(f'"{first:04x}" = "{run}"')
    TARGET.write_text("\n".join(lines) + "\n", encoding="utf-8")


if __name__ == "__main__":
    main()
