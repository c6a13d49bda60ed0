"""Grading of one bed: the most probable word, with its probability, from sizes at base and top or readings.

A size is an interval, so a verdict is a probability and never a bare word. What a structure is called
("graded") gives no direction and is not used.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from logkit.model import Bed, Grading, GradingWord, SizeInterval, SizeReading
from logkit.trends.ranks import theil_sen_interval, theil_sen_slope, trend_test

Array = npt.NDArray[np.float64]

WORDS: tuple[GradingWord, ...] = (
    "normal", "inverse", "inverse-then-normal", "normal-then-inverse", "ungraded",
)  # fmt: skip

SAME_PHI = 0.25
"""A change below this, half a field class, is no grading. Ours."""

LEAST_WIDTH_PHI = 0.1
"""Least width of a size, however precisely it is written: half a field estimate is not 0.250 mm. Ours."""

UNSURE_PHI = 0.5
"""How far a size written with a question mark is widened on both sides: one field class. Ours."""

MISREAD = 0.02
"""Chance that sizes written for base and top are a class or more off and tell nothing. Ours."""

READING_ERROR_PHI = 0.15
"""Standard error of a reading without a count. Ours."""

PRIOR_READINGS = 5.0
"""Weight of the stated error against the scatter of the readings about a fit, in readings. Ours."""

CHANGE_PHI = 1.5
"""Spread of the change over a limb of the profile before the readings are looked at, phi. Ours."""

SHAPE_PRIOR = {"flat": 0.35, "line": 0.30, "one break": 0.25, "two breaks": 0.10}
"""Chance of each shape before the readings are looked at. Ours."""


@dataclass(frozen=True, slots=True)
class _Shape:
    """A fitted shape: its prior, its words with shares, the logarithm of its evidence, its breaks."""

    prior: float
    words: tuple[tuple[GradingWord, float], ...]
    evidence: float
    breaks: tuple[float, ...]


def grade_bed(bed: Bed) -> Grading:
    """Grading of one bed.

    Parameters
    ----------
    bed : the bed; three or more in-bed readings go before sizes written for base and top

    Returns
    -------
    Grading with the most probable word; "ungraded" reads as "not distinguished from ungraded"

    Notes
    -----
    Base and top sizes: each is uniform in phi over its interval; a step under 0.25 phi is no change; a small
    share of sizes is misread, so that no verdict is certain.
    Readings: flat, straight and broken profiles are compared by their marginal likelihood under normal
    changes and a scatter about the reading error; a break may stand at any inner reading, all places being
    equally likely, and with two breaks the middle is flat.

    References
    ----------
    gelman_2013, kendall_1938, sen_1968
    """
    if bed.is_gap:
        return Grading(bed.name, "not determinable", basis="a gap has no grain sizes")
    readings = sorted((r for r in bed.sizes if r.d50_mm > 0), key=lambda r: r.position_m)
    if len({r.position_m for r in readings}) >= 3:
        return _from_readings(bed, readings)
    if len(bed.grain) >= 2:
        states = sorted(bed.grain, key=lambda state: state.fraction)
        return _from_states(bed.name, [state.size for state in states])
    if len({r.position_m for r in readings}) == 2:
        return _from_states(bed.name, [_as_interval(r) for r in readings])
    if bed.grain:
        return Grading(bed.name, "not determinable", basis="one size for the whole bed")
    return Grading(bed.name, "not determinable", basis="no grain size written")


def _as_interval(reading: SizeReading) -> SizeInterval:
    half = 2.0 ** (math.sqrt(3) * _reading_error(reading))
    return SizeInterval(reading.d50_mm / half, reading.d50_mm * half)


def _reading_error(reading: SizeReading) -> float:
    """Standard error of a median, phi: from the count and the spread of the sizes where they are known."""
    if not reading.count:
        return READING_ERROR_PHI
    spread = 0.7
    if reading.d10_mm and reading.d90_mm and reading.d90_mm > reading.d10_mm:
        spread = math.log2(reading.d90_mm / reading.d10_mm) / 2.563
    return math.hypot(0.1, 1.253 * spread / math.sqrt(reading.count))


# sizes at base and top


def _bounds(size: SizeInterval) -> tuple[float, float]:
    """Limits of a size in phi, coarse first, at least as wide as a size can be known."""
    low, high = size.coarse_phi, size.fine_phi
    if not size.sure:
        low, high = low - UNSURE_PHI, high + UNSURE_PHI
    missing = max(LEAST_WIDTH_PHI - (high - low), 0.0) / 2
    return low - missing, high + missing


def _difference_below(x: float, lower: tuple[float, float], upper: tuple[float, float]) -> float:
    """P(upper - lower <= x) for two uniform sizes."""
    (a, b), (c, d) = lower, upper

    def area(z: float) -> float:
        return max(z, 0.0) ** 2 / 2

    total = area(x - c + b) - area(x - c + a) - area(x - d + b) + area(x - d + a)
    return min(max(total / ((b - a) * (d - c)), 0.0), 1.0)


def _from_states(name: str, sizes: Sequence[SizeInterval]) -> Grading:
    bounds = [_bounds(size) for size in sizes]
    if len(bounds) == 2:
        inverse = _difference_below(-SAME_PHI, bounds[0], bounds[1])
        normal = 1 - _difference_below(SAME_PHI, bounds[0], bounds[1])
        shares: dict[GradingWord, float] = {
            "normal": normal, "inverse": inverse, "ungraded": max(1 - normal - inverse, 0.0),
        }  # fmt: skip
        breaks: tuple[float, ...] = ()
    else:
        shares = _state_shares(bounds)
        breaks = _turns([0.5 * (low + high) for low, high in bounds])
    shares = {word: (1 - MISREAD) * share for word, share in shares.items()}
    shares["ungraded"] = shares.get("ungraded", 0.0) + MISREAD
    return _verdict(name, shares, "base and top sizes", breaks=breaks)


def _state_shares(bounds: Sequence[tuple[float, float]]) -> dict[GradingWord, float]:
    """Shares of the words over the intervals: on a grid for few states, on spread points for many."""
    count = len(bounds)
    if count <= 4:
        ticks = (np.arange(9) + 0.5) / 9
        points = np.array(list(itertools.product(ticks, repeat=count)))
    else:
        points = np.random.default_rng(count).random((4000, count))
    low, high = np.array(bounds).T
    sizes = low + points * (high - low)
    # seen from both ends, since small steps add up from where one starts
    signs = np.concatenate([_signs(sizes), -_signs(sizes[:, ::-1])[:, ::-1]])
    rows, counts = np.unique(signs, axis=0, return_counts=True)
    shares: dict[GradingWord, float] = {}
    for row, number in zip(rows, counts, strict=True):
        word = _word([int(sign) for sign in row])
        shares[word] = shares.get(word, 0.0) + float(number) / signs.shape[0]
    return shares


def _signs(sizes: Array) -> Array:
    """Direction of each step upward: 1 finer, -1 coarser, 0 the same within half a class.

    A slow change counts: steps are taken from the last size that differed.
    """
    held = sizes[:, 0].copy()
    signs = np.zeros((sizes.shape[0], sizes.shape[1] - 1))
    for k in range(1, sizes.shape[1]):
        step = sizes[:, k] - held
        moved = np.abs(step) >= SAME_PHI
        signs[moved, k - 1] = np.sign(step[moved])
        held[moved] = sizes[moved, k]
    return signs


def _word(signs: Sequence[int]) -> GradingWord:
    turns = [sign for sign, _ in itertools.groupby(s for s in signs if s)]
    if not turns:
        return "ungraded"
    if len(turns) == 1:
        return "normal" if turns[0] > 0 else "inverse"
    if len(turns) == 2:
        return "normal-then-inverse" if turns[0] > 0 else "inverse-then-normal"
    return "not determinable"


def _turns(middles: Sequence[float]) -> tuple[float, ...]:
    """Fractions at which the middle sizes turn, for evenly spaced states."""
    steps = np.sign(np.diff(middles))
    last = len(middles) - 1
    return tuple(
        (k + 1) / last for k, (one, two) in enumerate(itertools.pairwise(steps)) if one and two and one != two
    )


# readings in the bed


def _from_readings(bed: Bed, readings: Sequence[SizeReading]) -> Grading:
    heights = np.array([r.position_m for r in readings])
    inside = bool(np.all((heights >= bed.base_m - 1e-6) & (heights <= bed.top_m + 1e-6)))
    fractions = (heights - (bed.base_m if inside else 0.0)) / bed.thickness_m
    median = np.array([-math.log2(r.d50_mm) for r in readings])
    error = math.sqrt(float(np.mean([_reading_error(r) ** 2 for r in readings])))
    shares, breaks = _compare_shapes(fractions, median, error)
    coarse = np.array([_coarse_phi(r) for r in readings])
    known = ~np.isnan(coarse)
    style = ""
    if known.sum() >= 3:
        coarse_shares, coarse_breaks = _compare_shapes(fractions[known], coarse[known], error)
        moves = 1 - shares.get("ungraded", 0.0) > 0.5
        coarse_moves = 1 - coarse_shares.get("ungraded", 0.0) > 0.5
        if coarse_moves:
            style = "distribution" if moves else "coarse-tail"
        if style == "coarse-tail":
            shares, breaks = coarse_shares, coarse_breaks
            heights, median = heights[known], coarse[known]  # what moved is what the statistics tell of
    order = trend_test(median)
    low, high = theil_sen_interval(heights, median)
    return _verdict(
        bed.name, shares, "in-bed readings", style=style, breaks=breaks, readings=len(readings),
        tau=order.tau, p=order.p, slope_phi_per_m=theil_sen_slope(heights, median), slope_low=low,
        slope_high=high,
    )  # fmt: skip


def _coarse_phi(reading: SizeReading) -> float:
    """Size of the coarse tail (d95, else d90) in phi, NaN where neither was read."""
    size = reading.d95_mm or reading.d90_mm
    return -math.log2(size) if size is not None and size > 0 else math.nan


def _compare_shapes(x: Array, y: Array, error: float) -> tuple[dict[GradingWord, float], tuple[float, ...]]:
    """Shares of the words, and the breaks of the best shape of the best word."""
    shapes = list(_shapes(x, y, error))
    most = max(shape.evidence for shape in shapes)
    shares: dict[GradingWord, float] = {}
    best: dict[GradingWord, tuple[float, tuple[float, ...]]] = {}
    for shape in shapes:
        weight = shape.prior * math.exp(shape.evidence - most)
        for word, share in shape.words:
            shares[word] = shares.get(word, 0.0) + weight * share
            if weight * share > best.get(word, (0.0, ()))[0]:
                best[word] = (weight * share, shape.breaks)
    total = sum(shares.values())
    shares = {word: share / total for word, share in shares.items()}
    winner = max(shares, key=lambda word: shares[word])
    return shares, best.get(winner, (0.0, ()))[1]


def _shapes(x: Array, y: Array, error: float) -> list[_Shape]:
    inner = sorted(set(x.tolist()))[1:-1]
    shapes = [_fit(x, y, error, [], SHAPE_PRIOR["flat"], ())]
    shapes.append(_fit(x, y, error, [x], SHAPE_PRIOR["line"], ()))
    for place in inner:
        below, above = np.minimum(x - place, 0.0), np.maximum(x - place, 0.0)
        prior = SHAPE_PRIOR["one break"] / len(inner) / 3
        for columns in ([below], [above], [below, above]):
            shapes.append(_fit(x, y, error, columns, prior, (place,)))
    pairs = list(itertools.combinations(inner, 2)) if x.size >= 6 else []
    for first, second in pairs[:200]:
        columns = [np.minimum(x - first, 0.0), np.maximum(x - second, 0.0)]
        shapes.append(_fit(x, y, error, columns, SHAPE_PRIOR["two breaks"] / len(pairs), (first, second)))
    return shapes


def _fit(
    x: Array, y: Array, error: float, columns: list[Array], prior: float, breaks: tuple[float, ...]
) -> _Shape:
    """One shape with its marginal likelihood; `columns` has no column for the level, which is free."""
    count = x.size
    if not columns:
        return _Shape(prior, (("ungraded", 1.0),), _log_evidence(y, None, error), breaks)
    design = np.stack([column / np.ptp(column) for column in columns], axis=1)  # slopes become changes, phi
    design = design - design.mean(axis=0)
    evidence = _log_evidence(y, design, error)
    changes, squares, *_ = np.linalg.lstsq(design, y - y.mean(), rcond=None)
    if len(columns) == 1 and not breaks:
        scatter = (float(squares.sum()) + PRIOR_READINGS * error**2) / (count + PRIOR_READINGS)
        score = float(changes[0]) * math.sqrt(float(np.sum(design**2)) / scatter)
        finer = 0.5 * math.erfc(-score / math.sqrt(2))
        words: tuple[tuple[GradingWord, float], ...] = (("normal", finer), ("inverse", 1 - finer))
    else:
        words = ((_word([int(np.sign(c)) if abs(c) >= SAME_PHI else 0 for c in changes]), 1.0),)
    return _Shape(prior, words, evidence, breaks)


def _log_evidence(y: Array, design: Array | None, error: float) -> float:
    """Logarithm of the marginal likelihood of centred readings, without what all shapes share.

    Changes are normal about zero with `CHANGE_PHI` a limb, the scatter is inverse gamma about the error
    with the weight of `PRIOR_READINGS`, the level is free.
    """
    centred = y - y.mean()
    squares = float(centred @ centred)
    log_determinant = 0.0
    if design is not None:
        stretch = (CHANGE_PHI / error) ** 2
        information = np.eye(design.shape[1]) + stretch * design.T @ design
        projection = design.T @ centred
        squares -= stretch * float(projection @ np.linalg.solve(information, projection))
        log_determinant = float(np.linalg.slogdet(information)[1])
    prior = PRIOR_READINGS * error**2
    power = y.size - 1 + PRIOR_READINGS
    return -0.5 * (log_determinant + power * math.log1p(max(squares, 0.0) / prior))


def _verdict(name: str, shares: dict[GradingWord, float], basis: str, *, style: str = "",
             breaks: tuple[float, ...] = (), **statistics: float | int) -> Grading:  # fmt: skip
    word = max(shares, key=lambda w: shares[w])
    ordered = tuple((w, round(shares.get(w, 0.0), 6)) for w in WORDS)
    if word == "not determinable":
        return Grading(name, word, None, ordered, basis="the sizes turn more than once", **statistics)  # type: ignore[arg-type]
    compound = word in ("inverse-then-normal", "normal-then-inverse")
    kept = tuple(round(b, 6) for b in breaks) if compound or basis == "in-bed readings" else ()
    return Grading(
        name, word, round(shares[word], 6), ordered, style if word != "ungraded" else "", basis,  # type: ignore[arg-type]
        break_fractions=kept, **statistics,  # type: ignore[arg-type]
    )  # fmt: skip
