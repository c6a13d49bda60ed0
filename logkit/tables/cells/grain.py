"""The grain-size cell: states and grading, largest clasts, median, and the rock words people put beside them."""

from __future__ import annotations

import re
from dataclasses import dataclass, field, replace
from functools import lru_cache
from itertools import pairwise
from typing import NamedTuple

from logkit.errors import nearest
from logkit.grains import interval_for
from logkit.model import GrainState, LargestClasts, SizeInterval, Structure
from logkit.tables.cells.largest import take_largest, take_median
from logkit.tables.cells.reading import (
    CACHE_SIZE,
    Reading,
    Remark,
    clean,
    error,
    note,
    question,
    quoted,
)
from logkit.tables.cells.refused import refusal
from logkit.tables.cells.sizes import (
    State,
    comma_note,
    conflict_remark,
    no_size_remark,
    parse_state,
)
from logkit.tables.cells.words import collect, unread
from logkit.vocabulary import lexicon, vocabulary

_ARROW = re.compile(r"\s*(?:→|->|=>|>{1,2}|⇢|↑)\s*")
_TO = re.compile(
    r"\s+(?:up\s+to|up\s+into|to|(?:passing|passes|grading|grades|graded|fining|coarsening)\s+(?:up\s+)?(?:in)?to)\s+",
    re.I,
)
_NUMBER_TO = re.compile(r"(?<=\d)\s+(?:up\s+)?to\s+(?=-?[\d.,]+\s*(?:mm|µm|um|micron|cm|phi|φ))", re.I)
_AT = re.compile(r"\s*@\s*(?P<number>\d+(?:\.\d+)?(?:e-?\d+)?)\s*(?P<percent>%)?", re.I)
_FINING = re.compile(
    r"\b(?:fining|fines)[\s-]*up(?:wards?)?\b|\bfining\b|\bnormal(?:ly)? grad(?:ed|ing)\b", re.I
)
_COARSENING = re.compile(
    r"\b(?:coarsening|coarsens)[\s-]*up(?:wards?)?\b|\bcoarsening\b"
    r"|\b(?:inverse(?:ly)?|reverse(?:ly)?) grad(?:ed|ing)\b",
    re.I,
)
_BASE_TOP = (
    re.compile(r"^(?:at\s+)?base[:\s]+(?P<base>.+?)[\s,;]+(?:at\s+)?top[:\s]+(?P<top>.+)$", re.I),
    re.compile(
        r"^(?P<base>.+?)\s*\(?\s*(?:at\s+)?(?:the\s+)?base\s*\)?[\s,;]+"
        r"(?P<top>.+?)\s*\(?\s*(?:at\s+)?(?:the\s+)?top\s*\)?$",
        re.I,
    ),
)
_SORTING = re.compile(
    r"(?<!\w)(?P<word>(?:(?:extremely|ext|very|vry|v|moderately|moderate|mod|m|mw|poorly|poor|p"
    r"|well|w|vw|vp|ep|vpoorly|vwell)"
    r"[\s.\-]*){1,3})(?:srtd|srt|sorted|sorting|std|sort)\b\.?",
    re.I,
)
_LOOSE_END = re.compile(r"\|\s*-\s*\w|\w\s*-\s*\|")
_CIRCA = re.compile(r"\bca?\.?\s*(?=\d)", re.I)
_GS = re.compile(r"\b(?:GS|mean|av(?:erage|g)?)\s*[:=~]?\s*(?=[\d.])", re.I)
_GRAINED = re.compile(r"-(?=grained\b)", re.I)

_CLASS_OF_ROCK = {
    "mudstone": "mud", "shale": "mud", "mud": "mud", "black_shale": "mud", "claystone": "clay", "clay": "clay",
    "siltstone": "silt", "silt": "silt", "sandstone": "sand", "sand": "sand", "arkose": "sand",
    "lithic_sandstone": "sand", "greywacke": "sand", "conglomerate": "gravel", "gravel": "gravel", "breccia": "gravel",
}  # fmt: skip


