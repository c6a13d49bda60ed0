"""Hydraulics: formulas as records, numbers in and numbers out. No beds here.

Examples
--------
>>> from logkit.hydraulics import evaluate
>>> round(evaluate("settling.stokes", d_mm=0.015625, temp_c=20, salinity=0), 6)
0.000219
"""

from __future__ import annotations

from logkit.hydraulics.sources import describe, sources_table
from logkit.registry import FORMULAS, Assessed, ValidityNote, assess, evaluate

__all__ = ["FORMULAS", "Assessed", "ValidityNote", "assess", "describe", "evaluate", "sources_table"]
