"""Where every row lies: thicknesses stacked, bases and tops, running heights, depths, spans.

Works along the rows: `start_m` and `end_m` grow downward through the table, as heights in an upward log and as
depths in a downward one. Turning them into `base_m` and `top_m` happens where beds are built.
"""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from functools import lru_cache
from itertools import pairwise

from logkit.model import Level
from logkit.tables.cells.lengths import Length
from logkit.tables.cores import add_lost_core, stack_lost_core
from logkit.tables.draft import Draft
from logkit.tables.sheet import Collector
from logkit.tables.slips import other_readings
from logkit.units import METRES

ROUNDING_M = 1e-6
"""Differences below this are of floating point, m."""
_CLOSE_M = 0.011
_WIDEST_M = 0.06
_DECIMALS = re.compile(r"\d(?:[.,](\d+))?(?!\d)")


class Placer:
    """Settles start and end of the drafts of one section.

    Parameters
    ----------
    drafts : in the order of the rows
    down : True when the rows run downward as depths
    found : takes the findings
    unit : length unit of the log, for messages about cores
    """

    def __init__(self, drafts: list[Draft], down: bool, found: Collector, unit: str = "m") -> None:
        self.drafts = drafts
        self.unit = unit
        self.down = down
        self.found = found
        self.noun = "depth" if down else "height"
        self.shown = unit if down else "m"
        self.starts: list[Length | None] = []
        self.ends: list[Length | None] = []
        self.tolerance = ROUNDING_M

    def place(self) -> None:
        """Settle all rows; a row that cannot be placed stays unplaced and has an error."""
        if not self.down:
            self._spans_that_are_thicknesses()
        self._running_heights()
        self.tolerance = min(max(0.6 * self._last_place(), ROUNDING_M), _WIDEST_M)
        pairs = self._pairs()
        stacks = any(d.thickness is not None and d.low is None for d in self.drafts)
        both = sum(
            start is not None and end is not None and (self.down or d.low is None or not stacks)
            for d, (start, end) in zip(self.drafts, pairs, strict=True)
        )
        if both * 2 >= len(self.drafts):
            self._as_written()
        else:
            if self.down and stack_lost_core(self.drafts, self.found, self.unit):
                self._pairs()
            self._stacked()

    def _pairs(self) -> list[tuple[Length | None, Length | None]]:
        """Start and end of every row as written."""
        pairs = [self._along(d) for d in self.drafts]
        self.starts = [start for start, _ in pairs]
        self.ends = [end for _, end in pairs]
        return pairs

    def say(self, draft: Draft, level: Level, code: str, message: str, remedy: str, *,
            choices: Sequence[str] = (), column: str = "") -> None:  # fmt: skip
        """A finding about the place of a row."""
        column = column or next((c for c in _COLUMNS if draft.cells.get(c)), "thickness")
        self.found.add(level, code, message, remedy, row=draft.row, column=column, choices=choices,
                       cell=draft.cells.get(column, ""), section=draft.section, bed=draft.name)  # fmt: skip

    def show(self, metres: float, digits: int = 6) -> str:
        """A position or length as it stands in a message, in the unit of the log."""
        return f"{metres / METRES[self.shown]:.{digits}g} {self.shown}"

    # -- what the cells mean -----------------------------------------------------------------------------------

    def _along(self, d: Draft) -> tuple[Length | None, Length | None]:
        """Start and end of a row as written, along the rows."""
        if d.low is not None:
            return d.low, d.high
        start, end = (d.top, d.base) if self.down else (d.base, d.top)
        return d.first or start, d.last or end

    def _spans_that_are_thicknesses(self) -> None:
        """`8-12` in a column of thicknesses is a bed that varies, unless spans follow one another."""
        spans = [d for d in self.drafts if d.low and d.high and d.cells.get("thickness")]
        ends = [d.high.metres for d in spans if d.high]
        if any(
            d.low.metres == 0 or any(abs(d.low.metres - e) < _CLOSE_M for e in ends) for d in spans if d.low
        ):
            return
        for d in spans:
            if d.low is None or d.high is None or not 0 < d.low.metres < d.high.metres <= 5 * d.low.metres:
                continue
            mean = 0.5 * (d.low.metres + d.high.metres)
            self.say(
                d,
                "question",
                "thickness.varies",
                f"read as a thickness that varies, mean {self.show(mean, 4)}",
                "write one thickness, or base and top",
                choices=(
                    f"thickness {self.show(mean, 4)}",
                    f"from {self.show(d.low.metres, 4)} to {self.show(d.high.metres, 4)}",
                ),
            )
            d.thickness = Length(mean, d.low.unit, True, d.low.comma, True)
            d.low = d.high = None

    def _running_heights(self) -> None:
        """A column of single heights or depths: are they where beds begin or where they end?"""
        rows = [d for d in self.drafts if d.height is not None]
        if not rows:
            return
        begins = self._heights_begin(rows)
        for d in rows:
            if begins:
                d.first = d.first or d.height
            else:
                d.last = d.last or d.height
        if begins:
            self._end_mark()

    def _end_mark(self) -> None:
        """A last row with nothing but a position is where the bed above ends."""
        if len(self.drafts) < 2:
            return
        last, above = self.drafts[-1], self.drafts[-2]
        if last.height is None or last.cells.keys() - {"position", "section"}:
            return
        if above.last is None and above.thickness is None:
            above.last = last.height
        self.say(last, "note", "position.end_mark", f"the last {self.noun} alone is where {above.label} ends", "",
                 column="position")  # fmt: skip
        self.drafts.pop()

    def _heights_begin(self, rows: list[Draft]) -> bool:
        misfit_begin = misfit_end = 0.0
        compared = 0
        for here, after in pairwise(self.drafts):
            if here.height and after.height:
                step = after.height.metres - here.height.metres
                if here.thickness and after.thickness:
                    compared += 1
                    misfit_begin += min(abs(step - here.thickness.metres), 10.0)
                    misfit_end += min(abs(step - after.thickness.metres), 10.0)
        if compared:
            return misfit_begin <= misfit_end
        first = rows[0].height
        begins = first is not None and (first.metres == 0 or self.down)
        words = f"{self.noun}s where beds begin", f"{self.noun}s where beds end"
        self.say(rows[0], "question", "position.which_end",
                 f"single {self.noun}s are read as the {words[0] if begins else words[1]}",
                 "give base and top, or a thickness",
                 choices=words if begins else words[::-1], column="position")  # fmt: skip
        return begins

    # -- bases and tops ----------------------------------------------------------------------------------------

    def _as_written(self) -> None:
        """Rows lie where they are written; what is missing comes from thickness or neighbours."""
        count = len(self.drafts)
        for i, d in enumerate(self.drafts):
            start, end = self.starts[i], self.ends[i]
            size = _thickness(d)
            before = self.drafts[i - 1].end_m if i and self.drafts[i - 1].placed else None
            after = self.starts[i + 1] if i + 1 < count else None
            a, b = start.metres if start else None, end.metres if end else None
            if d.unplaced and (a is None or b is None):
                continue
            if a is None and b is not None:
                a = b - size if size is not None else before
            if a is None:
                a = before
            if b is None and a is not None:
                b = a + size if size is not None else (after.metres if after and a < after.metres else None)
                if b is not None and size is None:
                    self.say(d, "question", "position.end_from_next",
                             f"no end is written; taken to where the next row begins, {self.show(b)}",
                             "write base and top of each bed", choices=("up to the next row", "unknown"))  # fmt: skip
            if a is None or b is None:
                self._no_place(d)
                continue
            self._settle(d, a, b, size, start is not None and end is not None)
        self._sort()
        if self.down:
            add_lost_core(self.drafts, self.found, self.unit)
        self._neighbours()

    def _no_place(self, d: Draft) -> None:
        if not d.unplaced:
            self.say(d, "error", "position.missing", "the row has no position",
                     "write a thickness, or base and top", column="thickness")  # fmt: skip
        d.unplaced = True

    def _settle(self, d: Draft, a: float, b: float, size: float | None, written: bool) -> None:
        low, high = ("top", "base") if self.down else ("base", "top")
        if abs(a - b) < 1e-12:
            self.say(d, "error", "position.no_thickness", "base and top are the same", "correct one of them")
            d.unplaced = True
            return
        if b < a:
            self.say(d, "error", "position.swapped",
                     f"the top lies below the base ({low} {self.show(a)}, {high} {self.show(b)})",
                     f"swap them: {low} {self.show(b)}, {high} {self.show(a)}", choices=("base and top swapped",),
                     column="top" if d.cells.get("top") else "")  # fmt: skip
            a, b = b, a
        elif written and size is not None and abs(b - a - size) > max(self.tolerance, 0.02 * size):
            self.say(
                d,
                "question",
                "thickness.sum",
                f"base and top are {self.show(b - a, 4)} apart, but the thickness is {self.show(size, 4)}",
                "correct one of the three; base and top are taken",
                choices=(f"{self.show(b - a, 4)} from base and top", f"{self.show(size, 4)} as written"),
                column="thickness",
            )
        d.start_m, d.end_m = a, b

    def _sort(self) -> None:
        """Rows in the order of their places; rows that stood elsewhere are asked about."""
        placed = [d for d in self.drafts if d.placed]
        if len(placed) > 1:
            falling = sum(y.start_m < x.start_m for x, y in pairwise(placed))
            if falling > 0.8 * (len(placed) - 1) and falling > 0:
                noun = "rise" if self.down else "fall"
                self.say(placed[0], "note" if len(placed) > 2 else "question", "position.order",
                         f"{self.noun}s {noun} from row to row; the rows are read in the order of their {self.noun}s",
                         "", choices=() if len(placed) > 2 else ("sorted",))  # fmt: skip
                self.drafts.reverse()
        order = sorted(range(len(self.drafts)), key=lambda i: _sort_key(self.drafts, i))
        if order != list(range(len(self.drafts))):
            highest = -math.inf
            for d in self.drafts:
                if d.placed and d.end_m <= highest + ROUNDING_M and d.start_m < highest - ROUNDING_M:
                    self.say(d, "question", "position.order",
                             f"{d.label} lies before the rows above it; it is put where its {self.noun}s say",
                             "check its position", choices=("moved to its place", "a wrong position"))  # fmt: skip
                elif d.placed:
                    highest = max(highest, d.end_m)
            self.drafts[:] = [self.drafts[i] for i in order]

    def _neighbours(self) -> None:
        """Overlaps are errors; holes become gaps and are asked about."""
        filled: list[Draft] = []
        last: Draft | None = None
        for d in self.drafts:
            if not d.placed:
                filled.append(d)
                continue
            if last is not None:
                step = d.start_m - last.end_m
                tolerance = self.tolerance
                if step < -tolerance:
                    self._overlap(d, last, -step)
                elif step > tolerance:
                    filled.append(self._hole(d, last, step))
            filled.append(d)
            if last is None or d.end_m > last.end_m:
                last = d
        self.drafts[:] = filled

    def _overlap(self, d: Draft, last: Draft, size: float) -> None:
        where = "starts above the base of" if self.down else "starts below the top of"
        self.say(d, "error", "position.overlap",
                 f"{d.label} {where} {last.label} (row {last.row}): they overlap by {self.show(size, 4)}",
                 "correct one of the two", column="top" if self.down and d.cells.get("top") else "")  # fmt: skip

    def _hole(self, d: Draft, last: Draft, size: float) -> Draft:
        self.say(d if d.row is not None else last, "question", "position.hole",
                 f"no row covers {self.show(size, 4)} between {last.label} and {d.label}; read as a gap",
                 "add a row for it, or correct the positions", choices=("a gap", "a wrong position"))  # fmt: skip
        return Draft(row=None, section=d.section, gap="not_logged", start_m=last.end_m, end_m=d.start_m)

    def _last_place(self) -> float:
        """Unit of the last place in which positions are written, m.

        The finest of all rows, since 1.30 is often written 1.3; thicknesses count only where nothing else does.
        """
        steps: dict[str, float] = {}
        for d in self.drafts:
            for column in _COLUMNS:
                text = d.cells.get(column)
                length = _length_of(d, column) if text else None
                if text and length is not None:
                    inches = length.unit == "ft" and ("'" in text or '"' in text)
                    step = METRES["in" if inches else length.unit] * 10.0 ** -_decimals(text)
                    steps[column] = min(step, steps.get(column, math.inf))
        thickness = steps.pop("thickness", 0.0)
        return min(steps.values(), default=thickness)

    # -- stacked thicknesses -----------------------------------------------------------------------------------

    def _stacked(self) -> None:
        """Thicknesses are laid on one another; written heights are compared with their sum."""
        sizes = [self._size(i) for i in range(len(self.drafts))]
        anchors = [(i, s.metres) for i, s in enumerate(self.starts) if s is not None]
        anchors += [(i + 1, e.metres) for i, e in enumerate(self.ends) if e is not None]
        anchors = list(dict(sorted(anchors, key=lambda pair: pair[0])).items())
        self._slips_between(anchors, sizes)
        alone = _wrong_alone(anchors, sizes)
        here = 0.0
        if anchors:
            index, value = anchors[0]
            here = value - sum(size or 0.0 for size in sizes[:index])
        offset = 0.0
        for i, d in enumerate(self.drafts):
            start, size = self.starts[i], sizes[i]
            if start is not None:
                after = self._compare(d, start.metres, here, offset)
                offset = offset if i in alone else after
            if size is None:
                self._no_place(d)
                continue
            d.start_m, d.end_m = here, here + size
            here = d.end_m
            end = self.ends[i]
            if end is not None and d.low is None:
                after = self._compare(d, end.metres, here, offset)
                offset = offset if i + 1 in alone else after

    def _size(self, index: int) -> float | None:
        """Thickness of a row, from its cell or from the heights around it."""
        d, start, end = self.drafts[index], self.starts[index], self.ends[index]
        size = _thickness(d)
        if size is not None or d.unplaced:
            return size
        if start is None and index:
            start = self.ends[index - 1]
        if end is None and index + 1 < len(self.drafts):
            end = self.starts[index + 1]
        if start is None and index == 0 and end is not None:
            return end.metres if end.metres > 0 else None
        if start is None or end is None:
            return None
        step = end.metres - start.metres
        if step < 0 and self.starts[index] is not None and self.ends[index] is not None:
            shown = f"{self.show(start.metres)}, {self.show(end.metres)}"
            self.say(d, "error", "position.swapped", f"the top lies below the base ({shown})",
                     "swap them", choices=("base and top swapped",))  # fmt: skip
            return -step
        return step if step > 0 else None

    def _compare(self, d: Draft, written: float, here: float, offset: float) -> float:
        """Ask where a written height leaves the sum of thicknesses; the new offset between the two."""
        away = written - here
        if abs(away - offset) <= max(self.tolerance, 0.005):
            return offset
        more = away - offset
        noun = "below" if (more > 0) == self.down else "above"
        if d.low is not None and d.high is not None and more < 0:
            self.say(
                d,
                "question",
                "position.overlap",
                f"the sum of the thicknesses is {self.show(here, 4)}, so {self.show(written, 4)} overlaps earlier beds",
                "say from which level the heights are counted",
                choices=(
                    f"placed at {self.show(here, 4)} by the thicknesses",
                    f"at {self.show(written, 4)} as written",
                ),
            )
            return offset
        self.say(d, "question", "thickness.sum",
                 f"the written {self.noun} {self.show(written, 4)} is {self.show(abs(more), 3)} {noun} "
                 f"the sum of the thicknesses, {self.show(here + offset, 4)}",
                 "correct a thickness or the height; the thicknesses are taken",
                 choices=(f"{self.show(here, 4)} by the thicknesses", f"{self.show(written, 4)} as written"),
                 column=next((c for c in ("base", "top", "position", "from", "to") if d.cells.get(c)), ""))  # fmt: skip
        return away

    def _slips_between(self, anchors: list[tuple[int, float]], sizes: list[float | None]) -> None:
        """A wrong unit that the written heights on both sides betray is put right, and asked about."""
        for (i, low), (j, high) in pairwise(anchors):
            between = [size for size in sizes[i:j] if size is not None]
            missing = (high - low) - sum(between)
            if len(between) < j - i or abs(missing) <= 0.02:
                continue
            fits: list[tuple[int, float, str]] = []
            for k in range(i, j):
                d = self.drafts[k]
                if d.thickness is not None:
                    fits += [
                        (k, metres, words)
                        for metres, words in other_readings(d.thickness)
                        if abs(metres - d.thickness.metres - missing) <= 0.02
                    ]
            if len(fits) != 1:
                continue
            k, metres, words = fits[0]
            d = self.drafts[k]
            if d.thickness is None:
                continue
            as_unit = d.thickness.metres / METRES[d.thickness.unit]
            self.say(d, "question", "thickness.unit_slip",
                     f"read as {words}: with {as_unit:.6g} {d.thickness.unit} the heights around it do not fit",
                     "write the unit into the cell", choices=(words, f"{as_unit:.6g} {d.thickness.unit}"))  # fmt: skip
            d.thickness = Length(
                metres, words.rpartition(" ")[2], True, d.thickness.comma, d.thickness.approximate
            )
            d.asked_unit = True
            sizes[k] = metres


