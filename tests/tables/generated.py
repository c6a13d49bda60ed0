"""Hypothesis strategies for whole logs: everything a bed may hold, in any combination a person could mean."""

from __future__ import annotations

from typing import Any

from hypothesis import strategies as st

from logkit.model import (
    SETTINGS,
    Bed,
    Bioturbation,
    Colour,
    Contact,
    CurrentReading,
    GrainState,
    Header,
    LargestClasts,
    Log,
    SetThickness,
    SizeInterval,
    SizeReading,
    Structure,
)
from logkit.tables.checks import mark_minimum
from logkit.units import METRES
from logkit.vocabulary import vocabulary

TEXT = st.text(st.characters(exclude_categories=("Cs",)), max_size=40)
LINE = st.text(st.characters(exclude_categories=("Cs", "Cc", "Zl", "Zp")), min_size=1, max_size=30).map(
    lambda text: " ".join(text.split())
)
HOSTILE = st.sampled_from(
    (
        "=1+1",
        "+cmd",
        "-2+3",
        "@sum",
        "'quoted",
        "<script>alert(1)</script>",
        'say "so"',
        "a,b;c\td",
        "two\nlines",
        "# no",
        "",
    )
)
WORDS = st.one_of(TEXT, HOSTILE)
SEEN = (
    LINE.map(lambda text: "".join(c for c in text if c.isprintable()))
    .filter(bool)
    .map(str.strip)
    .filter(bool)
)
NAME = st.one_of(
    st.integers(1, 400).map(str), st.sampled_from(("2b", "7a", "=A1", "-3", "12.4", "bed <x>")), SEEN
)


def ids(kind: str) -> st.SearchStrategy[str]:
    """Ids of a vocabulary."""
    return st.sampled_from(vocabulary(kind).ids)


def size(low: float = 1e-4, high: float = 4000.0) -> st.SearchStrategy[float]:
    """A positive number, on a logarithmic scale."""
    import math

    return st.floats(math.log(low), math.log(high)).map(math.exp)


@st.composite
def intervals(draw: st.DrawFn) -> SizeInterval:
    """A size interval: a class, or numbers."""
    low, high = sorted((draw(size()), draw(size())))
    return SizeInterval(low, high, draw(st.sampled_from(("", "mU", "fL-mU", "0.25 mm", "f"))), draw(st.booleans()),
                        draw(st.sampled_from(("", "coarse", "fine"))))  # fmt: skip


@st.composite
def grains(draw: st.DrawFn) -> tuple[GrainState, ...]:
    """No, one or several states, upward."""
    count = draw(st.integers(0, 4))
    places = sorted(draw(st.lists(st.floats(0, 1), min_size=count, max_size=count, unique=True)))
    return tuple(GrainState(place, draw(intervals())) for place in places)


STRUCTURES = st.builds(
    Structure, ids("structures"), TEXT, st.none() | st.floats(0, 0.5), st.none() | st.floats(0.5, 1),
    st.booleans(), st.sampled_from(("", "St", "Ta")),
)  # fmt: skip


@st.composite
def sets(draw: st.DrawFn, thickness: float) -> SetThickness:
    """A set thickness that fits into its bed."""
    low, high = sorted((draw(st.floats(0.01, 1)), draw(st.floats(0.01, 1))))
    low, high = low * thickness, high * thickness
    mean = draw(st.none() | st.floats(0, 1))
    return SetThickness(low, high, None if mean is None else min(high, low + mean * (high - low)),
                        draw(st.none() | st.integers(1, 40)))  # fmt: skip


CONTACTS = st.builds(
    Contact, ids("contacts"), st.none() | size(0.001, 3), st.none() | size(0.001, 3), st.booleans()
)
CURRENTS = st.builds(
    CurrentReading, ids("indicators"), st.sampled_from(("plane", "line", "azimuth")),
    st.sampled_from(("direction", "axis")), st.floats(0, 360, exclude_max=True), st.none() | st.floats(0, 90), TEXT,
    st.booleans(),
)  # fmt: skip
LARGEST = st.builds(
    LargestClasts,
    st.lists(size(), min_size=1, max_size=10).map(tuple),
    size(),
    st.sampled_from(("a", "b", "")),
)
METHODS = st.sampled_from(("", "card", "photo, 1:2"))
BIOTURBATION = st.builds(
    Bioturbation,
    st.just(1.0),
    st.sampled_from((1.0, 3.0)),
    st.sampled_from(("", "taylor_goldring", "ichnofabric")),
)
RANGES = st.tuples(size(1e-5, 50), size(1e-5, 50)).map(lambda pair: (min(pair), max(pair)))


def optional(strategy: st.SearchStrategy[Any]) -> st.SearchStrategy[Any]:
    """The value, or nothing."""
    return st.none() | strategy


