"""What a criterion is, and the registry of them; anybody can register one.

A criterion reads a phase and answers with a reading, or with None when the phase says nothing to it. A
reading is a hashable value; equal readings share their tables. Four kinds are known to the engine:

- ``state``: the reading is a tuple of bed states, looked up in the precomputed tables;
- ``clast``: the reading is a `ClastReading`, looked up in the tables as well;
- ``depth``: the reading is a `DepthReading`, a soft range of flow depth;
- ``cells``: anything else; `log_likelihood(reading, cells)` gives the natural logarithm of the likelihood
  on the arrays of `Cells`, at most 0, in any shape that broadcasts to (size, velocity, depth).

The criteria that ship with logkit are in `builtin_criteria`.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Hashable
from dataclasses import dataclass
from functools import cache
from typing import Any, Literal

from logkit.errors import ArgumentError
from logkit.flow.grid import Array
from logkit.flow.settings import Setting, read_flow_file
from logkit.flow.states import Fluid
from logkit.model import Bed, Phase
from logkit.registry import Registry

Kind = Literal["state", "clast", "depth", "cells"]
Side = Literal["band", "above", "below"]


@dataclass(frozen=True, slots=True)
class DepthReading:
    """A soft range of flow depth: lognormal with its own spread on each side.

    Attributes
    ----------
    median_m : most likely depth
    sd_ln_below, sd_ln_above : standard deviations in ln h; infinite where that side is open
    """

    median_m: float
    sd_ln_below: float
    sd_ln_above: float

    def __post_init__(self) -> None:
        if not (self.median_m > 0 and math.isfinite(self.median_m)):
            raise ArgumentError("median_m", self.median_m, "a depth above zero")
        if not (self.sd_ln_below > 0 and self.sd_ln_above > 0):
            raise ArgumentError("sd_ln", (self.sd_ln_below, self.sd_ln_above), "above zero")


@dataclass(frozen=True, slots=True)
class ClastReading:
    """A clast that was moved.

    Attributes
    ----------
    phi : size on a uniform bed that is as hard to move as the clast, as the tables count it
    written_mm : size as written
    """

    phi: float
    written_mm: float


@dataclass(frozen=True, slots=True)
class Cells:
    """The cells a `cells` criterion is asked about; the arrays broadcast to (size, velocity, depth).

    Attributes
    ----------
    d_m, velocity_m_s, flow_depth_m : shapes (n, 1, 1), (1, n, 1), (1, 1, n)
    fluid : water and grains
    """

    d_m: Array
    velocity_m_s: Array
    flow_depth_m: Array
    fluid: Fluid


@dataclass(frozen=True, slots=True)
class Context:
    """What a criterion may look at beside the phase.

    Attributes
    ----------
    bed : the bed of the phase
    setting : the setting that is read
    fluid : water and grains
    flow_depth_m, slope : stated range, from the bed, the log or the user, None when not stated
    whole_bed : True when the bed is one phase
    """

    bed: Bed
    setting: Setting
    fluid: Fluid
    flow_depth_m: tuple[float, float] | None = None
    slope: tuple[float, float] | None = None
    whole_bed: bool = True


@dataclass(frozen=True, slots=True)
class Criterion:
    """One rule that limits velocity or depth.

    Attributes
    ----------
    id, label : name in the registry, words in the ledger
    kind : how the engine evaluates it, see the module's text
    side : "band", or "above" / "below" for a bound on one side only
    reads : function of (phase, context) that gives the reading or None
    words : function of the reading that says in words what it means
    source, validity, status : as the ledger prints them
    log_likelihood : for the kind "cells" only
    formulas : ids of the registered formulas it rests on

    Examples
    --------
    A criterion of one's own: flutes are cut by fast currents (the number is invented).

    >>> import numpy as np
    >>> flutes = Criterion(
    ...     id="flutes", label="flutes were cut", kind="cells", side="above", source="ours",
    ...     validity="soles of sandstones", words=lambda reading: "the flow cut flutes",
    ...     reads=lambda phase, context: "cut" if any(
    ...         s.term == "flutes" for s in context.bed.structures) else None,
    ...     log_likelihood=lambda reading, cells: -np.logaddexp(
    ...         0.0, -1.702 * np.log10(cells.velocity_m_s / 1.0) / 0.2),
    ... )
    >>> flutes.side
    'above'

    `CRITERIA.register("flutes", flutes)` makes it take part in every later `infer_flow`.
    """

    id: str
    label: str
    kind: Kind
    side: Side
    reads: Callable[[Phase, Context], Hashable | None]
    words: Callable[[Any], str]
    source: str
    validity: str
    status: str = "ours"
    log_likelihood: Callable[[Any, Cells], Array] | None = None
    formulas: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        if self.kind not in ("state", "clast", "depth", "cells"):
            raise ArgumentError("kind", self.kind, '"state", "clast", "depth" or "cells"')
        if (self.kind == "cells") != (self.log_likelihood is not None):
            raise ArgumentError(
                "log_likelihood", self.log_likelihood, 'given for the kind "cells" and no other'
            )


CRITERIA: Registry[Criterion] = Registry("criterion", ("logkit.flow.builtin_criteria",))
"""All criteria by id, in the order in which they are asked; a later one gives way in a conflict."""


@dataclass(frozen=True, slots=True)
class CriterionText:
    """What criteria.toml says of a criterion: label, source, validity, status, ids of its formulas."""

    label: str
    source: str
    validity: str
    status: str
    formulas: tuple[str, ...]


@cache
def criterion_texts() -> dict[str, CriterionText]:
    """The texts of criteria.toml by id.

    Raises
    ------
    DataFileError : an entry lacks a field or has one that is not known
    """
    file = read_flow_file("criteria.toml")
    texts = {}
    for id, entry in file.data.get("criteria", {}).items():
        try:
            texts[id] = CriterionText(**entry | {"formulas": tuple(entry.get("formulas", ()))})
        except TypeError as problem:
            raise file.fail(f"{id}: {problem}.", f"criteria.{id}") from None
    return texts


@cache
def state_readings() -> dict[str, tuple[str, ...]]:
    """Bed states of structures for which the vocabulary names none or several."""
    from logkit.hydraulics.bedstates import STATES

    file = read_flow_file("criteria.toml")
    readings = {}
    for structure, states in file.data.get("readings", {}).items():
        for state in states:
            if state not in STATES:
                raise file.fail(f"{structure}: no bed state {state!r}.", "readings", structure)
        readings[structure] = tuple(states)
    return readings
