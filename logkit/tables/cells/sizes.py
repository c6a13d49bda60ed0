"""One grain-size state from text: a class, a range of classes, a measured size, with its doubts.

Grading (several states), largest clasts and the other words of a grain-size cell are read in `grain`; here
is only what stands between two grading arrows.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, replace
from functools import cache

from logkit.grains import Scale, SizeClass, scale
from logkit.model import SizeInterval
from logkit.tables.cells.lengths import number
from logkit.tables.cells.reading import Remark, error, note, question, quoted
from logkit.units import METRES

UNITS = r"mm|µm|um|microns?|cm|phi|φ"
_NUM = r"\d+(?:[.,]\d+)?|[.,]\d+"
MEASURED = re.compile(
    rf"(?<![\w.,])(?P<a>-?(?:{_NUM}))(?:\s*(?:{UNITS})?\s*(?:-|…|\.\.|\bto\b)\s*(?P<b>-?(?:{_NUM})))?"
    rf"\s*(?P<unit>{UNITS})(?![A-Za-z])",
    re.I,
)
BARE = re.compile(rf"^(?P<a>-?(?:{_NUM}))(?:\s*(?:-|to)\s*(?P<b>-?(?:{_NUM})))?$")
_OR = re.compile(r"\b(?:poss\w*|prob\w*|perhaps|maybe|or)\b", re.I)
_RANGE = re.compile(r"^\s*(?:-|--|…|\.\.)\s*$")
_WITH = re.compile(r"^\s*(?:\(|\+|,?\s*(?:with|w/|and|&|some|minor|occ\w*|plus)\b.*)\s*$", re.I)
_LIKELY_MICRONS = 63.0
_SMALLEST_MM, _LARGEST_MM = 1e-5, 1e5


@dataclass(frozen=True, slots=True)
class State:
    """A size state found in text.

    Attributes
    ----------
    size : None when the text holds no size
    rest : the words that are not part of the size
    measured_mm : a measured size written beside a class
    rock : "sand" or "sandstone" when the size was written together with that word
    remarks : what must be said
    """

    size: SizeInterval | None
    rest: str
    rock: str = ""
    remarks: tuple[Remark, ...] = ()
    measured_mm: float | None = None


@dataclass(frozen=True, slots=True)
class _Found:
    start: int
    end: int
    size: SizeInterval


@cache
def _class_pattern(name: str) -> re.Pattern[str]:
    """All labels of a scale, longest first, with dots and spaces allowed between their words."""
    labels: set[str] = set()
    for entry in scale(name).values():
        for written in (entry.name, entry.label, *entry.synonyms):
            words = written.replace(",", " ").split()
            # a hyphen parts the sides of a range (`c-pebble`), except behind `very`
            joints = [r"[\s.\-]*" if w in ("very", "v") else r"[\s.]*" for w in words[:-1]]
            labels.add("".join(re.escape(w) + j for w, j in zip(words, [*joints, ""], strict=True)))
            if re.fullmatch(r"v[fc]", entry.name) and written == entry.name:
                labels.add(r"v[\s.\-]*" + written[1])
    ordered = sorted(labels, key=lambda label: (-len(label), label))
    return re.compile(rf"(?<![\w'])(?:{'|'.join(ordered)})\.?(?![\w'])", re.I)


def parse_state(text: str, scale_name: str) -> State:
    """The size state in a text that holds no grading."""
    table = scale(scale_name)
    bare = BARE.match(text.strip())
    if bare:
        return _bare_number(bare, text)
    found, remarks = _all_found(text, table)
    if not found:
        return State(None, text, remarks=tuple(remarks))
    classes = [f for f in found if not _measured_label(f.size.label)]
    if classes and len(classes) < len(found):
        return _with_measurement(text, classes, [f for f in found if f not in classes], scale_name, remarks)
    rock = _rock_word(text, found[0])
    if len(found) == 1:
        only = found[0]
        after = text[only.end :]
        doubtful = _doubted(text[: only.start], after)
        rest = _cut(text, [(only.start, only.end)])
        return State(replace(only.size, sure=not doubtful), rest, rock, tuple(remarks))
    return _joined(text, found, rock, remarks)


def _doubted(before: str, after: str) -> bool:
    return bool(_OR.search(before)) or after.lstrip()[:1] == "?" or bool(re.search(r"^[^,;]*\?", after))


def _all_found(text: str, table: Scale) -> tuple[list[_Found], list[Remark]]:
    found: list[_Found] = []
    remarks: list[Remark] = []
    for match in MEASURED.finditer(text):
        size, remark = measured_size(match["a"], match["b"], match["unit"])
        if remark:
            remarks.append(remark)
        if size:
            found.append(_Found(match.start(), match.end(), size))
    taken = [(f.start, f.end) for f in found]
    for match in _class_pattern(table.name).finditer(text):
        if any(start < match.end() and match.start() < end for start, end in taken):
            continue
        entry = table.find(match[0])
        if entry:
            found.append(_Found(match.start(), match.end(), entry.interval))
            doubt = _doubtful_label(match[0], entry, text)
            if doubt:
                remarks.append(doubt)
    return sorted(found, key=lambda f: f.start), remarks


def _doubtful_label(written: str, entry: SizeClass, text: str) -> Remark | None:
    """The question on a label that means something else as well."""
    if written in ("FU", "CU"):
        way = "fining upward" if written == "FU" else "coarsening upward"
        return question("grain.upper_or_upward", f"{quoted(written)} may be a size or a trend",
                        f"write {entry.name} for the size, or the two sizes with an arrow",
                        (entry.name, way))  # fmt: skip
    rock = {"ms": "mudstone", "cs": "claystone"}.get(written.casefold())
    if rock and written.casefold() == text.strip().casefold():
        return question("grain.sand_or_rock", f"{quoted(written)} may be {entry.label} or {rock}",
                        f"write {entry.name} for the sand", (entry.label, rock))  # fmt: skip
    return None


def _joined(text: str, found: list[_Found], rock: str, remarks: list[Remark]) -> State:
    """Two or more sizes without a grading arrow: a range, alternatives, or one with the other subordinate."""
    first, second = found[0], found[1]
    between = text[first.end : second.start]
    spans = [(f.start, f.end) for f in found]
    names = first.size.label, second.size.label
    if len(found) > 2:
        remarks.append(
            question("grain.many_sizes", f"{len(found)} sizes stand side by side in {quoted(text)}",
                     "write a range f-m, or grading with an arrow m→f",
                     (f"range {_hull(found).label}", " → ".join(f.size.label for f in found) + " graded upward"))
        )  # fmt: skip
        return State(replace(_hull(found), sure=False), _cut(text, spans), rock, tuple(remarks))
    unsure = _doubted(text[: first.start], "") or text[second.end :].lstrip()[:1] == "?"
    if _RANGE.match(between):
        spans = [(first.start, second.end)]
        return State(replace(_hull(found), sure=not unsure), _cut(text, spans), rock, tuple(remarks))
    if between.strip() == "/":
        remarks.append(
            question("grain.slash", f"{names[0]}/{names[1]} may be doubt or alternation",
                     "write f-m for a range, f? for doubt, or a pattern for alternating beds",
                     (f"{names[0]} or {names[1]}, uncertain", f"{names[0]} and {names[1]} alternating"))
        )  # fmt: skip
        spans = [(first.start, second.end)]
        return State(replace(_hull(found), sure=False), _cut(text, spans), rock, tuple(remarks))
    if "?" in between or _OR.search(between):
        remarks.append(
            question("grain.alternative", f"{names[0]} is written with {names[1]} as an alternative",
                     "keep the size you trust", (names[0], names[1]))
        )  # fmt: skip
        return State(replace(first.size, sure=False), _cut(text, spans), rock, tuple(remarks))
    if _WITH.match(between):
        remarks.append(
            question("grain.subordinate", f"{names[0]} is written with some {names[1]}",
                     "write f-m when both belong to one range",
                     (f"{names[0]}, some {names[1]}", f"range {_hull(found).label}"))
        )  # fmt: skip
        return State(first.size, _cut(text, spans).replace("()", " "), rock, tuple(remarks))
    remarks.append(
        question("grain.two_sizes", f"{names[0]} and {names[1]} stand side by side",
                 "write f-m for a range or m→f for grading",
                 (f"range {_hull(found).label}", f"{names[0]} → {names[1]} graded upward"))
    )  # fmt: skip
    return State(replace(_hull(found), sure=False), _cut(text, spans), rock, tuple(remarks))


def _with_measurement(
    text: str, classes: list[_Found], measured: list[_Found], scale_name: str, remarks: list[Remark]
) -> State:
    """Classes with a measured size beside them: the classes stand, a size outside them is asked about."""
    state = parse_state(_blank(text, measured), scale_name)
    size = measured[0].size
    kept = [r for r in remarks if r not in state.remarks]
    if state.size and not state.size.low_mm <= size.middle_mm <= state.size.high_mm:
        kept.append(conflict_remark(state.size, size))
    return replace(state, remarks=(*state.remarks, *kept), measured_mm=size.middle_mm)


def _blank(text: str, found: list[_Found]) -> str:
    for one in found:
        text = text[: one.start] + " " * (one.end - one.start) + text[one.end :]
    return text


def conflict_remark(size: SizeInterval, measured: SizeInterval) -> Remark:
    """The question on a measured size that lies outside the class written beside it."""
    return question(
        "grain.measure_outside_class",
        f"{measured.label} lies outside {size.label} ({size.low_mm:.3g}-{size.high_mm:.3g} mm)",
        "correct the class or the measured size",
        (size.label, measured.label),
    )


def measured_size(a: str, b: str | None, unit: str) -> tuple[SizeInterval | None, Remark | None]:
    """The interval of a measured size or range, with a remark when it cannot be a grain size."""
    values = [number(v)[0] for v in (a, b) if v is not None]
    symbol = _symbol(unit)
    sizes = sorted(_millimetres(v, symbol) for v in values if v is not None)
    written = " to ".join(f"{v:g}" for v in values if v is not None) + f" {symbol}"
    if not sizes or not all(_SMALLEST_MM <= size <= _LARGEST_MM for size in sizes):
        return None, error("grain.impossible_size", f"{quoted(written)} is not a grain size",
                           "write a size above zero with mm, µm or phi")  # fmt: skip
    ordered = [v for v in values if v is not None]
    if len(ordered) == 2 and symbol != "phi":
        ordered.sort()
    label = "-".join(_plain(v) for v in ordered) + f" {symbol}"
    if symbol == "phi" and len(ordered) == 2 and min(ordered) < 0:
        label = " to ".join(_plain(v) for v in ordered) + " phi"
    return SizeInterval(sizes[0], sizes[-1], label), None


def _millimetres(value: float, symbol: str) -> float:
    if symbol == "phi":
        return 2.0**-value if abs(value) < 40 else 0.0
    return value * METRES[symbol] * 1000.0


def _symbol(unit: str) -> str:
    low = unit.casefold()
    if low in ("phi", "φ"):
        return "phi"
    return low if low in ("mm", "cm") else "µm"


def _plain(value: float) -> str:
    text = repr(float(value))
    return text.removesuffix(".0")


def _measured_label(label: str) -> bool:
    return label.rpartition(" ")[2] in ("mm", "cm", "µm", "phi")


def _bare_number(match: re.Match[str], text: str) -> State:
    first = number(match["a"])[0] or 0.0
    units = ["mm", "phi", "µm"]
    units.insert(0, units.pop(1 if first < 0 else 2 if first >= _LIKELY_MICRONS else 0))
    size, remark = measured_size(match["a"], match["b"], units[0])
    if size is None or remark:
        return State(None, "", remarks=(remark,) if remark else ())
    shown = size.label.rpartition(" ")[0]
    asked = question("grain.no_unit", f"{quoted(text)} has no unit", "write mm, µm or phi behind the number",
                     tuple(f"{shown} {unit}" for unit in units))  # fmt: skip
    return State(replace(size, sure=False), "", remarks=(asked,))


def _hull(found: list[_Found]) -> SizeInterval:
    finest = min(found, key=lambda f: (f.size.low_mm, f.size.high_mm)).size
    coarsest = max(found, key=lambda f: (f.size.high_mm, f.size.low_mm)).size
    label = finest.label if finest.label == coarsest.label else f"{finest.label}-{coarsest.label}"
    if _measured_label(finest.label) or _measured_label(coarsest.label):
        label = f"{finest.label} - {coarsest.label}"
    open_end = finest.open_end or coarsest.open_end
    return SizeInterval(finest.low_mm, coarsest.high_mm, label, open_end=open_end)


def _cut(text: str, spans: list[tuple[int, int]]) -> str:
    """The text without some stretches; a bar stands where one was, so that words do not run together."""
    kept, at = [], 0
    for start, end in sorted(spans):
        kept.append(text[at:start])
        at = end
    kept.append(text[at:])
    return " | ".join(kept)


def _rock_word(text: str, found: _Found) -> str:
    written = text[found.start : found.end].casefold()
    if written.endswith(("sst", "ss")):
        return "sandstone"
    return "sand" if written.endswith("sand") or written.endswith("sd") else ""


def no_size_remark(text: str, scale_name: str) -> Remark:
    """The error on a cell in which no size could be found."""
    table = scale(scale_name)
    words = text.split()
    near = table.nearest(text) or next((n for w in words[:5] if len(w) > 1 and (n := table.nearest(w))), None)
    return error("grain.unknown", f"{quoted(text)} holds no grain size that is known",
                 "write a class such as fU, a range f-m, a size such as 0.25 mm, or grading m→f",
                 allowed=tuple(table), nearest=near)  # fmt: skip


def comma_note(text: str) -> Remark | None:
    """The note on a decimal comma in a measured size."""
    match = MEASURED.search(text)
    if match and ("," in match["a"] or (match["b"] and "," in match["b"])):
        return note("grain.decimal_comma", f"{quoted(match[0])} read with a decimal comma")
    return None
