"""Writing LAS 2.0: a log as curves on equal steps, to the written standard, in plain ASCII.

Facies are integers with their legend among the parameters; gaps hold the null value. A curve on equal steps
cannot hold beds thinner than a step: how many fell between two steps is said in the file.
"""

from __future__ import annotations

import math
import unicodedata
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

import logkit
from logkit.compare.codes import LITHOLOGY_STEP, facies_label, facies_number
from logkit.errors import ArgumentError, LogkitError
from logkit.model.caution import CAUTION
from logkit.words import counted

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from logkit.model import Bed, Log

NULL = -999.25
STEP_M = 0.1
STEP_FT = 0.25
LONGEST_LINE = 256
_PLAIN = str.maketrans({"µ": "u", "μ": "u", "φ": "phi", "ϕ": "phi", "θ": "theta", "°": "deg", "²": "2", "³": "3",
                        "–": "-", "—": "-", "→": "->", "’": "'", "“": '"', "”": '"', "ß": "ss", "ø": "o",
                        "æ": "ae", "ł": "l", "…": "..."})  # fmt: skip


@dataclass(frozen=True, slots=True)
class LasCurve:
    """A curve to be written: mnemonic, unit, description and the number of decimals."""

    mnemonic: str
    unit: str
    description: str
    decimals: int


CURVES = (
    LasCurve("FACIES", "", f"Facies: {LITHOLOGY_STEP} x lithology + structure, see ~Parameter", 0),
    LasCurve("GRAIN_PHI", "", "Grain size, middle of the class, phi", 3),
    LasCurve("GRAIN_MAX", "MM", "Largest clasts where measured, else coarse limit of the class", 4),
    LasCurve("BI", "", "Bioturbation grade as written, middle of the interval", 1),
    LasCurve("V_P10", "M/S", "Flow velocity, 10 % quantile", 3),
    LasCurve("V_P50", "M/S", "Flow velocity, 50 % quantile", 3),
    LasCurve("V_P90", "M/S", "Flow velocity, 90 % quantile", 3),
    LasCurve("H_P10", "M", "Flow depth, 10 % quantile", 3),
    LasCurve("H_P50", "M", "Flow depth, 50 % quantile", 3),
    LasCurve("H_P90", "M", "Flow depth, 90 % quantile", 3),
)


def las_text(log: Log, history: Any = None, step_m: float | None = None) -> str:
    """A log as LAS 2.0.

    Parameters
    ----------
    history : flow history; without one the flow curves are left out
    step_m : step of the index, m; by default 0.1 m, or 0.25 ft for a log in feet

    Returns
    -------
    text of the file. A downward log has its depths under DEPT, in feet when it was logged in feet; an upward
    one its heights in m under INDEX.

    Raises
    ------
    LogkitError : the log has no beds, or none as thick as needed to hold a step
    ArgumentError : a step that is not above zero
    """
    if not log.beds:
        raise LogkitError(f"{log.name} has no beds to write as LAS.")
    feet = log.header.direction == "down" and log.header.unit.casefold() in ("ft", "feet", "foot")
    unit = 0.3048 if feet else 1.0
    step = _step(step_m, feet)
    down = log.header.direction == "down"
    index = _index(log, step, unit, down)
    positions = -index * unit if down else index * unit
    place = _beds_at(log.beds, positions, down)
    columns = _columns(log, history, place, positions)
    between = _never_hit(log.beds, place)
    used = [facies_number(b) for b in log.real_beds]
    lines = [
        *_version_section(),
        *_well_section(log, index, step, "FT" if feet else "M"),
        *_curve_section(columns, down, "FT" if feet else "M"),
        *_parameter_section(log, sorted(set(used))),
        *_other_section(between, step, "ft" if feet else "m"),
        *_data_section(index, columns, _decimals(step)),
    ]
    text = "\n".join(lines) + "\n"
    return text.encode("ascii").decode("ascii")


