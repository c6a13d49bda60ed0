"""The sentences that stand beside every velocity and depth, on screen, on paper and in files."""

from __future__ import annotations

CAUTION = (
    "Velocities and depths are ranges for the moment a bed formed, inferred from published empirical "
    "relations and void outside their ranges. They are not design floods, scour depths, strengths, pressures "
    "or reserves; for any use that touches safety a qualified person must check the source log and decide, "
    "under local codes."
)

CAUTION_SHORT = (
    "Flow and depth are ranges inferred from grain size and structure, not measured. Blank means no "
    "estimate, not still water. Not for design or safety without a qualified person's check of the log."
)
