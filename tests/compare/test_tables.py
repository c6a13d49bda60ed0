"""Comparison tables, tests between wells, proportion curve."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats
from synthetic_wells import bed, section

from logkit.compare import Companions, compare_logs
from logkit.compare.differences import compare_values
from logkit.compare.measures import amalgamation, flow_table, mixture, net_to_gross_table
from logkit.compare.placing import PlacedLog, place_logs
from logkit.compare.proportion import CLASSES, proportion_curve
from logkit.errors import ArgumentError
from logkit.model import Bed, Header, Log, Phase, PhaseEstimate, Quantiles
from logkit.registry import evaluate


@dataclass(frozen=True)
class History:
    """Estimates alone."""

    estimates: tuple[PhaseEstimate, ...]


def placed(*logs: Log) -> tuple[PlacedLog, ...]:
    """Logs hung by their bases."""
    return place_logs(logs, "base", "true", [Companions()] * len(logs))[0]


def layers(*parts: tuple[float, float], name: str = "A", gap: float = 0.0) -> Log:
    """Beds of (thickness, phi) upward, a gap of some height on top."""
    beds: list[Bed] = []
    base = 0.0
    for thickness, phi in parts:
        beds.append(bed(str(len(beds) + 1), base, thickness, phi, "massive"))
        base += thickness
    if gap:
        beds.append(Bed("gap 1", base, base + gap, kind="gap", gap_reason="no_exposure"))
    return Log(Header(section=name), tuple(beds))


def test_net_to_gross_of_the_handbook() -> None:
    """65 of 128 ft of sand give 0.51, and the gap counts only where the column says so."""
    foot = 0.3048
    log = layers((65 * foot, 2.0), (63 * foot, 6.0), gap=20 * foot)
    row = net_to_gross_table(placed(log), (0.0625,)).iloc[0]
    assert round(row.net_to_gross_without_gaps, 2) == 0.51
    assert row.net_to_gross_without_gaps == pytest.approx(
        evaluate("geometry.net_to_gross", net=65, gross=128), abs=1e-4
    )
    assert row.net_to_gross_with_gaps == pytest.approx(65 / 148, abs=1e-4)


def test_slope_example_of_the_handbook() -> None:
    """Twelve metres across strike on level ground at 35 degrees are 6.883 m."""
    thickness = evaluate("geometry.thickness_level_ground", width_across_strike_m=12, dip_deg=35)
    assert thickness == pytest.approx(6.883, abs=5e-4)


@given(st.lists(st.tuples(st.floats(0.05, 5), st.floats(-1, 7)), min_size=1, max_size=12))
@settings(max_examples=40)
def test_net_falls_as_the_cutoff_rises(parts: list[tuple[float, float]]) -> None:
    """A coarser cut-off never gives more net."""
    net = net_to_gross_table(placed(layers(*parts))).net_m.tolist()
    assert net == sorted(net, reverse=True)


def test_amalgamation_counts_sand_on_sand_within_runs() -> None:
    """Of three sand beds with a floor one lies on sand; a gap hides the floor."""
    log = layers((1, 2), (1, 2), (1, 6), (1, 2), (1, 6), (1, 2))
    assert amalgamation(placed(log)[0]) == pytest.approx(1 / 3, abs=1e-4)
    gap = Bed("gap 1", 6.0, 7.0, kind="gap", gap_reason="no_exposure")
    more = replace(log, beds=(*log.beds, gap, bed("9", 7.0, 1.0, 2.0, "massive")))
    assert amalgamation(placed(more)[0]) == pytest.approx(1 / 3, abs=1e-4)
    assert math.isnan(amalgamation(placed(layers((1, 6)))[0]))


def test_proportions_add_up_in_every_table() -> None:
    """Shares by thickness and by count are 1 for each well and kind."""
    logs = [section(1, 30), section(2, 40, name="B")]
    tables = compare_logs(logs, "base", histories=[None] * 2, trends=[None] * 2).tables()
    sums = tables["facies"].groupby(["section", "kind"])[["by_thickness", "by_count"]].sum()
    assert np.allclose(sums, 1.0, atol=0.005)
    assert tables["grading"].empty
    assert tables["wells"].coverage.tolist() == [1.0, 1.0]


def estimate(log: Log, index: int, velocity: Quantiles | None, bound: str = "range") -> PhaseEstimate:
    """An estimate for a whole bed."""
    b = log.beds[index]
    phase = Phase("A", b.name, 0, b.base_m, b.top_m, "bed", "river", bed_index=index)
    status = "estimated" if bound else "no estimate"
    return PhaseEstimate(phase, status, "" if bound else "mud", bound, velocity)  # type: ignore[arg-type]


def test_one_sided_answers_are_counted_and_not_mixed_in() -> None:
    """The velocity of a well comes from ranges alone; bounds and blanks are counted."""
    log = layers((1, 2), (1, 2), (1, 2))
    q = Quantiles(0.3, 0.4, 0.5, 0.6, 0.8)
    history = History((estimate(log, 0, q), estimate(log, 1, None, "above"), estimate(log, 2, None, "")))
    row = flow_table(placed(log), [history]).iloc[0]
    assert (row.phases, row.ranges, row.one_sided, row.no_estimate) == (3, 1, 1, 1)
    assert row.velocity_p50_m_s == 0.5
    assert row.velocity_p10_m_s >= 0.3
    assert row.velocity_p90_m_s <= 0.8
    assert math.isnan(row.flow_depth_p50_m)


@given(st.floats(0.1, 10))
def test_mixture_leans_to_the_thicker_phase(thickness: float) -> None:
    """Weight moves the middle of two ranges towards the thicker one, inside both."""
    slow, fast = Quantiles(0.1, 0.15, 0.2, 0.25, 0.3), Quantiles(1.0, 1.2, 1.5, 1.8, 2.0)
    middle = mixture([(slow, 1.0), (fast, thickness)])[1]
    assert 0.1 <= middle <= 2.0
    assert middle <= mixture([(slow, 1.0), (fast, thickness * 2)])[1] + 1e-9


def test_p_values_equal_scipy_and_are_corrected_together() -> None:
    """Rank and KS tests are scipy's; correction runs over all tests of the table."""
    random = np.random.default_rng(3)
    wells = {
        "A": {"bed_thickness": random.lognormal(0, 0.6, 40), "grain_size": random.normal(2, 1, 40)},
        "B": {"bed_thickness": random.lognormal(0.8, 0.6, 40), "grain_size": random.normal(2, 1, 40)},
    }
    found = {d.quantity: d for d in compare_values(wells)}
    thick = found["bed_thickness"]
    x, y = wells["A"]["bed_thickness"], wells["B"]["bed_thickness"]
    assert thick.p_rank == pytest.approx(stats.mannwhitneyu(x, y).pvalue)
    assert thick.ks_d == pytest.approx(stats.ks_2samp(x, y).statistic, abs=1e-3)
    tested = [p for d in found.values() for p in (d.p_rank, d.p_ks) if not math.isnan(p)]
    assert len(tested) == 4
    adjusted = stats.false_discovery_control(tested)
    assert thick.p_rank_adjusted == pytest.approx(adjusted[0])
    assert thick.delta < -0.474
    assert thick.reading.startswith("bed thickness: A is thinner than B (medians")
    assert "large effect" in thick.reading
    assert "are not distinguished" in found["grain_size"].reading
    assert "too few values to compare (A has 0, B has 0; 5 are needed)" in found["velocity"].reading


