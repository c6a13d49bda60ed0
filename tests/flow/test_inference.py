"""`infer_flow`: what each kind of bed gets, and what it never gets."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from make import CLASSES, bed, log, size

from logkit.errors import ArgumentError, UnknownNameError
from logkit.flow import infer_flow
from logkit.model import Bed, LargestClasts, PhaseEstimate, SetThickness, SizeInterval, Structure


def one(*args: object, **options: object) -> PhaseEstimate:
    """The estimate of a single bed given as for `bed`; options of infer_flow start with `ask_`."""
    asked = {k.removeprefix("ask_"): options.pop(k) for k in list(options) if k.startswith("ask_")}
    header = {k.removeprefix("log_"): options.pop(k) for k in list(options) if k.startswith("log_")}
    return infer_flow(log(bed(*args, **options), **header), **asked).estimates[0]  # type: ignore[arg-type]


def test_cross_bedded_sand_of_a_river_gets_ranges() -> None:
    """Every quantity of a cross-bedded river sand has rising quantiles that hang together."""
    found = one("mL", "trough_cross_bedding")
    assert (found.status, found.bound, found.bed_state) == ("estimated", "range", "dune")
    for name in ("velocity", "flow_depth", "shear_velocity", "total_shear_velocity", "froude"):
        q = getattr(found, name)
        assert 0 < q.p10 < q.p25 < q.p50 < q.p75 < q.p90, name
    assert found.velocity is not None
    assert 0.7 < found.velocity.p50 < 1.3
    assert found.limit_velocity_m_s is None


def test_a_worked_example_of_the_ledger_is_met() -> None:
    """Medium sand, dunes, mean set 0.12 m: velocity near 0.53/0.94/1.65 m/s, depth near 1.1/2.4/5.1 m."""
    found = one("mL", "trough_cross_bedding", set_thickness=SetThickness(0.12, 0.12, 0.12))
    assert found.velocity is not None
    assert found.flow_depth is not None
    velocity = (found.velocity.p10, found.velocity.p50, found.velocity.p90)
    depth = (found.flow_depth.p10, found.flow_depth.p50, found.flow_depth.p90)
    assert velocity == pytest.approx((0.53, 0.94, 1.65), rel=0.03)
    assert depth == pytest.approx((1.1, 2.4, 5.1), rel=0.04)


def test_motion_alone_is_a_bound_and_never_a_median() -> None:
    """With the prior off, sand that moved says "above": no quantile is given."""
    found = one("mL", ask_prior="off")
    assert found.bound == "above"
    assert found.limit_velocity_m_s is not None
    assert 0.1 < found.limit_velocity_m_s < 0.35
    assert found.velocity is None
    assert found.flow_depth is None
    assert found.froude is None


def test_massive_sand_of_a_river_gets_the_range_of_the_calibrated_prior() -> None:
    """Sand that moved in a river is a range, since the prior was fitted to rivers."""
    found = one("mL", "massive")
    assert found.bound == "range"
    assert found.velocity is not None
    assert found.velocity.p90 / found.velocity.p10 > 4


@pytest.mark.parametrize("grain", ["", "cL", "pbl"])
def test_a_largest_clast_is_a_bound_on_one_side(grain: str) -> None:
    """Without a structure that ends the range, a moved clast says "above"."""
    found = one(grain, lithology="conglomerate", largest=LargestClasts((60.0,), 60.0))
    assert (found.status, found.bound) == ("estimated", "above")
    assert found.velocity is None
    assert found.limit_velocity_m_s is not None
    assert 0.5 < found.limit_velocity_m_s < 2.5


def test_a_larger_clast_needs_a_faster_flow() -> None:
    """The limit rises with the clast."""
    limits = [one("cL", largest=LargestClasts((d,), d)).limit_velocity_m_s for d in (8.0, 16.0, 32.0, 64.0)]
    assert limits == sorted(limits)
    assert limits[-1] > 1.5 * limits[0]  # type: ignore[operator]


def test_hiding_tames_the_largest_clast_of_a_gravel_bed() -> None:
    """A cobble among pebbles is easier to move than the same cobble on sand."""
    on_gravel = one("pbl", largest=LargestClasts((90.0,), 90.0)).limit_velocity_m_s
    on_sand = one("cL", largest=LargestClasts((90.0,), 90.0)).limit_velocity_m_s
    assert on_gravel is not None
    assert on_sand is not None
    assert on_gravel < 0.8 * on_sand


def test_plane_beds_without_a_prior_or_a_depth_are_open_above() -> None:
    """Nothing ends the upper plane bed in water of unknown depth; a stated depth does, by the Froude number."""
    assert one("fL", "upper_plane_lamination", ask_prior="off").bound == "above"
    assert one("fL", "upper_plane_lamination", ask_prior="off", ask_flow_depth_m=1.0).bound == "range"


def test_generic_plane_beds_of_fine_sand_read_as_upper_and_of_coarse_sand_as_either() -> None:
    """Fine sand has no lower plane bed to speak of; in coarse sand the lower one keeps the velocity down."""
    fine, coarse = one("fL", "plane_lamination"), one("cU", "plane_lamination")
    assert fine.bed_state == "upper_plane"
    assert fine.velocity is not None
    assert coarse.velocity is not None
    assert coarse.velocity.p10 < fine.velocity.p10


@pytest.mark.parametrize(
    ("beds", "reason"),
    [
        ({"grain": "slt"}, "mud"),
        ({"lithology": "mudstone"}, "mud"),
        ({"lithology": "gypsum"}, "chemical rock"),
        ({"lithology": "coal"}, "coal"),
        ({"lithology": "limestone", "grain": "mL"}, "carbonate rock"),
        ({"lithology": "lava"}, "not a sediment"),
        ({"lithology": "tuff", "grain": "mL"}, "volcanic"),
        ({"lithology": "sandstone", "structures": "trough_cross_bedding"}, "no grain size"),
        ({"grain": "bld"}, "outside validity"),
        ({"grain": "fL", "structures": "wave_ripples"}, "waves"),
        ({"grain": "fL", "structures": "combined_ripples"}, "waves and a current"),
        ({"grain": "fL", "structures": "slump"}, "deformed"),
        ({"kind": "gap", "gap_reason": "no_exposure"}, "no exposure"),
        ({"kind": "gap", "gap_reason": "lost_core"}, "lost core"),
    ],
)
def test_no_estimate_says_why(beds: dict[str, str], reason: str) -> None:
    """What cannot be read gets a short reason and no number."""
    found = one(**beds)  # type: ignore[arg-type]
    assert (found.status, found.reason, found.bound) == ("no estimate", reason, "")
    assert found.velocity is None
    assert found.limit_velocity_m_s is None


def test_rippled_silt_is_read_and_said_to_be_fine() -> None:
    """Silt with ripples moved as grains: it gets a range and a note on validity."""
    found = one("slt", "current_ripples")
    assert found.bound == "range"
    assert any("Finer than the sand" in note for note in found.notes)


def test_waves_get_an_orbital_velocity_and_never_a_current() -> None:
    """Wave ripples: the orbital velocity is a note; hummocks bound the current from above."""
    ripples = one("fL", "wave_ripples", log_setting="waves")
    assert "orbital velocity" in ripples.notes[0]
    hummocky = one("fL", "hummocky", log_setting="waves")
    assert (hummocky.bound, hummocky.limit_velocity_m_s) == ("below", 0.10)
    assert hummocky.velocity is None
    assert one("fL", "trough_cross_bedding", log_setting="waves").velocity is None


def test_other_structures_among_waves_are_not_read_as_wave_ripples() -> None:
    """Plane beds need ripples washed out (0.78 m/s in 0.2 mm sand), sand alone its threshold, dunes nothing."""
    plane, dune, plain = (
        one("fU", s, log_setting="waves") for s in ("plane_lamination", "cross_bedding", "")
    )
    assert "orbital velocity above 0.79 m/s" in plane.notes[0]
    assert dune.reason == "waves and a current"
    assert "orbital velocity above 0.1" in plain.notes[0]
    assert {e.status for e in (plane, dune, plain)} == {"no estimate"}


def test_the_spacing_of_wave_ripples_gives_an_orbit_and_a_longest_period() -> None:
    """Handbook row: 0.1 m in 0.2 mm sand, orbit 0.154 m, longest period 3.5 s; a longer stated one is named."""
    found = one("fU", "wave_ripples", log_setting="waves", ripple_wavelength_m=0.1, wave_period_s=8.0)
    assert "orbit 0.15 m wide at the bed, periods up to 3.5 s" in found.notes[1]
    assert "stated period of 8 s is longer" in found.notes[2]
    flat = one("fU", "wave_ripples", log_setting="waves", ripple_wavelength_m=0.1, ripple_height_m=0.006)
    assert "anorbital" in flat.notes[1]
    wide = one("vfU", "wave_ripples", log_setting="waves", ripple_wavelength_m=0.5)
    assert "tells of no orbit" in wide.notes[1]


@pytest.mark.parametrize(("structure", "setting", "strange"), [
    ("hummocky", "river", True), ("wave_ripples", "turbidity", True), ("aeolian_cross_bedding", "waves", True),
    ("wave_ripples", "tidal", False), ("aeolian_cross_bedding", "river", False), ("cross_bedding", "wind", False),
])  # fmt: skip
def test_a_structure_that_the_setting_does_not_make_is_pointed_out(
    structure: str, setting: str, strange: bool
) -> None:
    """Hummocks in a river log are read as waves, and the reader is asked to check."""
    notes = one("fL", structure, log_setting=setting).notes
    assert any("check one of the two" in note for note in notes) == strange


def test_a_bed_without_structure_names_no_bed_state() -> None:
    """Massive sand says nothing of the form of the bed; low-angle lamination leaves three forms open."""
    assert one("mL", "massive").bed_state == one("mL").bed_state == ""
    assert one("mL", "low_angle_cross_bedding").bed_state == ""
    assert one("mL", "trough_cross_bedding").bed_state == "dune"


def test_only_structures_that_read_differently_are_several() -> None:
    """Imbrication, mud drapes and chips beside one form are no second reading."""
    one_form = one("mL", "trough_cross_bedding mud_chips reactivation_surface")
    assert not any("Several structures" in note for note in one_form.notes)
    two_forms = one("mL", "trough_cross_bedding current_ripples")
    assert any("Several structures" in note for note in two_forms.notes)


def test_laminated_silt_gets_no_plane_bed() -> None:
    """Silt settles into laminae as well; its ripples are still read."""
    laminated = one("slt", "plane_lamination")
    assert (laminated.status, laminated.reason) == ("no estimate", "outside validity")
    assert one("slt", "current_ripples").status == "estimated"


def test_the_slope_of_a_gravel_bed_is_not_used() -> None:
    """The resistance relation was fitted to beds of sand."""
    steep, without = (one("pbl", "cross_bedding", **ask) for ask in ({"ask_slope": 0.01}, {}))
    assert steep.velocity == without.velocity
    assert any("slope was not used" in note for note in steep.notes)


def test_mud_between_turbidites_gets_no_bound() -> None:
    """A mud with its size written is mud in every setting."""
    assert one("slt", log_setting="turbidity").reason == "mud"


def test_a_structure_written_twice_keeps_its_own_division() -> None:
    """In Ta-e both Ta and Te are structureless: the first is a suspension, the last is mud."""
    letters = {"Ta": "massive", "Tb": "plane_lamination", "Tc": "ripple_cross_lamination",
               "Td": "fine_lamination", "Te": "massive"}  # fmt: skip
    terms = tuple(Structure(term, code=code) for code, term in letters.items())
    history = infer_flow(log(bed("mU vfU", terms=terms, structures_upward=True), setting="turbidity"))
    assert [e.status for e in history.estimates] == [
        "estimated", "no estimate", "estimated", "no estimate", "no estimate",
    ]  # fmt: skip
    assert {t.tendency for t in history.tendency if t} == {"waning"}


def test_a_depth_out_of_range_is_named() -> None:
    """A depth of 1.5 cm is most likely a slip of the unit: the note gives it as it was read."""
    found = one("mL", "cross_bedding", flow_depth_m=(0.015, 0.015))
    assert (found.reason, found.notes[0][:29]) == ("outside validity", "It says a depth of 0.015 m; d")


def test_carbonate_sand_is_said_to_differ_from_quartz() -> None:
    """Ooids and shells are neither of the density nor of the shape of the tested grains."""
    assert any("Carbonate grains" in n for n in one("mL", "cross_bedding", lithology="grainstone").notes)


def test_wind_gives_a_wind_and_says_at_which_height() -> None:
    """Wind-dune sand: the wind was above its threshold; no water depth."""
    found = one("fU", "aeolian_cross_bedding", log_setting="wind")
    assert found.bound == "above"
    assert found.limit_velocity_m_s is not None
    assert 4 < found.limit_velocity_m_s < 9
    assert "10 m above the ground" in found.notes[0]


def test_a_turbidite_never_uses_the_ladder_of_a_river() -> None:
    """Ta from suspension, Tb only by choice, Tc between its edges, dunes as motion only; no depth, no Froude."""
    codes = {"Ta": "massive", "Tb": "plane_lamination", "Tc": "current_ripples", "Td": "fine_lamination"}
    found = {
        code: one("fL", terms=(Structure(term, code=code),), log_setting="turbidity")
        for code, term in codes.items()
    }
    assert found["Ta"].bound == found["Tc"].bound == "range"
    assert found["Ta"].transport_mode == "suspension"
    assert (found["Tb"].status, found["Tb"].reason) == ("no estimate", "Tb is ambiguous")
    assert found["Td"].status == "no estimate"
    chosen = one("fL", "plane_lamination", log_setting="turbidity", ask_read_tb=True)
    assert (chosen.bound, chosen.bed_state) == ("above", "upper_plane")
    assert one("mL", "trough_cross_bedding", log_setting="turbidity").bound == "above"
    assert all(e.flow_depth is None and e.froude is None for e in found.values())


def test_suspension_follows_the_settling_velocity() -> None:
    """Coarser Ta sand needs a faster current, in proportion to its settling velocity, faster than Tc ripples."""
    fine, coarse = (one(g, "massive", log_setting="turbidity").velocity for g in ("vfL", "mL"))
    assert fine is not None
    assert coarse is not None
    assert 5 < coarse.p50 / fine.p50 < 20
    ripples = one("mL", "current_ripples", log_setting="turbidity").velocity
    assert ripples is not None
    assert coarse.p50 > ripples.p50


def test_coarse_ta_is_outside_the_rule() -> None:
    """Grains that turbulence alone does not hold up get no velocity from it."""
    assert one("vcU", "massive", log_setting="turbidity").reason == "outside validity"


def test_a_structure_out_of_its_size_is_a_conflict_with_the_size() -> None:
    """Dunes in very fine sand: the clash names the grain size."""
    found = one("vfL", "cross_bedding", set_thickness=SetThickness(0.3, 0.3, 0.3))
    assert found.conflict == 1.0
    assert found.clash is not None
    assert (found.clash.first, found.clash.second) == ("bed_state", "grain_size")


def test_a_stated_depth_is_taken_from_bed_user_and_log_in_that_order() -> None:
    """The nearest statement wins; all of them move the depth."""
    depths = [
        one("mL", "cross_bedding", log_flow_depth_m=(8.0, 8.0)),
        one("mL", "cross_bedding", log_flow_depth_m=(8.0, 8.0), ask_flow_depth_m=4.0),
        one(
            "mL", "cross_bedding", log_flow_depth_m=(8.0, 8.0), ask_flow_depth_m=4.0, flow_depth_m=(2.0, 2.0)
        ),
    ]
    for found, expected in zip(depths, (8.0, 4.0, 2.0), strict=True):
        assert found.flow_depth is not None
        assert found.flow_depth.p50 == pytest.approx(expected, rel=0.1)
    assert "25 %" in depths[0].notes[0]


def test_a_stated_slope_narrows_a_river_and_is_refused_elsewhere() -> None:
    """Slope and depth give the velocity by the resistance of rivers; tidal beds say why it is not used."""
    without = one("mL", "cross_bedding", ask_flow_depth_m=3.0)
    steep = one("mL", "cross_bedding", ask_flow_depth_m=3.0, ask_slope=1e-3)
    gentle = one("mL", "cross_bedding", ask_flow_depth_m=3.0, ask_slope=2e-5)
    for found in (without, steep, gentle):
        assert found.velocity is not None
    assert gentle.velocity.p50 < without.velocity.p50 < steep.velocity.p50  # type: ignore[union-attr]
    tidal = one("mL", "cross_bedding", ask_slope=1e-4, log_setting="tidal")
    assert any("slope was not used" in note for note in tidal.notes)


def test_accretion_sets_and_bar_fronts_speak_of_depth() -> None:
    """Lateral accretion gives a depth near two thirds of its thickness, a bar front a least depth."""
    accretion = one("mL", "lateral_accretion", top_m=5.0)
    assert accretion.flow_depth is not None
    assert 2.5 < accretion.flow_depth.p50 < 4.5
    bar, plain = one("mL", "bar_front_set", top_m=5.0), one("mL", "massive", top_m=5.0)
    assert bar.flow_depth is not None
    assert plain.flow_depth is not None
    assert bar.flow_depth.p10 > 3 > plain.flow_depth.p10


def test_the_river_prior_gives_way_outside_sand() -> None:
    """Gravel in a river is read with the broad prior: motion alone is then a bound."""
    assert one("pbl").bound == "above"


def test_graded_phases_have_a_velocity_at_base_and_top() -> None:
    """A graded part of a sequence carries the velocities of its two ends."""
    history = infer_flow(log(bed("cL fL", "trough_cross_bedding current_ripples", structures_upward=True)))
    first = history.estimates[0]
    assert first.base_velocity is not None
    assert first.top_velocity is not None
    assert first.base_velocity.p50 > first.top_velocity.p50


def test_hot_and_salty_water_change_little() -> None:
    """Temperature and salinity are taken into account: a few per cent, not more."""
    cold, warm = (one("fL", "current_ripples", ask_temperature_c=t).velocity for t in (2.0, 30.0))
    assert cold is not None
    assert warm is not None
    assert cold.p50 != warm.p50
    assert cold.p50 == pytest.approx(warm.p50, rel=0.15)


def test_bad_options_name_what_is_allowed() -> None:
    """Unknown names and impossible numbers raise before anything is read."""
    table = log(bed("mL"))
    with pytest.raises(UnknownNameError, match=r"There is no setting called 'rivr'\. Did you mean 'river'\?"):
        infer_flow(table, setting="rivr")
    with pytest.raises(ArgumentError, match="prior is 'strong'"):
        infer_flow(table, prior="strong")
    for bad in (-1.0, (3.0, 2.0), float("nan")):
        with pytest.raises(ArgumentError, match="flow_depth_m"):
            infer_flow(table, flow_depth_m=bad)
    with pytest.raises(ArgumentError, match="salinity"):
        infer_flow(table, salinity=90.0)


def test_an_empty_log_has_an_empty_history() -> None:
    """No beds, no rows, no error; the columns are still there."""
    history = infer_flow(log())
    assert history.estimates == ()
    assert list(history.to_frame().columns)[:4] == ["section", "bed", "phase", "base_m"]
    assert history.summary()["phases"] == 0


@given(
    st.sampled_from(sorted(CLASSES)),
    st.sampled_from(["", "massive", "cross_bedding", "current_ripples", "plane_lamination", "antidunes", "hummocky",
                     "wind_ripple_lamination", "horizontal_gravel", "mud_chips", "no_such_structure"]),
    st.sampled_from(["river", "tidal", "turbidity", "waves", "combined", "wind", "unknown"]),
    st.one_of(st.none(), st.floats(0.001, 500)),
    st.one_of(st.none(), st.floats(0.01, 5000)),
)  # fmt: skip
@settings(max_examples=150, deadline=None)
def test_every_bed_gets_an_answer_that_is_whole(
    grain: str, structure: str, setting: str, depth: float | None, clast: float | None
) -> None:
    """Any bed: a range with rising finite quantiles, a bound with a limit, or a reason; never a mixture."""
    largest = LargestClasts((clast,), clast) if clast else None
    fields = {"largest": largest, "flow_depth_m": (depth, depth) if depth else None}
    history = infer_flow(log(bed(grain, structure, **fields), setting=setting))
    for found in history.estimates:
        if found.status == "no estimate":
            assert found.reason
            assert found.velocity is None
        elif found.bound == "range":
            q = found.velocity
            assert q is not None
            assert all(math.isfinite(v) for v in (q.p10, q.p50, q.p90))
            assert 0 < q.p10 < q.p50 < q.p90
        else:
            assert found.velocity is None
            assert found.limit_velocity_m_s is not None
            assert 0 < found.limit_velocity_m_s < 100
        assert 0.0 <= found.conflict <= 1.0
    assert history.explain("1")


def test_a_single_measured_size_counts_as_a_size() -> None:
    """A size without class width is read with the width of a grid cell, near its class."""
    point = SizeInterval(0.3, 0.3, "0.3 mm")
    exact = infer_flow(
        log(
            Bed("1", 0, 1, grain=bed("mL").grain[:0], sizes=()),
        )
    ).estimates[0]
    assert exact.reason == "no grain size"
    from logkit.model import GrainState

    found = infer_flow(
        log(Bed("1", 0, 1, grain=(GrainState(0.0, point),), structures=(Structure("cross_bedding"),)))
    ).estimates[0]
    of_class = one("mL", "cross_bedding")
    assert found.velocity is not None
    assert of_class.velocity is not None
    assert found.velocity.p50 == pytest.approx(of_class.velocity.p50, rel=0.03)
    assert size("mL").low_mm < 0.3 < size("mL").high_mm


def test_very_coarse_sand_is_not_held_in_suspension() -> None:
    """It has an upper bound in the ledger, the skin shear velocity at which it would be suspended.

    Finer sand may be suspended; pebbles are lifted by no flow of the grid, so both have no such bound.
    """
    ledger = infer_flow(log(bed("vcU"))).ledger("1").set_index("criterion")
    ceiling = ledger.loc["suspension_ceiling"]
    assert ceiling.bound == "below"
    assert 2 < ceiling.alone_p90_m_s < 10
    assert ledger.loc["motion"].alone_p10_m_s < 1.5
    for other in ("mL", "pbl"):
        assert "suspension_ceiling" not in set(infer_flow(log(bed(other))).ledger("1").criterion)


def test_an_impossible_depth_of_a_bed_names_the_bed() -> None:
    """Logs from memory may hold nonsense: the error says which bed."""
    with pytest.raises(ArgumentError, match="flow_depth_m of bed 1 is"):
        infer_flow(log(bed("mL", flow_depth_m=(0.0, 2.0))))


def test_a_coarse_sand_grain_does_not_open_a_river_range() -> None:
    """Only gravel tells of a faster moment; the largest sand grain leaves the range of the bed as it is."""
    assert one("mL", "massive", largest=LargestClasts((0.8,), 0.8)).bound == "range"


def test_plane_beds_outside_rivers_are_open_above() -> None:
    """No measured tidal flows end the range: a lower bound, and still a waning flow where ripples follow."""
    history = infer_flow(
        log(
            bed("fL", structures_upward=True, terms=(
                Structure("upper_plane_lamination"), Structure("current_ripples"))),
            setting="tidal",
        )
    )  # fmt: skip
    plane, ripples = history.estimates
    assert (plane.bound, plane.velocity, ripples.bound) == ("above", None, "range")
    assert plane.limit_velocity_m_s is not None
    assert 0.5 < plane.limit_velocity_m_s < 1.0
    assert ripples.tendency == "waning"


def test_shallow_rivers_carry_their_known_weakness() -> None:
    """Below 1 m the calibrated range holds too few measured streams; deeper rivers carry no such note."""
    for depth, told in ((0.5, True), (3.0, False)):
        found = one("mL", "trough_cross_bedding", ask_flow_depth_m=depth)
        assert any("Less than 1 m deep" in note for note in found.notes) == told


def test_an_inversely_graded_ta_is_read_from_its_coarsest_sand() -> None:
    """The strongest current is told by the coarsest grains it held, wherever in the bed they lie."""
    both = [one(g, "", terms=(Structure("massive", code="Ta"), Structure("plane_lamination", code="Tb")),
                structures_upward=True, log_setting="turbidity") for g in ("fL mU fL", "mU fL")]  # fmt: skip
    inverse, normal = (e.velocity for e in both)
    assert inverse is not None
    assert inverse == normal


def test_the_ledger_of_an_open_bed_state_has_no_upper_velocity() -> None:
    """Outside rivers the row of a plane bed ends nowhere; in a river the measured flows end it."""
    rows = {
        setting: infer_flow(log(bed("fL", "plane_lamination"), setting=setting)).ledger("1").iloc[0]
        for setting in ("tidal", "river")
    }
    assert rows["tidal"].bound == "above"
    assert np.isnan(rows["tidal"].alone_p90_m_s)
    assert rows["river"].alone_p90_m_s < 4
