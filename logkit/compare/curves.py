"""Curves that were measured in the hole, read from LAS files with `lasio`. Numbers on depths; no beds."""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from logkit.errors import LogkitError, UnknownNameError
from logkit.units import METRES

if TYPE_CHECKING:
    from numpy.typing import NDArray


@dataclass(frozen=True, eq=False, slots=True)
class Curve:
    """One curve of a well.

    Attributes
    ----------
    mnemonic, unit, description : as the file writes them
    depth_m : m along the hole, increasing
    values : in `unit`, NaN where the file has its null value
    source : name of the file
    """

    mnemonic: str
    unit: str
    depth_m: NDArray[np.float64]
    values: NDArray[np.float64]
    description: str = ""
    source: str = ""

    def moved(self, position_m: NDArray[np.float64]) -> Curve:
        """The same values on other positions."""
        return replace(self, depth_m=position_m)


def read_curves(path: str | Path, names: tuple[str, ...] = ()) -> tuple[Curve, ...]:
    """The curves of a LAS file, depths in metres.

    Parameters
    ----------
    names : mnemonics wanted, in any case; all by default

    Raises
    ------
    LogkitError : no such file, not a LAS file, or an index without a unit of length
    UnknownNameError : a wanted curve is not in the file
    """
    import lasio

    file = Path(path)
    if not file.is_file():
        raise LogkitError(f"There is no file {str(file)!r}.", "Check the name of the LAS file.")
    try:
        las = lasio.read(str(file), ignore_header_errors=False)
        index = np.asarray(las.index, dtype=float)
    except Exception as problem:  # lasio raises many kinds, down to IndexError, on damaged files
        raise LogkitError(
            f"{file.name} cannot be read as a LAS file: {problem or type(problem).__name__}.",
            "Check that it is LAS 2.0 text with ~V, ~W, ~C and ~A sections.",
        ) from None
    unit = str(las.curves[0].unit).strip().casefold()
    factor = {"f": 0.3048, "feet": 0.3048, "metres": 1.0, "meters": 1.0}.get(unit, METRES.get(unit))
    if factor is None:
        raise LogkitError(
            f"{file.name}: the index {las.curves[0].mnemonic!r} has the unit {unit!r}.",
            "Only curves on depths in metres or feet can stand beside a log.",
        )
    found = {str(c.mnemonic).casefold(): c for c in las.curves[1:]}
    wanted = [n.casefold() for n in names] or list(found)
    for name in wanted:
        if name not in found:
            raise UnknownNameError("curve", name, found, where=file.name)
    order = np.argsort(index, kind="stable")
    curves = []
    for name in wanted:
        values = np.asarray(found[name].data)
        if values.dtype.kind not in "fiu":
            continue
        text = str(found[name].descr or "")
        curves.append(
            Curve(
                str(found[name].mnemonic),
                str(found[name].unit or ""),
                index[order] * factor,
                values[order].astype(float),
                text,
                file.name,
            )
        )
    return tuple(curves)
