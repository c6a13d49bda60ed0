"""Registries: named things that can be looked up, listed and extended; and the record of a formula.

A formula is one record: id, function, inputs and output with units and dimensions, source with equation,
valid range, scatter and status. Tests, the ledger, the report and `logkit sources` all read that record.
Nothing of geology belongs here; the formulas register themselves from the modules named in `FAMILIES`.
"""

from __future__ import annotations

import functools
import inspect
import warnings
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field
from importlib import import_module
from typing import Any, Generic, TypeVar

import numpy as np

from logkit.errors import ArgumentError, LogkitError, UnknownNameError
from logkit.units import NONE, SUFFIXES, Dimension, Unit, split_suffix

T = TypeVar("T")
F = TypeVar("F", bound=Callable[..., Any])

GRAVITY_M_S2 = 9.81
"""Standard acceleration of gravity in every formula, m/s2."""


BLOCK = 16384
"""Values that an elementwise formula takes at a time."""


class Registry(Generic[T]):
    """Things of one kind by name. Others can add their own; an error lists the known names.

    Parameters
    ----------
    kind : what the things are, for error messages ("criterion", "log writer")
    modules : modules that add entries when imported; loaded on the first look-up
    """

    def __init__(self, kind: str, modules: tuple[str, ...] = ()) -> None:
        self.kind = kind
        self._modules = modules
        self._items: dict[str, T] = {}
        self._loaded = False

    def register(self, name: str, item: T, *, replace: bool = False) -> T:
        """Add an item under a name.

        Raises
        ------
        LogkitError : the name is taken and `replace` is False
        """
        if name in self._items and not replace:
            raise LogkitError(f"A {self.kind} called {name!r} is registered already.", "Pass replace=True.")
        self._items[name] = item
        return item

    def __getitem__(self, name: str) -> T:
        self._load()
        try:
            return self._items[name]
        except KeyError:
            raise UnknownNameError(self.kind, name, self._items) from None

    def __contains__(self, name: str) -> bool:
        self._load()
        return name in self._items

    def __iter__(self) -> Iterator[str]:
        self._load()
        return iter(self._items)

    def __len__(self) -> int:
        self._load()
        return len(self._items)

    def items(self) -> Iterator[tuple[str, T]]:
        """Name and item, in the order they were registered."""
        self._load()
        return iter(tuple(self._items.items()))

    def _load(self) -> None:
        if not self._loaded:
            self._loaded = True
            for module in self._modules:
                import_module(module)


FAMILIES: dict[str, tuple[str, ...]] = {
    "grain": ("logkit.grains",),
    "water": ("logkit.hydraulics.water",),
    "settling": ("logkit.hydraulics.settling", "logkit.hydraulics.spheres"),
    "threshold": (
        "logkit.hydraulics.threshold",
        "logkit.hydraulics.critical_velocity",
        "logkit.hydraulics.mixtures",
        "logkit.hydraulics.competence",
        "logkit.hydraulics.forces",
    ),
    "suspension": ("logkit.hydraulics.suspension",),
    "resistance": ("logkit.hydraulics.resistance", "logkit.hydraulics.manning"),
    "bedforms": ("logkit.hydraulics.bedforms", "logkit.hydraulics.bedstates", "logkit.hydraulics.ripples"),
    "depth": ("logkit.hydraulics.depth",),
    "slope": ("logkit.hydraulics.slope",),
    "waves": ("logkit.hydraulics.waves", "logkit.hydraulics.wave_ripples"),
    "wind": ("logkit.hydraulics.wind",),
    "turbidity": ("logkit.hydraulics.turbidity",),
    "rest": ("logkit.hydraulics.rest",),
    "stat": ("logkit.trends.formulas",),
    "geometry": ("logkit.trends.geometry",),
}
"""First part of a formula id -> the modules that register the formulas of that family."""


