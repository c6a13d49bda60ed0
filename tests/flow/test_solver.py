"""The fast path against the plain sum, and its accuracy against a fine grid."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from logkit.flow.criteria import ClastReading, DepthReading
from logkit.flow.grid import Grid
from logkit.flow.settings import flow_settings
from logkit.flow.slices import Signature, size_steps
from logkit.flow.solver import Answer, Case, Solver
from logkit.flow.states import MOVING, Fluid

QUANTITIES = [name for name in Answer.__annotations__ if name != "rim"]


def draw_cases(count: int, seed: int = 1) -> list[Case]:
    """Mixed beds: all states, a fifth with a clast, half with a depth."""
    rng = np.random.default_rng(seed)
    cases = []
    for place in range(count):
        state = (*MOVING, "moved")[place % 6]
        coarse = 0.5 * float(rng.integers(0, 2 if state == "lower_plane" else 8))
        kind = "motion" if state == "moved" else "bed_state"
        factors: list[tuple[str, object]] = [(kind, (state,))]
        if rng.random() < 0.2:
            factors.append(("largest_clast", ClastReading(float(rng.uniform(-5, -2)), 1.0)))
        median = float(np.exp(rng.uniform(-1, 2)))
        depths = (("dune_sets", DepthReading(median, 0.66, 0.66)),) if rng.random() < 0.5 else ()
        signature = Signature("river", Fluid(), size_steps(coarse, coarse + 0.5), tuple(factors))  # type: ignore[arg-type]
        cases.append(Case(signature, depths))
    return cases


@pytest.fixture(scope="module")
def solver() -> Solver:
    """A solver on the shipped grid."""
    return Solver()


def test_quantiles_stay_within_one_per_cent_of_a_fine_grid(solver: Solver) -> None:
    """P10, P50 and P90 of all quantities of 60 mixed beds against a grid three times as fine on each axis."""
    cases = draw_cases(60)
    fine = Solver(Grid(16, 288, 168))
    found, expected = solver.solve(solver.compile(cases)), fine.solve(fine.compile(cases))
    for name in QUANTITIES:
        error = np.abs(getattr(found, name)[::2] / getattr(expected, name)[::2] - 1)
        assert error.max() < 0.01, name


def test_slices_times_depth_equal_the_plain_sum_over_all_cells(solver: Solver) -> None:
    """The posterior of a bed is the direct sum over sizes of prior, structure and depth evidence."""
    case = Case(
        Signature("river", Fluid(), size_steps(1.5, 2.0), (("bed_state", ("dune",)),)),
        (("stated_depth", DepthReading(2.0, 0.3, 0.3)),),
    )
    grid, prior = solver.grid, flow_settings().prior("river")
    tables = solver.slices.tables(Fluid())
    cells, shares = grid.size_weights(1.5, 2.0)
    kernel = grid.kernel(prior.delta)
    plain = np.zeros((96, 56))
    for share, cell in zip(shares, range(cells.start, cells.stop), strict=True):
        mixed = (1 - prior.eps) * tables["dune"][cell] + 0.5 * prior.eps * tables.moved[cell]
        plain += share * (kernel @ mixed)
    plain *= solver.slices.prior("river")
    plain *= np.exp(-0.5 * ((grid.depth.ln_nodes - np.log(2.0)) / 0.3) ** 2)
    expected = plain.sum(axis=1) / plain.sum()
    assert solver.velocity_mass(solver.compile([case]))[:, 0] == pytest.approx(expected, abs=1e-5)


def test_answers_do_not_depend_on_the_company(solver: Solver) -> None:
    """A bed gets the same answer alone and among others, in any order."""
    cases = draw_cases(200, seed=5)
    together = solver.solve(solver.compile(cases))
    backwards = solver.solve(solver.compile(cases[::-1]))
    assert together.velocity == pytest.approx(backwards.velocity[:, ::-1], rel=1e-5)
    alone = solver.solve(solver.compile([cases[37]]))
    assert alone.velocity[:, 0] == pytest.approx(together.velocity[:, 37], rel=1e-5)


def test_same_input_same_answer() -> None:
    """Two solvers give bitwise equal answers."""
    cases = draw_cases(30)
    first, second = Solver(), Solver()
    assert np.array_equal(
        first.solve(first.compile(cases)).froude, second.solve(second.compile(cases)).froude
    )


def test_leaving_out_equals_an_answer_without(solver: Solver) -> None:
    """The ledger's velocities without a criterion are those of a bed that never had it."""
    cases = draw_cases(120, seed=9)
    batch = solver.compile(cases)
    for left in solver.leave_one_out(batch):
        bed = int(left.beds[0])
        case = cases[bed]
        if left.evidence == "setting":
            bare = Case(case.signature.unbiased(), case.depths)
        elif left.evidence.startswith("depth"):
            bare = Case(case.signature)
        else:
            bare = Case(case.signature.without(left.evidence), case.depths)
        expected = solver.solve(solver.compile([bare])).velocity[[0, 2, 4], 0]
        assert left.velocity[:, 0] == pytest.approx(expected, rel=1e-4), left.evidence


def test_priors_do_not_let_velocity_move_depth(solver: Solver) -> None:
    """The velocity prior is normalised at each depth: the depth prior is what the settings say."""
    prior = flow_settings().prior("river")
    assert prior.depth is not None
    depth = solver.slices.believed_depth("river")
    expected = np.exp(-0.5 * ((solver.grid.depth.ln_nodes - prior.depth[0]) / prior.depth[1]) ** 2)
    assert depth == pytest.approx(expected / expected.sum(), abs=1e-5)


@given(st.floats(0.1, 20.0), st.sampled_from(["ripple", "dune", "upper_plane"]))
@settings(max_examples=25, deadline=None)
def test_deeper_water_under_the_same_bed_flows_faster(depth: float, state: str) -> None:
    """For one structure and size, twice the depth never gives a slower middle velocity."""
    solver = Solver()
    signature = Signature("off", Fluid(), size_steps(2.0, 2.5), (("bed_state", (state,)),))
    cases = [Case(signature, (("stated_depth", DepthReading(h, 0.15, 0.15)),)) for h in (depth, 2 * depth)]
    velocity = solver.solve(solver.compile(cases)).velocity[2]
    assert velocity[1] > velocity[0]
