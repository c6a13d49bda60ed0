"""The lithology cell, and the words that say there is no rock to see."""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache

from logkit.model import GrainState, LargestClasts, Structure
from logkit.tables.cells.grain import GrainCell, read_grain
from logkit.tables.cells.reading import CACHE_SIZE, Reading, Remark, clean, error, question, quoted
from logkit.tables.cells.refused import refusal
from logkit.tables.cells.words import Collected, collect, unread
from logkit.vocabulary import lexicon, vocabulary

_SANDS = ("sandstone", "sand", "arkose", "lithic_sandstone", "greywacke", "pebbly_sandstone")
_KINDS = {
    "limestone": (
        "lime_mudstone",
        "wackestone",
        "packstone",
        "grainstone",
        "rudstone",
        "boundstone",
        "chalk",
    ),
    "sandstone": ("arkose", "lithic_sandstone", "greywacke", "pebbly_sandstone"),
    "mudstone": ("claystone", "shale", "black_shale"),
}
_SIZE_LETTERS = ("m", "c", "ms", "cs")
_EDGES = " .,;:()[]-"
_GAP_NUMBERS = re.compile(r"[~]?\d+(?:[.,]\d+)?\s*(?:mm|cm|m|ft|feet|in|'|\")?(?![A-Za-z])", re.I)


@dataclass(frozen=True, slots=True)
class RockCell:
    """What a lithology cell holds.

    Attributes
    ----------
    lithology : vocabulary id, "" when none is named
    qualifiers : vocabulary ids
    grain : size states written beside the rock, upward
    structures, largest, d50_mm : as in `GrainCell`
    sure : False when the rock is written with doubt or read from an ambiguous word
    """

    lithology: str = ""
    qualifiers: tuple[str, ...] = ()
    grain: tuple[GrainState, ...] = ()
    structures: tuple[Structure, ...] = ()
    largest: LargestClasts | None = None
    d50_mm: float | None = None
    sure: bool = True


@lru_cache(maxsize=CACHE_SIZE)
def read_lithology(text: str, scale: str = "wentworth") -> Reading[RockCell]:
    """The lithology cell.

    Parameters
    ----------
    text : the cell
    scale : size scale of size classes written beside the rock
    """
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    whole = vocabulary("lithologies").find(plain)
    known = lexicon("lithologies", "qualifiers", "structures", "fossils", "rounding")
    if whole and not known.scan(plain)[0].ambiguity:
        return Reading(RockCell(whole.id, sure="?" not in plain))
    words = collect(plain, known)
    remarks: list[Remark] = list(words.remarks)
    rocks = words.terms.get("lithologies", [])
    sized = _sized(plain, len({term.id for term, written, _ in rocks if written not in _SIZE_LETTERS}), scale)
    if sized and sized.value:
        return _with_sizes(sized.value, sized.remarks, words, "?" not in plain)
    named = dict.fromkeys(term.id for term, _, _ in rocks)
    for generic, kinds in _KINDS.items():
        if generic in named and any(kind in named for kind in kinds):
            del named[generic]  # `lst (packstone)` names one rock
    mixed = _interbedded(plain, tuple(named))
    _say_mixture(tuple(named), mixed, remarks)
    if not named and not words.terms:
        size = read_grain(plain, scale).value
        if size and size.states:
            return Reading(RockCell(grain=size.states, sure="?" not in plain))
        return Reading(None, (*remarks, _unknown(plain)))
    left = unread(words.unknown)
    if left:
        remarks.append(left)
    structures = tuple(Structure(t.id, w, sure=sure) for t, w, sure in words.terms.get("structures", ()))
    lithology = "heterolithic" if mixed else next(iter(named), "")
    return Reading(
        RockCell(lithology, words.ids("qualifiers"), (), structures,
                 sure="?" not in plain and all(sure for _, _, sure in rocks)),
        tuple(remarks),
    )  # fmt: skip


