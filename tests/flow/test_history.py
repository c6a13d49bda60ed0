"""The history as a table, the ledger, and the words."""

from __future__ import annotations

import pytest
from make import bed, log

from logkit.errors import ArgumentError, UnknownNameError
from logkit.flow import FlowHistory, infer_flow
from logkit.model import Bed, LargestClasts, SetThickness

QUANTITIES = [
    ("velocity", "_m_s"), ("flow_depth", "_m"), ("shear_velocity", "_m_s"), ("total_shear_velocity", "_m_s"),
    ("froude", ""),
]  # fmt: skip
NAMED = [
    *"section bed phase base_m top_m setting structure d50_mm status reason bound".split(),  # noqa: SIM905
    *(f"{name}_{level}{unit}" for name, unit in QUANTITIES for level in ("p10", "p50", "p90")),
    *"bed_state transport_mode conflict tendency tendency_probability".split(),  # noqa: SIM905
]


@pytest.fixture(scope="module")
def history() -> FlowHistory:
    """Five beds and a gap."""
    return infer_flow(
        log(
            bed("mL", "trough_cross_bedding", set_thickness=SetThickness(0.12, 0.12, 0.12)),
            bed("fU vfL", "upper_plane_lamination current_ripples", structures_upward=True),
            bed("mL", "trough_cross_bedding", largest=LargestClasts((60.0,), 60.0)),
            bed("slt"),
            Bed("gap 1", 0.0, 1.0, kind="gap", gap_reason="no_exposure"),
            bed("fL", "hummocky"),
        )
    )


def test_the_table_has_the_public_columns_in_order(history: FlowHistory) -> None:
    """Other people's scripts read these columns."""
    frame = history.to_frame()
    assert list(frame.columns)[: len(NAMED)] == NAMED
    assert len(frame) == 7
    assert frame.velocity_p50_m_s.dtype == float


def test_one_sided_rows_leave_the_quantiles_empty(history: FlowHistory) -> None:
    """A bound fills its limit and no quantile column."""
    frame = history.to_frame()
    row = frame[frame.bound == "below"].iloc[0]
    assert row.limit_velocity_m_s == 0.10
    assert row[[c for c in NAMED if "_p10" in c or "_p50" in c or "_p90" in c]].isna().all()


def test_the_summary_counts_every_phase_once(history: FlowHistory) -> None:
    """Ranges, bounds and no estimate make up the phases; the gap is not one of them."""
    found = history.summary()
    assert found["ranges"] + found["bounds"] + found["no_estimate"] == found["phases"] == 6
    assert found["conflicts"] == 1


def test_the_ledger_names_bound_validity_and_source_of_each_criterion(history: FlowHistory) -> None:
    """Structure, sets and prior each have a row that says what they are worth."""
    ledger = history.ledger("1").set_index("criterion")
    assert list(ledger.index) == ["bed_state", "dune_sets", "setting"]
    assert (ledger.narrows > 1).all()
    assert (ledger.gain_bits >= 0).all()
    assert ledger.validity.str.len().min() > 0
    assert ledger.source.str.len().min() > 0
    state = ledger.loc["bed_state"]
    assert [state.alone_p10_m_s, state.alone_p50_m_s, state.alone_p90_m_s] == pytest.approx(
        [0.51, 0.96, 1.79], rel=0.03
    )
    assert state.gain_bits == pytest.approx(0.14, abs=0.03)
    assert ledger.loc["dune_sets"].gain_bits == pytest.approx(0.54, abs=0.05)


def test_a_lower_bound_has_no_middle_in_the_ledger(history: FlowHistory) -> None:
    """The clast's row gives its limit and nothing above."""
    row = history.ledger("3").set_index("criterion").loc["largest_clast"]
    assert row.bound == "above"
    assert row.alone_p10_m_s > 0.5
    assert row[["alone_p50_m_s", "alone_p90_m_s"]].isna().all()


def test_a_phase_can_be_asked_for_by_number(history: FlowHistory) -> None:
    """Phases count from one at the base; a wrong number says which there are."""
    assert set(history.ledger("2", phase=2).phase) == {2}
    assert set(history.ledger("2").phase) == {1, 2}
    with pytest.raises(ArgumentError, match="from 1 to 2 in bed 2"):
        history.ledger("2", phase=3)
    with pytest.raises(UnknownNameError, match="no bed called '11'"):
        history.ledger("11")


def test_words_explain_the_bed(history: FlowHistory) -> None:
    """The lines name size, structure, range, criteria with sources, and the change within the bed."""
    first = "\n".join(history.explain("1"))
    assert "Bed 1, mL, trough cross-bedding, river: velocity 0.5" in first
    assert "depth from the sets: 0.98 to 5.3 m" in first
    assert "[Leclair & Bridge 2001; Bradley & Venditti 2017, cited second hand]" in first
    second = "\n".join(history.explain("2"))
    assert "phase 1 of 2" in second
    assert "From phase 1 to 2: waning" in second
    assert "fining and structures agree" in second


def test_words_name_the_pair_that_clashes(history: FlowHistory) -> None:
    """A conflict is told as two readings."""
    lines = "\n".join(history.explain("3"))
    assert "The bed carried dunes (0.5" in lines
    assert "but the flow moved a clast of 60 mm (above 1." in lines
    assert "no single flow does both" in lines


def test_words_say_why_there_is_nothing(history: FlowHistory) -> None:
    """Mud, gaps and waves get a sentence."""
    assert history.explain("4")[0] == "Bed 4, slt, river: no estimate (mud)."
    assert "no estimate (no exposure)" in history.explain("gap 1")[0]
    assert "the current was slower than 0.1 m/s" in history.explain("6")[0]


def test_the_tendency_table_has_a_row_for_each_step(history: FlowHistory) -> None:
    """Steps across the gap are left out."""
    frame = history.tendency_frame()
    assert len(frame) == 4
    assert set(frame.tendency) <= {"waxing", "waning", "steady", "not determinable"}


def test_user_text_stays_as_it_is() -> None:
    """Names with brackets and quotes pass through unchanged."""
    name = '<b onclick="x">7</b>'
    found = infer_flow(log(bed("mL", "cross_bedding", name=name)))
    assert found.to_frame().bed[0] == name
    assert found.explain(name)[0].startswith(f"Bed {name}, mL")


def test_the_formulas_behind_a_history_are_registered(history: FlowHistory) -> None:
    """Every id exists; formulas of criteria that did not speak are not among them."""
    from logkit.registry import FORMULAS

    assert all(id in FORMULAS for id in history.formulas), history.formulas
    assert "depth.bradley_venditti" in history.formulas
    assert "wind.shao_lu" not in history.formulas


def test_wind_is_called_wind_in_any_setting() -> None:
    """A wind-made structure in a river log speaks of wind and not of the river."""
    found = infer_flow(log(bed("fU", "wind_ripple_lamination")))
    assert "the wind 10 m above the ground was faster than" in found.explain("1")[0]
