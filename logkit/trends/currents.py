"""Palaeocurrents of a log: each reading corrected, then summaries by kind of indicator and by rank.

The rotation is in `geometry`, the statistics of angles in `circular`. Every reading keeps its row in the
table of corrections, also when it could not be used.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np

from logkit.model import Bed, CurrentReading, CurrentSummary, Log
from logkit.trends.circular import axial_resultant, circular_sd, rayleigh_p, resultant, vector_mean
from logkit.trends.geometry import plunge_in_bedding, restored_line, restored_plane
from logkit.trends.ranks import theil_sen_slope, trend_test
from logkit.vocabulary import vocabulary

if TYPE_CHECKING:
    import pandas as pd

Attitude = tuple[float, float]

FEW, FEW_LINES = 10, 20
"""Readings below which a mean is unreliable; for grooves and elongate clasts."""

LEAST_DIP = 2.0
"""Restored dip below which a plane has no direction, degrees."""

PLANE_TILT, LINE_TILT = 10.0, 25.0
"""Tilt above which a plane or a line must be restored, degrees; from memory of field handbooks."""

MANY_WANTED = frozenset({"groove", "long_axis", "wood_orientation", "tool_mark"})
APART = frozenset(
    {"wave_ripple_crest", "ripple_crest", "accretion_surface", "clinoform", "slump_fold", "long_axis",
     "wood_orientation", "aeolian_cross_bedding", "antidune_lamination", "unspecified"}
)  # fmt: skip
"""Indicators that do not simply point along the current, or whose kind is unknown: never put with others."""


@dataclass(frozen=True, slots=True)
class CorrectedReading:
    """One reading with everything done to it. Angles in degrees.

    azimuth_deg : where the current went (an axis: 0 to 180), None when it cannot be given
    restored_azimuth_deg, restored_dip_deg : of the plane or line with bedding level, before declination
    used : goes into the means; remark says why not, or what is doubtful
    """

    bed: str
    position_m: float
    indicator: str
    written: str
    nature: str
    sense: Literal["direction", "axis"]
    raw_azimuth_deg: float
    raw_dip_deg: float | None
    declination_deg: float | None
    bedding_dip_direction_deg: float | None
    bedding_dip_deg: float | None
    restored_azimuth_deg: float | None
    restored_dip_deg: float | None
    azimuth_deg: float | None
    used: bool
    remark: str


@dataclass(frozen=True, slots=True)
class CurrentTrend:
    """Turning of a direction up-section: Kendall's tau of the deviation from the mean, degrees a metre."""

    indicator: str
    n: int
    tau: float
    p: float
    turn_deg_per_m: float


@dataclass(frozen=True, slots=True)
class Currents:
    """Readings, summaries and trends up-section of a log."""

    readings: tuple[CorrectedReading, ...]
    summaries: tuple[CurrentSummary, ...]
    trends: tuple[CurrentTrend, ...]

    def table(self) -> pd.DataFrame:
        """One row a reading: as written, raw, corrected, used or why not."""
        import pandas as pd

        columns = list(CorrectedReading.__dataclass_fields__)
        return pd.DataFrame([[getattr(r, c) for c in columns] for r in self.readings], columns=columns)

    def to_frame(self) -> pd.DataFrame:
        """One row a summary."""
        import pandas as pd

        columns = [
            "indicator", "rank", "sense", "n", "mean_deg", "resultant", "spread_deg", "rayleigh_p", "notes",
        ]  # fmt: skip
        rows = [
            [s.indicator, s.rank, s.sense, s.n, s.mean_deg, s.resultant, s.spread_deg, s.rayleigh_p,
             " ".join(s.notes)]
            for s in self.summaries
        ]  # fmt: skip
        return pd.DataFrame(rows, columns=columns)


