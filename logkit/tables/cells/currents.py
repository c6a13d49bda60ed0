"""The palaeocurrent cell: readings with the feature they were measured on, exactly as read in the field.

Nothing is corrected here: tilt, declination and the reversal of imbrication belong to the trends.
"""

from __future__ import annotations

import re
from functools import lru_cache
from typing import Literal

from logkit.model import CurrentReading
from logkit.tables.cells.attitudes import COMPASS, Attitude, find_attitudes, read_attitude
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
from logkit.tables.cells.words import unread
from logkit.vocabulary import Term, lexicon, vocabulary

__all__ = ["read_attitude", "read_currents", "take_currents"]

_COUNT = re.compile(r"\(?\bn\s*=\s*\d+\)?", re.I)
_SPREAD = re.compile(r"(?:±|\+/-|\+-)\s*\d+(?:\.\d+)?\s*°?")
_TIMES = re.compile(r"(?<![\d./])(?P<bearing>\d{3})\s*\(\s*x?\s*(?P<times>\d{1,2})\s*x?\s*\)")
_FROM = re.compile(r"\bfrom\b(?:\s+the)?\s*$", re.I)
_AXIS = re.compile(r"\b(?:axis|axes|axial|line|trend)\b", re.I)
_NAMED_BEARING = re.compile(
    r"\b(?P<word>flutes?|grooves?|prods?|gutters?|PCL|lineation|imbr\w*|foresets?|fs|toward[s]?|az|azimuth|pc|flow)"
    r"\s*[:=]?\s*(?P<bearings>\d{3}(?:\s*[-,&/]\s*\d{3})*)(?![\d.])",
    re.I,
)
_COMMA = re.compile(
    r"(?<![\d.,])(?P<whole>\d{1,3}),(?P<tenths>\d)(?![\d.,])(?!\s?(?:°|deg\b)?\s?[NSEW]\b)", re.I
)
_MOST_READINGS = 500


@lru_cache(maxsize=CACHE_SIZE)
def read_currents(text: str, hint: str = "") -> Reading[tuple[CurrentReading, ...]]:
    """The palaeocurrent cell.

    Parameters
    ----------
    text : the cell
    hint : indicator or structure id that the readings are on when the cell names none
    """
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    remarks: list[Remark] = []
    body = _with_points(_repeated(_SPREAD.sub(" ", _COUNT.sub(" ", plain)), remarks), remarks)
    attitudes = find_attitudes(body, remarks)[:_MOST_READINGS]
    readings = _named(body, attitudes, hint, remarks)
    if hint and readings and readings != _named(body, attitudes, "", []):
        remarks.append(
            note("currents.on_structure", f"{quoted(plain)} names no feature: read as measured on the structure of "
                 "the bed", "write the feature before the reading where it is another one")
        )  # fmt: skip
    if not readings and not any(r.level == "error" for r in remarks):
        remarks.append(
            error("currents.unreadable", f"{quoted(plain)} holds no direction",
                  "write an azimuth as 075, a dip and dip direction as 22/140, or a compass point as NNE",
                  allowed=("075", "22/140", "N30E 40SE", "30→220", "030-210", "NNE"))
        )  # fmt: skip
    return Reading(readings or None, tuple(remarks))


def _repeated(text: str, remarks: list[Remark]) -> str:
    """The text with `090(3)` written out as three readings, which is asked."""

    def written_out(match: re.Match[str]) -> str:
        times = int(match["times"])
        remarks.append(
            question("currents.times", f"{quoted(match[0])} read as {times} readings of {match['bearing']}",
                     "write each reading with & between",
                     (f"{times} readings of {match['bearing']}", f"readings {match['bearing']} and {times}"))
        )  # fmt: skip
        return " & ".join([match["bearing"]] * times) or match["bearing"]

    return _TIMES.sub(written_out, text)


def _with_points(text: str, remarks: list[Remark]) -> str:
    """The text with `22,5/140` as 22.5/140, which is asked: the comma could part two readings."""

    def pointed(match: re.Match[str]) -> str:
        whole, tenths = match["whole"], match["tenths"]
        remarks.append(
            question("currents.decimal_comma", f"the comma in {quoted(match[0])} is read as a decimal comma",
                     "write a decimal point, or part readings with &",
                     (f"{whole}.{tenths} degrees", f"readings {whole} and {tenths}"))
        )  # fmt: skip
        return f"{whole}.{tenths}"

    return _COMMA.sub(pointed, text)


