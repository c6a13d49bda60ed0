"""Alignment: the engine against the registered formula, and what it suggests against known truth."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from synthetic_wells import second_well, section

from logkit.compare import Companions, SuggestedTie
from logkit.compare.placing import place_logs
from logkit.compare.suggestions import suggest_ties
from logkit.compare.warping import warp
from logkit.model import Bed, Log
from logkit.registry import evaluate


def suggest(first: Log, second: Log) -> tuple[SuggestedTie, ...]:
    """Suggestions between two logs hung by their bases."""
    placed, _ = place_logs([first, second], "base", "true", [Companions()] * 2)
    return suggest_ties(placed)


def partners(ties: tuple[SuggestedTie, ...]) -> dict[str, SuggestedTie]:
    """The tie of each bed of the first well, a mutual one before others."""
    return {t.first_bed: t for t in sorted(ties, key=lambda t: t.mutual)}


values = st.lists(st.floats(-5, 5), min_size=1, max_size=12)


@given(values, values)
@settings(max_examples=60)
def test_cost_equals_the_registered_formula(x: list[float], y: list[float]) -> None:
    """With closed ends the score is the symmetric normalised distance of the formula registry."""
    cost = np.abs(np.subtract.outer(x, y))[None]
    expected = evaluate(
        "stat.dtw_symmetric_normalised", x=x, y=y, local_cost="absolute difference", diagonal_weight=2
    )
    assert warp(cost).score[0] == pytest.approx(expected, abs=1e-9)


@given(values, values, st.booleans())
@settings(max_examples=60)
def test_the_path_is_whole_and_costs_what_the_score_says(x: list[float], y: list[float], ends: bool) -> None:
    """The marked cells run from one end to the other without turning back."""
    cost = np.abs(np.subtract.outer(x, y))[None]
    found = warp(cost, open_start=ends, open_end=ends)
    cells = np.argwhere(found.on_path()[0])
    steps = np.diff(cells, axis=0)
    assert ((steps >= 0) & (steps <= 1)).all()
    if not ends:
        assert cells[0].tolist() == [0, 0]
        assert cells[-1].tolist() == [len(x) - 1, len(y) - 1]


def test_open_ends_find_a_record_inside_a_longer_one() -> None:
    """A short record lies on its place in the long one when ends are open."""
    long = np.array([5.0, 9.0, 1.0, 7.0, 3.0, 8.0, 2.0])
    cost = np.abs(np.subtract.outer(long[2:5], long))[None] / 9
    cells = np.argwhere(warp(cost, open_start=True, open_end=True, skip=0.05).on_path()[0])
    assert cells.tolist() == [[0, 2], [1, 3], [2, 4]]


@pytest.mark.parametrize("habit", ["walk", "independent", "cycles"])
def test_two_wells_of_one_section_are_tied_within_one_bed(habit: str) -> None:
    """With stretch and loss, ties of at least 90 % of the beds fall within one bed of the truth."""
    near: list[bool] = []
    right: list[bool] = []
    for seed in range(6):
        first = section(seed, 60, habit)
        second, truth = second_well(first, 700 + seed)
        ties = suggest(first, second)
        found = partners(ties)
        near += [
            bed in found and abs(int(found[bed].second_bed) - int(partner)) <= 1
            for bed, partner in truth.items()
        ]
        right += [
            abs(int(t.second_bed) - int(truth[t.first_bed])) <= 1
            for t in ties
            if t.confident and t.first_bed in truth
        ]
    assert np.mean(near) >= 0.90
    assert len(right) > 100
    assert np.mean(right) >= 0.95


@pytest.mark.parametrize("habit", ["walk", "independent", "cycles"])
def test_unrelated_wells_are_hardly_ever_confident(habit: str) -> None:
    """Between unrelated wells of the same habit at most 5 % of the suggestions are called confident."""
    confident = [
        np.mean(
            [t.confident for t in suggest(section(seed, 50, habit), section(9000 + seed, 50, habit, "B"))]
        )
        for seed in range(20)
    ]
    assert np.mean(confident) <= 0.05


def test_a_well_cut_at_both_ends_still_ties() -> None:
    """A second well that holds only the middle of the section is tied there."""
    first = section(5, 60, "independent")
    second, truth = second_well(first, 44)
    kept = second.beds[6:-6]
    second = replace(second, beds=kept)
    names = {b.name for b in kept}
    found = partners(suggest(first, second))
    near = [
        abs(int(found[bed].second_bed) - int(partner)) <= 1
        for bed, partner in truth.items()
        if partner in names and bed in found
    ]
    assert np.mean(near) >= 0.9


def test_nothing_is_tied_inside_a_gap() -> None:
    """Beds opposite lost core get no partner there, and a gap gets none at all."""
    first = section(3, 40, "independent")
    beds = list(first.beds)
    lost = range(15, 22)
    gap = Bed("gap 1", beds[15].base_m, beds[21].top_m, kind="gap", gap_reason="lost_core")
    second = replace(first, beds=(*beds[:15], gap, *beds[22:]), header=replace(first.header, section="B"))
    ties = suggest(first, second)
    assert all(t.second_bed != "gap 1" for t in ties)
    confident = {t.first_bed for t in ties if t.confident}
    assert not confident & {str(i + 1) for i in lost if 16 <= i <= 20}
    assert len(confident) > 20


def test_markers_hold_the_alignment() -> None:
    """No suggestion crosses a shared marker, even where the beds would fit better."""
    first = section(8, 40, "independent")
    beds = list(first.beds)
    second = replace(
        first,
        header=replace(first.header, section="B"),
        beds=tuple(replace(b, marker="ash") if b.name == "25" else b for b in beds),
    )
    first = replace(first, beds=tuple(replace(b, marker="ash") if b.name == "20" else b for b in beds))
    for tie in suggest(first, second):
        assert (int(tie.first_bed) < 20) == (int(tie.second_bed) < 25)


def test_suggestions_are_the_same_every_time() -> None:
    """Resampling is seeded from the content."""
    first = section(2, 30)
    second, _ = second_well(first, 5)
    assert suggest(first, second) == suggest(first, second)