@dataclass(frozen=True, slots=True)
class Quantity:
    """One input or output of a formula.

    Attributes
    ----------
    name : name in the function's signature, ending in its SI unit (`d_m`), or `value` for an output
    unit : unit symbol; "1" for a pure number, "" for text, lists and other things that have none
    meaning : what it is, in words, with the textbook symbol
    dimension : exponents of length, time, mass
    """

    name: str
    unit: str
    meaning: str
    dimension: Dimension = NONE


@dataclass(frozen=True, slots=True)
class Limit:
    """A range outside of which a formula was not tested by its authors.

    Attributes
    ----------
    of : what is limited, in words or as the argument's public name ("d_mm", "h/D90")
    low, high : range, None where open, in the unit of `of`
    measure : function of the SI keyword arguments, defaults included, that gives the limited number
    """

    of: str
    low: float | None
    high: float | None
    measure: Callable[..., Any]

    def __str__(self) -> str:
        if self.low is None:
            return f"{self.of} up to {self.high:g}"
        if self.high is None:
            return f"{self.of} from {self.low:g}"
        return f"{self.of} {self.low:g} to {self.high:g}"


@dataclass(frozen=True, slots=True)
class Formula:
    """The record of one published or own formula."""

    id: str
    function: Callable[..., Any]
    inputs: tuple[Quantity, ...]
    output: Quantity
    equation: str
    source: str
    locator: str
    domain: str
    scatter: str
    status: str
    homogeneous: bool
    limits: tuple[Limit, ...] = ()
    pitfalls: str = ""
    resolve: Callable[[dict[str, Any]], dict[str, Any]] | None = None

    @property
    def family(self) -> str:
        """First part of the id."""
        return self.id.split(".", 1)[0]


class ValidityNote(UserWarning):
    """A formula was used outside the range its authors tested; the message names formula and limit."""


@dataclass(frozen=True, slots=True)
class Assessed:
    """A formula's value with what must be said about it.

    Attributes
    ----------
    value : float or array in `unit`; NaN where an input was NaN
    unit : unit symbol of the value
    notes : one sentence for each limit that was left, naming formula and limit
    outside : True where any limit was left, shape of the value
    missing : True where an input was NaN, shape of the value
    """

    value: Any
    unit: str
    notes: tuple[str, ...]
    outside: Any = field(default=False)
    missing: Any = field(default=False)


class FormulaRegistry(Registry[Formula]):
    """All formulas by id; loads a family's module when one of its ids is asked for."""

    def __init__(self) -> None:
        super().__init__("formula")
        self._families: set[str] = set()

    def load_family(self, family: str) -> None:
        """Import the module that registers a family, once."""
        if family in FAMILIES and family not in self._families:
            self._families.add(family)
            for module in FAMILIES[family]:
                import_module(module)

    def __getitem__(self, name: str) -> Formula:
        self.load_family(name.split(".", 1)[0])
        if name in self._items:
            return self._items[name]
        return super().__getitem__(name)

    def _load(self) -> None:
        for family in FAMILIES:
            self.load_family(family)


FORMULAS = FormulaRegistry()


def formula(
    id: str,
    *,
    gives: str,
    unit: str,
    equation: str,
    source: str,
    status: str,
    inputs: Mapping[str, str],
    locator: str = "",
    domain: str = "",
    scatter: str = "not stated",
    limits: tuple[Limit, ...] = (),
    positive: tuple[str, ...] = (),
    not_negative: tuple[str, ...] = (),
    homogeneous: bool = True,
    pitfalls: str = "",
    resolve: Callable[[dict[str, Any]], dict[str, Any]] | None = None,
    dimension: Dimension | None = None,
    elementwise: bool = False,
) -> Callable[[F], F]:
    """Register a function as a formula and guard its arguments.

    The function takes and returns SI; `unit` is the unit in which `evaluate` gives the value.

    Parameters
    ----------
    id : handbook key, `family.name`
    gives : what the value is, in words with its symbol
    unit : unit of the value as shown ("m/s", "mm", "1", "" for anything that is not a number)
    equation : formula in plain text
    source, locator : reference key ("ours" for an own construction) and equation, table or page
    status : "published", "secondary", "memory" or "ours"
    inputs : meaning of each argument by its name in the signature; other entries are passed over
    limits : tested ranges; leaving one gives a note
    positive, not_negative : arguments that must be > 0 or >= 0
    homogeneous : False for an empirical formula whose coefficients carry dimensions
    resolve : turns public inputs into the function's own (for example a temperature into a viscosity)
    dimension : dimension of the output where the unit symbol does not tell it
    elementwise : each value depends on the arguments at its own place only; long arrays are then taken in
        blocks that stay in the processor's cache
    """

    def decorate(function: F) -> F:
        names = [n for n in inspect.signature(function).parameters if n in inputs]
        quantities = tuple(_input_quantity(name, inputs[name]) for name in names)
        guarded = _guard(_in_blocks(function) if elementwise else function, positive, not_negative)
        record = Formula(
            id=id,
            function=guarded,
            inputs=quantities,
            output=Quantity("value", unit, gives, _unit_dimension(unit) if dimension is None else dimension),
            equation=equation,
            source=source,
            locator=locator,
            domain=domain,
            scatter=scatter,
            status=status,
            homogeneous=homogeneous,
            limits=limits,
            pitfalls=pitfalls,
            resolve=resolve,
        )
        FORMULAS.register(id, record)
        return guarded

    return decorate


