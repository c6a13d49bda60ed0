"""The records: complete, in words, and honest about range, gaps and bad input."""

from __future__ import annotations

import inspect
import tomllib
import warnings
from pathlib import Path

import numpy as np
import pytest
import sampling

from logkit.errors import ArgumentError, UnknownNameError
from logkit.hydraulics import FORMULAS, ValidityNote, assess, describe, evaluate, sources_table
from logkit.hydraulics.checks import outside_checks
from logkit.references import all_references
from logkit.registry import Formula

RECORDS = sampling.hydraulic_records()
NUMERIC = [r for r in RECORDS if sampling.numeric_arguments(r)]
ARRAYS = [r for r in NUMERIC if r.id != "depth.depth_over_set_thickness"]  # an integral: one set of numbers
STATUSES = {"published", "secondary", "memory", "ours"}


@pytest.mark.parametrize("record", RECORDS, ids=lambda r: r.id)
def test_record_is_complete(record: Formula) -> None:
    """A record says what it gives, from where, and what each argument means."""
    assert record.status in STATUSES
    assert record.output.meaning
    assert record.equation
    assert record.source in all_references() or record.source in ("ours", "definition")
    named = {quantity.name for quantity in record.inputs}
    assert named == set(inspect.signature(record.function).parameters)
    assert all(quantity.meaning for quantity in record.inputs)


@pytest.mark.parametrize("record", RECORDS, ids=lambda r: r.id)
def test_function_is_documented(record: Formula) -> None:
    """The docstring opens with a purpose and, where a work is cited, names it."""
    text = inspect.getdoc(record.function)
    assert text
    assert text.splitlines()[0].endswith((".", "."))


@pytest.mark.parametrize("record", ARRAYS, ids=lambda r: r.id)
def test_formula_is_vectorised(record: Formula) -> None:
    """Arrays give, value by value, what numbers give."""
    arguments = sampling.numeric_arguments(record)
    name = next(n for n in arguments if n not in sampling.WORDS)
    values = np.array([1.0, 1.02, 0.98]) * arguments[name]
    together = record.function(**arguments | {name: values})
    for i, value in enumerate(values):
        single = record.function(**arguments | {name: value})
        if record.output.unit == "":
            assert np.asarray(together)[..., i] == single
        else:
            np.testing.assert_allclose(np.asarray(together)[..., i], single, rtol=1e-12)


@pytest.mark.parametrize("record", ARRAYS, ids=lambda r: r.id)
def test_nan_gives_nan_with_its_mask(record: Formula) -> None:
    """A missing value gives a missing result, says so in the mask, and leaves its neighbour alone."""
    arguments = sampling.numeric_arguments(record)
    for name, value in arguments.items():
        if name in sampling.WORDS:
            continue
        result = assess(record.id, **arguments | {name: [value, np.nan]})
        assert list(np.broadcast_to(result.missing, 2)) == [False, True]
        last = np.asarray(result.value)[..., 1]
        first = np.asarray(result.value)[..., 0]
        if record.output.unit == "":
            assert last == ""
            assert first != ""
        else:
            assert np.all(np.isnan(last)), name
            assert np.all(np.isfinite(first)), name


SIZES = ("d_m", "d50_m", "d90_m", "d1_m", "d2_m", "d_fine_m", "d_coarse_m")


@pytest.mark.parametrize("wrong", [-1e-4, 0.0, [3e-4, -3e-4]])
@pytest.mark.parametrize(
    ("record", "name"),
    [(r, n) for r in NUMERIC for n in sampling.numeric_arguments(r) if n in SIZES],
    ids=lambda v: getattr(v, "id", v),
)
def test_impossible_size_is_refused_by_name(record: Formula, name: str, wrong: object) -> None:
    """A size that is not above zero raises an error that names the argument."""
    if name == "d90_m" and record.id == "resistance.bedform_roughness" and wrong == 0.0:
        return  # without grains: the part of the bedforms alone
    with pytest.raises(ArgumentError) as caught:
        evaluate(record.id, **sampling.numeric_arguments(record) | {name: wrong})
    assert caught.value.argument == name


LIMITED = [(r, limit) for r in NUMERIC for limit in r.limits]