def find_currents(log: Log, bedding: Mapping[str, Attitude] | None = None) -> Currents:
    """Correct and summarise the palaeocurrents of a log.

    Parameters
    ----------
    log : the log; its header gives bedding (dip direction, dip) and declination
    bedding : dip direction and dip by bed name, where a bed has its own

    Notes
    -----
    Readings and bedding are taken to be from the same compass: tilt is removed first, then the declination
    is added. Planes that dip upstream are reversed. A line without a plunge is taken to lie in the bedding.
    A bare bearing is used as read.
    """
    own = dict(bedding or {})
    readings = tuple(
        correct_reading(bed, reading, own.get(bed.name, log.header.bedding), log.header.declination_deg)
        for bed in log.real_beds
        for reading in bed.currents
    )
    groups: dict[tuple[str, str], list[CorrectedReading]] = {}
    for reading in readings:
        groups.setdefault((reading.indicator, reading.sense), []).append(reading)
    summaries = [_summary(indicator, _rank(indicator), group) for (indicator, _), group in groups.items()]
    for (rank, _), kinds in _combinable(groups).items():
        merged = [reading for kind in kinds for reading in groups[kind]]
        summaries.append(_summary(f"all of {rank} rank", rank, merged))
    trends = [t for (name, _), group in groups.items() if (t := _trend(name, group)) is not None]
    return Currents(readings, tuple(s for s in summaries if s is not None), tuple(trends))


def _rank(indicator: str) -> str:
    known = vocabulary("indicators")
    return known[indicator].rank if indicator in known else ""


def _upstream(indicator: str) -> bool:
    known = vocabulary("indicators")
    return indicator in known and known[indicator].upstream


def _combinable(
    groups: Mapping[tuple[str, str], Sequence[CorrectedReading]],
) -> dict[tuple[str, str], list[tuple[str, str]]]:
    """Kinds of one rank and one sense that may share a mean, where there are two or more."""
    ranks: dict[tuple[str, str], list[tuple[str, str]]] = {}
    for kind in groups:
        rank = _rank(kind[0])
        if rank and kind[0] not in APART:
            ranks.setdefault((rank, kind[1]), []).append(kind)
    return {key: kinds for key, kinds in ranks.items() if len(kinds) > 1}


def correct_reading(
    bed: Bed, reading: CurrentReading, bedding: Attitude | None, declination_deg: float | None
) -> CorrectedReading:
    """One reading with tilt removed, declination added and upstream dips reversed.

    Parameters
    ----------
    bedding : dip direction and dip, degrees; None unknown
    declination_deg : east positive, degrees; None unknown
    """
    azimuth: float | None = reading.azimuth_deg % 360
    restored: float | None = None
    dip = reading.dip_deg
    remarks: list[str] = []
    if bedding is not None and bedding[1] != 0:
        restored, dip, remark = _restore(reading, bedding)
        if remark:
            remarks.append(remark)
        azimuth = restored if restored is not None else azimuth
    usable = True
    if reading.nature == "plane" and dip is not None:
        if dip > 90:
            usable, azimuth = False, None
            remarks.append("upside down after the tilt is removed")
        elif dip < LEAST_DIP:
            usable, azimuth = False, None
            remarks.append(f"dip of {dip:.1f} degrees gives no direction")
    if not reading.sure:
        remarks.append("written with doubt")
    if azimuth is not None:
        azimuth += (declination_deg or 0.0) + (180.0 if _upstream(reading.indicator) else 0.0)
        azimuth = float(np.round(azimuth % (180 if reading.sense == "axis" else 360), 9))
    return CorrectedReading(
        bed.name, 0.5 * (bed.base_m + bed.top_m), reading.indicator, reading.written, reading.nature,
        reading.sense, reading.azimuth_deg, reading.dip_deg, declination_deg,
        bedding[0] if bedding else None, bedding[1] if bedding else None,
        restored, dip if restored is not None else None, azimuth, usable, "; ".join(remarks),
    )  # fmt: skip


