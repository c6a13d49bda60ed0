"""Size scales: labels, limits, spellings."""

from __future__ import annotations

import itertools
import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from logkit.errors import ArgumentError, DataFileError, UnknownNameError
from logkit.grains import class_of, interval_for, scale
from logkit.grains.scales import build_scale
from logkit.registry import evaluate

HALVES = ["vfL", "vfU", "fL", "fU", "mL", "mU", "cL", "cU", "vcL", "vcU"]


def test_half_classes_join_without_holes_from_sixteenth_to_two_mm() -> None:
    """The ten half-phi classes are adjacent and cover sand, 0.0625 to 2 mm."""
    classes = [scale()[name] for name in HALVES]
    assert classes[0].low_mm == 0.0625
    assert classes[-1].high_mm == 2.0
    for finer, coarser in itertools.pairwise(classes):
        assert finer.high_mm == coarser.low_mm
        assert finer.high_mm / finer.low_mm == pytest.approx(math.sqrt(2))


@pytest.mark.parametrize(
    ("written", "name"),
    [("fU", "fU"), ("Uf", "fU"), ("FU", "fU"), ("f U", "fU"), ("upper fine", "fU"), ("fine upper", "fU"),
     ("vfL", "vfL"), ("v.f.", "vf"), ("very fine", "vf"), ("vfs", "vf"), ("med", "m"), ("crs", "c"), ("slt", "silt"),
     ("cly", "clay"), ("gran", "granule"), ("pbl", "pebble"), ("cbl", "cobble"), ("bld", "boulder"), ("cL", "cL")],
)  # fmt: skip
def test_spellings_of_a_class(written: str, name: str) -> None:
    """The spellings of the trade lead to the canonical label."""
    found = interval_for(written)
    assert found is not None
    assert found.label == name


@pytest.mark.parametrize("name", ["wentworth", "iso14688"])
def test_every_canonical_label_reads_back(name: str) -> None:
    """A canonical label leads back to its own class, and limits are in order."""
    for entry in scale(name).values():
        found = interval_for(entry.name, name)
        assert found == entry.interval
        assert 0 < entry.low_mm < entry.high_mm


def test_medium_sand_differs_between_the_scales() -> None:
    """Medium sand is 0.25-0.5 mm on one scale and 0.2-0.63 mm on the other."""
    one, other = interval_for("m", "wentworth"), interval_for("medium sand", "iso14688")
    assert one is not None
    assert other is not None
    assert (one.low_mm, one.high_mm) == (0.25, 0.5)
    assert (other.low_mm, other.high_mm) == (0.2, 0.63)


def test_a_size_on_a_limit_belongs_to_the_coarser_class() -> None:
    """0.25 mm is the finest of lower medium sand."""
    found = class_of(0.25)
    assert found is not None
    assert found.name == "mL"
    assert class_of(1e9) is None


def test_unknown_scale_names_the_known() -> None:
    """A scale that does not exist is answered with the known ones."""
    with pytest.raises(UnknownNameError, match="wentworth"):
        scale("wentword")


def test_open_classes_have_no_middle() -> None:
    """Boulder has no upper limit, so asking for its middle is refused; fine upper has 0.210 mm."""
    with pytest.raises(ArgumentError):
        evaluate("grain.class_midpoint", class_name="boulder")
    assert evaluate("grain.class_midpoint", class_name="fU") == pytest.approx(0.2102, abs=1e-4)


def test_mistakes_in_a_scale_are_named() -> None:
    """Doubled labels and limits out of order are refused."""
    good = {"label": "a", "mm": [1, 2], "source": "s"}
    with pytest.raises(DataFileError, match="stands for"):
        build_scale("x", {"a": good, "b": {**good, "label": "b", "synonyms": ["A"]}})
    with pytest.raises(DataFileError, match="in order"):
        build_scale("x", {"a": {**good, "mm": [2, 1]}})
    with pytest.raises(DataFileError, match="unknown field"):
        build_scale("x", {"a": {**good, "lable": "a"}})


@given(st.floats(min_value=-12, max_value=14))
def test_phi_and_diameter_are_inverse(phi: float) -> None:
    """Going to a diameter and back gives the same phi."""
    d_mm = evaluate("grain.diameter_from_phi", phi=phi)
    assert evaluate("grain.phi_from_diameter", d_mm=d_mm) == pytest.approx(phi, abs=1e-9)


@given(st.floats(min_value=1e-4, max_value=1e3), st.floats(min_value=1.001, max_value=10))
def test_phi_falls_as_size_grows(d_mm: float, factor: float) -> None:
    """A coarser grain has the smaller phi."""
    assert evaluate("grain.phi_from_diameter", d_mm=d_mm * factor) < evaluate(
        "grain.phi_from_diameter", d_mm=d_mm
    )


@pytest.mark.parametrize("d_mm", [0, -1])
def test_phi_refuses_sizes_that_are_not_above_zero(d_mm: float) -> None:
    """Zero and negative sizes are refused."""
    with pytest.raises(ArgumentError):
        evaluate("grain.phi_from_diameter", d_mm=d_mm)