@pytest.mark.parametrize(("record", "limit"), LIMITED, ids=lambda v: getattr(v, "id", None) or v.of)
def test_leaving_the_range_gives_a_note(record: Formula, limit) -> None:  # type: ignore[no-untyped-def]
    """Outside the tested range a note names formula and limit, on numbers and arrays alike; inside none does."""
    arguments = sampling.numeric_arguments(record)
    outside = _outside(arguments, limit)
    assert outside is not None, f"no sample leaves {limit}"
    name, value = outside
    note = f"{record.id}: outside its tested range ({limit})."
    single = assess(record.id, **arguments | {name: value})
    assert note in single.notes
    assert single.outside is True
    several = assess(record.id, **arguments | {name: [value, value]})
    assert any(str(limit) in n and record.id in n and "2 of 2 values" in n for n in several.notes)
    assert list(several.outside) == [True, True]
    with pytest.warns(ValidityNote, match="outside its tested range"):
        evaluate(record.id, **arguments | {name: value})


def _outside(arguments: dict[str, float], limit) -> tuple[str, float] | None:  # type: ignore[no-untyped-def]
    for name, value in arguments.items():
        if name in sampling.WORDS:
            continue
        for factor in (1e-4, 1e-3, 0.01, 0.1, 10, 100, 1e3, 1e4, -1):
            if factor == -1 and name != "bed_slope_deg":
                continue
            tried = value * factor if value else float(factor)
            changed = limit.measure(**arguments | {name: tried})
            below = limit.low is not None and changed < limit.low
            above = limit.high is not None and changed > limit.high
            if below or above:
                return name, tried
    return None


def test_inside_the_range_there_is_no_note() -> None:
    """A value well inside warns of nothing."""
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        assert evaluate("settling.stokes", d_mm=0.02) > 0


def test_printed_limits_are_in_the_records() -> None:
    """Every tested range is the one that is written down beside the printed equations."""
    file = Path(__file__).parents[1] / "published" / "printed_equations.toml"
    written = tomllib.loads(file.read_text(encoding="utf-8"))["limits"]
    assert {r.id: [str(limit) for limit in r.limits] for r in RECORDS if r.limits} == written


def test_joint_scatter_takes_one_set_of_numbers() -> None:
    """The integral over two scatters refuses arrays by name and passes a missing number on."""
    with pytest.raises(ArgumentError, match="one number each"):
        evaluate("depth.depth_over_set_thickness", set_factor_sd=[0.7, 0.8])
    assert np.isnan(evaluate("depth.depth_over_set_thickness", set_factor_sd=float("nan")))


def test_unknown_formula_names_the_nearest() -> None:
    """A slip in an id is answered with the id that was meant."""
    with pytest.raises(UnknownNameError, match=r"Did you mean 'settling\.stokes'"):
        evaluate("settling.stoke", d_mm=0.1)


def test_unknown_input_names_what_is_allowed() -> None:
    """An input that a formula does not take is refused, with the list of those it takes."""
    with pytest.raises(ArgumentError, match=r"one of the inputs of settling\.stokes"):
        evaluate("settling.stokes", d_mm=0.1, roundness=3)


def test_missing_input_is_named() -> None:
    """An input that is missing is named; nothing is made up for it."""
    with pytest.raises(ArgumentError, match="flow_depth_m"):
        evaluate("bedforms.froude", velocity_m_s=1.0)


def test_unknown_word_lists_the_known_ones() -> None:
    """A word that a table does not know is answered with those it knows."""
    with pytest.raises(ArgumentError, match=r"'lower', 'upper'"):
        evaluate("threshold.gravel_range", method="visual", bound="middle")


def test_text_in_place_of_a_number_is_refused_by_name() -> None:
    """A word given as a size is refused like any bad size."""
    with pytest.raises(ArgumentError) as caught:
        evaluate("settling.stokes", d_mm="coarse")
    assert caught.value.argument in ("d_m", "d_mm")


def test_sources_table_lists_every_formula() -> None:
    """The register has one row a formula, with the number of its outside checks."""
    rows = {row.id: row for row in sources_table()}
    assert set(rows) == set(FORMULAS)
    assert sum(row.outside_checks for row in rows.values()) == len(outside_checks())
    assert rows["settling.gibbs"].outside_checks == 2
    assert rows["threshold.soulsby_whitehouse"].source == "Soulsby & Whitehouse 1997, Soulsby 1997, eq. 77"


def test_describe_compares_computed_with_published() -> None:
    """One formula comes with its inputs in units and its checks, computed against published value."""
    told = describe("settling.gibbs")
    assert [row.name for row in told.inputs] == ["d_m", "rho_s_kg_m3", "rho_kg_m3", "mu_pa_s", "g_m_s2"]
    assert [result.met for result in told.checks] == [True, True]
    assert told.checks[0].value == pytest.approx(told.checks[0].check.expected, rel=0.005)
