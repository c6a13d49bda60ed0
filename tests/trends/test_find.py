"""The whole of trends on one log: tables, sentences, JSON, thickness, plots, odd input."""

from __future__ import annotations

import json
import subprocess
import sys

import matplotlib as mpl
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats
from sections import cycles, section, thicknesses

from logkit.errors import ArgumentError, UnknownNameError
from logkit.model import Bed, CurrentReading, CurrentSummary, GrainState, Header, Log, SizeInterval
from logkit.trends import find_trends, plots
from logkit.trends.thickness import candidates, find_thickness

mpl.use("Agg")

SAND = GrainState(0.5, SizeInterval(0.25, 0.5))
MUD = GrainState(0.5, SizeInterval(0.0039, 0.0625))


@pytest.fixture
def log() -> Log:
    """A section of fining-up cycles with a gap and ten palaeocurrents."""
    generator = np.random.default_rng(4)
    phi, _ = cycles(generator, 0.3)
    plain = section(phi, thicknesses(generator, phi.size), gaps=(15,))
    beds = [
        Bed(b.name, b.base_m, b.top_m, kind=b.kind, grain=b.grain,
            currents=(CurrentReading("cross_bedding", "plane", "direction", 60.0 + k, 25.0),) if k % 5 == 1 else ())
        for k, b in enumerate(plain.beds)
    ]  # fmt: skip
    return Log(Header(title="Invented ridge"), tuple(beds))


def test_every_bed_has_one_grading_in_order(log: Log) -> None:
    """Gradings follow the beds of the log, gaps included, and are found by name."""
    trends = find_trends(log)
    assert [g.bed for g in trends.gradings] == [b.name for b in log.beds]
    assert trends.grading("3").bed == "3"
    with pytest.raises(UnknownNameError):
        trends.grading("no such bed")


def test_results_are_ready_for_json_and_tables(log: Log) -> None:
    """Everything passes through strict JSON; tables have their rows; unknown tables are named."""
    trends = find_trends(log)
    again = json.loads(json.dumps(trends.to_dict(), allow_nan=False))
    assert len(again["grading"]) == len(log.beds)
    tables = trends.tables()
    assert {"grading", "packages", "thickness", "transitions", "currents"} <= set(tables)
    assert len(tables["current readings"]) == sum(len(b.currents) for b in log.real_beds)
    assert trends.to_frame("packages").equals(tables["packages"])
    with pytest.raises(UnknownNameError):
        trends.to_frame("pakages")


def test_the_summary_says_what_was_found(log: Log) -> None:
    """Sentences name packages, order, net to gross and the mean current with its number."""
    text = "\n".join(find_trends(log).summary())
    assert "Fining-up package from" in text
    assert "Order of grain size" in text
    assert "Net to gross at 0.0625 mm" in text
    assert "Palaeocurrents, cross-bedding: mean toward" in text


def test_net_to_gross_counts_gaps_both_ways() -> None:
    """Sand 65 of 128 without the gap is 0.51; a gap as thick as the rest halves it; the range spans the class."""
    beds = (
        Bed("a", 0.0, 65.0, grain=(SAND,)), Bed("b", 65.0, 128.0, grain=(MUD,)),
        Bed("c", 128.0, 256.0, kind="gap"),
    )  # fmt: skip
    rows = find_thickness(Log(beds=beds), (0.0625, 0.3)).net_to_gross
    assert rows[0].ratio_without_gaps == pytest.approx(0.51, abs=0.005)
    assert rows[0].ratio_with_gaps == pytest.approx(65 / 256)
    assert (rows[1].net_low_m, rows[1].net_m, rows[1].net_high_m) == (0.0, 65.0, 65.0)


def test_amalgamated_contacts_are_counted_within_runs() -> None:
    """Sand on sand counts, sand on mud does not, and a gap is no contact."""
    kinds = "ssms.ss"
    beds = tuple(
        Bed(
            str(k),
            k,
            k + 1.0,
            kind="gap" if c == "." else "bed",
            grain=() if c == "." else (SAND if c == "s" else MUD,),
        )
        for k, c in enumerate(kinds)
    )
    result = find_thickness(Log(beds=beds)).amalgamation
    assert (result.contacts, result.amalgamated) == (3, 2)


def test_pattern_layers_stay_out_of_thickness_statistics() -> None:
    """Layers of a written pattern are counted as left out and do not change the quantiles."""
    real = [Bed(str(k), k, k + 0.5, grain=(SAND,)) for k in range(4)]
    pattern = [Bed(f"p{k}", 10 + k, 11.0 + k, grain=(SAND,), measured=False) for k in range(6)]
    result = find_thickness(Log(beds=(*real, *pattern)))
    assert result.left_out == 6
    assert result.classes[0].beds == 4
    assert result.classes[0].p50_m == pytest.approx(0.5)


@pytest.mark.parametrize(("kind", "draw"), [
    ("lognormal", lambda g, n: np.exp(g.normal(-1, 0.6, n))),
    ("exponential", lambda g, n: 0.05 + g.exponential(0.4, n)),
    ("power law", lambda g, n: 0.05 * (1 + g.pareto(1.3, n))),
])  # fmt: skip
def test_the_true_distribution_is_recovered(kind: str, draw: object) -> None:
    """The distribution that made the beds gets the largest weight and is not rejected; likelihoods are scipy's."""
    values = draw(np.random.default_rng(17), 300)  # type: ignore[operator]
    fits = {c.distribution: c for c in candidates("all beds", values)}
    best = max(fits.values(), key=lambda c: c.weight)
    assert best.distribution == kind
    assert best.p > 0.05
    logs = np.log(values)
    theirs = stats.lognorm.logpdf(values, logs.std(), scale=np.exp(logs.mean())).sum()
    assert fits["lognormal"].log_likelihood == pytest.approx(theirs)
    low = values.min()
    theirs = stats.expon.logpdf(values, low, values.mean() - low).sum()
    assert fits["exponential"].log_likelihood == pytest.approx(theirs)
    exponent = values.size / np.log(values / low).sum()
    assert fits["power law"].log_likelihood == pytest.approx(
        stats.pareto.logpdf(values, exponent, scale=low).sum()
    )