def evaluate(id: str, **inputs: Any) -> Any:
    """The value of a formula from inputs by their public names and units.

    Parameters
    ----------
    id : formula id, `settling.ferguson_church`
    inputs : `d_mm`, `temp_c`, `flow_depth_m` …; the suffix is the unit, no suffix is a pure number

    Returns
    -------
    float or array in the unit of the record. A `ValidityNote` is warned where a limit was left.

    Raises
    ------
    UnknownNameError : no such formula
    ArgumentError : an input that the formula does not take, or one it needs and did not get

    Examples
    --------
    >>> evaluate("grain.diameter_from_phi", phi=2)
    0.25
    """
    result = assess(id, **inputs)
    for note in result.notes:
        warnings.warn(note, ValidityNote, stacklevel=2)
    return result.value


def assess(id: str, **inputs: Any) -> Assessed:
    """As `evaluate`, with the notes and masks beside the value instead of warnings."""
    record = FORMULAS[id]
    arguments = _arguments(record, inputs)
    value = record.function(**arguments)
    measured_on = _defaults(record.function) | arguments
    unit = _shown_unit(record.output.unit)
    if unit is not None and unit.factor != 1.0:
        value = unit.from_si(value)
    numbers = [np.asarray(v, dtype=float) for v in arguments.values() if _is_number(v)]
    try:
        missing: Any = functools.reduce(np.logical_or, [np.isnan(n) for n in numbers], np.False_)
    except ValueError:  # lists of unlike length (percentile tables, azimuths): no common mask
        missing = False
    notes: list[str] = []
    outside: Any = np.False_
    for limit in record.limits:
        try:
            measured = np.asarray(limit.measure(**measured_on), dtype=float)
        except TypeError:
            continue
        left = np.zeros(measured.shape, dtype=bool)
        if limit.low is not None:
            left |= measured < limit.low * (1 - 1e-12)
        if limit.high is not None:
            left |= measured > limit.high * (1 + 1e-12)
        if left.any():
            share = "" if left.ndim == 0 else f" for {int(left.sum())} of {left.size} values"
            notes.append(f"{record.id}: outside its tested range{share} ({limit}).")
            outside = np.logical_or(outside, left)
    return Assessed(_plain(value), record.output.unit, tuple(notes), _plain(outside), _plain(missing))