@dataclass(frozen=True, slots=True)
class GrainCell:
    """What a grain-size cell holds.

    Attributes
    ----------
    states : upward; one state = not graded as far as written, several = written grading
    largest : largest clasts
    d50_mm : measured median or mean size, mm
    sorting, rounding, lithology : vocabulary ids, "" when not written
    qualifiers : vocabulary ids
    structures : structures written beside the size
    """

    states: tuple[GrainState, ...] = ()
    largest: LargestClasts | None = None
    d50_mm: float | None = None
    sorting: str = ""
    rounding: str = ""
    lithology: str = ""
    qualifiers: tuple[str, ...] = ()
    structures: tuple[Structure, ...] = field(default=())


class _States(NamedTuple):
    states: tuple[GrainState, ...]
    rest: str
    rock: str
    measured_mm: float | None


@lru_cache(maxsize=CACHE_SIZE)
def read_grain(text: str, scale: str = "wentworth") -> Reading[GrainCell]:
    """A grain-size cell.

    Parameters
    ----------
    text : the cell
    scale : size scale of the class labels, "wentworth" or "iso14688"
    """
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    remarks: list[Remark] = []
    rest, largest = take_largest(_CIRCA.sub("~", plain), remarks)
    rest, d50 = take_median(rest, largest, remarks)
    rest, sorting = _take_sorting(rest)
    comma = comma_note(rest)
    if comma:
        remarks.append(comma)
    states, leftover, rock, measured = _states(_GS.sub(" ", _GRAINED.sub(" ", rest)), scale, remarks)
    order = ("structures", "lithologies") if states else ("lithologies", "structures")
    words = collect(leftover, lexicon(*order, "qualifiers", "rounding"))
    remarks.extend(words.remarks)
    lithology = words.first("lithologies") or rock
    if not states:
        states = _states_without_class(plain, d50, lithology, scale, remarks)
        if not states and largest is None and not (lithology or words.terms):
            if not any(remark.level == "error" for remark in remarks):
                remarks.append(no_size_remark(plain, scale))
            return Reading(None, tuple(remarks))
    elif d50 is not None and len(states) == 1:
        _check_median(states[0].size, d50, remarks)
    left = unread(words.unknown)
    if left:
        remarks.append(left)
    structures = tuple(
        Structure(term.id, written, sure=sure) for term, written, sure in words.terms.get("structures", ())
    )
    d50 = measured if d50 is None else d50
    cell = GrainCell(states, largest, d50, sorting, words.first("rounding"), lithology,
                     words.ids("qualifiers"), structures)  # fmt: skip
    return Reading(cell, tuple(remarks))


@lru_cache(maxsize=CACHE_SIZE)
def read_size(text: str, scale: str = "wentworth") -> Reading[SizeInterval]:
    """One size: a class, a range or a measured size. Grading is refused, since one place is asked for."""
    reading = read_grain(text, scale)
    if reading.value is None:
        return Reading(None, reading.remarks)
    states = reading.value.states
    if len(states) == 1:
        return Reading(states[0].size, reading.remarks)
    if not states:
        return Reading(None, (*reading.remarks, no_size_remark(clean(text), scale)))
    refused = error("grain.one_size", f"{quoted(text)} is graded, but one size is asked for here",
                    "write grading into the column grain")  # fmt: skip
    return Reading(None, (*reading.remarks, refused))


@lru_cache(maxsize=CACHE_SIZE)
def read_largest(text: str) -> Reading[LargestClasts]:
    """The largest clasts: sizes with a unit, with or without a heading word such as MPS."""
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    remarks: list[Remark] = []
    rest, largest = take_largest(plain, remarks)
    if largest is None:
        rest, largest = take_largest(f"MPS {plain}", remarks)
    if largest is None:
        state = parse_state(plain, "wentworth")
        if state.size:
            size = state.size
            remarks.append(note("largest.class", f"{quoted(plain)} read as the class {size.label}"))
            return Reading(LargestClasts((size.low_mm, size.high_mm), size.middle_mm), tuple(remarks))
        return Reading(
            None,
            (error("largest.unreadable", f"{quoted(plain)} holds no clast sizes",
                   "write sizes with a unit, for example 9, 7, 6, 6, 5 cm"),),
        )  # fmt: skip
    left = unread(rest.split())
    return Reading(largest, (*remarks, left) if left else tuple(remarks))


