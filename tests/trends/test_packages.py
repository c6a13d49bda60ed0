"""Packages and order: known packages are found, random order gives none."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
import ruptures
from hypothesis import given, settings
from hypothesis import strategies as st
from sections import cycles, section, stepped, thicknesses

from logkit.trends import find_trends
from logkit.trends.order import order_test
from logkit.trends.packages import find_packages
from logkit.trends.segments import cut, least_costs, noise_variance
from logkit.trends.series import series

SERIES = st.lists(st.floats(-5, 5), min_size=2, max_size=40)


def packages_of(log: object) -> tuple:
    """Packages and boundaries of a log in both quantities."""
    runs = [(q, series(log, q)) for q in ("grain size", "thickness")]  # type: ignore[arg-type]
    return find_packages([(q, rs, order_test([r.values for r in rs], q)) for q, rs in runs])  # type: ignore[arg-type, misc]


def hits(boundaries: tuple, starts: list[int]) -> list[bool]:
    """For each known start whether a boundary lies within one bed of it."""
    found = [int(b.bed_above) for b in boundaries if b.quantity == "grain size"]
    return [any(abs(f - s) <= 1 for f in found) for s in starts]


@pytest.mark.parametrize(("make", "noise"), [(stepped, 0.25), (stepped, 0.3), (cycles, 0.3), (cycles, 0.4)])
def test_known_boundaries_are_found_within_one_bed(make: object, noise: float) -> None:
    """In sections of known packages (steps of 1 phi; cycles) at least nine in ten boundaries are found."""
    generator = np.random.default_rng(20)
    found: list[bool] = []
    extra = 0
    for _ in range(25):
        phi, starts = make(generator, noise)  # type: ignore[operator]
        _, boundaries = packages_of(section(phi, thicknesses(generator, phi.size)))
        found += hits(boundaries, starts)
        extra += sum(b.quantity == "grain size" for b in boundaries) - sum(hits(boundaries, starts))
    assert np.mean(found) >= 0.9
    assert extra / 25 < 1.0


@pytest.mark.parametrize(("beds", "gaps"), [(25, ()), (60, (20, 41))])
def test_shuffled_sections_rarely_get_a_significant_package(beds: int, gaps: tuple[int, ...]) -> None:
    """Of 150 shuffled sections of sizes in classes at most 5 % get any significant package."""
    generator = np.random.default_rng(beds)
    significant = 0
    for _ in range(150):
        phi = generator.choice([0.25, 1.75, 2.25, 6.0], beds, p=[0.2, 0.3, 0.2, 0.3])
        packages, _ = packages_of(section(phi, thicknesses(generator, beds), gaps))
        significant += any(p.significant for p in packages)
    assert significant / 150 <= 0.05


def test_fining_up_cycles_are_packages_with_their_word() -> None:
    """Most cycles of a river section come out as significant fining-up packages, none as coarsening-up."""
    generator = np.random.default_rng(5)
    words: list[str] = []
    for _ in range(10):
        phi, _ = cycles(generator, 0.3)
        packages, _ = packages_of(section(phi, thicknesses(generator, phi.size)))
        words += [p.trend for p in packages if p.quantity == "grain size" and p.level == 0]
    assert words.count("fining-up") >= 0.8 * len(words)
    assert "coarsening-up" not in words


def test_a_log_that_thickens_upward_says_so() -> None:
    """A section of one size whose beds thicken upward is one thickening-up package."""
    thickness = np.geomspace(0.1, 1.0, 25) * np.exp(np.random.default_rng(1).normal(0, 0.2, 25))
    trends = find_trends(section(np.full(25, 2.2), thickness))
    words = {p.trend for p in trends.significant_packages}
    assert words == {"thickening-up"}


def test_thickness_is_tested_in_the_packages_of_grain_size() -> None:
    """Where thickness has no packages of its own, each grain-size package is tested for thickening as well."""
    generator = np.random.default_rng(2)
    phi, _ = cycles(generator, 0.3)
    packages, _ = packages_of(section(phi, thicknesses(generator, phi.size)))
    of = {
        q: {(p.first_bed, p.last_bed) for p in packages if p.quantity == q}
        for q in ("grain size", "thickness")
    }
    assert len(of["grain size"]) >= 5
    assert of["thickness"] == of["grain size"] | {("0", str(phi.size - 1))}


def test_gaps_end_packages() -> None:
    """No package spans a gap, and the beds of each run make packages of their own."""
    phi, _ = cycles(np.random.default_rng(9), 0.2)
    log = section(phi, np.full(phi.size, 0.3), gaps=(20,))
    packages, _ = packages_of(log)
    gap = log.beds[20]
    assert all(p.top_m <= gap.base_m + 1e-9 or p.base_m >= gap.top_m - 1e-9 for p in packages)


def test_packages_tile_their_runs_and_nest_inside() -> None:
    """Outermost and inner packages meet without overlap; an inner one lies in the one that holds it."""
    generator = np.random.default_rng(3)
    steps = np.repeat(np.arange(6) * 0.9, 10) + 0.2 * generator.standard_normal(60)
    packages, _ = packages_of(section(steps, np.full(60, 0.5)))
    grain = [p for p in packages if p.quantity == "grain size"]
    inner = [p for p in grain if p.level == 1]
    outer = [p for p in grain if p.level == 0]
    assert inner, "a staircase is one fining-up package made of smaller ones"
    assert outer[0].trend == "fining-up"
    for level in (outer, inner):
        assert all(a.top_m <= b.base_m + 1e-9 for a, b in itertools.pairwise(level))
    assert all(any(o.base_m <= i.base_m and i.top_m <= o.top_m for o in outer) for i in inner)


@settings(max_examples=60, deadline=None)
@given(SERIES, st.floats(0.01, 20))
def test_flat_cuts_equal_an_independent_library(values: list[float], penalty: float) -> None:
    """With flat pieces only, the cost is that of the kernel method with the linear kernel in ruptures."""
    y = np.array(values)
    ours = cut(y, penalty, np.inf, minimum=2)
    ends = (
        ruptures.KernelCPD(kernel="linear", min_size=2).fit(y[:, None]).predict(pen=penalty)
        if y.size >= 4
        else [y.size]
    )

    def cost(stops: list[int]) -> float:
        starts = [0, *stops[:-1]]
        return sum(
            float(np.sum((y[a:b] - y[a:b].mean()) ** 2)) + penalty for a, b in zip(starts, stops, strict=True)
        )

    assert cost([p.stop for p in ours]) <= cost(ends) + 1e-6 * (1 + abs(cost(ends)))


@settings(max_examples=60, deadline=None)
@given(SERIES, st.floats(0.05, 5), st.floats(1, 2))
def test_many_series_at_once_cost_what_one_does(values: list[float], flat: float, ratio: float) -> None:
    """The cost of many series at once is that of the exact cut of each, so pruning loses nothing."""
    y = np.array(values) - np.mean(values)
    pieces = cut(y, flat, flat * ratio, minimum=4)
    alone = sum(p.squares + (flat * ratio if p.sloping else flat) for p in pieces)
    together = least_costs(np.stack([y, y[::-1]]), flat, flat * ratio, minimum=4)
    assert together[0] == pytest.approx(alone, rel=1e-6, abs=1e-6)
    assert together[1] == pytest.approx(alone, rel=1e-6, abs=1e-6)


def test_pieces_keep_their_least_size_and_meet() -> None:
    """Pieces cover the series without overlap and none is shorter than the minimum."""
    y = np.random.default_rng(6).normal(size=80)
    pieces = cut(y, 0.1, 0.1, minimum=5)
    assert [p.start for p in pieces] == [0, *[p.stop for p in pieces[:-1]]]
    assert pieces[-1].stop == 80
    assert min(p.stop - p.start for p in pieces) >= 5


def test_noise_is_that_of_the_items_not_of_the_steps() -> None:
    """The noise estimate of stepped normal items is near their variance, with few large steps beside."""
    generator = np.random.default_rng(7)
    y = np.repeat([0.0, 5.0, 0.0, 5.0], 500) + 0.4 * generator.standard_normal(2000)
    assert noise_variance(y) == pytest.approx(0.16, rel=0.1)


def test_random_order_is_rejected_at_the_nominal_rate() -> None:
    """The test of order rejects random series about as often as the level says, gain from cutting alike."""
    generator = np.random.default_rng(12)
    tests = [order_test([generator.normal(size=30)]) for _ in range(200)]
    assert 0.02 <= np.mean([(t.p or 1) <= 0.05 for t in tests]) <= 0.09
    assert 0.02 <= np.mean([(t.p_packages or 1) <= 0.05 for t in tests]) <= 0.09


@pytest.mark.parametrize(("values", "feature"), [
    (np.tile([0.0, 1.0], 20), "alternation"), (np.arange(40.0), "trend of the whole run"),
])  # fmt: skip
def test_order_names_what_stands_out(values: np.ndarray, feature: str) -> None:
    """Alternation and a steady trend are both order, and named; alternation is no reason to seek packages."""
    test = order_test([values])
    assert test.p is not None
    assert test.p < 0.01
    assert dict(test.features)[feature] < 0.01
    assert "not random" in test.sentence()
    if feature == "alternation":
        assert (test.p_packages or 0) > 0.05


def test_too_few_beds_are_not_tested() -> None:
    """Seven beds have no order to test: not determinable, and no package is cut."""
    log = section([0, 1, 2, 3, 4, 5, 6], [1] * 7)
    trends = find_trends(log)
    assert trends.order_test.p is None
    assert "not determinable" in trends.order_test.sentence()
    assert trends.boundaries == ()


def test_the_same_log_gives_the_same_result() -> None:
    """Shuffles are seeded from the values: two calls agree to the last digit."""
    phi, _ = cycles(np.random.default_rng(1), 0.3)
    log = section(phi, thicknesses(np.random.default_rng(2), phi.size))
    assert find_trends(log).to_dict() == find_trends(log).to_dict()
