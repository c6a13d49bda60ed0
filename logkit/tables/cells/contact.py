"""The contact cell: kind of the base, relief of an erosive one, distance over which a gradational one passes."""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache

from logkit.model import Contact, CurrentReading, Structure
from logkit.tables.cells.currents import take_currents
from logkit.tables.cells.lengths import number, unit_symbol
from logkit.tables.cells.reading import CACHE_SIZE, Reading, Remark, clean, error, note, question, quoted
from logkit.tables.cells.refused import refusal
from logkit.tables.cells.words import Collected, add_pieces, unread
from logkit.units import METRES
from logkit.vocabulary import lexicon, vocabulary

_NUM = r"\d+(?:[.,]\d+)?|[.,]\d+"
_UNIT = r"mm|cm|metres?|m|ft|feet|inch(?:es)?|in|'|\""
_RELIEF = re.compile(
    rf"\b(?:relief|rel\.?|scoured?|scours?|ero\w*|incised|cuts?(?:\s+down)?|amplitude|depth)\s*"
    rf"(?:of|to|up to|depth|:|=|~|by)?\s*"
    rf"(?:(?:{_NUM})\s*-\s*)?(?P<value>{_NUM})\s*(?P<unit>{_UNIT})?(?![A-Za-z])",
    re.I,
)
_AFTER = re.compile(
    rf"(?P<value>{_NUM})\s*(?P<unit>{_UNIT})?\s*(?:of\s+)?(?P<word>relief|scour|zone|transition)\b", re.I
)
_ZONE = re.compile(
    rf"\b(?:over|across|within|zone|grad\w*|transition\w*)\s*(?:of|:|=|~|over)?\s*\(?\s*"
    rf"(?P<value>{_NUM})\s*(?P<unit>{_UNIT})?(?![A-Za-z])\)?",
    re.I,
)
_MEASURE_WORDS = frozenset(
    ("relief", "rel", "over", "across", "within", "zone", "amplitude", "depth", "down", "up", "of", "max")
)
_PRECEDENCE = ("faulted", "erosive", "loaded", "gradational", "undulose", "sharp", "not_seen", "unknown")
_STRUCTURE_KIND = {
    "load_casts": "loaded",
    "flames": "loaded",
    "ball_and_pillow": "loaded",
    "scour_fill": "erosive",
}


@dataclass(frozen=True, slots=True)
class ContactCell:
    """A contact with what people write beside it: palaeocurrents and structures of the sole."""

    contact: Contact | None
    currents: tuple[CurrentReading, ...] = ()
    structures: tuple[Structure, ...] = ()


def read_contact(text: str, unit: str | None = None) -> Reading[Contact]:
    """The contact of a contact cell; soles and palaeocurrents beside it are in `read_contact_cell`.

    Parameters
    ----------
    text : the cell
    unit : unit of the sheet, for a relief without one
    """
    reading = read_contact_cell(text, unit)
    return Reading(reading.value.contact if reading.value else None, reading.remarks)


@lru_cache(maxsize=CACHE_SIZE)
def read_contact_cell(text: str, unit: str | None = None) -> Reading[ContactCell]:
    """The contact cell with the palaeocurrents and sole structures written beside the contact."""
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    remarks: list[Remark] = []
    rest, currents = take_currents(plain, "", remarks)
    relief, zone, rest = _measures(rest, unit, remarks)
    words = Collected()
    known = lexicon("contacts", "structures", "indicators")
    for clause in re.split(r"\s*[,;/+&]\s*", rest):
        add_pieces(words, (p for p in known.scan(clause) if not p.ambiguity or p.term), known.names,
                   "?" not in clause)  # fmt: skip
    remarks.extend(words.remarks)
    contact = _contact(words, relief, zone, remarks)
    structures = _structures(words, currents)
    left = unread(w for w in words.unknown if w.casefold() not in _MEASURE_WORDS)
    if contact is None and not structures and not currents:
        near = vocabulary("contacts").nearest(plain)
        labels = tuple(term.label for term in vocabulary("contacts").values())
        problem = error("contact.unknown", f"{quoted(plain)} is not a kind of contact", "use one of the kinds",
                        allowed=labels, nearest=near)  # fmt: skip
        return Reading(None, (*remarks, problem))
    if left:
        remarks.append(left)
    if currents:
        remarks.append(note("contact.currents", "the contact cell holds palaeocurrents: they are kept as readings",
                            "write them into the column palaeocurrent"))  # fmt: skip
    return Reading(ContactCell(contact, currents, structures), tuple(remarks))


def _measures(text: str, unit: str | None, remarks: list[Remark]) -> tuple[float | None, float | None, str]:
    relief = zone = None
    match = _AFTER.search(text)
    if match:
        value = _length(match, unit, remarks)
        text = f"{text[: match.start()]} {match['word']} {text[match.end() :]}"
        if match["word"].casefold() in ("relief", "scour"):
            return value, None, text
        return None, value, text
    match = _RELIEF.search(text)
    if match:
        relief = _length(match, unit, remarks)
        text = f"{text[: match.start('value')]} {text[match.end() :]}"
    match = _ZONE.search(text)
    if match:
        zone = _length(match, unit, remarks)
        text = f"{text[: match.start('value')]} {text[match.end() :]}"
    return relief, zone, text


def _length(match: re.Match[str], unit: str | None, remarks: list[Remark]) -> float | None:
    value = number(match["value"])[0]
    symbol = unit_symbol(match["unit"]) if match["unit"] else unit
    if not value:
        return None
    if symbol is None:
        symbol = "cm"
        remarks.append(
            question("length.no_unit", f"{quoted(match[0])} has no unit", "write the unit behind the number",
                     (f"{value:g} cm", f"{value:g} m"))
        )  # fmt: skip
    return value * METRES[symbol]


def _contact(
    words: Collected, relief: float | None, zone: float | None, remarks: list[Remark]
) -> Contact | None:
    found = words.terms.get("contacts", [])
    kinds = {term.id: sure for term, _, sure in found}
    for term, _, sure in words.terms.get("structures", ()):
        if term.id in _STRUCTURE_KIND:
            kinds.setdefault(_STRUCTURE_KIND[term.id], sure)
    if not kinds:
        if relief is not None:
            return Contact("erosive", relief, zone)
        return Contact("gradational", None, zone) if zone is not None else None
    real = [kind for kind in _PRECEDENCE if kind in kinds]
    kind = real[0]
    others = [k for k in real[1:] if k not in ("sharp", "unknown", "undulose")]
    if others:
        labels = [vocabulary("contacts")[k].label for k in (kind, *others)]
        remarks.append(
            question("contact.two_kinds", f"the contact is written as {' and '.join(labels)}",
                     "keep the kind that counts at the base", labels)
        )  # fmt: skip
    return Contact(kind, relief, zone, kinds[kind] and not others)


def _structures(words: Collected, currents: tuple[CurrentReading, ...]) -> tuple[Structure, ...]:
    """Sole structures, also those that are named only with their direction."""
    found = [Structure(t.id, written, sure=sure) for t, written, sure in words.terms.get("structures", ())]
    named = {s.term for s in found}
    terms = vocabulary("indicators")
    for id in dict.fromkeys([*(r.indicator for r in currents), *words.ids("indicators")]):
        of = terms[id].structures
        if len(of) == 1 and of[0] not in named:
            found.append(Structure(of[0], terms[id].label))
    return tuple(found)
