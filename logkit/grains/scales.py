"""Grain-size classes: the scales, their labels and limits, and the class or interval a label stands for.

A label is an interval, never a number. Scales are data (`data/scales.toml`). How a cell is written (ranges,
grading, doubts) belongs to the readers.
"""

from __future__ import annotations

import re
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache, lru_cache
from importlib.resources import files
from types import MappingProxyType
from typing import Literal, cast

from logkit.errors import DataFileError, UnknownNameError, nearest
from logkit.model import SizeInterval

FILE = "grains/data/scales.toml"
OpenEnd = Literal["", "coarse", "fine"]
_FIELDS = {"label", "phi", "mm", "open", "synonyms", "source"}
_MARKS = re.compile(r"[\s._,]+|(?<=very)-|(?<=^v)-", re.I)


@dataclass(frozen=True, slots=True)
class SizeClass:
    """One class of a scale.

    Attributes
    ----------
    name : canonical label, "fU"
    label : words, "fine sand, upper half"
    low_mm, high_mm : limits; nominal on an open side
    open_end : "coarse" or "fine" where the class has no limit, else ""
    synonyms : what people write
    source : reference key
    """

    name: str
    label: str
    low_mm: float
    high_mm: float
    open_end: OpenEnd = ""
    synonyms: tuple[str, ...] = ()
    source: str = ""

    @property
    def interval(self) -> SizeInterval:
        """The class as a size interval."""
        return SizeInterval(self.low_mm, self.high_mm, self.name, open_end=self.open_end)


class Scale(Mapping[str, SizeClass]):
    """The classes of a scale by canonical name, fine to coarse as in the file; finds a class from a label."""

    def __init__(self, name: str, classes: Mapping[str, SizeClass], labels: Mapping[str, str]) -> None:
        self.name = name
        self._classes = MappingProxyType(dict(classes))
        self._labels = MappingProxyType(dict(labels))

    def __getitem__(self, name: str) -> SizeClass:
        try:
            return self._classes[name]
        except KeyError:
            raise UnknownNameError(f"class of the scale {self.name}", name, self._classes) from None

    def __contains__(self, name: object) -> bool:
        return name in self._classes

    def __iter__(self):  # type: ignore[no-untyped-def]
        return iter(self._classes)

    def __len__(self) -> int:
        return len(self._classes)

    def find(self, label: str) -> SizeClass | None:
        """The class a label stands for, in any of its spellings; None when it is not one."""
        name = self._labels.get(compact(label))
        return self._classes[name] if name else None

    def nearest(self, label: str) -> str | None:
        """Canonical name of the class most like the label, None when nothing is near."""
        match = nearest(compact(label), self._labels)
        return self._labels[match] if match else None

    def classes_at(self, d_mm: float) -> tuple[SizeClass, ...]:
        """The classes that hold a size, narrowest first; a size on a limit belongs to the coarser class."""
        held = [c for c in self._classes.values() if c.low_mm <= d_mm < c.high_mm]
        return tuple(sorted(held, key=lambda c: c.high_mm / c.low_mm))


@lru_cache(maxsize=4096)
def compact(label: str) -> str:
    """A label as it is compared: lower case without dots and spaces, nor the hyphen of `very-fine`."""
    return _MARKS.sub("", label).casefold()


SCALES = ("wentworth", "iso14688")
"""Names of the scales a log may declare."""


@cache
def scale(name: str = "wentworth") -> Scale:
    """A scale by name, read and checked once.

    Raises
    ------
    UnknownNameError : no such scale
    DataFileError : the data file has a mistake
    """
    if name not in SCALES:
        raise UnknownNameError("size scale", name, SCALES)
    text = files("logkit.grains").joinpath("data/scales.toml").read_text(encoding="utf-8")
    return build_scale(name, tomllib.loads(text)[name], text)


def build_scale(name: str, entries: Mapping[str, dict], text: str = "") -> Scale:
    """A scale from its parsed table; `text` is the file, to name lines.

    Raises
    ------
    DataFileError : a field is missing, unknown or out of order, or two classes share a label
    """

    def fail(id: str, what: str) -> DataFileError:
        heads = (f"[{name}.{id}]", f'[{name}."{id}"]')
        line = next((i for i, t in enumerate(text.splitlines(), 1) if t.strip() in heads), None)
        return DataFileError(FILE, line, f"{name}.{id}: {what}")

    classes: dict[str, SizeClass] = {}
    labels: dict[str, str] = {}
    for id, entry in entries.items():
        unknown = set(entry) - _FIELDS
        if unknown:
            raise fail(id, f"unknown field {min(unknown)!r}.")
        if ("phi" in entry) == ("mm" in entry) or "label" not in entry or "source" not in entry:
            raise fail(id, "needs label, source and either phi or mm.")
        if "phi" in entry:
            low, high = 2.0 ** -entry["phi"][1], 2.0 ** -entry["phi"][0]
        else:
            low, high = entry["mm"]
        if not 0 < low < high:
            raise fail(id, "the limits must be positive and in order.")
        synonyms = tuple(entry.get("synonyms", ()))
        open_end = cast(OpenEnd, entry.get("open", ""))
        classes[id] = SizeClass(id, entry["label"], low, high, open_end, synonyms, entry["source"])
        for written in (id, entry["label"], *synonyms):
            taken = labels.setdefault(compact(written), id)
            if taken != id:
                raise fail(id, f"{written!r} stands for {taken!r} as well.")
    return Scale(name, classes, labels)


def interval_for(label: str, scale_name: str = "wentworth") -> SizeInterval | None:
    """The size interval a class label stands for, None when it is not a class of the scale.

    Examples
    --------
    >>> interval_for("Uf").label, interval_for("Uf").high_mm
    ('fU', 0.25)
    """
    found = scale(scale_name).find(label)
    return found.interval if found else None


def class_of(d_mm: float, scale_name: str = "wentworth") -> SizeClass | None:
    """The narrowest class that holds a size in mm, None outside the scale."""
    held = scale(scale_name).classes_at(d_mm)
    return held[0] if held else None