@st.composite
def described(draw: st.DrawFn, base: float, top: float) -> dict[str, Any]:
    """What a bed may hold beside name and place."""
    places = sorted(draw(st.lists(st.floats(0, 1), max_size=4, unique=True)))
    readings = tuple(
        SizeReading(round(base + p * (top - base), 9), draw(size(1e-3, 100)), draw(optional(size(1e-3, 100))),
                    draw(optional(size(1e-3, 100))), None, draw(optional(st.integers(1, 500))), draw(METHODS))
        for p in places
    )  # fmt: skip
    return {
        "lithology": draw(st.just("") | ids("lithologies")),
        "qualifiers": tuple(draw(st.lists(ids("qualifiers"), max_size=2, unique=True))),
        "grain": draw(grains()),
        "largest": draw(optional(LARGEST)),
        "sizes": tuple(sorted(readings, key=lambda r: r.position_m)),
        "sorting": draw(st.just("") | ids("sorting")),
        "structures": tuple(draw(st.lists(STRUCTURES, max_size=3))),
        "structures_upward": draw(st.booleans()),
        "set_thickness": draw(optional(sets(top - base))),
        "ripple_wavelength_m": draw(optional(size(0.01, 5))),
        "ripple_height_m": draw(optional(size(0.001, 1))),
        "climb_angle_deg": draw(optional(st.floats(0, 40))),
        "d50_mm": draw(optional(size(1e-3, 200))),
        "wave_period_s": draw(optional(size(0.5, 25))),
        "contact": draw(optional(CONTACTS)),
        "currents": tuple(draw(st.lists(CURRENTS, max_size=3))),
        "flow_depth_m": draw(optional(RANGES)),
        "slope": draw(optional(RANGES)),
        "bioturbation": draw(optional(BIOTURBATION)),
        "colour": draw(optional(st.builds(Colour, LINE, st.sampled_from(("", "5YR 4/4"))))),
        "fossils": tuple(draw(st.lists(ids("fossils"), max_size=2, unique=True))),
    }  # fmt: skip


@st.composite
def beds(draw: st.DrawFn, name: str, base: float, top: float) -> Bed:
    """A bed or a gap between two heights."""
    common: dict[str, Any] = {
        "samples": tuple(draw(st.lists(LINE, max_size=2))),
        "photos": tuple(draw(st.lists(LINE, max_size=2))),
        "marker": draw(st.just("") | LINE),
        "confidence": draw(st.just("") | WORDS),
        "notes": draw(st.just("") | WORDS),
        "written": tuple(draw(st.dictionaries(LINE, TEXT, max_size=3)).items()),
    }
    common["marker_sure"] = draw(st.booleans()) if common["marker"] else True
    if draw(st.integers(0, 5)) == 0:
        return Bed(name, base, top, "gap", draw(ids("gaps")), **common)
    rest = draw(described(base, top))
    return Bed(
        name, base, top, **rest, **common, measured=draw(st.booleans()), minimum_thickness=draw(st.booleans())
    )


HEADERS = st.builds(
    Header, title=WORDS, section=LINE | st.just(""), location=WORDS, coordinates=WORDS, coordinate_datum=WORDS,
    logged_by=WORDS, date=WORDS, direction=st.just("up"), unit=st.sampled_from(("", "m", "cm", "ft")),
    setting=st.sampled_from(SETTINGS), water_temperature_c=optional(st.floats(0, 40)),
    salinity=optional(st.floats(0, 40)),
    grain_density_kg_m3=optional(st.floats(1000, 6000)),
    bedding=optional(st.tuples(st.floats(0, 360, exclude_max=True), st.floats(0, 90))),
    declination_deg=optional(st.floats(-180, 180)), size_scale=st.sampled_from(("wentworth", "iso14688")),
    grain_method=WORDS, sorting_of_sizes=WORDS, kb_elevation_m=optional(st.floats(-500, 3000)),
    depth_reference=WORDS, thickness_type=st.sampled_from(("true", "vertical", "measured")),
    flow_depth_m=optional(RANGES), slope=optional(RANGES),
    extra=st.lists(st.tuples(st.sampled_from(("distance_m", "field party", "note")), WORDS), max_size=2).map(tuple),
)  # fmt: skip


@st.composite
def logs(draw: st.DrawFn, most_beds: int = 4) -> Log:
    """A log upward in heights, or downward in depths of any unit."""
    header = draw(HEADERS)
    count = draw(st.integers(1, most_beds))
    names = draw(st.lists(NAME, min_size=count, max_size=count, unique=True))
    steps = [draw(st.floats(0.001, 40)) for _ in names]
    start = draw(st.floats(-200, 3000))
    heights = [round(start, 9)]
    for step in steps:
        heights.append(round(heights[-1] + step, 9))
    if not draw(st.booleans()):
        placed = zip(names, heights, heights[1:], strict=False)
        return Log(header, tuple(mark_minimum([draw(beds(name, base, top)) for name, base, top in placed])))
    return draw(_down(header, names, steps))


@st.composite
def _down(draw: st.DrawFn, header: Header, names: list[str], steps: list[float]) -> Log:
    from dataclasses import replace

    unit = header.unit or "m"
    header = replace(header, direction="down", unit=unit)
    depths = [round(draw(st.floats(0, 4000)), 2)]
    for step in steps:
        depths.append(round(depths[-1] + step + 0.01, 2))
    rows = []
    for name, top, base in zip(names, depths, depths[1:], strict=False):
        place = [round(-round(d * METRES[unit], 12), 9) for d in (base, top)]
        bed = draw(beds(name, *place))
        rows.append(replace(bed, depth_base=base, depth_top=top))
    return Log(header, tuple(mark_minimum(rows[::-1])))
