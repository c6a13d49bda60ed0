"""Waxing and waning: right where it is called, silent where it cannot be told."""

from __future__ import annotations

import numpy as np
import pytest
from make import bed, log, size
from synthetic import river_log

from logkit.flow import infer_flow
from logkit.model import Bed, GrainState, Structure


def test_ranges_and_tendencies_hold_on_flows_drawn_from_the_model() -> None:
    """Five logs of 200 beds: the 80 % intervals hold 77-90 %; called tendencies are right, hardly one is wrong.

    Beds of one log share half of the allowance, so single logs lie between 70 and 90 %.
    """
    inside, right, wrong = [], [], []
    words = {"waxing": 1, "waning": -1}
    for seed in range(5):
        truth = river_log(200, seed)
        history = infer_flow(truth.log)
        frame = history.to_frame()
        low, high = frame.velocity_p10_m_s.to_numpy(), frame.velocity_p90_m_s.to_numpy()
        inside.append((low <= truth.velocity_m_s) & (truth.velocity_m_s <= high))
        change = np.log(truth.velocity_m_s[1:] / truth.velocity_m_s[:-1])
        called = np.array([words.get(t.tendency, 0) if t else 0 for t in history.tendency])
        clear = np.abs(change) > np.log(1.5)
        right.append(called[clear] == np.sign(change[clear]))
        wrong.append((called[clear] != 0) & ~right[-1])
    held, good, bad = (np.concatenate(x) for x in (inside, right, wrong))
    assert 0.77 <= held.mean() <= 0.90
    assert good.sum() / (good.sum() + bad.sum()) >= 0.90
    assert bad.mean() < 0.02
    assert good.mean() > 0.35


def test_the_same_bed_twice_is_not_determinable() -> None:
    """Equal readings leave the direction open: a probability of one half and no word."""
    transition = infer_flow(log(bed("mL", "cross_bedding"), bed("mL", "cross_bedding"))).tendency[0]
    assert transition is not None
    assert transition.tendency == "not determinable"
    assert transition.p_waxing == pytest.approx(0.5, abs=0.01)


def test_order_turns_waning_into_waxing() -> None:
    """Turning two beds over turns the probability over."""
    down = infer_flow(log(bed("fL", "upper_plane_lamination"), bed("fL", "current_ripples"))).tendency[0]
    up = infer_flow(log(bed("fL", "current_ripples"), bed("fL", "upper_plane_lamination"))).tendency[0]
    assert down is not None
    assert up is not None
    assert (down.tendency, up.tendency) == ("waning", "waxing")
    assert down.p_waxing == pytest.approx(1 - up.p_waxing, abs=0.02)  # type: ignore[operator]


def test_structures_passing_up_within_a_bed_make_a_pattern() -> None:
    """Ripples, dunes, ripples in one bed: waxing, then waning."""
    history = infer_flow(
        log(bed("fU", "current_ripples upper_plane_lamination current_ripples", structures_upward=True))
    )
    (pattern,) = history.bed_patterns
    assert pattern.pattern == "waxing-then-waning"
    assert pattern.probability is not None
    assert 0.6 < pattern.probability < 1
    assert [e.tendency for e in history.estimates] == ["not determinable", "waxing", "waning"]


def test_a_gap_breaks_the_chain() -> None:
    """No tendency across what was not seen."""
    beds = (
        bed("fL", "upper_plane_lamination"),
        Bed("gap 1", 0.8, 1.2, kind="gap", gap_reason="no_exposure"),
        bed("fL", "current_ripples", name="3", base_m=1.2),
    )
    history = infer_flow(log(*beds))
    assert history.tendency == (None, None)
    assert history.estimates[2].tendency == "not determinable"
    assert history.estimates[2].tendency_probability is None


def test_grading_and_structures_are_said_to_agree_or_not() -> None:
    """Fining from plane beds to ripples agrees; coarsening with the same structures does not."""
    words = {}
    for grain in ("fU vfL", "vfL fU"):
        history = infer_flow(
            log(bed(grain, "upper_plane_lamination current_ripples", structures_upward=True, top_m=0.8))
        )
        assert history.tendency[0] is not None
        words[grain] = history.tendency[0].agreement
    assert words["fU vfL"] == "fining and structures agree: waning"
    assert words["vfL fU"].endswith("they disagree")


