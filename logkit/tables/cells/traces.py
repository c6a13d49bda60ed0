"""Bioturbation grades and fossils: `BI 2-3 Oph.`, `ii3`, `30 %`, `Sk., biv frags`."""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache

from logkit.model import Bioturbation
from logkit.tables.cells.lengths import number
from logkit.tables.cells.reading import CACHE_SIZE, Reading, Remark, clean, error, note, question, quoted
from logkit.tables.cells.refused import refusal
from logkit.vocabulary import lexicon
from logkit.vocabulary.words import word

_NUM = r"\d+(?:[.,]\d+)?"
_GRADE = re.compile(
    rf"""(?:(?P<scheme>\bTG|\bBI|\bB\.I\.|\bii|\bI\.?F\.?I\.?|\bbioturb(?:ation)?(?:\s+(?:index|grade))?|\bgrade)
        \s*[:=]?\s*
        (?P<a>{_NUM})(?:\s*(?:-|to|/)\s*(?P<b>{_NUM}))?\s*(?P<percent>%)?)(?![A-Za-z0-9])""",
    re.X | re.I,
)
_BARE = re.compile(rf"^(?P<a>{_NUM})(?:\s*(?:-|to|/)\s*(?P<b>{_NUM}))?\s*(?P<percent>%)?(?![\d.])")
_WORDS = {"none": 0.0, "absent": 0.0, "no bioturbation": 0.0, "not bioturbated": 0.0, "unbioturbated": 0.0,
          "sparse": 1.0, "low": 2.0, "moderate": 3.0, "mod": 3.0, "high": 4.0, "intense": 5.0,
          "complete": 6.0}  # fmt: skip
_STATES = frozenset(
    (
        "fragment",
        "debris",
        "cast",
        "mould",
        "mold",
        "impression",
        "hash",
        "trace",
        "remain",
        "broken",
        "whole",
        "articulated",
        "burrow",
    )
)
RANGES = {"taylor_goldring": (0.0, 6.0), "ichnofabric": (1.0, 6.0), "percent": (0.0, 100.0)}
"""Scheme -> lowest and highest grade."""


@dataclass(frozen=True, slots=True)
class BioturbationCell:
    """A bioturbation grade and the fossils written beside it (vocabulary ids)."""

    bioturbation: Bioturbation | None
    fossils: tuple[str, ...] = ()


@lru_cache(maxsize=CACHE_SIZE)
def read_bioturbation_cell(text: str) -> Reading[BioturbationCell]:
    """The bioturbation cell with the traces written beside the grade.

    A grade without a named scheme is read on that of Taylor and Goldring, 0 to 6, with a note.

    References
    ----------
    taylor_goldring_1993
    """
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    remarks: list[Remark] = []
    rest, grade = take_bioturbation(plain, remarks)
    if grade is None and not remarks:
        rest, grade = _bare_grade(plain, remarks)
    fossils: tuple[str, ...] = ()
    if any(c.isalpha() for c in rest):
        named = read_fossils(rest)
        fossils = named.value or ()
        remarks.extend(named.remarks)
    if grade is None and not fossils and not any(r.level == "error" for r in remarks):
        remarks.append(
            error("bioturbation.unreadable", f"{quoted(plain)} holds no bioturbation grade",
                  "write BI with a grade from 0 to 6, for example BI 2-3", allowed=("BI 0-6", "ii 1-6", "0-100 %"))
        )  # fmt: skip
    if grade is None and not fossils:
        return Reading(None, tuple(remarks))
    return Reading(BioturbationCell(grade, fossils), tuple(remarks))


