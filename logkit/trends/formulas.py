"""The formulas of the family `stat`: importing this module registers them all.

Each lives in the module of its subject; nothing is computed here.
"""

from __future__ import annotations

from logkit.trends import chains, circular, distances, ranks, segments

__all__ = ["chains", "circular", "distances", "ranks", "segments"]