def ascii_text(text: str) -> str:
    """Text in ASCII on one line: accents dropped, known signs spelled out, the rest as '?'."""
    spelled = unicodedata.normalize("NFKD", text.translate(_PLAIN))
    plain = (
        "".join(c for c in spelled if not unicodedata.combining(c)).encode("ascii", "replace").decode("ascii")
    )
    return "".join(c if c.isprintable() else " " for c in plain).strip()


def _step(step_m: float | None, feet: bool) -> float:
    if step_m is None:
        return STEP_FT if feet else STEP_M
    if not (step_m > 0 and math.isfinite(step_m)):
        raise ArgumentError("step_m", step_m, "above zero")
    return round(step_m / 0.3048, 3) or 0.001 if feet else step_m


def _index(log: Log, step: float, unit: float, down: bool) -> NDArray[np.float64]:
    """Whole multiples of the step inside the log, growing."""
    low, high = (-log.top_m, -log.base_m) if down else (log.base_m, log.top_m)
    first, last = math.ceil(low / unit / step - 1e-9), math.floor(high / unit / step + 1e-9)
    if last <= first:
        raise LogkitError(
            f"{log.name}: the log is thinner than two steps of {step:g}.", "Use a smaller step."
        )
    return np.round(np.arange(first, last + 1) * step, _decimals(step))


def _beds_at(beds: Sequence[Bed], positions: NDArray[np.float64], down: bool) -> NDArray[np.int64]:
    """Place of the bed at each position, -1 in a hole between beds. A boundary belongs to the bed that is
    met there when going along the index."""
    bases = np.array([b.base_m for b in beds])
    tops = np.array([b.top_m for b in beds])
    nudge = -1e-9 if down else 1e-9
    place = np.searchsorted(bases, positions + nudge, side="right") - 1
    at = np.clip(place, 0, len(beds) - 1)
    outside = (place < 0) | (positions > tops[at] + 1e-9)
    # the last sample may lie on the outer boundary of the log
    place = np.where((place < 0) & (np.abs(positions - bases[0]) < 1e-9), 0, np.where(outside, -1, at))
    return np.asarray(place, dtype=np.int64)


def _columns(
    log: Log, history: Any, place: NDArray[np.int64], positions: NDArray[np.float64]
) -> list[tuple[LasCurve, NDArray[np.float64]]]:
    """Values of each curve at the positions, NaN where there is nothing to say."""
    count = len(positions)
    values = {curve.mnemonic: np.full(count, math.nan) for curve in CURVES}
    for i in np.unique(place[place >= 0]):
        bed, here = log.beds[i], place == i
        if bed.is_gap:
            continue
        values["FACIES"][here] = facies_number(bed)
        values["GRAIN_PHI"][here] = _phi_in(bed, positions[here])
        values["GRAIN_MAX"][here] = _coarsest_mm(bed)
        if bed.bioturbation is not None:
            values["BI"][here] = 0.5 * (bed.bioturbation.low + bed.bioturbation.high)
    if history is not None:
        for estimate in history.estimates:
            phase = estimate.phase
            here = (place == phase.bed_index) & (positions >= phase.base_m) & (positions <= phase.top_m)
            for letter, quantiles in (("V", estimate.velocity), ("H", estimate.flow_depth)):
                if quantiles is not None and estimate.bound == "range":
                    for label in ("p10", "p50", "p90"):
                        values[f"{letter}_{label.upper()}"][here] = getattr(quantiles, label)
    curves = CURVES if history is not None else CURVES[:4]
    return [(curve, values[curve.mnemonic]) for curve in curves]


def _phi_in(bed: Bed, positions: NDArray[np.float64]) -> NDArray[np.float64]:
    """Grain size inside a bed, straight between its written states."""
    if not bed.grain:
        return np.full(len(positions), math.nan)
    heights = [bed.base_m + state.fraction * bed.thickness_m for state in bed.grain]
    return np.interp(positions, heights, [state.size.middle_phi for state in bed.grain])


def _coarsest_mm(bed: Bed) -> float:
    if bed.largest is not None:
        return bed.largest.mean_mm
    return bed.size.high_mm if bed.size is not None else math.nan


