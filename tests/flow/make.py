"""Short ways to build beds and logs for the tests of the flow engine."""

from __future__ import annotations

from typing import Any

from logkit.model import Bed, GrainState, Header, Log, SizeInterval, Structure

CLASSES = {
    "slt": (0.0156, 0.0312), "vfL": (0.0625, 0.0884), "vfU": (0.0884, 0.125), "fL": (0.125, 0.1768),
    "fU": (0.1768, 0.25), "mL": (0.25, 0.3536), "mU": (0.3536, 0.5), "cL": (0.5, 0.7071), "cU": (0.7071, 1.0),
    "vcU": (1.414, 2.0), "pbl": (8.0, 16.0), "bld": (512.0, 1024.0),
}  # fmt: skip


def size(label: str) -> SizeInterval:
    """A grain-size class by its field label."""
    return SizeInterval(*CLASSES[label], label)


def bed(grain: str = "", structures: str = "", name: str = "1", **fields: Any) -> Bed:
    """A bed of 0.8 m; grain states and structures are given as words, upward."""
    labels = grain.split()
    states = tuple(GrainState(i / max(len(labels) - 1, 1), size(label)) for i, label in enumerate(labels))
    base = fields.pop("base_m", 0.0)
    top = fields.pop("top_m", base + 0.8)
    terms = tuple(Structure(term) for term in structures.split())
    return Bed(name, base, top, grain=states, structures=fields.pop("terms", terms), **fields)


def log(*beds: Bed, **header: Any) -> Log:
    """A river log of beds that are stacked if they all start at zero."""
    if len(beds) > 1 and all(b.base_m == 0 for b in beds):
        from dataclasses import replace

        beds = tuple(
            replace(b, name=str(i + 1) if b.name == "1" else b.name, base_m=float(i), top_m=i + b.thickness_m)
            for i, b in enumerate(beds)
        )
    return Log(Header(**{"setting": "river", "section": "A", **header}), beds)