@pytest.mark.parametrize("beds", [
    (), (Bed("1", 0, 1),), (Bed("g", 0, 1, kind="gap"),), (Bed("1", 0, 1, grain=(SAND,)), Bed("g", 1, 2, kind="gap")),
    tuple(Bed(str(k), k, k + 1.0, grain=(SAND,)) for k in range(12)),
    tuple(Bed(str(k), k, k + 1.0, lithology="nowhere in the vocabulary") for k in range(12)),
])  # fmt: skip
def test_poor_logs_give_empty_results_not_errors(beds: tuple[Bed, ...]) -> None:
    """No beds, only gaps, beds without sizes, beds all alike: results that say nothing, in words and JSON."""
    trends = find_trends(Log(beds=beds))
    assert trends.significant_packages == ()
    assert json.dumps(trends.to_dict(), allow_nan=False)
    assert trends.summary()


@settings(max_examples=25, deadline=None)
@given(st.lists(st.tuples(st.sampled_from("smgx"), st.floats(0.001, 50)), max_size=25))
def test_any_sequence_of_beds_gets_through(items: list[tuple[str, float]]) -> None:
    """Any mixture of sand, mud, gaps and blank beds of any thickness gives finite, ordered results."""
    beds, base = [], 0.0
    for k, (kind, thickness) in enumerate(items):
        grain = {"s": (SAND,), "m": (MUD,)}.get(kind, ())
        beds.append(Bed(str(k), base, base + thickness, kind="gap" if kind == "g" else "bed", grain=grain))
        base += thickness
    trends = find_trends(Log(beds=tuple(beds)))
    json.dumps(trends.to_dict(), allow_nan=False)
    assert all(0 <= p.p <= p.p_adjusted <= 1 for p in trends.packages)


def test_sizes_taken_from_the_lithology_are_counted_and_said() -> None:
    """Beds with only a lithology count with its usual range, and the summary says how many."""
    beds = tuple(Bed(str(k), k, k + 1.0, lithology="mudstone" if k % 2 else "", grain=() if k % 2 else (SAND,))
                 for k in range(10))  # fmt: skip
    trends = find_trends(Log(beds=beds))
    assert trends.assumed_sizes == 5
    assert any("5 beds without a written size" in line for line in trends.summary())


@pytest.mark.parametrize(("options", "argument"), [
    ({"level": 0}, "level"), ({"minimum_beds": 2}, "minimum_beds"), ({"states": "colour"}, "states"),
    ({"cut_offs_mm": (0.0,)}, "cut_offs_mm"),
])  # fmt: skip
def test_options_out_of_range_are_refused_by_name(log: Log, options: dict, argument: str) -> None:
    """An option that cannot be used is an error that names it."""
    with pytest.raises(ArgumentError) as caught:
        find_trends(log, **options)
    assert caught.value.argument == argument


def test_states_may_be_a_function_of_a_bed(log: Log) -> None:
    """A person's own facies are a function; beds it gives none break the chain."""
    result = find_trends(log, states=lambda bed: "odd" if int(bed.name) % 2 else "").transitions
    assert result.states == ("odd",)
    assert result.total == 0


def test_plots_return_the_axes_they_took(log: Log) -> None:
    """Every plot draws on the given axes and gives them back; rose classes go with the square root of counts."""
    import matplotlib.pyplot as plt
    from matplotlib.patches import Wedge

    trends = find_trends(log)
    figure, axes = plt.subplots(2, 2)
    summary = CurrentSummary("flute", "direction", (10, 11, 12, 13, 200), 12.0, 0.6, 30.0, 0.1)
    assert plots.rose(axes[0, 0], summary) is axes[0, 0]
    radii = sorted(p.r for p in axes[0, 0].patches if isinstance(p, Wedge))
    assert radii == pytest.approx([0.5, 1.0])
    assert plots.packages(axes[0, 1], trends.packages) is axes[0, 1]
    assert plots.transitions(axes[1, 0], trends.transitions) is axes[1, 0]
    values = [b.thickness_m for b in log.real_beds]
    assert plots.thickness(axes[1, 1], trends.thickness, values) is axes[1, 1]
    assert len(axes[1, 1].lines) == 4
    figure.canvas.draw()
    plt.close(figure)


def test_an_axis_is_drawn_at_both_ends_and_counted_once() -> None:
    """Axial readings make two equal wedges for one class; the title counts readings."""
    import matplotlib.pyplot as plt
    from matplotlib.patches import Wedge

    figure, ax = plt.subplots()
    plots.rose(ax, CurrentSummary("groove", "axis", (30.0, 31.0), 30.5, 1.0, 0.5, None))
    assert len([p for p in ax.patches if isinstance(p, Wedge)]) == 2
    assert ax.get_title() == "groove casts, n = 2"
    with pytest.raises(ArgumentError):
        plots.rose(ax, CurrentSummary("groove", "axis", (30.0,), 30.0, 1.0, 0.0, None), 25)
    plt.close(figure)


def test_importing_trends_stays_light() -> None:
    """Neither scipy nor pandas nor matplotlib is loaded until a result needs it."""
    code = (
        "import sys, logkit.trends, logkit.trends.plots;"
        "print([m for m in ('scipy', 'pandas', 'matplotlib', 'ruptures') if m in sys.modules])"
    )
    out = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert out.stdout.strip() == "[]"
