"""Grading of one bed: words with probabilities, from sizes at base and top and from readings."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats
from sections import class_of

from logkit.model import Bed, GrainState, SizeInterval, SizeReading
from logkit.trends import grade_bed

OPPOSITE = {
    "normal": "inverse", "inverse": "normal", "ungraded": "ungraded", "not determinable": "not determinable",
    "inverse-then-normal": "inverse-then-normal", "normal-then-inverse": "normal-then-inverse",
}  # fmt: skip


def bed_of(*phi: float, sure: bool = True) -> Bed:
    """A bed with these sizes from base to top, each a half-phi class."""
    states = []
    for k, value in enumerate(phi):
        size = class_of(value)
        size = SizeInterval(size.low_mm, size.high_mm, sure=sure)
        states.append(GrainState(k / max(len(phi) - 1, 1), size))
    return Bed("b", 10.0, 11.0, grain=tuple(states))


def bed_read(phi: list[float], coarse_phi: list[float] | None = None, base_m: float = 10.0) -> Bed:
    """A bed one metre thick with readings at even heights."""
    count = len(phi)
    sizes = tuple(
        SizeReading(
            base_m + (k + 0.5) / count,
            float(2.0**-p),
            d95_mm=float(2.0 ** -coarse_phi[k]) if coarse_phi else None,
        )
        for k, p in enumerate(phi)
    )
    return Bed("b", base_m, base_m + 1.0, sizes=sizes)


@pytest.mark.parametrize(("phi", "word"), [
    ((2.2, 3.7), "normal"), ((3.7, 2.2), "inverse"), ((2.2, 2.2), "ungraded"),
    ((3.2, 1.2, 3.2), "inverse-then-normal"), ((1.2, 3.2, 1.2), "normal-then-inverse"),
    ((0.2, 1.2, 2.2, 3.2), "normal"), ((0.2, 1.2, 2.2, 3.2, 4.2, 5.2), "normal"),
])  # fmt: skip
def test_written_sizes_give_their_word(phi: tuple[float, ...], word: str) -> None:
    """Sizes some classes apart leave no doubt; one class twice is not distinguished from ungraded."""
    grading = grade_bed(bed_of(*phi))
    assert grading.verdict == word
    assert grading.probability is not None
    assert grading.probability > 0.7


def test_a_class_apart_is_less_sure_than_two() -> None:
    """The width of the classes is carried into the probability, doubt widens it further; none is certain."""
    near, far = grade_bed(bed_of(2.2, 2.7)), grade_bed(bed_of(2.2, 3.2))
    doubtful = grade_bed(bed_of(2.2, 2.7, sure=False))
    assert near.verdict == far.verdict == "normal"
    assert (doubtful.probability or 0) < (near.probability or 0) < (far.probability or 0) < 1
    # two adjacent uniform half-phi classes: P(difference > 0.25) = 1 - 0.25^2/(2 x 0.5^2)
    assert near.probability == pytest.approx(0.98 * (1 - 0.125))


@settings(max_examples=40, deadline=None)
@given(st.lists(st.floats(-3, 7), min_size=2, max_size=4))
def test_a_bed_upside_down_has_the_opposite_grading(phi: list[float]) -> None:
    """Turning a bed over turns simple words, keeps turning ones and keeps the probability."""
    up, down = grade_bed(bed_of(*phi)), grade_bed(bed_of(*phi[::-1]))
    total = sum(p for _, p in up.probabilities)
    assert total <= 1 + 1e-5
    if up.probability is not None and up.probability > 0.6 and len(phi) <= 3:
        assert down.verdict == OPPOSITE[up.verdict]
        assert down.probability == pytest.approx(up.probability, abs=1e-5)


@pytest.mark.parametrize(("bed", "basis"), [
    (Bed("g", 0, 1, kind="gap"), "a gap has no grain sizes"),
    (Bed("n", 0, 1), "no grain size written"),
    (bed_of(2.2), "one size for the whole bed"),
    (bed_of(1.2, 3.2, 1.2, 3.2), "the sizes turn more than once"),
])  # fmt: skip
def test_what_cannot_be_graded_says_why(bed: Bed, basis: str) -> None:
    """No word is made up: not determinable, with the reason and without a probability."""
    grading = grade_bed(bed)
    assert grading.verdict == "not determinable"
    assert grading.probability is None
    assert grading.basis == basis


@pytest.mark.parametrize(("phi", "word"), [
    ([1.0, 1.5, 2.1, 2.4, 3.0], "normal"), ([3.0, 2.4, 2.1, 1.5, 1.0], "inverse"),
    ([2.0, 2.1, 1.95, 2.05, 2.0], "ungraded"), ([2.0, 1.0, 2.0], "inverse-then-normal"),
    ([3.0, 2.0, 1.0, 2.0, 3.0, 3.9], "inverse-then-normal"), ([1.0, 2.0, 3.0, 2.1, 1.0], "normal-then-inverse"),
    ([1.0, 1.05, 0.95, 1.0, 2.0, 3.1], "normal"),
])  # fmt: skip
def test_readings_give_the_word_of_their_profile(phi: list[float], word: str) -> None:
    """Profiles well above the reading error get their word; statistics of the readings are kept."""
    grading = grade_bed(bed_read(phi))
    assert grading.verdict == word
    assert grading.readings == len(phi)
    assert grading.tau == pytest.approx(stats.kendalltau(range(len(phi)), phi).statistic)
    heights = 10 + (np.arange(len(phi)) + 0.5) / len(phi)
    assert grading.slope_phi_per_m == pytest.approx(stats.theilslopes(phi, heights).slope)
    assert grading.slope_low is not None
    assert grading.slope_low <= grading.slope_phi_per_m <= (grading.slope_high or 0)


def test_the_break_is_where_the_profile_turns() -> None:
    """The turning point of a hinged profile is found to the reading."""
    grading = grade_bed(bed_read([3.0, 2.0, 1.0, 2.0, 3.0, 3.9]))
    assert grading.break_fractions == pytest.approx((2.5 / 6,), abs=0.01)


def test_heights_in_the_bed_and_heights_of_the_section_mean_the_same() -> None:
    """Readings written as heights within the bed give the grading of those written as heights of the log."""
    absolute = bed_read([3.0, 2.0, 1.0, 2.0, 3.0])
    inside = Bed("b", 10.0, 11.0, sizes=tuple(
        SizeReading(r.position_m - 10.0, r.d50_mm) for r in absolute.sizes
    ))  # fmt: skip
    assert grade_bed(inside).break_fractions == pytest.approx(grade_bed(absolute).break_fractions)


def test_coarse_tail_is_told_from_distribution_grading() -> None:
    """Only the coarse percentile fines: coarse-tail. Both fine: distribution."""
    coarse = [-1.0, -0.3, 0.5, 1.2, 2.0]
    tail = grade_bed(bed_read([2.0, 2.02, 1.98, 2.0, 2.05], coarse))
    assert (tail.verdict, tail.style) == ("normal", "coarse-tail")
    assert tail.tau == pytest.approx(1.0)
    assert (tail.slope_phi_per_m or 0) > 0
    whole = grade_bed(bed_read([1.0, 1.6, 2.3, 3.0, 3.7], coarse))
    assert (whole.verdict, whole.style) == ("normal", "distribution")


def test_random_readings_are_rarely_called_graded() -> None:
    """Readings that scatter by their error about one size are mostly not distinguished from ungraded."""
    generator = np.random.default_rng(2)
    words = [grade_bed(bed_read(list(2 + 0.15 * generator.standard_normal(6)))).verdict for _ in range(200)]
    assert np.mean([word != "ungraded" for word in words]) < 0.1


def test_counts_carry_the_error_of_a_median() -> None:
    """Few counted grains make the same profile less sure than many."""

    def counted(number: int) -> float:
        bed = bed_read([1.6, 1.8, 2.0, 2.2])
        sizes = tuple(SizeReading(r.position_m, r.d50_mm, count=number) for r in bed.sizes)
        shares = dict(grade_bed(Bed("b", 10.0, 11.0, sizes=sizes)).probabilities)
        return shares["ungraded"]

    assert counted(10) > counted(1000)