def take_bioturbation(text: str, remarks: list[Remark]) -> tuple[str, Bioturbation | None]:
    """The text without a bioturbation grade that is named as one, and the grade."""
    match = _GRADE.search(text)
    if match is None:
        return text, None
    rest = f"{text[: match.start()]} {text[match.end() :]}"
    word = match["scheme"].casefold().replace(".", "")
    if match["percent"]:
        return rest, _grade(match, "percent", remarks)
    if word in ("ii", "ifi"):
        return rest, _grade(match, "ichnofabric", remarks)
    if word != "tg":
        remarks.append(
            note("bioturbation.scheme", f"{quoted(match[0])} read on the scheme of Taylor and Goldring, 0 to 6",
                 "write TG or ii before the grade, so that the scheme is named on the sheet")
        )  # fmt: skip
    return rest, _grade(match, "taylor_goldring", remarks)


def _bare_grade(text: str, remarks: list[Remark]) -> tuple[str, Bioturbation | None]:
    match = _BARE.match(text)
    if match:
        scheme = "percent" if match["percent"] else "taylor_goldring"
        if scheme != "percent":
            remarks.append(
                note("bioturbation.scheme", f"{quoted(match[0])} read on the scheme of Taylor and Goldring, 0 to 6",
                     "write TG or ii before the grade, so that the scheme is named on the sheet")
            )  # fmt: skip
        return text[match.end() :], _grade(match, scheme, remarks)
    value = _WORDS.get(text.casefold())
    if value is None:
        return text, None
    remarks.append(
        note("bioturbation.word", f"{quoted(text)} read as grade {value:g} of Taylor and Goldring")
    )
    return "", Bioturbation(value, value, "taylor_goldring")


def _grade(match: re.Match[str], scheme: str, remarks: list[Remark]) -> Bioturbation | None:
    values = sorted(v for t in (match["a"], match["b"]) if t and (v := number(t)[0]) is not None)
    lowest, highest = RANGES[scheme]
    if values and lowest <= values[0] and values[-1] <= highest:
        return Bioturbation(values[0], values[-1], scheme)
    shown = scheme.replace("_", " ")
    remarks.append(
        error("bioturbation.range", f"{quoted(match[0])} is outside the scheme {shown}",
              f"write a grade from {lowest:g} to {highest:g}, or % behind a percentage",
              allowed=("BI 0-6", "ii 1-6", "0-100 %"))
    )  # fmt: skip
    return None


@lru_cache(maxsize=CACHE_SIZE)
def read_fossils(text: str) -> Reading[tuple[str, ...]]:
    """Fossils and trace fossils: ids where the vocabulary knows them, else the words as written."""
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    known = lexicon("fossils")
    found: list[str] = []
    remarks: list[Remark] = []
    for clause in re.split(r"\s*[,;/+&]\s*|\s+and\s+", plain):
        new: list[str] = []
        for piece in known.scan(clause):
            if piece.term and piece.vocabulary == "fossils":
                found.append(piece.term.id)
            elif piece.ambiguity:
                ranked = piece.ambiguity.ranked(("fossils",))
                if ranked[0].terms and ranked[0].terms[0][0] == "fossils":
                    found.append(ranked[0].terms[0][1].id)
                    remarks.append(
                        question("word.ambiguous", f"{quoted(piece.written)} has several meanings",
                                 f"write {ranked[0].words} in full", (m.words for m in ranked))
                    )  # fmt: skip
                else:
                    new.append(piece.written)
            elif not (piece.filler or word(piece.written)[0] in _STATES) and any(
                c.isalpha() for c in piece.written
            ):
                new.append(piece.written)
        if new:
            words = " ".join(new)
            near = known.suggest(words)
            hint = f"; nearest known: {near}" if near else ""
            remarks.append(
                note("fossils.as_written", f"{quoted(words)} is not in the list and is kept as written{hint}")
            )
            found.append(words[:80])
    if not found:
        remarks.append(
            error(
                "fossils.unreadable",
                f"{quoted(plain)} names no fossil",
                "write a name, for example Skolithos",
            )
        )
    return Reading(tuple(dict.fromkeys(found)) or None, tuple(remarks))
