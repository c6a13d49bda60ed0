"""Prints how often the ranges of the engine hold the measured velocities, beside two naive readings.

Run: `python tests/calibration/coverage.py`. The rivers are told as beds of a log through `infer_flow`: half-phi
class, "cross-bedding" or nothing, setting river, depth within 25 % or none.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from rivers import DUNES_FROM_MM, River, read_rivers, river_log

import logkit.flow.inference as inference
from logkit.flow import infer_flow
from logkit.flow.solver import Solver
from logkit.registry import evaluate

STATED = {
    "cross_bedded_with_depth": ("cross-bedded, depth +-25 %", "cross_bedding", True, "75-86 %, <= 3.2"),
    "cross_bedded": ("cross-bedded", "cross_bedding", False, "72-85 %, <= 3.8"),
    "moved": ("sand that moved", "", False, ">= 80 %, <= 5.5"),
    "moved_with_depth": ("sand that moved, depth +-25 %", "", True, ""),
}
"""Case -> words, structure, depth known, what was asked for."""


@dataclass(frozen=True)
class Row:
    """Coverage of one case, or of a naive reading."""

    key: str
    words: str
    rivers: int
    coverage: float
    width: float
    bias: float
    wanted: str = ""

    def __str__(self) -> str:
        return (
            f"{self.words:44s} n {self.rivers:3d}   in range {100 * self.coverage:5.1f} %   P90/P10 {self.width:5.2f}"
            f"   P50/measured {self.bias:4.2f}   {self.wanted}"
        )


def coverage_row(
    key: str, words: str, velocities: Sequence[float], ranges: np.ndarray, wanted: str = ""
) -> Row:
    """Coverage of ranges (low, middle, high) of shape (3, rivers)."""
    u = np.asarray(velocities)
    inside = (ranges[0] <= u) & (u <= ranges[2])
    return Row(key, words, len(u), float(inside.mean()), float(np.median(ranges[2] / ranges[0])),
               float(np.median(ranges[1] / u)), wanted)  # fmt: skip


def engine_row(key: str, rivers: list[River]) -> Row:
    """Coverage of one case through the public function."""
    words, structure, with_depth, wanted = STATED[key]
    history = infer_flow(river_log(rivers, structure, with_depth))
    frame = history.to_frame()
    ranges = frame[["velocity_p10_m_s", "velocity_p50_m_s", "velocity_p90_m_s"]].to_numpy().T
    return coverage_row(key, words, [r.velocity_m_s for r in rivers], ranges, wanted)


def table(rivers: list[River], solver: Solver | None = None) -> list[Row]:
    """The rows of the engine, for all sand rivers.

    Parameters
    ----------
    rivers : measured reaches; those too fine for dunes are left out where the bed is told as cross-bedded
    solver : answers in place of the shipped one
    """
    if solver is not None:
        inference.shared_solver = lambda: solver  # type: ignore[assignment]
    dunes = [r for r in rivers if r.d50_mm >= DUNES_FROM_MM]
    return [engine_row(key, dunes if STATED[key][1] else rivers) for key in STATED]


def naive_rows(rivers: list[River]) -> list[Row]:
    """The band between the classical erosion and deposition lines, and one constant answer for all rivers."""
    u = [r.velocity_m_s for r in rivers]
    d = [r.size.middle_mm for r in rivers]
    low = np.array([evaluate("rest.hjulstrom_deposition", d_mm=x) for x in d])
    high = np.array([evaluate("threshold.hjulstrom_erosion", d_mm=x) for x in d])
    band = np.stack([low, np.sqrt(low * high), high])
    middle, spread = float(np.mean(np.log(u))), float(np.std(np.log(u)))
    constant = np.exp([[middle + z * spread] * len(u) for z in (-1.2816, 0.0, 1.2816)])
    return [
        coverage_row("band", "between erosion and deposition line", u, band),
        coverage_row("constant", "constant answer (lognormal of these rivers)", u, constant),
    ]


def main() -> None:
    """Print the tables."""
    rivers = read_rivers()
    for row in (*table(rivers), *naive_rows(rivers)):
        print(row)
    print("\nCross-bedded with depth, by depth and by source:")
    dunes = [r for r in rivers if r.d50_mm >= DUNES_FROM_MM]
    for low, high in ((0, 1), (1, 2), (2, 4), (4, 8), (8, math.inf)):
        part = [r for r in dunes if low <= r.depth_m < high]
        print(f"{f'{low} to {high} m':>16s}  {engine_row('cross_bedded_with_depth', part)}")
    for source in sorted({r.source.split("(")[0].strip() for r in dunes}):
        part = [r for r in dunes if r.source.startswith(source)]
        print(f"{source[:16]:>16s}  {engine_row('cross_bedded_with_depth', part)}")
    fine = [r for r in rivers if r.d50_mm < DUNES_FROM_MM]
    print(f"{'below 0.125 mm':>16s}  {engine_row('cross_bedded_with_depth', fine)}")


if __name__ == "__main__":
    main()
