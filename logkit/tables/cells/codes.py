"""Facies codes and division letters as they stand in a cell: `St`, `Sh/Sl?`, `Ta-c`, `Tbc`, `S1`."""

from __future__ import annotations

import re
from dataclasses import dataclass

from logkit.model import Structure
from logkit.tables.cells.reading import Remark, note, question
from logkit.vocabulary import CodeTable, FaciesCode, code_table

_BOUMA = re.compile(r"^T(?P<letters>[a-e](?:[\-/,→>]?[a-e])*)(?P<doubt>\?)?$")
_EDGES = " .,;:()[]"


@dataclass(frozen=True, slots=True)
class CodeWord:
    """A word that is a code or several.

    Attributes
    ----------
    structures : in order; `upward` is True for a sequence of divisions
    lithologies : lithology ids of the codes
    remarks : questions on alternatives
    """

    structures: tuple[Structure, ...]
    upward: bool
    lithologies: tuple[str, ...]
    remarks: tuple[Remark, ...] = ()


def read_code_word(word: str, table: CodeTable) -> CodeWord | None:
    """The codes in one word, None when it is not one. Case counts: `Sh` is a code, `sh` is not."""
    plain = word.strip(_EDGES)
    divisions = _BOUMA.match(plain)
    if divisions:
        return _divisions(plain, divisions["letters"], bool(divisions["doubt"]))
    doubt = plain.endswith("?")
    parts = re.split(r"[/+|]|(?<=[a-z0-9])-(?=[A-Z])", plain.rstrip("?"))
    known = [_lookup(part.rstrip("?"), table) for part in parts]
    if not known or not all(known):
        return None
    codes = [code for code in known if code]
    several = len(codes) > 1
    structures = tuple(
        s for code in codes for s in _structures(code, plain, sure=not (doubt or several or "?" in plain))
    )
    remarks: tuple[Remark, ...] = ()
    if several:
        shown = tuple(f"{code.code} ({code.words})" for code in codes)
        remarks = (
            question("codes.alternatives", f"{plain!r} names {len(codes)} codes; all are kept as unsure",
                     "keep the code you trust, or write an arrow for a sequence", shown),
        )  # fmt: skip
    elif codes[0].alternatives and doubt:
        remarks = (note("codes.doubt", f"{plain!r}: {codes[0].words}"),)
    return CodeWord(structures, False, tuple(c.lithology for c in codes if c.lithology), remarks)


def _lookup(code: str, table: CodeTable) -> FaciesCode | None:
    found = table.codes.get(code)
    if found is None:
        found = code_table("bouma").codes.get(code)
    return found


def _structures(code: FaciesCode, written: str, sure: bool) -> tuple[Structure, ...]:
    return tuple(Structure(id, written, sure=sure, code=code.code) for id in code.structures)


def _divisions(written: str, letters: str, doubt: bool) -> CodeWord:
    """Turbidite divisions in order: `a-c` is a, b, c."""
    chosen: list[str] = []
    for match in re.finditer(r"([a-e])(?:-([a-e]))?", letters):
        first, last = match[1], match[2] or match[1]
        step = range(ord(first), ord(last) + 1) if last >= first else range(ord(first), ord(last) - 1, -1)
        chosen.extend(chr(c) for c in step if not chosen or chosen[-1] != chr(c))
    codes = [code_table("bouma").codes[f"T{letter}"] for letter in chosen]
    structures = tuple(s for code in codes for s in _structures(code, written, sure=not doubt))
    remarks: tuple[Remark, ...] = ()
    if len(chosen) > 1:
        remarks = (
            note("codes.divisions", f"{written!r}: {len(chosen)} divisions without their thicknesses"),
        )
    if chosen != sorted(chosen):
        remarks = (
            question("codes.order", f"the divisions of {written!r} are not in their usual order upward",
                     "write the divisions upward", (" → ".join(chosen), " → ".join(sorted(chosen)))),
        )  # fmt: skip
    rocks = dict.fromkeys(code.lithology for code in codes)
    if len(rocks) > 1:
        rocks.pop("mudstone", None)

    return CodeWord(structures, len(chosen) > 1, tuple(rocks), remarks)