def take_currents(text: str, hint: str, remarks: list[Remark]) -> tuple[str, tuple[CurrentReading, ...]]:
    """The text of another cell without its clear palaeocurrents, and these.

    Clear are a dip with its direction, a plunge with its trend, and three digits behind a word such as
    `flutes`; any other number is left alone.
    """
    found: list[CurrentReading] = []
    for match in reversed(list(_NAMED_BEARING.finditer(text))):
        attitudes = find_attitudes(match["bearings"], remarks)
        found[:0] = _named(
            match[0], _shifted(attitudes, match.start("bearings") - match.start()), hint, remarks
        )
        text = f"{text[: match.start('bearings')]} {text[match.end('bearings') :]}"
    attitudes = find_attitudes(text, remarks, pairs_only=True)
    for attitude in reversed(attitudes):
        before = text[: attitude.start]
        found[:0] = _named(before[-40:] + text[attitude.start : attitude.end],
                           _shifted([attitude], len(before[-40:]) - attitude.start), hint, [])  # fmt: skip
        text = f"{before} {text[attitude.end :]}"
    return text, tuple(found)


def _shifted(attitudes: list[Attitude], by: int) -> list[Attitude]:
    return [Attitude(a.nature, a.azimuth_deg, a.dip_deg, a.start + by, a.end + by, a.sure) for a in attitudes]


def _named(
    text: str, attitudes: list[Attitude], hint: str, remarks: list[Remark]
) -> tuple[CurrentReading, ...]:
    """Readings with their indicators: a name counts for all readings behind it until the next name."""
    readings: list[CurrentReading] = []
    known = lexicon("indicators")
    current = _from_hint(hint)
    at = 0
    unknown: list[str] = []
    for attitude in attitudes:
        before = text[at : attitude.start]
        doubt = False
        if attitude.start >= at and before.strip(" ,;&/+"):
            for piece in known.scan(before):
                if piece.term and piece.vocabulary == "indicators":
                    current = piece.term if piece.term.id != "unspecified" or not hint else current
                elif piece.filler:
                    doubt = doubt or piece.written == "?" or piece.written.casefold().startswith("poss")
                elif any(c.isalpha() for c in piece.written) and piece.written.upper() not in COMPASS:
                    unknown.append(piece.written)
        reversed_sense = bool(_FROM.search(before))
        unknown = [
            w
            for w in unknown
            if w.casefold() not in ("from", "axi", "axis", "axes", "axial", "line", "trend")
        ]
        after = text[attitude.end : attitude.end + 1]
        reading = _reading(attitude, current, text, bool(_AXIS.search(before)), not doubt and after != "?")
        readings.append(reading)
        if reversed_sense:
            remarks.append(
                question("currents.from", f"{quoted(text)} says from: the direction is kept as written",
                         "write the direction the flow went towards",
                         (f"towards {reading.azimuth_deg:g}", f"towards {(reading.azimuth_deg + 180) % 360:g}"))
            )  # fmt: skip
        at = max(at, attitude.end)
    _explain(readings, remarks)
    tail = [p.written for p in known.scan(text[at:]) if not p.filler and not p.term] if attitudes else []
    left = unread([*unknown, *tail]) if attitudes else None
    if left:
        remarks.append(left)
    return tuple(readings)


def _from_hint(hint: str) -> Term:
    terms = vocabulary("indicators")
    if hint in terms:
        return terms[hint]
    return next((t for t in terms.values() if hint and hint in t.structures), terms["unspecified"])


def _reading(attitude: Attitude, term: Term, text: str, axis: bool, sure: bool) -> CurrentReading:
    nature: Literal["plane", "line", "azimuth"]
    if attitude.dip_deg is None:
        nature = "azimuth"
    elif term.id == "unspecified":
        nature = "line" if attitude.nature == "line" else "plane"
    else:
        nature = "plane" if term.nature == "plane" else "line"
    sense: Literal["direction", "axis"] = (
        "axis" if attitude.nature == "axis" or term.sense == "axis" or axis else "direction"
    )
    return CurrentReading(term.id, nature, sense, attitude.azimuth_deg, attitude.dip_deg,
                          text[attitude.start : attitude.end].strip(), attitude.sure and sure)  # fmt: skip


def _explain(readings: list[CurrentReading], remarks: list[Remark]) -> None:
    """Notes on readings whose meaning people get wrong."""
    upstream = [r for r in readings if vocabulary("indicators")[r.indicator].upstream]
    if upstream:
        r = upstream[0]
        remarks.append(
            note("currents.upstream", f"{r.indicator.replace('_', ' ')} dips against the flow: dip direction "
                 f"{r.azimuth_deg:.0f}, flow towards about {(r.azimuth_deg + 180) % 360:.0f} before tilt is removed")
        )  # fmt: skip
    flat = [r for r in readings if r.nature == "azimuth" and r.indicator not in ("unspecified",)]
    if flat:
        remarks.append(
            note("currents.azimuth_as_read", f"{flat[0].indicator.replace('_', ' ')} {flat[0].azimuth_deg:03.0f} is an "
                 "azimuth as read: without a plunge or dip the tilt of the bed cannot be removed from it")
        )  # fmt: skip