def _never_hit(beds: Sequence[Bed], place: NDArray[np.int64]) -> int:
    hit = set(place.tolist())
    return sum(not bed.is_gap and i not in hit for i, bed in enumerate(beds))


def _decimals(step: float) -> int:
    text = f"{step:.6f}".rstrip("0")
    return max(len(text.partition(".")[2]), 1)


def _line(mnemonic: str, unit: str, data: object, description: str) -> str:
    """One header line; a colon in the data would end them."""
    value = ascii_text(str(data)).replace(":", "-")
    line = f" {mnemonic}.{unit} {value} : {ascii_text(description)}"
    return line[:LONGEST_LINE]


def _version_section() -> list[str]:
    return [
        "~Version",
        _line("VERS", "", "2.0", "CWLS log ASCII Standard - version 2.0"),
        _line("WRAP", "", "NO", "One line per step"),
    ]


def _well_section(log: Log, index: NDArray[np.float64], step: float, unit: str) -> list[str]:
    places = _decimals(step)
    header = log.header
    return [
        "~Well",
        _line("STRT", unit, f"{index[0]:.{places}f}", "Start"),
        _line("STOP", unit, f"{index[-1]:.{places}f}", "Stop"),
        _line("STEP", unit, f"{step:.{places}f}", "Step"),
        _line("NULL", "", f"{NULL}", "Null value"),
        _line("COMP", "", "NOT GIVEN", "Company"),
        _line("WELL", "", log.name, "Well or section"),
        _line("FLD", "", "NOT GIVEN", "Field"),
        _line("LOC", "", header.location or "NOT GIVEN", "Location"),
        _line("PROV", "", "NOT GIVEN", "Province"),
        _line("SRVC", "", f"logkit {logkit.__version__}", "Made by"),
        _line("DATE", "", header.date or "NOT GIVEN", "Date of logging"),
        _line("UWI", "", "NOT GIVEN", "Unique well identifier"),
    ]


def _curve_section(columns: list[tuple[LasCurve, NDArray[np.float64]]], down: bool, unit: str) -> list[str]:
    index = ("DEPT", "Depth as logged") if down else ("INDEX", "Height above the base of the section")
    return [
        "~Curve",
        _line(index[0], unit, "", index[1]),
        *(_line(c.mnemonic, c.unit, "", c.description) for c, _ in columns),
    ]


def _parameter_section(log: Log, numbers: list[int]) -> list[str]:
    header = log.header
    lines = ["~Parameter"]
    if header.depth_reference:
        lines.append(_line("DREF", "", header.depth_reference, "Depth reference"))
    if header.kb_elevation_m is not None:
        lines.append(_line("EKB", "M", f"{header.kb_elevation_m:.2f}", "Elevation of the depth reference"))
    lines.append(_line("THICK", "", header.thickness_type, "What a depth difference means"))
    lines.append(_line("SETTING", "", header.setting, "Setting that flow was read with"))
    lines.extend(_line(f"F{number}", "", number, f"FACIES {facies_label(number)}") for number in numbers)
    return lines


def _other_section(between: int, step: float, unit: str) -> list[str]:
    import textwrap

    text = [
        CAUTION,
        f"{counted(between, 'bed')} thin enough to fall between two steps of {step:g} {unit}, not shown in the curves; "
        "the interval table holds every bed.",
    ]
    return ["~Other", *(f" {line}" for part in text for line in textwrap.wrap(ascii_text(part), 100))]


def _data_section(
    index: NDArray[np.float64], columns: list[tuple[LasCurve, NDArray[np.float64]]], places: int
) -> list[str]:
    texts = [[f"{v:.{places}f}" for v in index]]
    for curve, values in columns:
        texts.append([f"{v:.{curve.decimals}f}" if math.isfinite(v) else f"{NULL}" for v in values])
    widths = [max(len(t) for t in column) for column in texts]
    rows = zip(*texts, strict=True)
    return ["~ASCII", *(" ".join(t.rjust(w) for t, w in zip(row, widths, strict=True)) for row in rows)]
