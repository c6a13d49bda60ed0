"""Choices of a report, from a file and by name."""

from pathlib import Path

import pytest

from logkit.errors import ArgumentError, DataFileError, LogkitError
from logkit.report.settings import SECTIONS, make_settings


def write(folder: Path, text: str) -> Path:
    """A settings file."""
    path = folder / "report.toml"
    path.write_text(text, encoding="utf-8")
    return path


def test_options_stand_above_the_file(tmp_path: Path) -> None:
    """A choice made by name replaces the one in the file, the others of the file stay."""
    path = write(tmp_path, 'units = "feet"\norganisation = "Orme Survey"\nsections = ["summary", "limits"]\n')
    chosen = make_settings(path, units="si")
    assert (chosen.units, chosen.organisation, chosen.sections) == (
        "si",
        "Orme Survey",
        ("summary", "limits"),
    )


def test_unknown_key_names_the_nearest_with_its_line(tmp_path: Path) -> None:
    """A misspelt key says file, line and what it may have meant."""
    path = write(tmp_path, 'units = "si"\norganization = "Orme Survey"\n')
    with pytest.raises(DataFileError) as caught:
        make_settings(path)
    assert str(caught.value) == f"{path}, line 2: unknown key 'organization'. Did you mean 'organisation'?"


def test_unknown_section_names_the_nearest(tmp_path: Path) -> None:
    """A misspelt section is refused with the nearest one."""
    with pytest.raises(ArgumentError, match="Did you mean 'history'"):
        make_settings(None, sections=["histroy"])


@pytest.mark.parametrize(
    "text",
    [
        'scale = "fifty"\n',
        "scale = 0\n",
        "scale = true\n",
        'archive = "yes"\n',
        "title = 3\n",
        'units = "cubits"\n',
    ],
)
def test_wrong_values_are_refused(tmp_path: Path, text: str) -> None:
    """A value of the wrong kind names its line."""
    with pytest.raises(DataFileError, match="line 1"):
        make_settings(write(tmp_path, text))


def test_a_file_that_is_no_toml_is_refused(tmp_path: Path) -> None:
    """Broken TOML and a missing file are told in words."""
    with pytest.raises(DataFileError, match="not TOML"):
        make_settings(write(tmp_path, "units = \n"))
    with pytest.raises(LogkitError, match="No such file"):
        make_settings(tmp_path / "none.toml")


def test_all_sections_by_default() -> None:
    """Without a choice every section is there, in the order of the list."""
    assert make_settings(None).sections == tuple(SECTIONS)
