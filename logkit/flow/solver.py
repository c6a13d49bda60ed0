"""Answers many beds at once: slices times depth evidence, quantiles, leave-one-out velocities, conflict.

A `Batch` is what the beds say, as arrays; how a bed comes to say it belongs to `reading`.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, replace
from functools import partial

import numpy as np

from logkit.flow.criteria import CRITERIA, DepthReading
from logkit.flow.grid import LEVELS, Array, Grid, quantiles
from logkit.flow.settings import Settings, flow_settings
from logkit.flow.slices import Signature, SliceStore
from logkit.flow.states import MOVING

LEDGER_LEVELS = (0.10, 0.50, 0.90)
STATE_SHARE = 0.8
"""Share of the mass from which one of the states that can make a structure is named."""

CHUNK = 2048
"""Beds answered in one pass, so that memory does not grow with the log."""


@dataclass(frozen=True, slots=True)
class Case:
    """What one phase says: its signature and its evidence on depth.

    Attributes
    ----------
    depths : (criterion id, reading) of the criteria of the kind "depth"
    """

    signature: Signature
    depths: tuple[tuple[str, DepthReading], ...] = ()


@dataclass(frozen=True)
class Batch:
    """Many cases as arrays. A clast between two nodes of the grid makes two columns of one bed.

    Attributes
    ----------
    signatures : the different signatures, clasts on nodes of the grid
    which, bed, share : signature, bed and weight of each column; the first columns are the beds in order
    ln_depth, sd_below, sd_above : depth readings, shape (readings, beds); infinite spreads where there is none
    """

    signatures: tuple[Signature, ...]
    which: Array
    bed: Array
    share: Array
    ln_depth: Array
    sd_below: Array
    sd_above: Array

    @property
    def beds(self) -> int:
        """Number of cases."""
        return self.ln_depth.shape[1]

    @property
    def has_depth(self) -> Array:
        """Where there is a depth reading, shape (readings, beds)."""
        return np.isfinite(self.sd_below) | np.isfinite(self.sd_above)


@dataclass(frozen=True)
class Answer:
    """Quantiles of all beds, SI, shape (levels, beds), and the mass on the rim of the grid."""

    velocity: Array
    flow_depth: Array
    shear_velocity: Array
    total_shear_velocity: Array
    froude: Array
    rim: Array


@dataclass(frozen=True)
class LeftOut:
    """Velocity quantiles with one piece of evidence left out.

    Attributes
    ----------
    evidence : criterion id, "setting" for the prior, or "depth <slot>"
    beds : the beds that have it
    velocity : quantiles at `LEDGER_LEVELS` without it, shape (3, beds)
    """

    evidence: str
    beds: Array
    velocity: Array


@dataclass(frozen=True)
class Disagreement:
    """How well the criteria of each bed agree; shape (beds,).

    Attributes
    ----------
    agreement : log10 of how much more often the criteria hold together than if independent; negative = clash
    support : best joint likelihood over all flows, each criterion scaled to its own best
    expected : best likelihood of the structure in this size, not scaled
    """

    agreement: Array
    support: Array
    expected: Array


class Solver:
    """Answers batches on one grid.

    Parameters
    ----------
    grid : the cells
    settings : priors and relations; the shipped ones by default
    """

    def __init__(self, grid: Grid | None = None, settings: Settings | None = None) -> None:
        self.grid = grid or Grid()
        self.slices = SliceStore(self.grid, settings or flow_settings())

    def compile(self, cases: Sequence[Case]) -> Batch:
        """The arrays of many cases.

        Parameters
        ----------
        cases : one for each phase
        """
        known: dict[Signature, int] = {}
        first: list[int] = []
        second: list[tuple[int, int, float]] = []
        share = np.ones(len(cases), dtype=np.float32)
        slots = max((len(c.depths) for c in cases), default=0)
        ln_depth = np.zeros((slots, len(cases)))
        below = np.full((slots, len(cases)), np.inf)
        above = np.full((slots, len(cases)), np.inf)
        for bed, case in enumerate(cases):
            parts = self.slices.on_nodes(case.signature)
            first.append(known.setdefault(parts[0][0], len(known)))
            for signature, weight in parts[1:]:
                share[bed] = parts[0][1]
                second.append((known.setdefault(signature, len(known)), bed, weight))
            for slot, (_, reading) in enumerate(case.depths):
                ln_depth[slot, bed] = math.log(reading.median_m)
                below[slot, bed], above[slot, bed] = reading.sd_ln_below, reading.sd_ln_above
        return Batch(
            tuple(known),
            np.array([*first, *(w for w, _, _ in second)], dtype=np.intp),
            np.array([*range(len(cases)), *(b for _, b, _ in second)], dtype=np.intp),
            np.concatenate([share, np.array([s for _, _, s in second], dtype=np.float32)]),
            ln_depth, below, above,
        )  # fmt: skip

    def solve(self, batch: Batch) -> Answer:
        """Quantiles at `LEVELS` of velocity, depth, shear velocities and Froude number."""
        names = ("velocity", "shear_velocity", "froude", "total_shear_velocity")
        result = {name: np.full((len(LEVELS), batch.beds), np.nan) for name in (*names, "flow_depth")}
        rim = np.zeros(batch.beds)
        grid, count = self.grid, self.grid.velocity.count
        axes = (grid.velocity, grid.shear, grid.froude, grid.shear)
        by_depth = np.array([self.slices.velocity(s).sum(axis=0) for s in batch.signatures])
        by_depth = by_depth.reshape(len(batch.signatures), grid.depth.count)
        for chunk in _chunks(batch):
            beds = chunk.beds
            weights = self.depth_weights(batch, beds)
            mass = self._mixed(batch, chunk, weights, self.slices.stack)
            depth = _gathered(by_depth, batch, chunk) * weights
            for row, (name, axis) in enumerate(zip(names, axes, strict=True)):
                result[name][:, beds] = quantiles(mass[row * count : (row + 1) * count], axis)
            result["flow_depth"][:, beds] = quantiles(depth, grid.depth)
            with np.errstate(invalid="ignore", divide="ignore"):
                rim[beds] = (mass[0] + mass[count - 1] + depth[0] + depth[-1]) / depth.sum(axis=0)
        return Answer(**result, rim=rim)

    def plane(self, signature: Signature, sharp: bool = False) -> Array:
        """Prior times likelihood of one signature, shape (velocity, depth)."""
        take = self.slices.sharp if sharp else self.slices.velocity
        result: Array = sum(np.float32(w) * take(s) for s, w in self.slices.on_nodes(signature))  # type: ignore[assignment]
        return result

    def velocity_mass(self, batch: Batch, sharp: bool = False) -> Array:
        """Posterior mass of the velocity cells, shape (velocity, beds); columns sum to one.

        Parameters
        ----------
        batch : the beds
        sharp : without the allowances for local velocities and for structures that say nothing
        """
        take = self.slices.sharp if sharp else self.slices.velocity
        result = np.empty((self.grid.velocity.count, batch.beds), dtype=np.float32)
        for chunk in _chunks(batch):
            beds = chunk.beds
            result[:, beds] = self._mixed(batch, chunk, self.depth_weights(batch, beds), take)
        normed: Array = result / np.maximum(result.sum(axis=0), np.float32(1e-30))
        return normed

    def leave_one_out(self, batch: Batch) -> tuple[LeftOut, ...]:
        """Velocity quantiles of every bed without each of its criteria, and without the prior."""
        found = []
        for label, variant, beds, slot in _left_out(batch):
            velocity = np.empty((len(LEDGER_LEVELS), len(beds)))
            for chunk in _chunks(variant):
                places = chunk.beds
                weights = self.depth_weights(batch, beds[places], slot)
                mass = self._mixed(variant, chunk, weights, self.slices.velocity)
                velocity[:, places] = quantiles(mass, self.grid.velocity, LEDGER_LEVELS)
            found.append(LeftOut(label, beds, velocity))
        return tuple(found)

    def disagreement(self, batch: Batch) -> Disagreement:
        """The conflict test of every bed, from sharp likelihoods."""
        count = self.grid.depth.count
        everything = [self.slices.evidence(s) for s in batch.signatures]
        by_depth = np.array([e.by_depth for e in everything]).reshape(-1, count)
        peaks = np.array([e.peak for e in everything]).reshape(-1, count)
        alone = np.array([self.slices.alone(s) for s in batch.signatures]).reshape(-1, 3)
        believed = np.array([self.slices.believed_depth(s.prior) for s in batch.signatures]).reshape(
            -1, count
        )
        agreement, ln_support, expected = (np.zeros(batch.beds) for _ in range(3))
        for chunk in _chunks(batch):
            beds = chunk.beds
            weights = self.depth_weights(batch, beds)
            joint = (_gathered(by_depth, batch, chunk) * weights).sum(axis=0)
            best = np.max(_gathered(peaks, batch, chunk) * weights, axis=0)
            numbers = _gathered(alone, batch, chunk)
            agreement[beds] = np.log10(np.maximum(joint, 1e-300)) - numbers[0]
            ln_support[beds] = np.log10(np.maximum(best, 1e-30)) - numbers[1]
            expected[beds] = numbers[2]
            depth_prior = believed[batch.which[beds]].T
            for slot in range(len(batch.ln_depth)):
                only = self._weights_of(batch, beds, slot)
                mass = (depth_prior * only).sum(axis=0)
                agreement[beds] -= np.log10(np.maximum(mass, 1e-300))
                ln_support[beds] -= np.log10(np.maximum(only.max(axis=0), 1e-30))
        return Disagreement(agreement, 10.0**ln_support, expected)

    def likely_states(self, batch: Batch) -> list[str]:
        """The bed state of every bed: the structure's, or the one of several that has `STATE_SHARE` of the mass.

        A bed without a structure has none, however probable a state is in its flows.
        """
        shares = np.zeros((len(batch.signatures), len(MOVING), self.grid.depth.count))
        for row, signature in enumerate(batch.signatures):
            for place, (id, reading) in enumerate(signature.factors):
                if CRITERIA[id].kind != "state":
                    continue
                for column, state in enumerate(MOVING):
                    if state in reading:  # type: ignore[operator]
                        factors = list(signature.factors)
                        factors[place] = (id, (state,))
                        one = replace(signature, factors=tuple(factors))
                        shares[row, column] = self.slices.evidence(one).by_depth
        flat = shares.reshape(len(batch.signatures), -1)
        names = [""] * batch.beds
        for chunk in _chunks(batch):
            beds = chunk.beds
            weights = self.depth_weights(batch, beds)
            mass = _gathered(flat, batch, chunk).reshape(len(MOVING), -1, len(beds))
            by_bed = (mass * weights).sum(axis=1)
            sure = by_bed.max(axis=0) >= np.maximum(STATE_SHARE * by_bed.sum(axis=0), 1e-30)
            best = by_bed.argmax(axis=0)
            for bed, state in zip(beds[sure].tolist(), best[sure].tolist(), strict=True):
                names[bed] = MOVING[state]
        return names

    def depth_weights(
        self, batch: Batch, beds: Array | slice | None = None, leave: int | None = None
    ) -> Array:
        """Likelihood of the depth evidence, shape (depth, beds).

        Parameters
        ----------
        batch : the beds
        beds : only these beds
        leave : slot of the reading to leave out
        """
        chosen = slice(None) if beds is None else beds
        count = len(np.arange(batch.beds)[chosen])
        result = np.ones((self.grid.depth.count, count), dtype=np.float32)
        for slot in range(len(batch.ln_depth)):
            if slot != leave:
                result *= self._weights_of(batch, chosen, slot)
        return result

    def _weights_of(self, batch: Batch, beds: Array | slice, slot: int) -> Array:
        nodes = self.grid.depth.ln_nodes.astype(np.float32)[:, None]
        offset = nodes - batch.ln_depth[slot, beds].astype(np.float32)
        below = (1.0 / batch.sd_below[slot, beds]).astype(np.float32)
        above = (1.0 / batch.sd_above[slot, beds]).astype(np.float32)
        offset *= np.where(offset < 0, below, above)
        np.square(offset, out=offset)
        offset *= np.float32(-0.5)
        result: Array = np.exp(offset, out=offset)
        return result

    def _mixed(
        self, batch: Batch, chunk: _Chunk, weights: Array, take: Callable[[Signature], Array]
    ) -> Array:
        """Slice times depth evidence of some beds, shape (rows of the slice, beds).

        Parameters
        ----------
        batch, chunk : the beds
        weights : depth evidence of the beds, shape (depth, beds)
        take : gives the slice of a signature
        """
        mass = self._products(batch, chunk.beds, weights, take)
        if len(chunk.extra):
            mass[:, chunk.place] += self._products(batch, chunk.extra, weights[:, chunk.place], take)
        return mass

    def _products(
        self, batch: Batch, columns: Array, weights: Array, take: Callable[[Signature], Array]
    ) -> Array:
        """Slice times depth evidence of columns that are sorted by signature."""
        which = batch.which[columns]
        inputs = weights * batch.share[columns]
        starts = np.flatnonzero(np.r_[True, np.diff(which) != 0])
        stops = np.r_[starts[1:], len(which)]
        mass = np.empty((len(take(batch.signatures[which[0]])), len(which)), dtype=np.float32)
        for start, stop in zip(starts.tolist(), stops.tolist(), strict=True):
            mass[:, start:stop] = take(batch.signatures[which[start]]) @ inputs[:, start:stop]
        return mass


@dataclass(frozen=True, slots=True)
class _Chunk:
    """Some beds, sorted by signature, with the second columns of those that have two.

    beds : the beds, which are their first columns as well
    extra : second columns, sorted by signature
    place : place of the bed of each second column among `beds`
    """

    beds: Array
    extra: Array
    place: Array


def _chunks(batch: Batch) -> Iterator[_Chunk]:
    """All beds, a limited number at a time."""
    order = np.argsort(batch.which[: batch.beds], kind="stable")
    position = np.empty(batch.beds, dtype=np.intp)
    position[order] = np.arange(batch.beds)
    extra = batch.beds + np.argsort(batch.which[batch.beds :], kind="stable")
    at = position[batch.bed[extra]]
    for start in range(0, batch.beds, CHUNK):
        inside = (at >= start) & (at < start + CHUNK)
        yield _Chunk(order[start : start + CHUNK], extra[inside], at[inside] - start)


def _gathered(table: Array, batch: Batch, chunk: _Chunk) -> Array:
    """Rows of a table by signature, mixed for each bed; shape (values, beds)."""
    result: Array = table[batch.which[chunk.beds]].T * batch.share[chunk.beds]
    if len(chunk.extra):
        result[:, chunk.place] += table[batch.which[chunk.extra]].T * batch.share[chunk.extra]
    return result


def _left_out(batch: Batch) -> Iterator[tuple[str, Batch, Array, int | None]]:
    """Each kind of evidence: its name, the beds that have it as a batch without it, and the depth slot."""
    ids = dict.fromkeys(id for s in batch.signatures for id, _ in s.factors)
    for id in ids:
        has = np.array([any(f == id for f, _ in s.factors) for s in batch.signatures], dtype=bool)
        yield id, *_variant(batch, has, partial(Signature.without, criterion=id)), None
    informed = np.array([s.prior != "off" for s in batch.signatures], dtype=bool)
    if informed.any():
        yield "setting", *_variant(batch, informed, Signature.unbiased), None
    everything = np.ones(len(batch.signatures), dtype=bool)
    for slot in range(len(batch.ln_depth)):
        has_slot = batch.has_depth[slot]
        if has_slot.any():
            yield f"depth {slot}", *_variant(batch, everything, lambda s: s, has_slot), slot


def _variant(
    batch: Batch, has: Array, change: Callable[[Signature], Signature], chosen: Array | None = None
) -> tuple[Batch, Array]:
    """The beds whose signature has something, as a batch of their own with changed signatures."""
    wanted = has[batch.which[: batch.beds]] if chosen is None else chosen
    beds = np.flatnonzero(wanted)
    known: dict[Signature, int] = {}
    target = np.array(
        [
            known.setdefault(change(s), len(known)) if h else -1
            for s, h in zip(batch.signatures, has, strict=True)
        ],
        dtype=np.intp,
    )
    place = np.full(batch.beds, -1, dtype=np.intp)
    place[beds] = np.arange(len(beds))
    extra = batch.beds + np.flatnonzero(wanted[batch.bed[batch.beds :]])
    columns = np.concatenate([beds, extra])
    return (
        Batch(
            tuple(known), target[batch.which[columns]], place[batch.bed[columns]], batch.share[columns],
            batch.ln_depth[:, beds], batch.sd_below[:, beds], batch.sd_above[:, beds],
        ),
        beds,
    )  # fmt: skip
