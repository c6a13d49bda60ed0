"""Laws that hold for any input: monotone curves, limits, sums, inverses, sphere against sphere."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from logkit.hydraulics import bedforms, evaluate
from logkit.hydraulics.bedstates import STATES, p_dune, soft_criterion
from logkit.hydraulics.depth import depth_over_set_thickness
from logkit.hydraulics.forces import drag_force, lift_force, pivot_shields, submerged_weight
from logkit.hydraulics.resistance import grain_chezy, log_law
from logkit.hydraulics.settling import band, dietrich, ferguson_church, hindered, soulsby, stokes
from logkit.hydraulics.spheres import dietrich_rep_form, gibbs, sphere_drag
from logkit.hydraulics.suspension import MODES, transport_mode
from logkit.hydraulics.threshold import brownlie, soulsby_whitehouse
from logkit.hydraulics.turbidity import autosuspension_size
from logkit.hydraulics.water import density, viscosity_fresh, viscosity_sea
from logkit.hydraulics.wave_ripples import longest_period, wave_region, wiberg_harris_spacing
from logkit.hydraulics.waves import breaking_height, komar_miller_threshold, orbital_diameter, wavelength
from logkit.hydraulics.wind import iversen_white, shao_lu

SIZE = st.floats(2e-6, 0.02)
SAND = st.floats(6.25e-5, 2e-3)
RATIO = st.floats(1.02, 3.0)
R, NU = 1.65, 1e-6


@given(SIZE, RATIO)
@pytest.mark.parametrize("law", [stokes, ferguson_church, soulsby, sphere_drag])
def test_coarser_grains_settle_faster(law, size: float, ratio: float) -> None:  # type: ignore[no-untyped-def]
    """Settling velocity rises with size."""
    assert law(size * ratio, R, NU) > law(size, R, NU)


@given(st.floats(2e-6, 0.05), RATIO)
def test_coarser_natural_grains_settle_faster(size: float, ratio: float) -> None:
    """Dietrich's natural grains settle faster when coarser, but for the printed step between his branches."""
    galileo = R * 9.81 * size**3 / NU**2
    if not (galileo < 0.05 <= galileo * ratio**3):
        assert dietrich(size * ratio, R, NU) > dietrich(size, R, NU)


@given(st.floats(1e-6, 8e-6))
@pytest.mark.parametrize("law", [ferguson_church, sphere_drag])
def test_fines_follow_stokes(law, size: float) -> None:  # type: ignore[no-untyped-def]
    """Laws for all sizes go over into Stokes for fine grains."""
    assert law(size, R, NU) == pytest.approx(stokes(size, R, NU), rel=0.01)


@given(SIZE, st.floats(0.5e-6, 1.5e-6), RATIO)
def test_thicker_water_slows_grains(size: float, nu: float, ratio: float) -> None:
    """Settling velocity falls with viscosity."""
    assert ferguson_church(size, R, nu * ratio) < ferguson_church(size, R, nu)


@given(SIZE)
def test_band_holds_its_centre(size: float) -> None:
    """The band between formulas contains its centre."""
    low, centre, high = band(size, R, NU)
    assert low <= centre <= high


@given(st.floats(1e-4, 2e-3), st.floats(0.2, 0.65), st.floats(0.66, 1.0))
def test_flat_grains_settle_slower(size: float, flat: float, round_: float) -> None:
    """A flatter grain settles more slowly."""
    assert dietrich(size, R, NU, csf=flat) < dietrich(size, R, NU, csf=round_)


@pytest.mark.parametrize("size", np.geomspace(6.25e-5, 2e-3, 6))
def test_sphere_laws_agree_as_stated(size: float) -> None:
    """Gibbs is within 8 %, Dietrich's sphere within 12 % of library sphere drag; the Rep form within 0.6 % of his."""
    sphere = sphere_drag(size, R, NU)
    rep = np.sqrt(R * 9.81 * size) * size / NU
    round_grain = dietrich(size, R, NU, csf=1.0, powers=6.0)
    assert gibbs(size, 2650.0, 1000.0, 1e-3) == pytest.approx(sphere, rel=0.08)
    assert round_grain == pytest.approx(sphere, rel=0.12)
    assert dietrich_rep_form(rep) * np.sqrt(R * 9.81 * size) == pytest.approx(round_grain, rel=0.006)