def test_delta_is_the_share_of_pairs() -> None:
    """Cliff's delta counts pairs with the first larger less pairs with the first smaller."""
    x, y = np.array([1.0, 2, 3, 4, 5]), np.array([2.5, 2.6, 2.7, 2.8, 2.9])
    found = compare_values({"A": {"bed_thickness": x}, "B": {"bed_thickness": y}})[0]
    assert found.delta == pytest.approx(np.sign(np.subtract.outer(x, y)).mean())


def test_many_wells_are_each_set_against_the_others() -> None:
    """Above eight wells there is one test a well and quantity."""
    random = np.random.default_rng(1)
    wells = {f"W{i}": {"bed_thickness": random.lognormal(0, 1, 20)} for i in range(12)}
    found = [d for d in compare_values(wells) if d.quantity == "bed_thickness"]
    assert len(found) == 12
    assert all(d.second == "all other wells" and d.n_second == 220 for d in found)


def test_one_sorting_gives_the_tests_of_scipy() -> None:
    """Each well against the rest has the statistics and p that scipy gives, ties included."""
    random = np.random.default_rng(6)
    wells = {f"W{i}": {"bed_thickness": random.lognormal(0.05 * i, 1, 30).round(1)} for i in range(10)}
    found = [d for d in compare_values(wells) if d.quantity == "bed_thickness"]
    for d in found:
        x = wells[d.first]["bed_thickness"]
        rest = np.concatenate([w["bed_thickness"] for name, w in wells.items() if name != d.first])
        rank = stats.mannwhitneyu(x, rest, method="asymptotic")
        ks = stats.ks_2samp(x, rest, method="asymp")
        assert d.p_rank == pytest.approx(rank.pvalue)
        assert d.delta == pytest.approx(2 * rank.statistic / (len(x) * len(rest)) - 1, abs=6e-4)
        assert d.ks_d == pytest.approx(ks.statistic, abs=6e-4)
        assert d.p_ks == pytest.approx(ks.pvalue)
        assert d.median_second == pytest.approx(float(f"{np.median(rest):.2g}"))


