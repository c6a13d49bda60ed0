"""Answers many beds at once: slices times depth evidence, quantiles, leave-one-out velocities, conflict.

A `Batch` is what the beds say, as arrays; how a bed comes to say it belongs to `reading`.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

import numpy as np

from logkit.flow.criteria import CRITERIA, DepthReading
from logkit.flow.grid import LEVELS, Array, Grid, quantiles
from logkit.flow.slices import Signature, SliceStore
from logkit.flow.states import MOVING

LEDGER_LEVELS = (0.10, 0.50, 0.90)
CHUNK = 8192
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
    """Many cases as arrays.

    Attributes
    ----------
    signatures : the different signatures
    which : index of each bed's signature
    ln_depth, sd_below, sd_above : depth readings, shape (readings, beds); infinite spreads where there is none
    has_depth : where there is a reading, shape (readings, beds)
    """

    signatures: tuple[Signature, ...]
    which: Array
    ln_depth: Array
    sd_below: Array
    sd_above: Array
    has_depth: Array

    @property
    def beds(self) -> int:
        """Number of cases."""
        return len(self.which)

    def part(self, beds: Array) -> Batch:
        """The batch with only some of its beds."""
        return replace(
            self, which=self.which[beds], ln_depth=self.ln_depth[:, beds], sd_below=self.sd_below[:, beds],
            sd_above=self.sd_above[:, beds], has_depth=self.has_depth[:, beds],
        )  # fmt: skip


def compile_cases(cases: Sequence[Case]) -> Batch:
    """The arrays of many cases.

    Parameters
    ----------
    cases : one for each phase
    """
    known: dict[Signature, int] = {}
    which = np.fromiter((known.setdefault(c.signature, len(known)) for c in cases), np.intp, len(cases))
    slots = max((len(c.depths) for c in cases), default=0)
    ln_depth = np.zeros((slots, len(cases)))
    below = np.full((slots, len(cases)), np.inf)
    above = np.full((slots, len(cases)), np.inf)
    for bed, case in enumerate(cases):
        for slot, (_, reading) in enumerate(case.depths):
            ln_depth[slot, bed] = np.log(reading.median_m)
            below[slot, bed], above[slot, bed] = reading.sd_ln_below, reading.sd_ln_above
    return Batch(tuple(known), which, ln_depth, below, above, np.isfinite(below) | np.isfinite(above))


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
class LedgerArrays:
    """Velocity quantiles with one piece of evidence left out.

    Attributes
    ----------
    bed, left_out : bed and what was left out: a criterion id, "depth <slot>" or "setting"
    velocity : shape (3, rows)
    """

    bed: Array
    left_out: tuple[str, ...]
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
    """

    def __init__(self, grid: Grid | None = None) -> None:
        self.grid = grid or Grid()
        self.slices = SliceStore(self.grid)

    def solve(self, batch: Batch) -> Answer:
        """Quantiles at `LEVELS` of velocity, depth, shear velocities and Froude number."""
        result = {
            name: np.full((len(LEVELS), batch.beds), np.nan)
            for name in Answer.__annotations__
            if name != "rim"
        }
        rim = np.zeros(batch.beds)
        order = np.argsort(batch.which, kind="stable")
        count, grid = self.grid.velocity.count, self.grid
        for start in range(0, len(order), CHUNK):
            beds = order[start : start + CHUNK]
            part = batch.part(beds)
            weights = self.depth_weights(part)
            mass = self._products(part, weights, self.slices.stack)
            depth = self._depth_mass(part, weights)
            axes = {"velocity": grid.velocity, "shear_velocity": grid.shear, "froude": grid.froude,
                    "total_shear_velocity": grid.shear}  # fmt: skip
            for row, (name, axis) in enumerate(axes.items()):
                result[name][:, beds] = quantiles(mass[row * count : (row + 1) * count], axis)
            result["flow_depth"][:, beds] = quantiles(depth, grid.depth)
            whole = depth.sum(axis=0)
            with np.errstate(invalid="ignore", divide="ignore"):
                rim[beds] = (mass[0] + mass[count - 1] + depth[0] + depth[-1]) / whole
        return Answer(**result, rim=rim)

    def leave_one_out(self, batch: Batch) -> LedgerArrays:
        """Velocity quantiles of every bed without each of its criteria, and without the prior."""
        rows = _LeaveOneOut(batch)
        weights = self.depth_weights(batch)
        velocity = np.empty((len(LEDGER_LEVELS), len(rows.bed)))
        order = np.argsort(rows.which, kind="stable")
        for start in range(0, len(order), CHUNK):
            chosen = order[start : start + CHUNK]
            columns = weights[:, rows.bed[chosen]]
            for slot in range(len(batch.ln_depth)):
                left = rows.slot[chosen] == slot
                if left.any():
                    columns[:, left] = self.depth_weights(batch.part(rows.bed[chosen[left]]), leave=slot)
            mass = self._products_of(rows.signatures, rows.which[chosen], columns, self.slices.velocity)
            velocity[:, chosen] = quantiles(mass, self.grid.velocity, LEDGER_LEVELS)
        return LedgerArrays(rows.bed, rows.left_out, velocity)

    def disagreement(self, batch: Batch) -> Disagreement:
        """The conflict test of every bed, from sharp likelihoods."""
        everything = [self.slices.evidence(s) for s in batch.signatures]
        by_depth = np.array([e.by_depth for e in everything]).reshape(len(everything), -1)
        peaks = np.array([e.peak for e in everything]).reshape(len(everything), -1)
        alone_sum, alone_best, expected = (np.zeros(len(everything)) for _ in range(3))
        expected += 1.0
        for row, signature in enumerate(batch.signatures):
            for id, _ in signature.factors:
                alone = self.slices.evidence(signature.only(id))
                best = max(float(alone.peak.max()), 1e-30)
                alone_sum[row] += np.log10(max(alone.by_depth.sum(), 1e-300))
                alone_best[row] += np.log10(best)
                if id == "bed_state":
                    expected[row] = best
        weights = self.depth_weights(batch)
        agreement = np.log10(np.maximum((by_depth[batch.which].T * weights).sum(axis=0), 1e-300))
        agreement -= alone_sum[batch.which]
        best_joint = np.max(peaks[batch.which].T * weights, axis=0)
        prior_depth = np.array([self.slices.prior(s.prior).sum(axis=0) for s in batch.signatures])
        ln_support = np.log10(np.maximum(best_joint, 1e-30)) - alone_best[batch.which]
        for slot in range(len(batch.ln_depth)):
            only = self._weights_of(batch, slot)
            mass = (prior_depth.reshape(len(everything), -1)[batch.which].T * only).sum(axis=0)
            agreement -= np.log10(np.maximum(mass, 1e-300))
            ln_support -= np.log10(only.max(axis=0))
        return Disagreement(agreement, 10.0**ln_support, expected[batch.which])

    def likely_states(self, batch: Batch) -> list[str]:
        """The bed state of every bed: the structure's, or the most probable one where it has half the mass."""
        shares = np.zeros((len(batch.signatures), len(MOVING), self.grid.depth.count))
        for row, signature in enumerate(batch.signatures):
            for place, (id, reading) in enumerate(signature.factors):
                if CRITERIA[id].kind != "state":
                    continue
                for column, state in enumerate(MOVING):
                    if state in reading or reading == ("moved",):  # type: ignore[operator]
                        factors = list(signature.factors)
                        factors[place] = (id, (state,))
                        one = replace(signature, factors=tuple(factors))
                        shares[row, column] = self.slices.evidence(one).by_depth
        weights = self.depth_weights(batch)
        by_bed = np.stack([(shares[batch.which, k].T * weights).sum(axis=0) for k in range(len(MOVING))])
        whole = by_bed.sum(axis=0)
        best = by_bed.argmax(axis=0)
        sure = by_bed.max(axis=0) >= 0.5 * whole
        return [MOVING[k] if ok and w > 0 else "" for k, ok, w in zip(best, sure, whole, strict=True)]

    def depth_weights(self, batch: Batch, leave: int | None = None) -> Array:
        """Likelihood of the depth evidence, shape (depth, beds); one slot may be left out."""
        result = np.ones((self.grid.depth.count, batch.beds), dtype=np.float32)
        for slot in range(len(batch.ln_depth)):
            if slot != leave:
                result *= self._weights_of(batch, slot)
        return result

    def _weights_of(self, batch: Batch, slot: int) -> Array:
        nodes = self.grid.depth.ln_nodes.astype(np.float32)[:, None]
        offset = nodes - batch.ln_depth[slot].astype(np.float32)[None, :]
        below = (1.0 / batch.sd_below[slot]).astype(np.float32)
        above = (1.0 / batch.sd_above[slot]).astype(np.float32)
        scaled = offset * np.where(offset < 0, below[None, :], above[None, :])
        result: Array = np.exp(-0.5 * scaled * scaled)
        return result

    def _products(self, part: Batch, weights: Array, take: Callable[[Signature], Array]) -> Array:
        return self._products_of(part.signatures, part.which, weights, take)

    def _products_of(
        self,
        signatures: Sequence[Signature],
        which: Array,
        weights: Array,
        take: Callable[[Signature], Array],
    ) -> Array:
        """Slice times depth evidence; beds are sorted by signature. Shape (rows of the slice, beds)."""
        starts = np.flatnonzero(np.r_[True, np.diff(which) != 0])
        stops = np.r_[starts[1:], len(which)]
        first = take(signatures[which[0]])
        result = np.empty((first.shape[0], len(which)), dtype=np.float32)
        for start, stop in zip(starts.tolist(), stops.tolist(), strict=True):
            np.matmul(take(signatures[which[start]]), weights[:, start:stop], out=result[:, start:stop])
        return result

    def _depth_mass(self, part: Batch, weights: Array) -> Array:
        """Posterior mass of the depth cells, shape (depth, beds)."""
        used, inverse = np.unique(part.which, return_inverse=True)
        columns = np.array([self.slices.velocity(part.signatures[i]).sum(axis=0) for i in used])
        result: Array = columns[inverse].T * weights
        return result


