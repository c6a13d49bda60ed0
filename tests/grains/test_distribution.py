"""Measures of a distribution, sorting classes, largest clasts, grain numbers."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.stats import norm

from logkit.errors import ArgumentError
from logkit.grains import sorting_class
from logkit.registry import FORMULAS, evaluate

PERCENTILES = {
    "phi5": 0.5,
    "phi16": 1.0,
    "phi25": 1.3,
    "phi50": 2.0,
    "phi75": 2.6,
    "phi84": 3.0,
    "phi95": 3.8,
}


def normal_curve(mean: float, sd: float) -> dict[str, float]:
    """Percentiles of a normal curve in phi from an outside library."""
    return {f"phi{p}": float(norm.ppf(p / 100, mean, sd)) for p in (5, 16, 25, 50, 75, 84, 95)}


@given(st.floats(min_value=-5, max_value=8), st.floats(min_value=0.05, max_value=3))
def test_measures_of_a_normal_curve(mean: float, sd: float) -> None:
    """A normal curve has its mean, 0.9957 of its spread, no skewness and a kurtosis of one."""
    curve = normal_curve(mean, sd)
    assert evaluate("grain.folk_ward_mean", **curve) == pytest.approx(mean, abs=1e-9)
    assert evaluate("grain.folk_ward_sorting", **curve) == pytest.approx(0.995669 * sd, rel=1e-5)
    assert evaluate("grain.folk_ward_skewness", **curve) == pytest.approx(0, abs=1e-9)
    assert evaluate("grain.folk_ward_kurtosis", **curve) == pytest.approx(1.0, abs=2e-3)


def test_a_curve_given_in_words_equals_its_percentiles() -> None:
    """`normal in phi` with a spread gives what its percentiles give."""
    words = evaluate("grain.folk_ward_sorting", distribution="normal in phi", sd_phi=1.3)
    assert words == pytest.approx(evaluate("grain.folk_ward_sorting", **normal_curve(0, 1.3)), rel=1e-9)


def test_a_tail_of_fines_is_positive_skewness() -> None:
    """Percentiles count from the coarse end: a long fine tail skews positive."""
    assert evaluate("grain.folk_ward_skewness", **PERCENTILES) > 0


def test_one_size_has_no_skewness() -> None:
    """A sample of one size gives NaN, not a division by zero."""
    flat = dict.fromkeys(PERCENTILES, 2.0)
    assert math.isnan(evaluate("grain.folk_ward_skewness", **flat))
    assert math.isnan(evaluate("grain.folk_ward_kurtosis", **flat))


def test_percentiles_out_of_order_are_refused() -> None:
    """Percentiles counted from the fine end are found out."""
    turned = dict(zip(PERCENTILES, reversed(PERCENTILES.values()), strict=True))
    with pytest.raises(ArgumentError, match="coarse end"):
        evaluate("grain.folk_ward_sorting", **turned)


@pytest.mark.parametrize(
    ("phi", "words"),
    [(0.2, "very well sorted"), (0.35, "well sorted"), (0.6, "moderately well sorted"), (0.9, "moderately sorted"),
     (1.5, "poorly sorted"), (3, "very poorly sorted"), (4, "extremely poorly sorted")],
)  # fmt: skip
def test_sorting_words(phi: float, words: str) -> None:
    """A spread in phi gets the words of its class; a limit belongs to the next class."""
    assert sorting_class(phi) == words


def test_sorting_class_refuses_nonsense() -> None:
    """Negative spreads and unknown words are refused, the words with the nearest class."""
    with pytest.raises(ArgumentError):
        sorting_class(-1)
    with pytest.raises(ArgumentError, match="nearest: well sorted"):
        evaluate("grain.sorting_class_upper_limit", class_name="wel sorted")


def test_mean_of_the_largest_clasts() -> None:
    """9, 7, 6, 6, 5 cm have a mean of 6.6 cm."""
    assert evaluate("grain.mps", sizes_cm=[9, 7, 6, 6, 5]) == pytest.approx(66.0)


@given(st.floats(min_value=1e-5, max_value=0.1))
def test_particle_reynolds_number_is_a_power_of_the_dimensionless_diameter(d_m: float) -> None:
    """Rep equals D* to the power 1.5 exactly."""
    fluid = {"submerged_gravity": 1.65, "nu_m2_s": 1e-6}
    dstar = evaluate("grain.dstar", d_m=d_m, **fluid)
    assert evaluate("grain.rep", d_m=d_m, **fluid) == pytest.approx(dstar**1.5, rel=1e-9)


def test_every_grain_formula_of_the_family_is_registered() -> None:
    """All keys of the family are there with a source and a status."""
    FORMULAS.load_family("grain")
    keys = {id for id, _ in FORMULAS.items() if id.startswith("grain.")}
    assert keys >= {
        "grain.phi_from_diameter", "grain.diameter_from_phi", "grain.udden_wentworth", "grain.half_phi",
        "grain.iso14688", "grain.class_midpoint", "grain.mps", "grain.folk_ward_mean", "grain.folk_ward_sorting",
        "grain.folk_ward_skewness", "grain.folk_ward_kurtosis", "grain.sorting_class_upper_limit",
        "grain.submerged_gravity", "grain.dstar", "grain.rep",
    }  # fmt: skip
