"""Sentences that several verbs print."""

from __future__ import annotations

CAUTION = (
    "Velocities and depths are ranges for the moment a bed formed, inferred from published empirical relations and "
    "void outside their ranges. They are not design floods, scour depths, strengths, pressures or reserves; for any "
    "use that touches safety a qualified person must check the source log and decide, under local codes."
)
