"""The structures cell: facies codes, Bouma letters and words, with the measures written beside them.

Order counts as upward only when it is written so: by division letters, an arrow, or words such as `passing up
into`. A list with commas has no order.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, replace
from functools import lru_cache

from logkit.errors import UnknownNameError
from logkit.model import Bioturbation, CurrentReading, SetThickness, Structure
from logkit.tables.cells.codes import read_code_word
from logkit.tables.cells.currents import take_currents
from logkit.tables.cells.reading import CACHE_SIZE, Reading, Remark, clean, error, note, question, quoted
from logkit.tables.cells.refused import refusal
from logkit.tables.cells.sets import take_climb, take_height, take_sets, take_wavelength
from logkit.tables.cells.traces import take_bioturbation
from logkit.tables.cells.words import Collected, collect, unread
from logkit.vocabulary import CodeTable, code_table, code_tables, lexicon, vocabulary

_UPWARD = re.compile(
    r"\s*(?:→|->|=>|(?<![<])>+|↑)\s*|\s+(?:(?:passing|passes|grading|grades|graded|going)\s+(?:up(?:wards?)?\s*)?(?:in)?to"
    r"|up\s*(?:in)?to|to|then|overlain\s+by|followed\s+by|succeeded\s+by|below)\s+",
    re.I,
)
_CLAUSE = re.compile(r"\s*[,;]\s*")
_DIVISION_LIST = re.compile(r"\bT[a-e](?:[-/,][a-e])+\b")
_DOUBTED_DIVISIONS = re.compile(r"\bT(?=[a-e/,\-]*\()(?:\(?[a-e]\)?[-/,]?){1,6}(?![A-Za-z])")
_ASIDES = (
    (re.compile(r"\b(?:fining|coarsening|thinning|thickening|fines|coarsens)[\s-]*up(?:wards?)?\b", re.I),
     "structures.trend", "is a trend, not a structure", "write the sizes at base and top into the column grain"),
    (re.compile(r"\b(?:sharp|gradational|erosive|erosional|scoured|loaded)\s+(?:base|contact|top)\b", re.I),
     "structures.contact", "is a contact, not a structure", "write it into the column contact"),
)  # fmt: skip
_EXTENT = re.compile(
    r"[@\[(]\s*(?P<low>\d+(?:\.\d+)?(?:e-?\d+)?)\s*-\s*(?P<high>\d+(?:\.\d+)?(?:e-?\d+)?)"
    r"\s*(?P<percent>%)?\s*(?:of bed)?[\])]?",
    re.I,
)
_PLACES = ((re.compile(r"\b(?:at|near|in) (?:the )?(?:base|bottom)\b|\bbasal\b|\blower(?:most)?\s+part\b", re.I), 0),
           (re.compile(r"\b(?:at|near|in)\s+(?:the\s+)?top\b|\bupper(?:most)?\s+part\b", re.I), 1))  # fmt: skip
_KINDS_OF_CROSS_BEDDING = ("trough_cross_bedding", "planar_cross_bedding", "herringbone_cross_bedding",
                          "sigmoidal_cross_bedding", "low_angle_cross_bedding")  # fmt: skip
_LONGEST_LIST = 60


@dataclass(frozen=True, slots=True)
class StructuresCell:
    """What a structures cell holds.

    Attributes
    ----------
    structures : in the order written; `upward` is True when that order is written as upward
    set_thickness, climb_angle_deg, ripple_wavelength_m, ripple_height_m : measures, SI and degrees
    lithology : rock that is written, or that all codes agree on; "" else
    qualifiers, fossils : vocabulary ids
    bioturbation : grade written beside the structures
    currents : palaeocurrents written beside the structures
    """

    structures: tuple[Structure, ...] = ()
    upward: bool = False
    set_thickness: SetThickness | None = None
    climb_angle_deg: float | None = None
    ripple_wavelength_m: float | None = None
    ripple_height_m: float | None = None
    lithology: str = ""
    qualifiers: tuple[str, ...] = ()
    bioturbation: Bioturbation | None = None
    fossils: tuple[str, ...] = ()
    currents: tuple[CurrentReading, ...] = ()


@lru_cache(maxsize=CACHE_SIZE)
def read_structures(text: str, codes: str = "fluvial", unit: str | None = None) -> Reading[StructuresCell]:
    """A structures cell.

    Parameters
    ----------
    text : the cell
    codes : name of the table of facies codes, see `logkit.vocabulary.code_tables`; the letters of the
        turbidite divisions are always known
    unit : unit of the sheet, for set thicknesses and ripple measures without one

    Notes
    -----
    An unknown `codes` gives an error remark, since cells never raise.
    """
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    try:
        table = code_table(codes)
    except UnknownNameError as problem:
        return Reading(None, (error("codes.unknown_table", problem.what.rstrip("."), problem.remedy.rstrip("."),
                                    allowed=problem.known, nearest=problem.nearest),))  # fmt: skip
    remarks: list[Remark] = []
    rest, bioturbation = take_bioturbation(plain, remarks)
    rest, climb = take_climb(rest, remarks)
    rest, sets = take_sets(rest, unit, remarks)
    rest, wavelength = take_wavelength(rest, unit, remarks)
    rest, height = take_height(rest, unit, remarks)
    rest, currents = take_currents(rest, "", remarks)
    rest = _take_asides(rest, remarks)
    found, words, upward, lithology = _structures(rest, table, remarks)
    if currents and found:
        currents = _on_structure(currents, found[0].term)
    measured = currents or sets or bioturbation or any(v is not None for v in (climb, wavelength, height))
    if not (
        found
        or words.terms
        or words.unknown
        or measured
        or lithology
        or any(r.level == "error" for r in remarks)
    ):
        words.unknown.extend(w for w in rest.split() if w != ",")  # fillers alone say nothing
    _say_unknown(rest, words, found, remarks)
    cell = StructuresCell(
        found, upward and len(found) > 1, sets, climb, wavelength, height,
        words.first("lithologies") or lithology, words.ids("qualifiers"), bioturbation,
        words.ids("fossils"), currents,
    )  # fmt: skip
    if cell == StructuresCell() and any(r.level == "error" for r in remarks):
        return Reading(None, tuple(remarks))
    return Reading(cell, tuple(remarks))


def _structures(
    text: str, table: CodeTable, remarks: list[Remark]
) -> tuple[tuple[Structure, ...], Collected, bool, str]:
    """Structures in the order written, the other words, whether the order is upward, the rock of the codes."""
    words = Collected()
    found: list[Structure] = []
    rocks: set[str] = set()
    text = _DOUBTED_DIVISIONS.sub(lambda m: re.sub(r"[()]", "", m[0]) + "?", text)
    parts = _split_upward(_DIVISION_LIST.sub(lambda m: m[0].replace(",", "/"), text), table)
    upward = len(parts) > 1
    placed: list[tuple[int, int, Structure]] = []
    for part in parts:
        for clause in _CLAUSE.split(part):
            if not clause.strip() or len(found) >= _LONGEST_LIST:
                continue
            read, sequence, rock = _clause(clause, table, words, remarks)
            upward = upward or sequence
            if rock:
                rocks.add(rock)
            where = next((place for pattern, place in _PLACES if pattern.search(clause)), None)
            placed.extend((where, len(placed), s) for s in read if where is not None)
            found.extend(read)
    if len(placed) == len(found) > 1 and {place for place, _, _ in placed} == {0, 1}:
        found, upward = [s for _, _, s in sorted(placed, key=lambda p: p[:2])], True
    return tuple(found), words, upward, rocks.pop() if len(rocks) == 1 else ""


def _split_upward(text: str, table: CodeTable) -> list[str]:
    """The text split where it is written as a sequence upward."""
    parts = [part for part in _UPWARD.split(text) if part.strip()]
    if len(parts) > 1 and not re.search(r"→|->|=>|>|↑", text):
        # words such as `to` part a sequence only when there is a structure on each side
        known = lexicon("structures")
        for part in parts:
            has_term = any(piece.vocabulary == "structures" or piece.ambiguity for piece in known.scan(part))
            if not has_term and not any(read_code_word(word, table) for word in part.split()):
                return [text]
    return parts or [text]


def _clause(
    clause: str, table: CodeTable, words: Collected, remarks: list[Remark]
) -> tuple[list[Structure], bool, str]:
    """Structures of one clause, whether it is a sequence of divisions, and the rock of its codes."""
    low = high = None
    extent = _EXTENT.search(clause)
    if extent:
        low, high = (float(extent[n]) / (100 if extent["percent"] else 1) for n in ("low", "high"))
        clause = f"{clause[: extent.start()]} {clause[extent.end() :]}"
        if not 0 <= low < high <= 1:
            remarks.append(error("structures.extent", f"{low:g}-{high:g} is not a part of a bed",
                                 "write the part upward as @0-0.4 or [0-40%]"))  # fmt: skip
            low = high = None
    found: list[Structure] = []
    rocks: set[str] = set()
    sequence = False
    plain_words: list[str] = []
    for written in clause.split():
        code = read_code_word(written, table)
        if code is None:
            plain_words.append(written)
            continue
        found.extend(code.structures)
        remarks.extend(r for r in code.remarks if r not in remarks)
        sequence = sequence or code.upward
        rocks.update(code.lithologies)
    rest = " ".join(plain_words)
    if rest:
        own = collect(
            rest, lexicon("structures", "lithologies", "qualifiers", "fossils"), sure="?" not in rest
        )
        named = own.terms.get("structures", [])
        if any(t.id in _KINDS_OF_CROSS_BEDDING for t, _, _ in named):
            named = [
                n for n in named if n[0].id != "cross_bedding"
            ]  # `cross-bedded (trough)` is one structure
        found.extend(Structure(t.id, written, sure=sure) for t, written, sure in named)
        for name, terms in own.terms.items():
            if name != "structures":
                words.terms.setdefault(name, []).extend(terms)
        remarks.extend(r for r in own.remarks if r not in remarks)
        words.unknown.extend(own.unknown)
    if extent:
        found = [replace(s, base_fraction=low, top_fraction=high) for s in found]
    return found, sequence, rocks.pop() if len(rocks) == 1 else ""


def _take_asides(text: str, remarks: list[Remark]) -> str:
    """The text without trends and contacts, which other columns hold."""
    for pattern, code, message, remedy in _ASIDES:
        match = pattern.search(text)
        if match:
            remarks.append(note(code, f"{quoted(match[0])} {message}", remedy))
            text = f"{text[: match.start()]} , {text[match.end() :]}"
    return text


def _on_structure(currents: tuple[CurrentReading, ...], structure: str) -> tuple[CurrentReading, ...]:
    """Readings without a named indicator were measured on the structure beside them."""
    terms = vocabulary("indicators")
    indicator = next((t for t in terms.values() if structure in t.structures), None)
    if indicator is None:
        return currents
    return tuple(
        replace(
            reading,
            indicator=indicator.id,
            sense="axis" if indicator.sense == "axis" else reading.sense,
            nature=reading.nature
            if reading.dip_deg is None
            else ("plane" if indicator.nature == "plane" else "line"),
        )
        if reading.indicator == "unspecified"
        else reading
        for reading in currents
    )


def _say_unknown(text: str, words: Collected, found: tuple[Structure, ...], remarks: list[Remark]) -> None:
    """Words nobody knows: an error when they stand alone or are close to a term, else a note."""
    unknown = [w for w in words.unknown if any(c.isalpha() for c in w) or len(w) > 1]
    if not unknown:
        return
    phrase = " ".join(unknown)
    near = lexicon("structures").suggest(text if found else phrase)
    if near in [vocabulary("structures")[structure.term].label for structure in found]:
        near = None
    anything = found or words.terms
    if anything and not near:
        left = unread(unknown)
        if left:
            remarks.append(left)
        return
    if anything:
        read = vocabulary("structures")[found[0].term].label if found else "left out"
        remarks.append(
            question("structures.unknown_word", f"{quoted(phrase)} is not a structure that is known",
                     f"correct it to {near}, or move it to the notes column", (read, str(near)))
        )  # fmt: skip
        return
    allowed = tuple(term.label for term in vocabulary("structures").values())
    elsewhere = [t.name for t in code_tables().values() if any(word in t.codes for word in unknown)]
    remedy = "use a known term or code, or move the words to the notes column"
    if elsewhere:
        remedy = f"choose the table of codes it is from: {', '.join(elsewhere)}"
    remarks.append(
        error("structures.unknown", f"{quoted(phrase)} is not a structure that is known", remedy,
              allowed=allowed, nearest=near)
    )  # fmt: skip