def _arguments(record: Formula, inputs: dict[str, Any]) -> dict[str, Any]:
    """The function's own SI arguments from the inputs as a person names them."""
    known = inspect.signature(record.function).parameters
    given = {name: _number(value) for name, value in inputs.items()}
    if record.resolve is not None:
        given = record.resolve(given)
    stems = {split_suffix(name)[0]: name for name in known}
    arguments: dict[str, Any] = {}
    for name, value in given.items():
        if name in known:
            arguments[name] = value
            continue
        stem, unit = split_suffix(name)
        target = stems.get(stem)
        wanted = split_suffix(target)[1] if target else None
        if target is None or unit is None or wanted is None or unit.dimension != wanted.dimension:
            raise ArgumentError(name, value, f"one of the inputs of {record.id}: {', '.join(known)}")
        if not _is_number(value):
            raise ArgumentError(name, value, f"a number or numbers in {unit.symbol}")
        arguments[target] = wanted.from_si(unit.to_si(value))
    for name, parameter in known.items():
        if name not in arguments and parameter.default is inspect.Parameter.empty:
            raise ArgumentError(name, None, f"given: {record.id} needs {', '.join(known)}")
    return arguments


def _in_blocks(function: F) -> F:
    order = tuple(inspect.signature(function).parameters)

    @functools.wraps(function)
    def blocked(*args: Any, **kwargs: Any) -> Any:
        named = dict(zip(order, args, strict=False)) | kwargs
        long = {n: v for n, v in named.items() if isinstance(v, np.ndarray) and v.size > 1}
        shapes = {v.shape for v in long.values()}
        if len(shapes) != 1 or (size := next(iter(long.values())).size) <= 2 * BLOCK:
            return function(*args, **kwargs)
        flat = {n: v.reshape(-1) for n, v in long.items()}
        parts: Any = None
        for begin in range(0, size, BLOCK):
            piece = slice(begin, begin + BLOCK)
            part = function(**named | {n: v[piece] for n, v in flat.items()})
            if parts is None:
                kind = object if part.dtype.kind == "U" else part.dtype
                parts = np.empty((*part.shape[:-1], size), dtype=kind)
            parts[..., piece] = part
        if parts.dtype == object:
            parts = parts.astype(str)
        return parts.reshape(*parts.shape[:-1], *shapes.pop())

    return blocked  # type: ignore[return-value]


def _defaults(function: Callable[..., Any]) -> dict[str, Any]:
    parameters = inspect.signature(function).parameters
    return {n: p.default for n, p in parameters.items() if p.default is not inspect.Parameter.empty}


def _guard(function: F, positive: tuple[str, ...], not_negative: tuple[str, ...]) -> F:
    if not positive and not not_negative:
        return function
    order = tuple(inspect.signature(function).parameters)

    @functools.wraps(function)
    def guarded(*args: Any, **kwargs: Any) -> Any:
        named = dict(zip(order, args, strict=False)) | kwargs
        for name in positive:
            if name in named and np.any(_numbers(name, named[name]) <= 0):
                raise ArgumentError(name, named[name], "above zero")
        for name in not_negative:
            if name in named and np.any(_numbers(name, named[name]) < 0):
                raise ArgumentError(name, named[name], "zero or above")
        return function(*args, **kwargs)

    return guarded  # type: ignore[return-value]


def _numbers(name: str, value: Any) -> np.ndarray:
    try:
        return np.asarray(value, dtype=float)
    except (TypeError, ValueError):
        raise ArgumentError(name, value, "a number or numbers") from None


def _input_quantity(name: str, meaning: str) -> Quantity:
    unit = split_suffix(name)[1]
    return Quantity(name, unit.symbol if unit else "1", meaning, unit.dimension if unit else NONE)


def _shown_unit(symbol: str) -> Unit | None:
    return next((u for u in SUFFIXES.values() if u.symbol == symbol), None)


def _unit_dimension(symbol: str) -> Dimension:
    unit = _shown_unit(symbol)
    return unit.dimension if unit else NONE


def _is_number(value: Any) -> bool:
    return isinstance(value, int | float | np.ndarray | np.generic) and not isinstance(value, bool)


def _number(value: Any) -> Any:
    """Lists of numbers become arrays, so that formulas are vectorised over any sequence."""
    if isinstance(value, list | tuple) and value and all(isinstance(v, int | float) for v in value):
        return np.asarray(value, dtype=float)
    return value


def _plain(value: Any) -> Any:
    """A zero-dimensional array as a Python number."""
    if isinstance(value, np.generic) or (isinstance(value, np.ndarray) and value.ndim == 0):
        return value.item()
    return value
