"""What a bed is made of: frozen records with SI values (sizes in mm, as the trade writes them).

A bed keeps the original text of every cell in `written`. Terms are ids of `logkit.vocabulary`.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import Literal


@dataclass(frozen=True, slots=True)
class SizeInterval:
    """A grain-size reading as an interval: the width of the class is part of the reading.

    Attributes
    ----------
    low_mm, high_mm : finer and coarser limit, 0 < low_mm <= high_mm
    label : canonical wording ("fU", "fL-mU", "0.25 mm")
    sure : False when written with a question mark or read from an ambiguous cell
    open_end : "coarse" or "fine" when the class has no limit there (boulder, clay), else ""
    """

    low_mm: float
    high_mm: float
    label: str = ""
    sure: bool = True
    open_end: Literal["", "coarse", "fine"] = ""

    @property
    def middle_mm(self) -> float:
        """Geometric middle, mm."""
        return math.sqrt(self.low_mm * self.high_mm)

    @property
    def coarse_phi(self) -> float:
        """Phi of the coarser limit (the smaller number)."""
        return -math.log2(self.high_mm)

    @property
    def fine_phi(self) -> float:
        """Phi of the finer limit (the larger number)."""
        return -math.log2(self.low_mm)

    @property
    def middle_phi(self) -> float:
        """Phi of the geometric middle."""
        return 0.5 * (self.coarse_phi + self.fine_phi)


@dataclass(frozen=True, slots=True)
class GrainState:
    """Grain size at one place in a bed; `fraction` is 0 at the base and 1 at the top."""

    fraction: float
    size: SizeInterval


@dataclass(frozen=True, slots=True)
class SizeReading:
    """A measured size at one height inside a bed. Missing percentiles are None.

    d10 is the size than which 10 % by weight is finer; d90 and d95 are on the coarse side.
    """

    position_m: float
    d50_mm: float
    d10_mm: float | None = None
    d90_mm: float | None = None
    d95_mm: float | None = None
    count: int | None = None
    method: str = ""


@dataclass(frozen=True, slots=True)
class LargestClasts:
    """The largest clasts as measured: their sizes, mean and which axis was taken ("a", "b" or "")."""

    sizes_mm: tuple[float, ...]
    mean_mm: float
    axis: str = ""


@dataclass(frozen=True, slots=True)
class Structure:
    """One sedimentary structure in a bed.

    Attributes
    ----------
    term : vocabulary id ("trough_cross_bedding")
    written : the words it was read from
    base_fraction, top_fraction : extent in the bed, None when not recorded
    sure : False for "?" or one of several alternatives
    code : facies code or Bouma letter it came from ("St", "Ta"), "" when written in words
    """

    term: str
    written: str = ""
    base_fraction: float | None = None
    top_fraction: float | None = None
    sure: bool = True
    code: str = ""


@dataclass(frozen=True, slots=True)
class SetThickness:
    """Cross-set thickness as written: a mean when the person gave one, a range, a count. Never invented."""

    low_m: float
    high_m: float
    mean_m: float | None = None
    count: int | None = None

    @property
    def central_m(self) -> float:
        """The mean when given, else the geometric middle of the range (an assumption: say so)."""
        return self.mean_m if self.mean_m is not None else math.sqrt(self.low_m * self.high_m)


@dataclass(frozen=True, slots=True)
class Contact:
    """The base contact of a bed.

    kind : "sharp", "erosive", "gradational", "undulose", "loaded", "faulted", "not_seen" or "unknown"
    relief_m : lateral relief of an erosive base; makes the bed beneath a minimum thickness
    zone_m : distance over which a gradational contact passes
    """

    kind: str
    relief_m: float | None = None
    zone_m: float | None = None
    sure: bool = True


@dataclass(frozen=True, slots=True)
class CurrentReading:
    """One palaeocurrent reading as written, before any correction.

    indicator : vocabulary id of what was measured ("cross_bedding", "flute", "imbrication", "unspecified")
    nature : "plane" (dip direction and dip), "line" (trend and plunge) or "azimuth" (a bearing only)
    sense : "direction" (points one way) or "axis" (line only)
    azimuth_deg : dip direction of a plane, trend of a line or the bearing, 0 <= azimuth < 360
    dip_deg : dip of a plane or plunge of a line, None when not given
    """

    indicator: str
    nature: Literal["plane", "line", "azimuth"]
    sense: Literal["direction", "axis"]
    azimuth_deg: float
    dip_deg: float | None = None
    written: str = ""
    sure: bool = True


@dataclass(frozen=True, slots=True)
class Bioturbation:
    """Bioturbation grade as written: an interval on a named scheme ("taylor_goldring", "ichnofabric", …)."""

    low: float
    high: float
    scheme: str = ""


@dataclass(frozen=True, slots=True)
class Colour:
    """Colour as written, with the Munsell notation when it is one."""

    text: str
    munsell: str = ""


@dataclass(frozen=True, slots=True)
class Bed:
    """One described interval, or a gap. Heights in metres, up is positive, `base_m < top_m`.

    Attributes
    ----------
    name : as written ("2b"); a gap without a name is "gap 1", "gap 2" …
    kind : "bed" or "gap" (no exposure, lost core; never filled, never in statistics)
    gap_reason : vocabulary id of the reason for a gap ("no_exposure", "lost_core", "fault"), "" for a bed
    lithology : vocabulary id ("sandstone"), "" when not given
    qualifiers : vocabulary ids of qualifiers and cements ("calcareous", "silty")
    grain : states upward; empty unknown, one = not graded as far as written, more = written grading.
        A written range is one wide state, never grading.
    d50_mm : median measured beside the class or in place of one, mm; of the whole bed, None when not measured
    largest, sizes, sorting : largest clasts; in-bed readings upward; sorting class id, "" unknown
    structures : in the order written; `structures_upward` is True when that order is upward in the bed
    measured : False for a layer of a written pattern ("6 x (8 vfs / 4 mdst)"): excluded from thickness tests
    minimum_thickness : True when an erosive base above cut into it
    depth_base, depth_top : depths as written for a downward log, in the unit of the log; None else
    row : row in the file; `written` the original text of every cell as (column, text)
    """

    name: str
    base_m: float
    top_m: float
    kind: Literal["bed", "gap"] = "bed"
    gap_reason: str = ""
    lithology: str = ""
    qualifiers: tuple[str, ...] = ()
    grain: tuple[GrainState, ...] = ()
    largest: LargestClasts | None = None
    sizes: tuple[SizeReading, ...] = ()
    sorting: str = ""
    structures: tuple[Structure, ...] = ()
    structures_upward: bool = False
    set_thickness: SetThickness | None = None
    ripple_wavelength_m: float | None = None
    ripple_height_m: float | None = None
    climb_angle_deg: float | None = None
    wave_period_s: float | None = None
    d50_mm: float | None = None
    contact: Contact | None = None
    currents: tuple[CurrentReading, ...] = ()
    flow_depth_m: tuple[float, float] | None = None
    slope: tuple[float, float] | None = None
    bioturbation: Bioturbation | None = None
    colour: Colour | None = None
    fossils: tuple[str, ...] = ()
    samples: tuple[str, ...] = ()
    photos: tuple[str, ...] = ()
    marker: str = ""
    marker_sure: bool = True
    confidence: str = ""
    notes: str = ""
    measured: bool = True
    minimum_thickness: bool = False
    depth_base: float | None = None
    depth_top: float | None = None
    row: int | None = field(default=None, compare=False)
    written: tuple[tuple[str, str], ...] = field(default=(), repr=False, compare=False)

    @property
    def thickness_m(self) -> float:
        """Top minus base, m."""
        return self.top_m - self.base_m

    @property
    def is_gap(self) -> bool:
        """True for an interval with no data."""
        return self.kind == "gap"

    @property
    def size(self) -> SizeInterval | None:
        """Size interval of the whole bed: the middle state, or the hull of all states; None unknown."""
        if not self.grain:
            return None
        if len(self.grain) == 1:
            return self.grain[0].size
        low = min(state.size.low_mm for state in self.grain)
        high = max(state.size.high_mm for state in self.grain)
        return SizeInterval(low, high, sure=all(state.size.sure for state in self.grain))

    def written_in(self, column: str) -> str:
        """Original text of a cell, "" when the cell was empty."""
        return next((text for name, text in self.written if name == column), "")
