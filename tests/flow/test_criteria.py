"""Criteria as records, and one that somebody else registers."""

from __future__ import annotations

from collections.abc import Hashable, Iterator

import numpy as np
import pytest
from make import bed, log

from logkit.errors import ArgumentError, UnknownNameError
from logkit.flow import CRITERIA, Cells, Context, Criterion, DepthReading, infer_flow
from logkit.model import Phase
from logkit.references import all_references


def flute_reading(phase: Phase, context: Context) -> Hashable | None:
    """Flutes on the sole of the bed."""
    return "flutes" if any(s.term == "flutes" for s in context.bed.structures) else None


def flute_likelihood(reading: str, cells: Cells) -> np.ndarray:
    """Invented for this test: flutes are cut above 1 m/s, one fifth of a decade soft."""
    return -np.logaddexp(0.0, -1.702 * np.log10(cells.velocity_m_s / 1.0) / 0.2)


FLUTES = Criterion(
    id="flutes", label="flutes were cut", kind="cells", side="above", reads=flute_reading,
    words=lambda _: "the flow cut flutes", source="invented", validity="this test",
    log_likelihood=flute_likelihood,
)  # fmt: skip


@pytest.fixture
def with_flutes() -> Iterator[None]:
    """The criterion registered for one test."""
    CRITERIA.register("flutes", FLUTES)
    yield
    CRITERIA._items.pop("flutes")


def test_a_registered_criterion_takes_part_and_has_its_ledger_row(with_flutes: None) -> None:
    """A third party's criterion moves the answer of beds it reads, and of no others."""
    marked, plain = (
        infer_flow(log(bed("mL", structures))) for structures in ("cross_bedding flutes", "cross_bedding")
    )
    assert marked.estimates[0].velocity is not None
    assert plain.estimates[0].velocity is not None
    assert marked.estimates[0].velocity.p10 > 1.2 * plain.estimates[0].velocity.p10
    row = marked.ledger("1").set_index("criterion").loc["flutes"]
    assert (row.label, row.bound, row.source) == ("flutes were cut", "above", "invented")
    assert "flutes" not in set(plain.ledger("1").criterion)


def test_a_criterion_that_depends_on_grain_size_is_averaged_over_the_class(with_flutes: None) -> None:
    """Likelihoods that differ between the sizes of a class are multiplied size by size."""

    def by_size(reading: str, cells: Cells) -> np.ndarray:
        return -0.5 * ((np.log(cells.velocity_m_s) - np.log(3000.0 * cells.d_m)) / 0.2) ** 2

    from dataclasses import replace

    CRITERIA.register("flutes", replace(FLUTES, log_likelihood=by_size, side="band"), replace=True)
    (found,) = infer_flow(log(bed("mU", "flutes")), prior="off").estimates
    assert found.bound == "range"
    assert found.velocity is not None
    assert found.velocity.p50 == pytest.approx(3000 * 0.42e-3, rel=0.08)


def test_kinds_and_their_functions_belong_together() -> None:
    """A criterion of the kind "cells" needs its function, any other must have none."""
    with pytest.raises(ArgumentError, match="log_likelihood is None"):
        Criterion("x", "x", "cells", "band", flute_reading, str, "ours", "")
    with pytest.raises(ArgumentError, match="kind is 'table'"):
        Criterion("x", "x", "table", "band", flute_reading, str, "ours", "")  # type: ignore[arg-type]


def test_an_unknown_criterion_names_the_nearest() -> None:
    """The registry lists what there is."""
    with pytest.raises(UnknownNameError, match="Did you mean 'largest_clast'"):
        CRITERIA["largest_clasts"]


def test_depth_readings_are_checked() -> None:
    """A depth below zero cannot become evidence."""
    with pytest.raises(ArgumentError, match="median_m is -1"):
        DepthReading(-1, 0.2, 0.2)


def test_every_criterion_cites_known_works() -> None:
    """Sources of criteria are keys of the reference list, or our own."""
    for id, criterion in CRITERIA.items():
        for key in criterion.source.split(", "):
            assert key == "ours" or key in all_references(), f"{id}: {key}"


def test_every_criterion_rests_on_registered_formulas() -> None:
    """Ids in criteria.toml are ids of the formula registry."""
    from logkit.flow.criteria import criterion_texts
    from logkit.registry import FORMULAS

    for id, text in criterion_texts().items():
        assert all(formula in FORMULAS for formula in text.formulas), (id, text.formulas)
