"""Charts drawn with matplotlib: the bed-state plane, the velocity against grain-size chart, roses.

Each gives (SVG text, width mm, height mm), or None when no phase can be shown. Same input, same bytes.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from contextlib import contextmanager
from io import StringIO
from typing import Any

import numpy as np

from logkit.hydraulics import evaluate
from logkit.model import CurrentSummary, PhaseEstimate
from logkit.registry import GRAVITY_M_S2
from logkit.report.wells import Well

MM = 1 / 25.4
INK, SOFT, OUTER, EDGE = "#1d2430", "#575e69", "#b2dbea", "#0b5a78"
R_QUARTZ = 1.65
CHART_MARGINS = (15.0, 3.0, 3.0, 11.0)
ROSE_MARGINS = (7.0, 7.0, 11.0, 7.0)
Picture = tuple[str, float, float]


@contextmanager
def _figure(
    width_mm: float, height_mm: float, margins_mm: tuple[float, float, float, float], **kwargs: Any
) -> Iterator[tuple[Any, Any]]:
    """A figure and its axes in logkit's type; never touches a display.

    Margins (left, right, top, foot) are fixed, because a layout that is fitted draws everything twice.
    """
    import matplotlib
    from matplotlib.backends.backend_svg import FigureCanvasSVG
    from matplotlib.figure import Figure

    settings: dict[Any, Any] = {
        "font.family": "DejaVu Sans", "font.size": 7, "svg.fonttype": "none", "svg.hashsalt": "logkit",
        "axes.linewidth": 0.6, "axes.edgecolor": INK, "xtick.color": INK, "ytick.color": INK,
        "axes.labelcolor": INK, "text.color": INK,
    }  # fmt: skip
    with matplotlib.rc_context(settings):
        figure = Figure(figsize=(width_mm * MM, height_mm * MM))
        FigureCanvasSVG(figure)
        left, right, top, foot = margins_mm
        figure.subplots_adjust(
            left / width_mm,
            foot / height_mm,
            1 - right / width_mm,
            1 - top / height_mm,
            wspace=0.45,
            hspace=0.5,
        )
        yield figure, figure.subplots(**kwargs)


def _svg(figure: Any, width_mm: float, height_mm: float) -> Picture:
    buffer = StringIO()
    figure.savefig(buffer, format="svg", metadata={"Date": None, "Creator": "logkit"})
    text = buffer.getvalue()
    text = re.sub(r"<!DOCTYPE[^>]*>\s*", "", text)
    text = re.sub(r'width="[\d.]+pt"', f'width="{width_mm:g}mm"', text, count=1)
    text = re.sub(r'height="[\d.]+pt"', f'height="{height_mm:g}mm"', text, count=1)
    return text, width_mm, height_mm


def _ranged(well: Well) -> list[PhaseEstimate]:
    return [
        e
        for e in well.history.estimates
        if e.bound == "range" and e.velocity is not None and e.phase.size is not None
    ]


def bed_state_plane(well: Well) -> Picture | None:
    """Grain Shields number against grain size, with the edges of bed states and the phases."""
    phases = [e for e in _ranged(well) if e.shear_velocity is not None]
    if not phases:
        return None
    from matplotlib.collections import LineCollection

    width, height = 150.0, 95.0
    d_mm = np.geomspace(0.06, 4.0, 200)
    temperature = well.log.header.water_temperature_c
    water = {
        "temp_c": 10.0 if temperature is None else temperature,
        "salinity": well.log.header.salinity or 0.0,
    }
    dstar = np.asarray(evaluate("grain.dstar", d_mm=d_mm, submerged_gravity=R_QUARTZ, **_viscosity(water)))
    motion = np.asarray(evaluate("threshold.soulsby_whitehouse", dstar=dstar))
    with _figure(width, height, CHART_MARGINS) as (figure, axes):
        _edge(axes, d_mm, motion, 0.20, "motion")
        _edge(axes, d_mm[dstar < 12], 4 * motion[dstar < 12], 0.20, "ripples to dunes")
        _edge(axes, d_mm, np.full_like(d_mm, 0.70), 0.15, "to upper plane bed")
        bars, points = [], []
        for e in phases:
            size, u = e.phase.size, e.shear_velocity
            if size is None or u is None:
                continue
            middle = size.middle_mm / 1000
            low, mid, high = (v**2 / (R_QUARTZ * GRAVITY_M_S2 * middle) for v in (u.p10, u.p50, u.p90))
            bars.append(((size.middle_mm, low), (size.middle_mm, high)))
            bars.append(((size.low_mm, mid), (size.high_mm, mid)))
            points.append((size.middle_mm, mid))
        axes.add_collection(
            LineCollection(list(dict.fromkeys(bars)), colors=EDGE, linewidths=0.5, alpha=0.7, zorder=3)
        )
        axes.plot(*zip(*dict.fromkeys(points), strict=True), ".", color=INK, ms=3, zorder=4)
        axes.set(xscale="log", yscale="log", xlim=(0.06, 4), ylim=(0.01, 10))
        axes.set(xlabel="grain size, mm", ylabel="grain Shields number")
        _plain_ticks(axes, (0.0625, 0.125, 0.25, 0.5, 1, 2, 4))
        return _svg(figure, width, height)


def velocity_size_chart(well: Well) -> Picture | None:
    """Mean velocity against grain size, with the classical erosion and deposition lines and the phases."""
    phases = _ranged(well)
    if not phases:
        return None
    from matplotlib.collections import LineCollection, PolyCollection

    width, height = 150.0, 95.0
    d_mm = np.geomspace(0.002, 100.0, 300)
    erosion = evaluate("threshold.hjulstrom_erosion", d_mm=d_mm, nu_m2_s=1.31e-6, submerged_gravity=R_QUARTZ)
    deposition = np.where(
        d_mm >= 0.01, evaluate("rest.hjulstrom_deposition", d_mm=np.maximum(d_mm, 0.01)), np.nan
    )
    with _figure(width, height, CHART_MARGINS) as (figure, axes):
        _edge(axes, d_mm, np.asarray(erosion), 0.24, "erosion")
        _edge(axes, d_mm, deposition, 0.24, "deposition")
        axes.axvspan(0.002, 0.02, color="#f0eadf", lw=0, zorder=0)
        axes.text(0.0063, 0.0013, "cohesive", ha="center", color=SOFT, fontsize=6)
        boxes, lines = [], []
        for e in phases:
            size, v = e.phase.size, e.velocity
            if size is None or v is None:
                continue
            left, right = size.low_mm, size.high_mm
            boxes.append(((left, v.p10), (right, v.p10), (right, v.p90), (left, v.p90)))
            lines.append(((left, v.p50), (right, v.p50)))
        axes.add_collection(
            PolyCollection(
                list(dict.fromkeys(boxes)), facecolors=OUTER, edgecolors="none", alpha=0.35, zorder=3
            )
        )
        axes.add_collection(LineCollection(list(dict.fromkeys(lines)), colors=EDGE, linewidths=0.8, zorder=4))
        axes.set(xscale="log", yscale="log", xlim=(0.002, 100), ylim=(0.001, 10))
        axes.set(xlabel="grain size, mm", ylabel="mean velocity, m/s")
        _plain_ticks(axes, (0.002, 0.0156, 0.0625, 0.25, 1, 4, 16, 64))
        return _svg(figure, width, height)


def roses(summaries: list[CurrentSummary]) -> Picture | None:
    """One rose a summary, radius with the square root of frequency."""
    from logkit.trends.plots import rose

    shown = [s for s in summaries if s.n > 0][:6]
    if not shown:
        return None
    width, height = 52.0 * min(len(shown), 3), 58.0 * (1 + (len(shown) - 1) // 3)
    shape = {"nrows": 1 + (len(shown) - 1) // 3, "ncols": min(len(shown), 3), "squeeze": False}
    with _figure(width, height, ROSE_MARGINS, **shape) as (figure, grid):
        for axes, summary in zip(grid.flat, shown, strict=False):
            rose(axes, summary)
        for axes in list(grid.flat)[len(shown) :]:
            axes.set_visible(False)
        return _svg(figure, width, height)


def _viscosity(water: dict[str, float]) -> dict[str, float]:
    return {"nu_m2_s": float(evaluate("water.kinematic_viscosity", **water))}


def _edge(axes: Any, x: Any, y: Any, sigma_log10: float, label: str) -> None:
    """A line with its scatter as a band, named at its right end; x rises."""
    axes.fill_between(x, y * 10**-sigma_log10, y * 10**sigma_log10, color="#e7ebef", lw=0, zorder=1)
    axes.plot(x, y, color=SOFT, lw=0.9, zorder=2)
    axes.annotate(
        label, (x[-4], y[-4]), xytext=(0, 3), textcoords="offset points", ha="right", fontsize=6, color=INK,
        bbox={"facecolor": "#ffffff", "edgecolor": "none", "alpha": 0.8, "pad": 0.6}, zorder=6,
    )  # fmt: skip


def _plain_ticks(axes: Any, sizes: tuple[float, ...]) -> None:
    from matplotlib.ticker import FuncFormatter, NullLocator

    axes.set_xticks(sizes, [f"{s:g}" for s in sizes])
    axes.xaxis.set_minor_locator(NullLocator())
    axes.yaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
    axes.grid(True, which="major", color="#d5d8db", lw=0.3, zorder=0)
