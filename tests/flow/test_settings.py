"""The data files of the engine: what they must hold, and how mistakes are named."""

from __future__ import annotations

import pytest

from logkit.errors import DataFileError
from logkit.flow.criteria import criterion_texts, state_readings
from logkit.flow.settings import build_settings, flow_settings, read_flow_file
from logkit.model import SETTINGS
from logkit.references import all_references
from logkit.vocabulary.loading import parse_toml
from logkit.vocabulary.terms import vocabulary

SHIPPED = read_flow_file("settings.toml").text
CALIBRATION = read_flow_file("calibration.toml")


def test_every_setting_of_the_model_is_declared() -> None:
    """The engine knows each setting a log can name."""
    assert set(flow_settings().settings) == set(SETTINGS)


def test_only_rivers_use_the_river_prior() -> None:
    """The prior that was fitted to rivers is the default of no other setting."""
    assert [s.name for s in flow_settings().settings.values() if s.prior == "river"] == ["river"]


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            'reading = "wind"',
            'readng = "wind"',
            r"line \d+: wind: unknown field 'readng'. Did you mean 'reading'",
        ),
        ('prior = "broad"', 'prior = "wide"', r"line \d+: tidal: no prior 'wide'"),
        ("sd_ln = 0.66", 'sd_ln = "wide"', r"line \d+: sd_ln must be a number, not 'wide'"),
        ("[tendency]", "[tendencies]", r"the table \[tendency\] is missing"),
        ("erosion_pa = 0.7", "erosion_pa = ", "not TOML"),
    ],
)
def test_a_mistake_is_named_with_file_and_line(old: str, new: str, message: str) -> None:
    """A wrong word, number or table in the settings raises an error that says where."""
    assert old in SHIPPED
    with pytest.raises(DataFileError, match=message) as caught:
        build_settings(parse_toml(SHIPPED.replace(old, new), "flow/settings.toml"), CALIBRATION)
    assert caught.value.file == "flow/settings.toml"


def test_an_impossible_calibration_is_refused() -> None:
    """A negative allowance names the prior and the field."""
    bad = parse_toml(CALIBRATION.text.replace("delta = 0.5", "delta = -0.5"), "flow/calibration.toml")
    with pytest.raises(DataFileError, match="river: delta must be a number from 0 to 2"):
        build_settings(read_flow_file("settings.toml"), bad)


def test_the_calibration_says_where_it_is_from() -> None:
    """Date, data and achieved coverage are kept with the numbers."""
    made = flow_settings().calibration
    assert made["rivers"] > 200
    assert "Gearon" in made["data"]
    assert 0.75 <= made["coverage"]["cross_bedded_with_depth"][0] <= 0.86


def test_sources_are_known_works() -> None:
    """Each group of numbers cites a key of the reference list, the calibration, or our own judgement."""
    allowed = {"ours", "calibration", *all_references()}
    settings = flow_settings()
    cited = [s.source for s in settings.settings.values()] + [p.source for p in settings.priors.values()]
    cited += [g["source"] for g in settings.depth.values()]
    cited += [
        g["source"] for g in (settings.resistance, settings.density_current, settings.mud, settings.tendency)
    ]
    for text in criterion_texts().values():
        cited += text.source.split(", ")
    assert set(cited) <= allowed, set(cited) - allowed


def test_structures_with_declared_states_are_in_the_vocabulary() -> None:
    """A reading declared for a structure nobody can write would never be used."""
    assert set(state_readings()) <= set(vocabulary("structures"))