def test_thin_inverse_grading_is_no_proof_of_waxing() -> None:
    """Below ten centimetres inverse grading says nothing; thicker, it points to waxing."""
    thin, thick = (infer_flow(log(bed("vfL mL", "massive", top_m=top))).tendency[0] for top in (0.05, 1.0))
    assert thin is not None
    assert thick is not None
    assert thin.agreement == "inverse grading in so thin a layer is no proof of waxing"
    assert thin.tendency == "not determinable"
    assert thick.tendency == "waxing"


def test_normal_grading_of_a_suspension_is_waning() -> None:
    """A graded Ta: the drag and the suspension rule are shared, so the sizes alone tell."""
    ta = Structure("graded_massive", code="Ta")
    states = (GrainState(0.0, size("mL")), GrainState(1.0, size("vfU")))
    history = infer_flow(log(Bed("1", 0.0, 1.0, grain=states, structures=(ta,)), setting="turbidity"))
    transition = history.tendency[0]
    assert transition is not None
    assert transition.tendency == "waning"
    assert transition.agreement == "the sizes themselves measure the suspension"


def test_one_sided_answers_are_not_compared() -> None:
    """Two lower bounds do not make a tendency."""
    transition = infer_flow(log(bed("pbl"), bed("mL")), prior="off").tendency[0]
    assert transition is not None
    assert (transition.tendency, transition.p_waxing) == ("not determinable", None)


def test_bouma_divisions_read_upward_mean_a_waning_flow() -> None:
    """Tb passing up into Tc gives no velocity for Tb, and still a waning flow; the reverse is waxing."""
    tb, tc = Structure("plane_lamination", code="Tb"), Structure("ripple_cross_lamination", code="Tc")
    for order, word in (((tb, tc), "waning"), ((tc, tb), "waxing")):
        history = infer_flow(log(bed("fL", terms=order, structures_upward=True), setting="turbidity"))
        assert history.tendency[0] is not None
        assert history.tendency[0].tendency == word
        assert "Bouma divisions" in history.tendency[0].agreement


def test_sizes_alone_never_make_a_turbidity_current_wax() -> None:
    """Inverse grading of a suspended load: silent in a thin layer, no more than a leaning in a thick one."""
    states = (GrainState(0.0, size("fL")), GrainState(1.0, size("mU")))
    ta = (Structure("massive", code="Ta"),)
    for top_m, chance in ((0.05, None), (0.6, 0.7)):
        history = infer_flow(log(Bed("1", 0.0, top_m, grain=states, structures=ta), setting="turbidity"))
        transition = history.tendency[0]
        assert transition is not None
        assert (transition.tendency, transition.probability) == ("not determinable", chance)
        assert "no proof of waxing" in transition.agreement


def test_no_probability_of_a_suspension_is_one() -> None:
    """However far the sizes fall, a share of doubt stays."""
    states = (GrainState(0.0, size("cU")), GrainState(1.0, size("vfL")))
    found = infer_flow(
        log(Bed("1", 0.0, 1.0, grain=states, structures=(Structure("massive"),)), setting="turbidity")
    ).tendency[0]
    assert found is not None
    assert (found.tendency, found.probability) == ("waning", pytest.approx(0.98, abs=0.001))


def test_each_turbidite_is_a_current_of_its_own() -> None:
    """Amalgamated beds are not one flow that waxed."""
    fine, coarse = (bed(g, "massive") for g in ("fL", "mU"))
    transition = infer_flow(log(fine, coarse, setting="turbidity")).tendency[0]
    assert transition is not None
    assert (transition.tendency, transition.probability) == ("not determinable", None)
    assert transition.agreement == "each bed is a current of its own"


def test_a_complete_sequence_is_no_less_sure_than_its_weakest_step() -> None:
    """Four like steps of Ta-e rest on one order of divisions: their chances are not multiplied."""
    letters = {"Ta": "massive", "Tb": "plane_lamination", "Tc": "ripple_cross_lamination",
               "Td": "fine_lamination", "Te": "massive"}  # fmt: skip
    terms = tuple(Structure(term, code=code) for code, term in letters.items())
    history = infer_flow(log(bed("mU vfU", terms=terms, structures_upward=True), setting="turbidity"))
    (pattern,) = history.bed_patterns
    assert pattern.pattern == "waning"
    assert pattern.probability == min(t.probability for t in history.tendency if t and t.probability)