@lru_cache(maxsize=CACHE_SIZE)
def read_sorting(text: str) -> Reading[str]:
    """Sorting class id from words (`mod well`, `p srt`) or a Folk and Ward value in phi (`0.6 phi`)."""
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    terms = vocabulary("sorting")
    found = terms.find(plain) or terms.find(f"{plain} sorted")
    if found:
        return Reading(found.id)
    match = re.fullmatch(r"(\d+(?:[.,]\d+)?)\s*(?:phi|φ)?", plain)
    if match:
        value = float(match[1].replace(",", "."))
        id = next((t.id for t in terms.values() if t.limit_phi is None or value < t.limit_phi), "")
        label = terms[id].label
        return Reading(id, (note("sorting.value", f"{quoted(plain)} read as {value:g} phi: {label}"),))
    labels = tuple(term.label for term in terms.values())
    near = nearest(plain, [w for t in terms.values() for w in (t.label, *t.synonyms)])
    return Reading(None, (error("sorting.unknown", f"{quoted(plain)} is not a sorting class",
                                "use one of the classes", allowed=labels, nearest=near),))  # fmt: skip


def _take_sorting(text: str) -> tuple[str, str]:
    match = _SORTING.search(text)
    if not match:
        return text, ""
    words = match[0].split()
    for skipped in range(len(words)):
        # `m w srt`: the first word may be the size, so the longest known ending counts
        found = vocabulary("sorting").find(" ".join(words[skipped:]))
        if found:
            kept = " ".join(words[:skipped])
            return f"{text[: match.start()]}{kept} | {text[match.end() :]}", found.id
    return text, ""


def _states(text: str, scale: str, remarks: list[Remark]) -> _States:
    """States upward, the words left over, a rock written together with a size, and a measured size."""
    body, trend = _take_trend(text)
    parts, arrow = _parts(body, scale)
    read: list[tuple[State, float | None]] = []
    for part in parts:
        at = _AT.search(part)
        fraction = None
        if at:
            fraction = float(at["number"]) / (100.0 if at["percent"] else 1.0)
            part = part[: at.start()] + " " + part[at.end() :]
        read.append((parse_state(part, scale), fraction))
    found = [(state, fraction) for state, fraction in read if state.size]
    rest = " | ".join(state.rest for state, _ in read)
    rock = next((state.rock for state, _ in read if state.rock), "")
    remarks.extend(r for state, _ in read for r in state.remarks)
    measured = next((state.measured_mm for state, _ in read if state.measured_mm), None)
    if not found:
        return _States((), rest, rock, measured)
    if arrow == "arrow" and len(found) < len(read):
        remarks.extend(no_size_remark(state.rest.strip(" |"), scale) for state, _ in read if not state.size)
    if _LOOSE_END.search(rest):
        remarks.append(
            error("grain.range_end", f"one side of the range in {quoted(text)} is not a size that is known",
                  "write both sides as classes, for example f-m")
        )  # fmt: skip
    if len(found) == 1:
        return _States(_single(found[0][0], text, trend, scale, remarks), rest, rock, measured)
    if arrow:
        # beside another size these labels cannot be a trend or a rock
        remarks[:] = [r for r in remarks if r.code not in ("grain.sand_or_rock", "grain.upper_or_upward")]
    if arrow == "to":
        remarks.append(_graded_by_words([s.size for s, _ in found if s.size], text))
    return _States(_placed(found, remarks), rest, rock, measured)


def _graded_by_words(sizes: list[SizeInterval], text: str) -> Remark:
    """What is said on `m to f`: grading; `f to m` is the usual order of a range as well and is asked."""
    labels = " → ".join(size.label for size in sizes)
    rising = len(sizes) == 2 and sizes[0].middle_mm < sizes[1].middle_mm
    if rising and not re.search(r"\bup|base|into\b", text, re.I):
        return question("grain.to", f"{quoted(text)} is read as grading upward and could be a range",
                        "write an arrow for grading, a hyphen for a range",
                        (f"{labels} graded upward", f"range {sizes[0].label}-{sizes[1].label}"))  # fmt: skip
    return note("grain.graded_by_words", f"read as grading, upward: {labels}")


def _parts(text: str, scale: str) -> tuple[list[str], str]:
    """The text split at its grading signs, and which kind they are: "arrow", "to" or ""."""
    for pattern in _BASE_TOP:
        match = pattern.match(text.strip(" |,;"))
        if match and all(parse_state(match[name], scale).size for name in ("base", "top")):
            return [match["base"], match["top"]], "to"
    if _ARROW.search(text):
        return [part for part in _ARROW.split(text) if part.strip()], "arrow"
    text = _NUMBER_TO.sub("-", text)
    parts = _TO.split(text)
    if len(parts) > 1 and all(parse_state(part, scale).size for part in parts):
        return parts, "to"
    return [text], ""


