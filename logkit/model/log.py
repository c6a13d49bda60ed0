"""A log: header, ordered beds and gaps, findings. One measured section or one cored well."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING, Literal

from logkit.errors import UnknownNameError
from logkit.model.bed import Bed
from logkit.model.finding import Finding, Level
from logkit.registry import Registry

if TYPE_CHECKING:
    import pandas as pd

SETTINGS = ("river", "tidal", "turbidity", "waves", "combined", "wind", "unknown")

LOG_TOOLS: Registry = Registry("log tool", ("logkit.tables",))
"""Functions that need the tables layer (`frame`, `writer`), registered by it."""


@dataclass(frozen=True, slots=True)
class Header:
    """What stands above the table. Angles in degrees, lengths in metres.

    bedding : (dip direction, dip) of the section, degrees; declination east positive
    extra : header lines with keys logkit does not know, kept as written
    """

    title: str = ""
    section: str = ""
    location: str = ""
    coordinates: str = ""
    coordinate_datum: str = ""
    logged_by: str = ""
    date: str = ""
    direction: Literal["up", "down"] = "up"
    unit: str = ""
    setting: str = "unknown"
    water_temperature_c: float | None = None
    salinity: float | None = None
    grain_density_kg_m3: float | None = None
    bedding: tuple[float, float] | None = None
    declination_deg: float | None = None
    size_scale: Literal["wentworth", "iso14688"] = "wentworth"
    grain_method: str = ""
    sorting_of_sizes: str = ""
    kb_elevation_m: float | None = None
    depth_reference: str = ""
    thickness_type: Literal["true", "vertical", "measured"] = "true"
    flow_depth_m: tuple[float, float] | None = None
    slope: tuple[float, float] | None = None
    extra: tuple[tuple[str, str], ...] = ()


@dataclass(frozen=True, slots=True)
class Log:
    """One measured section or cored well. `beds` run upward and include gaps.

    Two logs are equal when header and beds are; findings, source and the rows in the file do not count.
    """

    header: Header = field(default_factory=Header)
    beds: tuple[Bed, ...] = ()
    findings: tuple[Finding, ...] = field(default=(), compare=False)
    source: str = field(default="", compare=False)

    @property
    def name(self) -> str:
        """Section name, else title, else the file's name without ending."""
        return self.header.section or self.header.title or Path(self.source).stem or "log"

    @property
    def base_m(self) -> float:
        """Height of the lowest base, m; NaN without beds."""
        return min((bed.base_m for bed in self.beds), default=float("nan"))

    @property
    def top_m(self) -> float:
        """Height of the highest top, m; NaN without beds."""
        return max((bed.top_m for bed in self.beds), default=float("nan"))

    @property
    def thickness_m(self) -> float:
        """Whole height, gaps included, m."""
        return self.top_m - self.base_m

    @property
    def real_beds(self) -> tuple[Bed, ...]:
        """Beds without gaps."""
        return tuple(bed for bed in self.beds if not bed.is_gap)

    @property
    def runs(self) -> tuple[tuple[Bed, ...], ...]:
        """Beds in unbroken runs, upward; a gap ends a run."""
        runs: list[list[Bed]] = [[]]
        for bed in self.beds:
            if bed.is_gap:
                runs.append([])
            else:
                runs[-1].append(bed)
        return tuple(tuple(run) for run in runs if run)

    def bed(self, name: str) -> Bed:
        """The bed with this name.

        Raises
        ------
        UnknownNameError : no such bed; names the nearest one
        """
        for bed in self.beds:
            if bed.name == name:
                return bed
        raise UnknownNameError("bed", name, (bed.name for bed in self.beds), where=self.name)

    def count(self, level: Level) -> int:
        """Number of findings of a level."""
        return sum(finding.level == level for finding in self.findings)

    def to_frame(self) -> pd.DataFrame:
        """One row a bed or gap in the canonical columns, upward."""
        frame: pd.DataFrame = LOG_TOOLS["frame"](self)
        return frame

    def write(self, path: str | Path) -> Path:
        """Write the normalised table (csv, tsv or xlsx by ending); `read_log` gives the same log back.

        Raises
        ------
        LogkitError : the folder cannot be written or the ending is not known
        """
        written: Path = LOG_TOOLS["writer"](self, path)
        return written
