"""Readers of single cells: text in, a `Reading` out. They know neither files nor rows, and never raise.

A reader takes the text of a cell and, where it matters, the unit, the size scale or the table of codes of the
sheet. Readers are pure and keep what they have read, since a log repeats its cells.
"""

from logkit.tables.cells.attitudes import read_attitude
from logkit.tables.cells.contact import ContactCell, read_contact, read_contact_cell
from logkit.tables.cells.core import CoreNote, read_core_note
from logkit.tables.cells.currents import read_currents
from logkit.tables.cells.grain import GrainCell, read_grain, read_largest, read_size, read_sorting
from logkit.tables.cells.lengths import Length, Span, is_span, read_length, read_span
from logkit.tables.cells.other import (
    read_colour,
    read_interval,
    read_marker,
    read_number,
    read_photos,
    read_samples,
)
from logkit.tables.cells.pattern import Pattern, PatternPart, is_pattern, read_pattern
from logkit.tables.cells.reading import Reading, Remark
from logkit.tables.cells.refused import is_date
from logkit.tables.cells.rock import RockCell, read_gap, read_lithology
from logkit.tables.cells.sets import read_sets
from logkit.tables.cells.structures import StructuresCell, read_structures
from logkit.tables.cells.traces import (
    BioturbationCell,
    read_bioturbation_cell,
    read_fossils,
)

__all__ = [
    "BioturbationCell", "ContactCell", "CoreNote", "GrainCell", "Length", "Pattern", "PatternPart", "Reading", "Remark",
    "RockCell", "Span", "StructuresCell", "is_date", "is_pattern", "is_span", "read_attitude", "read_bioturbation_cell",
    "read_colour", "read_contact", "read_contact_cell", "read_core_note", "read_currents",
    "read_fossils", "read_gap", "read_grain", "read_interval", "read_largest", "read_length", "read_lithology",
    "read_marker", "read_number", "read_pattern", "read_photos", "read_samples", "read_sets", "read_size",
    "read_sorting", "read_span", "read_structures",
]  # fmt: skip