@lru_cache(maxsize=CACHE_SIZE)
def read_gap(text: str) -> Reading[str]:
    """The reason for a gap (vocabulary id), or None when the text is not about a gap."""
    plain = _GAP_NUMBERS.sub(" ", clean(text)).strip(_EDGES)
    if not plain or len(plain) > 120:
        return Reading(None)
    terms = vocabulary("gaps")
    found = terms.find(plain)
    if found:
        return Reading(found.id)
    pieces = lexicon("gaps").scan(plain)
    if pieces and pieces[0].vocabulary == "gaps" and pieces[0].term:
        others = [p for p in pieces[1:] if not p.filler and p.vocabulary != "gaps"]
        # `lost core 2.6 ft` is a gap; `covered by fine sst` talks about a rock
        if not others:
            return Reading(pieces[0].term.id)
    return Reading(None)


def _sized(plain: str, rocks: int, scale: str) -> Reading[GrainCell] | None:
    """The cell read as one with a size, when it names at most one rock and a size beside it."""
    if rocks > 1 or len(plain.split()) < 2:
        return None
    reading = read_grain(plain, scale)
    if any(r.code in ("grain.to", "grain.graded_by_words") for r in reading.remarks) and " up" not in plain:
        reading = _range_beside_rock(plain, reading, scale)
    cell = reading.value
    if cell is None or any(r.code == "grain.from_rock" for r in reading.remarks):
        return reading if cell and (cell.largest or cell.d50_mm) else None
    # a class that is itself the rock (`sandy silt`) is no size beside a rock, and a lone `m` may be anything
    labels = [state.size.label for state in cell.states]
    if all(vocabulary("lithologies").find(label) for label in labels):
        return reading if cell.largest else None
    lone = all(label in ("m", "c") for label in labels) and not re.search(
        r"\b(?:med|crs|medium|coarse)", plain, re.I
    )
    return None if lone and cell.lithology not in _SANDS else reading


def _range_beside_rock(plain: str, graded: Reading[GrainCell], scale: str) -> Reading[GrainCell]:
    """`fine to medium sandstone` names a range; grading is offered as the other reading."""
    reading = read_grain(re.sub(r"\s+to\s+", "-", plain), scale)
    if reading.value is None or graded.value is None or len(reading.value.states) != 1:
        return graded
    label = reading.value.states[0].size.label
    order = " → ".join(state.size.label for state in graded.value.states)
    asked = question("grain.to", f"{quoted(plain)} is read as a range and could be grading",
                     "write the size into the column grain, with an arrow for grading",
                     (f"range {label}", f"{order} graded upward"))  # fmt: skip
    return Reading(reading.value, (asked, *reading.remarks))


def _with_sizes(
    cell: GrainCell, remarks: tuple[Remark, ...], words: Collected, sure: bool
) -> Reading[RockCell]:
    """A lithology cell that holds a size: the size reader has sorted all its words."""
    lithology = cell.lithology or words.first("lithologies")
    rock = RockCell(lithology, cell.qualifiers, cell.states, cell.structures, cell.largest, cell.d50_mm, sure)
    return Reading(rock, remarks)


def _interbedded(text: str, rocks: tuple[str, ...]) -> bool:
    return bool(re.search(r"\binterb\w*|\binterlam\w*|\balternat\w*|/", text, re.I)) and len(rocks) == 2


def _say_mixture(rocks: tuple[str, ...], mixed: bool, remarks: list[Remark]) -> None:
    if len(rocks) > 1 and not any(r.code == "word.ambiguous" for r in remarks):
        labels = [vocabulary("lithologies")[id].label for id in rocks]
        shown = [labels[0], "heterolithic: " + " and ".join(labels)]
        if mixed:
            shown.reverse()
        remarks.append(
            question("lithology.several", f"{len(rocks)} rocks are named: {', '.join(labels)}",
                     "name the main rock first, or write alternating beds as a pattern",
                     (shown[0], shown[1]))
        )  # fmt: skip


def _unknown(plain: str) -> Remark:
    terms = vocabulary("lithologies")
    labels = tuple(term.label for term in terms.values())
    near = terms.nearest(plain) or next(
        (n for w in plain.split()[:6] if len(w) > 2 and (n := terms.nearest(w))), None
    )
    return error("lithology.unknown", f"{quoted(plain)} is not a rock that is known",
                 "use a known rock, or move the words to the notes column", allowed=labels, nearest=near)  # fmt: skip
