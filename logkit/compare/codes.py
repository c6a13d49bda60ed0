"""Numbers and links that stand for lithologies and structures in files for other programs, and their table."""

from __future__ import annotations

import tomllib
from functools import cache
from importlib.resources import files
from typing import TYPE_CHECKING, Any

from logkit.errors import DataFileError
from logkit.vocabulary import vocabulary

if TYPE_CHECKING:
    import pandas as pd

    from logkit.model import Bed

LITHOLOGY_STEP = 1000
"""A facies number is this times the lithology's number, plus the structure's."""


@cache
def facies_numbers() -> dict[str, dict[str, int]]:
    """Numbers of lithologies and structures by id.

    Raises
    ------
    DataFileError : two ids share a number, or a number does not fit
    """
    table = _load("facies_numbers.toml")
    for kind, numbers in table.items():
        values = list(numbers.values())
        if len(set(values)) != len(values) or not all(0 < v < LITHOLOGY_STEP for v in values):
            raise DataFileError(
                "facies_numbers.toml", None, f"numbers of {kind} repeat or leave 1 to {LITHOLOGY_STEP - 1}."
            )
    return table


def facies_number(bed: Bed) -> int:
    """Number of a bed's lithology and first structure; 0 stands for one that is not known."""
    numbers = facies_numbers()
    structure = bed.structures[0].term if bed.structures else ""
    return LITHOLOGY_STEP * numbers["lithologies"].get(bed.lithology, 0) + numbers["structures"].get(
        structure, 0
    )


def facies_label(number: int) -> str:
    """Words for a facies number."""
    lithology, structure = divmod(number, LITHOLOGY_STEP)
    parts = []
    for kind, wanted in (("lithologies", lithology), ("structures", structure)):
        id = next((i for i, n in facies_numbers()[kind].items() if n == wanted), "")
        if id:
            parts.append(vocabulary(kind)[id].label)
    return ", ".join(parts) or "not given"


def lithology_link(lithology: str) -> str:
    """Link of a lithology in the open vocabulary, "" where there is none."""
    table = _load("lithology_links.toml")
    name = table["names"].get(lithology, "")
    return f"{table['base']}{name}" if name else ""


def codes_table() -> pd.DataFrame:
    """Every term that may stand in the hand-over set: kind, id, number, words, link."""
    import pandas as pd

    rows = []
    for kind, numbers in facies_numbers().items():
        for id, number in numbers.items():
            if id not in vocabulary(kind):
                continue
            link = lithology_link(id) if kind == "lithologies" else ""
            rows.append(
                {"kind": kind, "id": id, "number": number, "label": vocabulary(kind)[id].label, "link": link}
            )
    return pd.DataFrame(rows)


@cache
def _load(name: str) -> dict[str, Any]:
    text = files("logkit.compare").joinpath("data", name).read_text(encoding="utf-8")
    return tomllib.loads(text)
