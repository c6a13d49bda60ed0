"""A written pattern of layers: `6 x (8 vfs Tc / 4 mdst)`. The layers were counted, not measured one by one."""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache

from logkit.model import GrainState, Structure
from logkit.tables.cells.grain import read_grain
from logkit.tables.cells.lengths import read_length
from logkit.tables.cells.reading import CACHE_SIZE, Reading, Remark, clean, error, note, quoted
from logkit.tables.cells.refused import refusal
from logkit.tables.cells.structures import read_structures

_PATTERN = re.compile(r"^(?P<count>\d{1,5})\s*[x*]\s*[(\[](?P<inside>.+)[)\]]\s*\.?$", re.I)
_LEADING = re.compile(
    r"^(?P<length>~?\d+(?:[.,]\d+)?(?:\s*(?:mm|cm|m|ft|feet|in|'|\")(?![A-Za-z]))?)\s*(?P<rest>.*)$", re.I
)
_MOST_LAYERS = 2000


@dataclass(frozen=True, slots=True)
class PatternPart:
    """One layer of a pattern: thickness in m, size states upward, lithology id, structures."""

    thickness_m: float
    grain: tuple[GrainState, ...] = ()
    lithology: str = ""
    structures: tuple[Structure, ...] = ()


@dataclass(frozen=True, slots=True)
class Pattern:
    """A repeated group of layers, upward: `count` times the `parts` in the order written."""

    count: int
    parts: tuple[PatternPart, ...]

    @property
    def layers(self) -> int:
        """Number of layers in all."""
        return self.count * len(self.parts)

    @property
    def thickness_m(self) -> float:
        """Thickness of the whole, m."""
        return self.count * sum(part.thickness_m for part in self.parts)


def is_pattern(text: str) -> bool:
    """True when a cell is written as a pattern."""
    return _PATTERN.match(clean(text)) is not None


@lru_cache(maxsize=CACHE_SIZE)
def read_pattern(
    text: str, unit: str | None = None, scale: str = "wentworth", codes: str = "fluvial"
) -> Reading[Pattern]:
    """A pattern of layers.

    Parameters
    ----------
    text : the cell
    unit : unit of the sheet for thicknesses without one
    scale, codes : size scale and table of facies codes of the log
    """
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    match = _PATTERN.match(plain)
    if match is None:
        return Reading(None, (_unreadable(plain),))
    written = [part for part in re.split(r"\s*/\s*(?!\d*\s*\d/)", match["inside"]) if part.strip()]
    remarks: list[Remark] = []
    parts = [part for part in (_part(p.strip(), unit, scale, codes, remarks) for p in written) if part]
    count = int(match["count"])
    if len(parts) != len(written) or not parts:
        return Reading(None, (*remarks, _unreadable(plain)))
    if not 0 < count * len(parts) <= _MOST_LAYERS:
        problem = error("pattern.count", f"{quoted(plain)} makes {count * len(parts)} layers",
                        f"write a pattern of 1 to {_MOST_LAYERS} layers")  # fmt: skip
        return Reading(None, (*remarks, problem))
    pattern = Pattern(count, tuple(parts))
    remarks.append(
        note("pattern.not_measured", f"{pattern.layers} layers, {pattern.thickness_m:.4g} m, from a pattern: "
             "not measured one by one, left out of thickness statistics")
    )  # fmt: skip
    return Reading(pattern, tuple(remarks))


def _part(text: str, unit: str | None, scale: str, codes: str, remarks: list[Remark]) -> PatternPart | None:
    match = _LEADING.match(text)
    if match is None:
        return None
    length = read_length(match["length"], unit)
    remarks.extend(length.remarks)
    if length.value is None or length.value.metres <= 0:
        return None
    words = match["rest"].strip(" ,")
    structures: tuple[Structure, ...] = ()
    kept: list[str] = []
    for word in words.split():
        # codes such as Tc are case-sensitive and would be lost among the words of a size cell
        code = read_structures(word, codes)
        if code.value and code.value.structures and code.value.structures[0].code:
            structures += code.value.structures
            remarks.extend(code.remarks)
        else:
            kept.append(word)
    if not kept:
        return PatternPart(length.value.metres, (), "", structures)
    cell = read_grain(" ".join(kept), scale)
    remarks.extend(cell.remarks)
    if cell.value is None:
        return None
    return PatternPart(
        length.value.metres, cell.value.states, cell.value.lithology, structures + cell.value.structures
    )


def _unreadable(plain: str) -> Remark:
    return error("pattern.unreadable", f"{quoted(plain)} is not a pattern of layers",
                 "write the count and the layers upward, for example 6 x (8 vfs / 4 mdst)")  # fmt: skip