def test_branches_of_dietrich_leave_the_known_step() -> None:
    """The published branches do not meet: the velocity jumps by 4.7 % at Dd = 0.05."""
    at = (0.05 * NU**2 / (R * 9.81)) ** (1 / 3)
    step = dietrich(at * 1.000001, R, NU, 1.0, 6.0) / dietrich(at * 0.999999, R, NU, 1.0, 6.0)
    assert abs(step - 1) == pytest.approx(0.047, abs=0.003)


@given(st.floats(0, 0.5), st.floats(0.001, 0.1))
def test_company_slows_grains(concentration: float, more: float) -> None:
    """Settling is hindered more by more grains, and not at all by none."""
    assert hindered(0.03, concentration + more, 3e-4, NU) < hindered(0.03, concentration, 3e-4, NU)
    assert hindered(0.03, 0.0, 3e-4, NU) == 0.03


@given(st.floats(0, 40), st.floats(0, 41), st.floats(0.5, 5))
def test_water_gets_heavier_with_salt_and_thinner_with_heat(temp: float, salt: float, more: float) -> None:
    """Salt adds density and viscosity; heat takes viscosity away."""
    assert density(temp, salt + more) > density(temp, salt)
    assert viscosity_sea(temp, salt + more) > viscosity_sea(temp, salt)
    assert viscosity_fresh(temp + more) < viscosity_fresh(temp)


@pytest.mark.parametrize("temp", np.arange(0, 41, 5))
def test_sea_formula_meets_the_fresh_one(temp: float) -> None:
    """Without salt the sea-water viscosity agrees with the fresh-water one within 0.13 %."""
    assert viscosity_sea(temp, 0.0) == pytest.approx(viscosity_fresh(temp), rel=0.0013)


@given(st.floats(0.01, 1e4))
def test_threshold_stays_between_its_limits(dstar: float) -> None:
    """The main curve is capped at 0.30 and never falls below its minimum."""
    assert evaluate("threshold.soulsby_whitehouse_minimum") * 0.99999 <= soulsby_whitehouse(dstar) < 0.30


@given(st.floats(1, 1e9))
def test_brownlie_goes_to_its_rough_limit(rep: float) -> None:
    """Brownlie's curve keeps above its minimum and ends at 0.06."""
    assert 0.03 < brownlie(rep) < 0.23
    assert brownlie(1e15) == pytest.approx(0.06, rel=1e-3)


FLOW = st.tuples(st.floats(0.05, 3), st.floats(0.1, 10), SAND)


@given(FLOW)
def test_bed_states_sum_to_one(flow: tuple[float, float, float]) -> None:
    """The six probabilities sum to one, none is negative, and each own formula gives its row."""
    velocity, depth, size = flow
    p = soft_criterion(velocity, depth, size, 1.5 * size, R, NU)
    assert p.sum() == pytest.approx(1)
    assert np.all(p >= 0)
    assert p_dune(velocity, depth, size, 1.5 * size, R, NU) == p[STATES.index("dune")]


@given(FLOW, RATIO)
def test_faster_water_moves_more(flow: tuple[float, float, float], ratio: float) -> None:
    """The chance that nothing moves falls with velocity; standing water moves nothing."""
    velocity, depth, size = flow
    still = soft_criterion(np.array([0, velocity, velocity * ratio]), depth, size, 1.5 * size, R, NU)[0]
    assert still[0] == 1
    assert still[2] <= still[1]


