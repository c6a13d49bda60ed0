"""The measured rivers the engine is calibrated and tested on, and the logs they are told as.

The data do not belong to the product: they are read from beside the checkout where they exist.
"""

from __future__ import annotations

import csv
import math
import sys
from dataclasses import dataclass
from pathlib import Path

from logkit.model import Bed, GrainState, Header, Log, SizeInterval, Structure

DATA = Path(__file__).resolve().parents[3] / "shared" / "data" / "bankfull_rivers.csv"
CITATION = (
    "Bankfull reaches of sand-bed rivers, open compilation of Gearon et al. 2024 (MIT licence); rows through "
    "Trampush et al. 2014, Li et al. 2015, Wilkerson & Parker 2011, Singer 2010, Gaurav et al. 2015"
)
SAND_MM = (0.0625, 2.0)
DUNES_FROM_MM = 0.125


@dataclass(frozen=True)
class River:
    """One measured reach: mean velocity is discharge over width times depth."""

    source: str
    velocity_m_s: float
    depth_m: float
    d50_mm: float

    @property
    def size(self) -> SizeInterval:
        """The half-phi class of its median size, all a log would tell."""
        fine = math.floor(-2 * math.log2(self.d50_mm) + 1e-9) / 2 + 0.5
        return SizeInterval(2.0**-fine, 2.0 ** -(fine - 0.5))


def read_rivers() -> list[River]:
    """Sand-bed rivers with discharge, width and depth; exits with a message where the data are not there."""
    if not DATA.exists():
        print(f"The measured rivers are not here: {DATA} does not exist. Nothing was done.", file=sys.stderr)
        raise SystemExit(1)
    rivers = []
    with DATA.open(encoding="utf-8") as file:
        for row in csv.DictReader(file):
            try:
                width, depth, size, discharge = (
                    float(row[key]) for key in ("width_m", "depth_m", "d50_mm", "discharge_m3_s")
                )
            except ValueError:
                continue
            if min(width, depth, discharge) > 0 and SAND_MM[0] <= size < SAND_MM[1]:
                rivers.append(River(row["citation"], discharge / (width * depth), depth, size))
    return rivers


def river_log(rivers: list[River], structure: str, with_depth: bool) -> Log:
    """The rivers as beds of one log: half-phi class, a structure or none, depth within 25 % or none."""
    beds = []
    for place, river in enumerate(rivers):
        beds.append(
            Bed(
                name=str(place + 1),
                base_m=float(place),
                top_m=place + 0.8,
                grain=(GrainState(0.0, river.size),),
                structures=(Structure(structure),) if structure else (),
                flow_depth_m=(0.75 * river.depth_m, 1.25 * river.depth_m) if with_depth else None,
            )
        )
    return Log(Header(title="measured rivers", setting="river"), tuple(beds))