class _LeaveOneOut:
    """Rows of a leave-one-out run: which bed, which signature, which depth slot is left out."""

    def __init__(self, batch: Batch) -> None:
        known: dict[Signature, int] = {}
        beds: list[Array] = []
        which: list[Array] = []
        slots: list[Array] = []
        labels: list[str] = []

        def add(chosen: Array, signature_of: Array, label: str, slot: int) -> None:
            beds.append(chosen)
            which.append(signature_of)
            slots.append(np.full(len(chosen), slot))
            labels.extend([label] * len(chosen))

        own = np.array([known.setdefault(s, len(known)) for s in batch.signatures], dtype=np.intp)
        ids = list(dict.fromkeys(id for s in batch.signatures for id, _ in s.factors))
        for id in ids:
            has = np.array([any(f == id for f, _ in s.factors) for s in batch.signatures], dtype=bool)
            target = np.array(
                [known.setdefault(s.without(id), len(known)) for s in batch.signatures], dtype=np.intp
            )
            chosen = np.flatnonzero(has[batch.which])
            add(chosen, target[batch.which[chosen]], id, -1)
        informed = np.array([s.prior != "off" for s in batch.signatures], dtype=bool)
        target = np.array(
            [known.setdefault(replace(s, prior="off"), len(known)) for s in batch.signatures], dtype=np.intp
        )
        chosen = np.flatnonzero(informed[batch.which])
        add(chosen, target[batch.which[chosen]], "setting", -1)
        for slot in range(len(batch.ln_depth)):
            chosen = np.flatnonzero(batch.has_depth[slot])
            add(chosen, own[batch.which[chosen]], f"depth {slot}", slot)
        self.signatures = tuple(known)
        self.bed = np.concatenate(beds) if beds else np.zeros(0, dtype=np.intp)
        self.which = np.concatenate(which) if which else np.zeros(0, dtype=np.intp)
        self.slot = np.concatenate(slots) if slots else np.zeros(0, dtype=np.intp)
        self.left_out = tuple(labels)