@given(FLOW)
def test_skin_stress_and_velocity_are_inverse(flow: tuple[float, float, float]) -> None:
    """Velocity to skin stress and back is the same velocity."""
    velocity, depth, size = flow
    theta = bedforms.skin_shields(velocity, depth, size, 1.5 * size, R)
    assert bedforms.velocity_from_skin_shields(theta, depth, size, 1.5 * size, R) == pytest.approx(velocity)


@given(st.floats(0.1, 10), SAND)
def test_stage_zero_is_the_threshold(depth: float, size: float) -> None:
    """At van Rijn's threshold the transport stage is zero."""
    dstar = size * (R * 9.81 / NU**2) ** (1 / 3)
    theta = evaluate("threshold.van_rijn_shields", dstar=dstar)
    velocity = bedforms.velocity_from_skin_shields(theta, depth, size, 1.5 * size, R)
    assert bedforms.transport_stage(velocity, depth, size, 1.5 * size, R, NU) == pytest.approx(0, abs=1e-9)


def test_roughness_through_the_surface_gives_no_number() -> None:
    """Where the roughness is as high as the flow is deep there is no value, and no complaint from numpy."""
    assert np.isnan(log_law(0.01, 0.2))
    assert np.isnan(grain_chezy(0.01, 0.2))


@given(st.floats(1, 20), st.floats(0.3, 200), RATIO)
def test_longer_waves_reach_deeper(period: float, depth: float, ratio: float) -> None:
    """Wavelength rises with period and stays below its deep-water value; shallow water stirs the bed more."""
    length = wavelength(period, depth)
    assert length < wavelength(period * ratio, depth)
    assert length <= 9.81 * period**2 / (2 * np.pi) * (1 + 1e-9)
    assert orbital_diameter(period, depth, 0.1) >= orbital_diameter(period, depth * ratio, 0.1)
    assert breaking_height(period, depth) <= 0.78 * depth


@given(st.floats(1, 15), st.floats(1e-4, 2e-3), st.floats(1.001, 1.05))
def test_wave_threshold_has_no_jump(period: float, size: float, ratio: float) -> None:
    """The two published branches are joined without a jump: the threshold rises smoothly with size."""
    step = komar_miller_threshold(size * ratio, period, R) / komar_miller_threshold(size, period, R)
    assert 1 < step < ratio**2


@given(st.floats(0.02, 0.3), st.floats(1e-4, 9e-4))
def test_longest_period_just_moves_the_sand(spacing: float, size: float) -> None:
    """At the longest period the orbit of the ripple moves the sand and no more."""
    period = longest_period(spacing, size, R)
    assert np.pi * spacing / 0.65 / period == pytest.approx(komar_miller_threshold(size, period, R), rel=1e-6)


def test_ripple_gives_a_region_of_waves() -> None:
    """A ripple never gives one depth: each possible period has a range of depths."""
    region = wave_region(0.1, 2e-4, R)
    assert len(region["period_s"]) > 10
    assert np.all(region["depth_max_m"] > 1.5 * region["depth_min_m"])
    period = longest_period(0.1, 2e-4, R)
    assert region["period_s"][-1] == pytest.approx(period)
    assert region["period_s"][0] >= period / 5
    # the deep end of the longest waves: half their deep-water wavelength, or less where they would break
    assert region["depth_max_m"].max() == pytest.approx(9.81 * period**2 / (4 * np.pi), rel=0.02)


def test_ripple_spacing_is_not_unique() -> None:
    """A spacing of 0.107 m in 0.2 mm sand fits a small orbital and a large anorbital diameter."""
    assert wiberg_harris_spacing(0.107 / 0.62, 2e-4) == pytest.approx(0.107, rel=1e-3)
    assert wiberg_harris_spacing(5.0, 2e-4) == pytest.approx(0.107, rel=1e-3)


@given(st.floats(1.25e-4, 1e-3))
def test_wind_laws_agree_as_stated(size: float) -> None:
    """Iversen & White is within 10 % of Shao & Lu from 0.125 to 1 mm."""
    assert iversen_white(size) == pytest.approx(shao_lu(size), rel=0.1)