def _take_trend(text: str) -> tuple[str, int]:
    """The text without words of a trend, and the trend: -1 fining, +1 coarsening, 0 none."""
    for pattern, trend in ((_FINING, -1), (_COARSENING, 1)):
        if _TO.search(text) or _ARROW.search(text):
            break
        match = pattern.search(text)
        if match:
            return f"{text[: match.start()]} | {text[match.end() :]}", trend
    upward = re.search(r"(?<![\w])(FU|CU)(?![\w])", text)
    if upward and re.search(r"[A-Za-z]", text[: upward.start()] + text[upward.end() :].replace("|", "")):
        rest = f"{text[: upward.start()]} | {text[upward.end() :]}"
        if parse_state(rest, "wentworth").size and not re.search(r"[-→>]\s*$", text[: upward.start()]):
            after = text[upward.end() :].lstrip()
            if not after.startswith(("-", "→", ">")):
                return rest, -1 if upward[1] == "FU" else 1
    return text, 0


def _single(state: State, text: str, trend: int, scale: str, remarks: list[Remark]) -> tuple[GrainState, ...]:
    size = state.size
    if size is None or not trend:
        return (GrainState(0.0, size),) if size else ()
    word = "fining" if trend < 0 else "coarsening"
    ends = [interval_for(label, scale) for label in size.label.split("-")]
    if len(ends) == 2 and ends[0] and ends[1]:
        order = ends if trend > 0 else ends[::-1]
        pair = tuple(
            GrainState(f, replace(s, sure=size.sure)) for f, s in zip((0.0, 1.0), order, strict=True) if s
        )
        shown = " → ".join(s.size.label for s in pair)
        if re.search(r"\b(?:FU|CU)\b", text):
            remarks.append(question("grain.upper_or_upward", f"the range with {quoted(text)} is read as {word} upward",
                                    "write the two sizes with an arrow", (shown, f"range {size.label}")))  # fmt: skip
        else:
            remarks.append(note("grain.trend_words", f"{word} upward with {size.label} read as {shown}"))
        return pair
    remarks.append(
        note("grain.trend_without_sizes", f"{word} upward is written with one size only: {size.label}",
             "write the size at the base and at the top with an arrow, for example m→f")
    )  # fmt: skip
    return (GrainState(0.0, size),)


def _placed(found: list[tuple[State, float | None]], remarks: list[Remark]) -> tuple[GrainState, ...]:
    """States with their fractions: as written with @, else spread evenly from base to top."""
    count = len(found)
    fractions = [index / (count - 1) if given is None else given for index, (_, given) in enumerate(found)]
    rising = all(lower < upper for lower, upper in pairwise(fractions))
    if not rising or fractions[0] < 0 or fractions[-1] > 1:
        remarks.append(
            error("grain.fractions", "the places behind @ must rise from 0 (base) to 1 (top)",
                  "write the states upward, or leave the places out")
        )  # fmt: skip
        fractions = [index / (count - 1) for index in range(count)]
    pairs = zip(fractions, found, strict=True)
    return tuple(GrainState(fraction, state.size) for fraction, (state, _) in pairs if state.size)


def _states_without_class(
    plain: str, d50: float | None, lithology: str, scale: str, remarks: list[Remark]
) -> tuple[GrainState, ...]:
    """A state from the measured median, or from the rock word when that is all there is."""
    if d50 is not None:
        return (GrainState(0.0, SizeInterval(d50, d50, f"{d50:g} mm")),)
    size = interval_for(_CLASS_OF_ROCK.get(lithology, ""), scale) if lithology else None
    if size is None:
        return ()
    remarks.append(note("grain.from_rock", f"no size in {quoted(plain)}: the rock gives {size.label}"))
    return (GrainState(0.0, size),)


def _check_median(size: SizeInterval, d50: float, remarks: list[Remark]) -> None:
    if not size.low_mm <= d50 <= size.high_mm:
        remarks.append(conflict_remark(size, SizeInterval(d50, d50, f"D50 {d50:g} mm")))
