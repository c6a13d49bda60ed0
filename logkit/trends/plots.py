"""Plots of the results on matplotlib axes: each function takes an Axes, draws on it and returns it.

matplotlib is loaded only when a function runs. Nothing is computed here; the annotated column is drawn by
`logkit.drawing`.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from logkit.errors import ArgumentError
from logkit.model import CurrentSummary, Package
from logkit.trends.circular import rose_radius
from logkit.trends.results import indicator_words
from logkit.trends.thickness import Thickness, cumulative
from logkit.trends.transitions import Transitions, spoken

if TYPE_CHECKING:
    from matplotlib.axes import Axes

INK, INK2, FILL, GRID, STRESS, CHIP = "#1d2430", "#575e69", "#c1b9d1", "#d5d8db", "#c52f15", "#6c8492"
SIZE = 7


def rose(ax: Axes, summary: CurrentSummary, class_width_deg: float = 20.0) -> Axes:
    """Rose of directions or axes; the radius goes with the square root of the count.

    Parameters
    ----------
    ax : plain (not polar) axes; north is up
    summary : one kind of indicator; axes are drawn at both ends and counted once
    class_width_deg : width of the classes, a divisor of 180

    Notes
    -----
    The title gives the number of readings, the rings their counts; the line is the mean, red and thick
    when the Rayleigh test rejects uniformity at 0.05, thin and dashed otherwise.

    References
    ----------
    nemec_1988
    """
    from matplotlib.patches import Circle, Wedge

    if class_width_deg <= 0 or abs(180 / class_width_deg - round(180 / class_width_deg)) > 1e-9:
        raise ArgumentError("class_width_deg", class_width_deg, "a divisor of 180")
    _bare(ax)
    ax.set_xlim(-1.3, 1.3)
    ax.set_ylim(-1.3, 1.3)
    ax.set_title(f"{indicator_words(summary.indicator)}, n = {summary.n}", fontsize=SIZE, color=INK)
    axis = summary.sense == "axis"
    span = 180.0 if axis else 360.0
    classes = round(span / class_width_deg)
    counts = np.histogram(np.mod(summary.azimuths_deg, span), bins=classes, range=(0, span))[0]
    most = int(counts.max(initial=0))
    for ring in _rings(most):
        radius = float(rose_radius(ring, most))
        ax.add_patch(Circle((0, 0), radius, fill=False, edgecolor=GRID, linewidth=0.5))
        x, y = _point(25.0, radius)  # beside north, so that the outer count does not meet the letter
        ax.text(x, y, f"{ring}", fontsize=SIZE - 1, color=INK2, va="bottom")
    for azimuth, letter in ((0, "N"), (90, "E"), (180, "S"), (270, "W")):
        x, y = _point(azimuth, 1.18)
        ax.text(x, y, letter, ha="center", va="center", fontsize=SIZE, color=INK)
    for k, count in enumerate(counts):
        if not count:
            continue
        radius = float(rose_radius(int(count), most))
        for turn in (0.0, 180.0) if axis else (0.0,):
            start = k * class_width_deg + turn
            ax.add_patch(
                Wedge((0, 0), radius, 90 - start - class_width_deg, 90 - start,
                      facecolor=FILL, edgecolor=INK2, linewidth=0.4)
            )  # fmt: skip
    _mean_line(ax, summary)
    return ax


def _mean_line(ax: Axes, summary: CurrentSummary) -> None:
    if summary.mean_deg is None:
        return
    sure = summary.rayleigh_p is not None and summary.rayleigh_p <= 0.05
    tip = _point(summary.mean_deg, 1.05)
    tail = _point(summary.mean_deg + 180, 1.05) if summary.sense == "axis" else (0.0, 0.0)
    ax.plot(
        [tail[0], tip[0]], [tail[1], tip[1]], color=STRESS if sure else INK,
        linewidth=1.4 if sure else 0.7, linestyle="-" if sure else "--",
    )  # fmt: skip


def _point(azimuth_deg: float, radius: float) -> tuple[float, float]:
    angle = math.radians(azimuth_deg)
    return radius * math.sin(angle), radius * math.cos(angle)


def _rings(most: int) -> list[int]:
    """Counts at which a ring is drawn: the largest and about a quarter of it, half its radius."""
    return sorted({max(round(most / 4), 1), most}) if most else []


def _bare(ax: Axes) -> None:
    if ax.name == "polar":
        raise ArgumentError("ax", ax, "plain axes, not polar ones")
    ax.set_aspect("equal")
    ax.set_axis_off()


def transitions(ax: Axes, result: Transitions) -> Axes:
    """Diagram of the significant transitions, read upward.

    Parameters
    ----------
    ax : plain axes
    result : the tested chain; states stand on a ring, by name from the top clockwise

    Notes
    -----
    An arrow goes from the lower to the upper state; full where it is more frequent than by chance, dashed
    red where it is less; its width goes with the residual, its label is count/expected.
    """
    _bare(ax)
    ax.set_xlim(-1.6, 1.6)
    ax.set_ylim(-1.5, 1.5)
    ax.set_title(f"{result.by}, read upward, n = {result.total}", fontsize=SIZE, color=INK)
    count = max(len(result.states), 1)
    places = {state: _point(360 * k / count, 1.0) for k, state in enumerate(result.states)}
    for pair in result.significant:
        more = pair.residual > 0
        ax.annotate(
            "", xy=places[pair.above], xytext=places[pair.below],
            arrowprops={
                "arrowstyle": "-|>", "color": INK if more else STRESS, "linestyle": "-" if more else "--",
                "linewidth": 0.5 + 0.25 * min(abs(pair.residual), 8), "shrinkA": 16, "shrinkB": 16,
                "connectionstyle": "arc3,rad=0.16",
            },
        )  # fmt: skip
        (x0, y0), (x1, y1) = places[pair.below], places[pair.above]
        x = 0.62 * x0 + 0.38 * x1 + 0.1 * (y1 - y0)  # off the line, nearer its start: centres are crowded
        y = 0.62 * y0 + 0.38 * y1 - 0.1 * (x1 - x0)
        ax.text(
            x, y, f"{pair.count}/{pair.expected:.1f}", fontsize=SIZE - 1, color=INK2, ha="center", va="center"
        )
    for state, (x, y) in places.items():
        ax.text(x, y, spoken(state), fontsize=SIZE, color=INK, ha="center", va="center",
                bbox={"boxstyle": "round,pad=0.3", "facecolor": "white", "edgecolor": CHIP})  # fmt: skip
    if not result.significant:
        text = "not determinable" if result.p is None else "no transition stands out"
        ax.text(0, 0, text, fontsize=SIZE, color=INK2, ha="center", va="center")
    return ax


def packages(ax: Axes, found: Sequence[Package], quantity: str = "grain size") -> Axes:
    """Packages of one quantity against height: a wedge where there is a trend, a bar where there is none.

    Parameters
    ----------
    ax : axes; the vertical one becomes height in metres
    found : packages, as `Trends.packages`
    quantity : "grain size" or "thickness"; a wedge narrows where grains get finer or beds thinner

    Notes
    -----
    Significant packages are filled; nested ones stand to the right of those that hold them.
    """
    own = [p for p in found if p.quantity == quantity]
    if quantity not in ("grain size", "thickness"):
        raise ArgumentError("quantity", quantity, "'grain size' or 'thickness'")
    for package in own:
        left = float(package.level)
        low, high = left + 0.1, left + 0.9
        widest_below = package.trend in ("fining-up", "thinning-up")
        if not package.significant:
            x, y = (
                [low, low + 0.15, low + 0.15, low],
                [package.base_m, package.base_m, package.top_m, package.top_m],
            )
        else:
            x = [low, high, low]
            y = [package.base_m, package.base_m if widest_below else package.top_m, package.top_m]
        ax.fill(x, y, facecolor=FILL if package.significant else "none", edgecolor=INK2, linewidth=0.6)
        if package.significant:
            ax.text(low + 0.05, 0.5 * (package.base_m + package.top_m), f"τ {package.tau:+.2f}",
                    fontsize=SIZE - 1, color=INK, va="center")  # fmt: skip
    levels = max((p.level for p in own), default=0) + 1
    ax.set_xlim(0, levels)
    ax.set_xticks([])
    if own:
        ax.set_ylim(min(p.base_m for p in own), max(p.top_m for p in own))
    ax.set_ylabel("height (m)", fontsize=SIZE)
    ax.tick_params(labelsize=SIZE - 1)
    ax.set_title(f"packages, {quantity}", fontsize=SIZE, color=INK)
    return ax


def thickness(ax: Axes, result: Thickness, values_m: Sequence[float], class_name: str = "all beds") -> Axes:
    """Share of beds thicker than a thickness, with the candidate distributions.

    Parameters
    ----------
    ax : axes; both become logarithmic
    result : the statistics, which hold the fits
    values_m : thicknesses of the class, m
    class_name : class whose fits are drawn

    Notes
    -----
    The candidate with the largest weight is full; the others are dashed and dotted.
    """
    values = np.sort(np.asarray(values_m, dtype=float))
    if values.size == 0 or values[0] <= 0:
        raise ArgumentError("values_m", values_m, "one or more thicknesses above zero")
    share = 1 - (np.arange(values.size) + 0.5) / values.size
    ax.plot(values, share, "o", markersize=2.5, color=CHIP, label=f"{class_name}, n = {values.size}")
    grid = np.geomspace(values[0], values[-1], 200)
    best = result.best(class_name)
    broken = iter(("--", ":"))
    for fit in result.distributions:
        if fit.class_name != class_name:
            continue
        parameters = np.array([value for _, value in fit.parameters])[:, None]
        above = 1 - cumulative(fit.distribution, grid[None, :], parameters)[0]
        ax.plot(grid, above, linestyle="-" if fit is best else next(broken), linewidth=1.2 if fit is best else 0.7,
                color=INK, label=f"{fit.distribution}, weight {fit.weight:.2f}")  # fmt: skip
    ax.set_xscale("log")
    ax.set_yscale("log")
    ax.set_ylim(0.3 / values.size, 1.2)
    ax.set_xlabel("thickness (m)", fontsize=SIZE)
    ax.set_ylabel("share of thicker beds", fontsize=SIZE)
    ax.tick_params(labelsize=SIZE - 1)
    ax.legend(fontsize=SIZE - 1, frameon=False)
    return ax