def _wrong_alone(anchors: Sequence[tuple[int, float]], sizes: Sequence[float | None]) -> set[int]:
    """Places whose written height alone leaves the sum of thicknesses, while those before and after agree."""
    sums = [0.0]
    for size in sizes:
        sums.append(sums[-1] + (size or 0.0))
    away = [(i, height - sums[i]) for i, height in anchors]
    return {
        here[0]
        for before, here, after in zip(away, away[1:], away[2:], strict=False)
        if abs(before[1] - after[1]) < 0.02 < abs(here[1] - before[1])
    }


_COLUMNS = ("thickness", "base", "top", "from", "to", "position")


@lru_cache(maxsize=4096)
def _decimals(text: str) -> int:
    """Decimals of the number with most of them in a cell."""
    return max((len(digits) for digits in _DECIMALS.findall(text)), default=0)


def _length_of(d: Draft, column: str) -> Length | None:
    if column == "thickness":
        return d.low or d.thickness
    lengths = {"base": d.base, "top": d.top, "from": d.first, "to": d.last, "position": d.height}
    return lengths[column] or d.low


def _thickness(d: Draft) -> float | None:
    """Thickness that a row states, m: its own, its pattern's, or that of a span."""
    if d.pattern is not None:
        return d.pattern.count * sum(part.thickness_m for part in d.pattern.parts)
    return d.thickness.metres if d.thickness is not None else None


def _sort_key(drafts: list[Draft], index: int) -> tuple[float, int]:
    """Place of a row; an unplaced one keeps to the row before it."""
    for i in range(index, -1, -1):
        if drafts[i].placed:
            return drafts[i].start_m, index
    return -math.inf, index
