"""What the engine takes from its data files: settings, priors, depth relations and the calibrated numbers.

The files are read once and checked, a mistake is named with file and line. The edges of the bed states are
not here: they are one construction and live in `hydraulics.bedstates`.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any

from logkit.errors import UnknownNameError, nearest
from logkit.vocabulary.loading import DataFile, parse_toml

PRIORS = ("off", "broad", "river")


@dataclass(frozen=True, slots=True)
class Setting:
    """One setting: how its beds are read, its usual prior and water; fields as in settings.toml."""

    name: str
    reading: str
    prior: str
    temperature_c: float
    salinity: float
    source: str


@dataclass(frozen=True, slots=True)
class Prior:
    """What is believed of velocity and depth before a bed is read, with the calibrated allowances.

    Attributes
    ----------
    name, words, source : of the prior
    delta : allowance in ln U for local against mean velocity, size, temperature
    eps : share of beds whose structure says nothing
    velocity_given_depth : (intercept, slope, standard deviation) of ln U against ln h, None for none
    depth : (mean, standard deviation) of ln h, None for none
    sizes_mm : sizes the prior was made for, None for any
    """

    name: str
    words: str
    source: str
    delta: float
    eps: float
    velocity_given_depth: tuple[float, float, float] | None = None
    depth: tuple[float, float] | None = None
    sizes_mm: tuple[float, float] | None = None


@dataclass(frozen=True, slots=True)
class Settings:
    """Everything in the data files; the groups are plain numbers by name."""

    settings: dict[str, Setting]
    priors: dict[str, Prior]
    depth: dict[str, dict[str, Any]]
    resistance: dict[str, Any]
    density_current: dict[str, Any]
    mud: dict[str, Any]
    tendency: dict[str, Any]
    calibration: dict[str, Any]

    def setting(self, name: str) -> Setting:
        """A setting by name.

        Raises
        ------
        UnknownNameError : there is no such setting
        """
        try:
            return self.settings[name]
        except KeyError:
            raise UnknownNameError("setting", name, self.settings) from None

    def prior(self, name: str) -> Prior:
        """A prior by name.

        Raises
        ------
        UnknownNameError : there is no such prior
        """
        try:
            return self.priors[name]
        except KeyError:
            raise UnknownNameError("prior", name, self.priors) from None


def read_flow_file(name: str) -> DataFile:
    """A data file of this package, parsed.

    Raises
    ------
    DataFileError : it is not TOML; names file and line
    """
    return parse_toml(files("logkit.flow").joinpath(name).read_text(encoding="utf-8"), f"flow/{name}")


@cache
def flow_settings() -> Settings:
    """The shipped settings with the shipped calibration."""
    return build_settings(read_flow_file("settings.toml"), read_flow_file("calibration.toml"))


def build_settings(file: DataFile, calibration: DataFile) -> Settings:
    """Settings from parsed files.

    Raises
    ------
    DataFileError : a table or a number is missing, negative where it must not be, or not known
    """
    for table in ("settings", "priors", "depth", "resistance", "density_current", "mud", "tendency"):
        if table not in file.data:
            raise file.fail(f"the table [{table}] is missing.", table)
    settings = {}
    for name, entry in file.data["settings"].items():
        settings[name] = _setting(name, entry, file)
        if settings[name].prior not in PRIORS:
            raise file.fail(f"{name}: no prior {settings[name].prior!r}.", f"settings.{name}", "prior")
    priors = {name: _prior(name, file, calibration) for name in PRIORS}
    for group in ("density_current", "mud", "tendency"):
        _numbers(file, group, file.data[group])
    for table in ("depth", "resistance"):
        for name, entry in file.data[table].items():
            _numbers(file, f"{table}.{name}", entry)
    return Settings(
        settings=settings, priors=priors, depth=file.data["depth"], resistance=file.data["resistance"]["river"],
        density_current=file.data["density_current"], mud=file.data["mud"], tendency=file.data["tendency"],
        calibration=calibration.data.get("made", {}),
    )  # fmt: skip


def _setting(name: str, entry: dict[str, Any], file: DataFile) -> Setting:
    table = f"settings.{name}"
    known = [f for f in Setting.__dataclass_fields__ if f != "name"]
    for field in entry:
        if field not in known:
            near = nearest(field, known)
            hint = f"Did you mean {near!r}?" if near else f"Known: {', '.join(known)}."
            raise file.fail(f"{name}: unknown field {field!r}.", table, field, hint)
    for field in known:
        if field not in entry:
            raise file.fail(f"{name}: {field} is missing.", table)
    return Setting(name=name, **entry)


def _numbers(file: DataFile, table: str, entry: dict[str, Any]) -> None:
    """Every value of a group is a number, every group names its source."""
    if not entry.get("source"):
        raise file.fail(f"[{table}] names no source.", table)
    for field, value in entry.items():
        if field != "source" and (isinstance(value, bool) or not isinstance(value, int | float)):
            raise file.fail(f"{field} must be a number, not {value!r}.", table, field)


def _prior(name: str, file: DataFile, calibration: DataFile) -> Prior:
    entry = file.data["priors"].get(name)
    fitted = calibration.data.get(name)
    if entry is None:
        raise file.fail(f"the prior {name!r} is missing.", "priors")
    if fitted is None:
        raise calibration.fail(f"the prior {name!r} is missing.", name)
    for field in ("delta", "eps"):
        if not isinstance(fitted.get(field), int | float) or not 0 <= fitted[field] < 2:
            raise calibration.fail(f"{name}: {field} must be a number from 0 to 2.", name, field)
    common = {"name": name, "words": entry["words"], "source": entry["source"],
              "delta": float(fitted["delta"]), "eps": float(fitted["eps"])}  # fmt: skip
    if name == "broad":
        return Prior(
            **common,
            velocity_given_depth=(math.log(entry["froude_median"]) + 0.5 * math.log(9.81), 0.5,
                                  entry["froude_sd_ln"]),
            depth=(math.log(entry["depth_median_m"]), entry["depth_sd_ln"]),
        )  # fmt: skip
    if name == "river":
        return Prior(
            **common,
            velocity_given_depth=(fitted["velocity_intercept"], fitted["velocity_slope"],
                                  fitted["velocity_sd_ln"]),
            depth=(entry["depth_ln_mean"], entry["depth_sd_ln"]),
            sizes_mm=(entry["finest_mm"], entry["coarsest_mm"]),
        )  # fmt: skip
    return Prior(**common)