def test_few_of_many_alike_wells_differ() -> None:
    """Wells drawn from one population are called different in at most 5 % of the tests."""
    random = np.random.default_rng(11)
    called = []
    for _ in range(60):
        wells = {n: {"bed_thickness": random.lognormal(0, 0.7, 40)} for n in ("A", "B", "C")}
        called.append(any(d.p_rank_adjusted < 0.05 for d in compare_values(wells)[:3]))
    assert np.mean(called) <= 0.10


def test_proportion_curve_adds_up() -> None:
    """Shares add to 1 where anything is described, and metres to those of the wells."""
    logs = placed(layers((1, 2), (2, 6), gap=1.0), layers((3, -2), (1, 3), name="B"))
    curve = proportion_curve(logs, 0.5)
    shares = curve[list(CLASSES)].sum(axis=1)
    assert shares[curve.described_m > 0].round(3).eq(1.0).all()
    assert curve.described_m.sum() == pytest.approx(7.0)
    assert curve.gaps_m.sum() == pytest.approx(1.0)
    assert curve.iloc[0].gravel == 0.5
    with pytest.raises(ArgumentError, match="slice_m is 0"):
        proportion_curve(logs, 0)


def test_summary_says_datum_thickness_and_how_many_tests() -> None:
    """The sentences name what a reader must know before a number."""
    logs = [section(1, 30), section(2, 40, name="B")]
    said = compare_logs(logs, "base", histories=[None] * 2, trends=[None] * 2).summary()
    assert said[0] == ("2 wells hang on 'base'; a height difference is true stratigraphic thickness (TST).")
    assert "after correction for" in said[-1]


def test_cutoffs_and_thickness_are_checked() -> None:
    """A cut-off of zero or an unknown thickness names the argument."""
    logs = [section(1, 10), section(2, 10, name="B")]
    none = {"histories": [None] * 2, "trends": [None] * 2}
    with pytest.raises(ArgumentError, match="cutoffs_mm"):
        compare_logs(logs, cutoffs_mm=(0.0,), **none)  # type: ignore[arg-type]
    with pytest.raises(ArgumentError, match=r"thickness is 'apparent'.*true, vertical or measured"):
        compare_logs(logs, thickness="apparent", **none)  # type: ignore[arg-type]
