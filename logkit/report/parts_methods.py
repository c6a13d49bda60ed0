"""The parts of a report that say how: formulas used with their sources, reference list, limits."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from logkit import __version__
from logkit.model import CAUTION
from logkit.references import NOT_WORKS, cited, reference
from logkit.registry import FORMULAS
from logkit.report.document import Block, Column, Paragraph, Table, Terms
from logkit.report.wells import Well

STATUS_WORDS = {
    "published": "seen in the primary or an agency text",
    "secondary": "seen in secondary sources that name the original",
    "memory": "recalled, not confirmed",
    "ours": "own construction or judgement",
}

TREND_FORMULAS = ("stat.kendall_tau_b", "stat.kendall_exact_p", "stat.theil_sen_slope", "stat.bh_adjusted")
CHAIN_FORMULAS = ("stat.markov_chi_square", "stat.markov_expected")
CURRENT_FORMULAS = (
    "stat.vector_mean",
    "stat.rayleigh_p",
    "stat.rose_radius",
    "geometry.tilt_plane_dip_direction",
)
SIZE_FORMULAS = ("grain.udden_wentworth", "grain.class_midpoint")


def formulas_used(wells: Iterable[Well]) -> list[str]:
    """Ids of the formulas behind the numbers of these logs, in order of the alphabet."""
    used: set[str] = set()
    for well in wells:
        used.update(well.history.formulas)
        used.update(SIZE_FORMULAS)
        if well.trends.packages:
            used.update(TREND_FORMULAS)
        if len(well.trends.tables().get("transitions", ())):
            used.update(CHAIN_FORMULAS)
        if any(s.n for s in well.trends.currents):
            used.update(CURRENT_FORMULAS)
    return sorted(id for id in used if id in FORMULAS)


def methods(wells: list[Well]) -> Iterator[Block]:
    """Only the formulas used, each with source, validity, scatter and status."""
    used = [FORMULAS[id] for id in formulas_used(wells)]
    yield Paragraph(
        f"Made by logkit {__version__}. Beds are split into phases of one grain size and one structure. For each "
        "phase every criterion that can speak gives a likelihood on a grid of velocity and flow depth, with its "
        "published scatter; their product with what is believed about the setting beforehand is averaged over the "
        "width of the grain-size class. Where criteria leave no common ground this is said and nothing is averaged."
    )
    yield Table(
        "methods",
        "Formulas used in this report. Status: "
        + "; ".join(f"{word} – {meaning}" for word, meaning in STATUS_WORDS.items())
        + ". A result outside a tested range carries a note. Source: records of the formulas; references.",
        (
            Column("formula"),
            Column("gives"),
            Column("equation"),
            Column("source"),
            Column("tested range"),
            Column("scatter"),
            Column("status"),
        ),
        tuple(
            (
                f.id,
                f.output.meaning,
                f.equation,
                _source(f.source, f.locator),
                "; ".join(str(limit) for limit in f.limits) or f.domain,
                f.scatter,
                f.status,
            )
            for f in used
        ),
    )


def references(wells: list[Well]) -> Iterator[Block]:
    """Works behind the formulas used and the criteria of the ledgers."""
    sources = {FORMULAS[id].source for id in formulas_used(wells)}
    for well in wells:
        for place in range(len(well.history.estimates)):
            sources.update(row.source for row in well.history.ledger_at(place))
    keys = {key.strip() for source in sources for key in source.split(",")} - set(NOT_WORKS)
    works = sorted({str(reference(key)) + _doubt(key) for key in keys})
    yield Terms(tuple((f"{i}.", work) for i, work in enumerate(works, 1)))


def limits() -> Iterator[Block]:
    """What the numbers are not."""
    yield Paragraph(CAUTION, "caution")
    for text in LIMITS:
        yield Paragraph(text)


LIMITS = (
    "A bed records the flow at the moment it formed, at the place where it was seen. What lies between beds, under "
    "gaps and beside the section is not known from it.",
    "The relations come from flumes and modern rivers with quartz sand in clear water. Clay, plants, shells, "
    "light or heavy grains, dense flows and fast fall-out change them in ways that a column does not show.",
    "Grain size read by eye is a class, not a measurement; the class width is carried through, a wrong class is not.",
    "Structures are readings too. An estimate that rests on one structure falls with it: look at the ledger before "
    "quoting a number.",
    "Relations that share data or form are not independent. The posterior treats criteria as independent given the "
    "flow; the allowance fitted to measured rivers covers part of this, for rivers only.",
    "A package or a trend that is not distinguished from random order is not a cycle.",
)


def _source(source: str, locator: str) -> str:
    return "own construction" if source in NOT_WORKS else cited(source) + (f", {locator}" if locator else "")


def _doubt(key: str) -> str:
    return " [details recalled, to be checked]" if reference(key).status == "memory" else ""