@given(st.floats(0.3, 10), st.floats(1e-3, 0.05))
def test_autosuspension_inverts_settling(velocity: float, slope: float) -> None:
    """The size found settles exactly as fast as the current sinks along its slope."""
    size = autosuspension_size(velocity, slope, R, NU)
    assert ferguson_church(size, R, NU) == pytest.approx(velocity * np.sin(np.arctan(slope)), rel=1e-8)


def test_joint_scatter_matches_a_direct_draw() -> None:
    """The integrated quantiles of depth over set thickness are those of a plain Monte Carlo."""
    rng = np.random.default_rng(7)
    a = rng.normal(2.9, 0.7, 400_000)
    ratio = a[a > 0.3] * 6.7 * np.exp(0.616 * rng.standard_normal((a > 0.3).sum()))
    for name, share in (("p05", 5), ("p16", 15.866), ("p50", 50), ("p84", 84.134), ("p95", 95)):
        assert depth_over_set_thickness(name) == pytest.approx(np.percentile(ratio, share), rel=0.015)


@settings(max_examples=30)
@given(st.floats(0.01, 0.2), st.floats(2e-3, 0.02))
def test_forces_explain_the_threshold(ustar: float, size: float) -> None:
    """At the pivoting threshold, and only there, lift and drag balance the weight about the contact."""
    theta = pivot_shields(45.0)
    critical = np.sqrt(theta * 1.65 * 9.81 * size)
    weight = submerged_weight(size, 2650.0, 1000.0)
    drag, lift = drag_force(critical, size, 1000.0), lift_force(critical, size, 1000.0)
    assert drag == pytest.approx(weight - lift, rel=1e-9)
    assert 0.02 < theta < 0.1
    assert drag_force(ustar, size, 1000.0) > 0


def test_hidden_grains_need_more_stress() -> None:
    """A wider pivoting angle, as of a small grain among large ones, raises the threshold."""
    assert pivot_shields(60.0) > pivot_shields(45.0) > pivot_shields(30.0)


@given(st.floats(1e-4, 2e-3))
def test_modes_follow_each_other(size: float) -> None:
    """With rising shear velocity a grain rests, then rolls or hops, then is carried; never back."""
    modes = transport_mode(np.geomspace(1e-3, 1, 200), size, R, NU)
    ranks = [MODES.index(m) for m in modes]
    assert ranks == sorted(ranks)
    assert (ranks[0], ranks[-1]) == (0, 4)


@pytest.mark.parametrize(
    ("size", "depth", "velocity", "temp", "state"),
    [
        (1.08e-4, 0.25, 0.60, 10.0, "ripple"),
        (1.08e-4, 0.25, 0.98, 10.0, "upper_plane"),
        (5.0e-4, 0.15, 0.45, 20.0, "dune"),
        (5.0e-4, 0.15, 0.55, 20.0, "dune"),
    ],
)
def test_observed_bed_state_is_the_most_likely_one(
    size: float, depth: float, velocity: float, temp: float, state: str
) -> None:
    """Published flume observations (0.108 mm ripples and plane bed, 0.5 mm dunes) come out as observed."""
    inputs = {"d50_m": size, "d90_m": 1.5 * size, "flow_depth_m": depth, "velocity_m_s": velocity}
    p = evaluate("bedforms.soft_criterion", temp_c=temp, **inputs)
    assert STATES[int(np.argmax(p))] == state


def test_long_arrays_give_what_short_ones_give() -> None:
    """Taking a long array in blocks changes nothing, for numbers, for several results and for words."""
    sizes = np.geomspace(1e-4, 2e-3, 70_000).reshape(2, -1)
    for law in (ferguson_church, band, lambda d, r, n: transport_mode(0.05, d, r, n)):
        whole = law(sizes, R, NU)
        assert whole.shape[-2:] == sizes.shape
        assert np.array_equal(whole[..., 1, -500:], law(sizes[1, -500:], R, NU))