def _restore(reading: CurrentReading, bedding: Attitude) -> tuple[float | None, float | None, str]:
    """Restored azimuth and dip, or None and the dip as read with the reason."""
    if reading.nature == "plane":
        if reading.dip_deg is None:
            limit = " although the tilt is above the limit" if bedding[1] > PLANE_TILT else ""
            return None, None, f"no dip written: tilt not removed{limit}"
        return (*restored_plane(reading.azimuth_deg, reading.dip_deg, *bedding), "")
    if reading.nature == "line":
        plunge, remark = reading.dip_deg, ""
        if plunge is None:
            if abs(bedding[1] - 90) < 1e-9:
                return None, None, "a bearing does not fix a line in vertical bedding: give its pitch"
            plunge, remark = plunge_in_bedding(reading.azimuth_deg, *bedding), "taken to lie in the bedding"
        return (*restored_line(reading.azimuth_deg, plunge, *bedding), remark)
    limit = " although the tilt is above the limit" if bedding[1] > LINE_TILT else ""
    return None, reading.dip_deg, f"bearing as read: tilt not removed{limit}"


def _summary(indicator: str, rank: str, group: Sequence[CorrectedReading]) -> CurrentSummary | None:
    used = [r for r in group if r.used and r.azimuth_deg is not None]
    azimuths = np.array([r.azimuth_deg for r in used], dtype=float)
    sense = group[0].sense
    notes = _notes(indicator, group, used)
    if not used:
        return CurrentSummary(indicator, sense, (), None, 0.0, None, None, rank, tuple(notes))
    factor = 2.0 if sense == "axis" else 1.0
    length = resultant(factor * azimuths)
    mean = round(vector_mean(factor * azimuths) / factor, 9) % (360 / factor)
    spread = math.degrees(circular_sd(factor * azimuths)) / factor
    if math.isnan(mean):
        notes.append("The readings cancel: no mean direction.")
    elif sense == "direction" and len(used) >= 3 and axial_resultant(azimuths) > length + 0.3:
        notes.append("Opposed readings: the mean stands for neither group.")
    return CurrentSummary(
        indicator, sense, tuple(float(a) for a in azimuths), None if math.isnan(mean) else mean, length,
        spread if math.isfinite(spread) else None,
        rayleigh_p(factor * azimuths) if len(used) >= 5 else None, rank, tuple(notes),
    )  # fmt: skip


def _notes(indicator: str, group: Sequence[CorrectedReading], used: Sequence[CorrectedReading]) -> list[str]:
    notes = []
    wanted = FEW_LINES if indicator in MANY_WANTED else FEW
    if len(used) < wanted:
        count = "1 reading" if len(used) == 1 else f"{len(used)} readings"
        notes.append(f"{count}: below {wanted} a mean is unreliable.")
    if len(used) < len(group):
        notes.append(f"{len(group) - len(used)} readings without a direction left out.")
    if all(r.declination_deg is None for r in group):
        notes.append("No declination given: azimuths are as read.")
    if all(r.bedding_dip_deg is None for r in group):
        notes.append("No bedding given: tilt not removed.")
    tilted = sum("above the limit" in r.remark for r in used)
    if tilted:
        notes.append(f"{tilted} readings not restored although the tilt is above the limit.")
    return notes


def _trend(indicator: str, group: Sequence[CorrectedReading]) -> CurrentTrend | None:
    """Turning up-section, where five or more readings have a clear mean."""
    used = sorted((r for r in group if r.used and r.azimuth_deg is not None), key=lambda r: r.position_m)
    if len(used) < 5:
        return None
    period = 180.0 if used[0].sense == "axis" else 360.0
    azimuths = np.array([r.azimuth_deg for r in used], dtype=float)
    scale = 360.0 / period
    if resultant(scale * azimuths) < 0.3:
        return None
    mean = vector_mean(scale * azimuths) / scale
    turned = (azimuths - mean + period / 2) % period - period / 2
    heights = np.array([r.position_m for r in used])
    if np.unique(heights).size < 3:
        return None
    levels = np.unique(heights)
    means = np.array([turned[heights == level].mean() for level in levels])
    test = trend_test(means)
    return CurrentTrend(indicator, len(used), test.tau, test.p, theil_sen_slope(levels, means))
