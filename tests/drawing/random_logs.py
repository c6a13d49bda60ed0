"""Random logs with results, for tests and benchmarks of the drawing; every seed gives the same log again."""

from __future__ import annotations

import math
import random
from dataclasses import dataclass

from logkit.model import (
    Bed,
    Bioturbation,
    Clash,
    Colour,
    Contact,
    CurrentReading,
    CurrentSummary,
    Grading,
    GrainState,
    Header,
    Log,
    Package,
    Phase,
    PhaseEstimate,
    Quantiles,
    SetThickness,
    SizeInterval,
    Structure,
)
from logkit.vocabulary.terms import vocabulary

WORDS = [
    "sets",
    "thin",
    "upward",
    "sharp",
    "base",
    "roots",
    "red",
    "mottles",
    "sheet",
    "wedges",
    "out",
    "north",
    "flood",
    "waning",
    "recheck",
    "S5",
    "<b>",
    "&",
    "14°",
]


@dataclass(frozen=True)
class Results:
    """Stands for a history and for trends."""

    estimates: tuple[PhaseEstimate, ...]
    gradings: tuple[Grading, ...]
    packages: tuple[Package, ...]
    currents: tuple[CurrentSummary, ...]


def quantiles(middle: float, spread: float) -> Quantiles:
    """Lognormal quantiles around a middle."""
    return Quantiles(*(middle * math.exp(spread * z) for z in (-1.28, -0.67, 0.0, 0.67, 1.28)))


def size(mm: float) -> SizeInterval:
    """A half-phi class above a size."""
    return SizeInterval(mm, mm * math.sqrt(2), label=f"{mm:.2g} mm")


class _Maker:
    def __init__(self, seed: int) -> None:
        self.rng = random.Random(seed)
        structures = vocabulary("structures")
        self.filling = [
            t for t in structures if structures[t].group in ("current", "wave", "fallout", "wind")
        ]
        self.objects = [
            t for t in structures if structures[t].group in ("biogenic", "exposure", "deformation", "sole")
        ]
        self.lithologies = list(vocabulary("lithologies"))
        self.fossils = list(vocabulary("fossils"))
        self.gaps = list(vocabulary("gaps"))
        self.contacts = list(vocabulary("contacts"))

    def note(self) -> str:
        """No note, a short one, or a very long one."""
        r = self.rng.random()
        if r < 0.6:
            return ""
        return " ".join(self.rng.choice(WORDS) for _ in range(4 if r < 0.9 else 60))

    def bed(self, number: int, base: float, thickness: float) -> Bed:
        """A bed with a bit of everything."""
        rng = self.rng
        states: tuple[GrainState, ...] = ()
        r = rng.random()
        if r < 0.45:
            states = (GrainState(0.5, size(2 ** rng.uniform(-9, 6))),)
        elif r < 0.9:
            coarse = rng.uniform(-5, 3)
            states = tuple(GrainState(f, size(2 ** (coarse + rng.uniform(-3, 1)))) for f in (0.0, 0.4, 1.0))
        terms = rng.sample(self.filling, rng.randint(0, 3)) + rng.sample(self.objects, rng.randint(0, 2))
        return Bed(
            name=str(number) if rng.random() < 0.9 else f"{number}b, doubtful",
            base_m=base,
            top_m=base + thickness,
            lithology=rng.choice(self.lithologies) if rng.random() < 0.9 else "",
            grain=states,
            structures=tuple(Structure(term) for term in terms),
            structures_upward=rng.random() < 0.5,
            set_thickness=SetThickness(0.05, 0.3) if rng.random() < 0.4 else None,
            contact=Contact(rng.choice(self.contacts), relief_m=rng.choice((None, 0.02, 0.3)))
            if rng.random() < 0.8
            else None,
            currents=tuple(
                CurrentReading("flute", "azimuth", rng.choice(("direction", "axis")), rng.uniform(0, 359.9))  # type: ignore[arg-type]
                for _ in range(rng.choice((0, 0, 1, 4)))
            ),
            bioturbation=Bioturbation(1.0, rng.choice((1.0, 4.0))) if rng.random() < 0.3 else None,
            colour=Colour(rng.choice(("dark grey", "reddish brown", "odd"))) if rng.random() < 0.5 else None,
            fossils=tuple(rng.sample(self.fossils, rng.randint(0, 2))),
            samples=(f"S{number}",) if rng.random() < 0.2 else (),
            marker="Grey ash" if rng.random() < 0.03 else "",
            notes=self.note(),
        )

    def estimate(self, bed: Bed, index: int) -> PhaseEstimate:
        """Any kind of answer."""
        rng = self.rng
        phase = Phase("", bed.name, 0, bed.base_m, bed.top_m, "bed", "river", bed_index=index)
        middle = 10 ** rng.uniform(-1.5, 0.7)
        kind = rng.random()
        if kind < 0.25:
            return PhaseEstimate(
                phase, "no estimate", reason=rng.choice(("mud", "no structure and no grain size"))
            )
        if kind < 0.35:
            bound = rng.choice(("above", "below"))
            return PhaseEstimate(
                phase, "estimated", bound=bound, limit_velocity_m_s=middle, limit_flow_depth_m=1.0
            )  # type: ignore[arg-type]
        velocity = quantiles(middle, rng.uniform(0.1, 0.8))
        clash = None
        if kind < 0.45:
            other = quantiles(middle * 3, 0.2) if kind < 0.4 else None
            clash = Clash(
                "bed_state",
                "motion",
                0.9,
                "ripples need 0.2–0.5 m/s",
                "1 mm sand: above 0.7 m/s",
                velocity,
                other,
            )
        return PhaseEstimate(
            phase, "estimated", bound="range", velocity=velocity, base_velocity=quantiles(middle * 1.2, 0.3),
            top_velocity=quantiles(middle * 0.8, 0.3), flow_depth=quantiles(10 ** rng.uniform(-0.8, 1.2), 0.4),
            bed_state=rng.choice(("ripple", "dune", "upper_plane", "gravel", "")), clash=clash,
            conflict=0.9 if clash else 0.0,
        )  # fmt: skip


def random_log(
    seed: int, beds: int | None = None, thickness_m: tuple[float, float] | None = None, gaps: float = 0.08
) -> tuple[Log, Results]:
    """A log and results of every kind; number and thickness of beds random unless given."""
    maker = _Maker(seed)
    rng = maker.rng
    count = beds if beds is not None else rng.choice((1, 2, 5, 20, 60, 120))
    low, high = thickness_m or rng.choice(((0.001, 0.02), (0.02, 0.5), (0.3, 4.0), (0.001, 3.0)))
    made: list[Bed] = []
    estimates: list[PhaseEstimate] = []
    base = rng.uniform(-20, 400) if rng.random() < 0.3 else 0.0
    for number in range(1, count + 1):
        thickness = math.exp(rng.uniform(math.log(low), math.log(high)))
        if rng.random() < gaps:
            made.append(
                Bed(f"gap {number}", base, base + thickness, kind="gap", gap_reason=rng.choice(maker.gaps))
            )
        else:
            bed = maker.bed(number, base, thickness)
            estimates.append(maker.estimate(bed, len(made)))
            made.append(bed)
        base += thickness
    header = Header(
        title=rng.choice(("Invented cliff", "A very long invented title of a section that does not want to end")),
        location="nowhere (invented)", logged_by="A. Example", date="2026-05-14", setting="river",
    )  # fmt: skip
    return Log(header, tuple(made)), _results(made, tuple(estimates))


def _results(beds: list[Bed], estimates: tuple[PhaseEstimate, ...]) -> Results:
    packages = []
    for number, trend in enumerate(("fining-up", "thickening-up")):
        part = beds[number * len(beds) // 2 : (number + 1) * len(beds) // 2]
        if part:
            packages.append(
                Package(trend, part[0].base_m, part[-1].top_m, part[0].name, part[-1].name, len(part), -0.5, 0.01,
                        0.03, number == 0)
            )  # fmt: skip
    azimuths = tuple(c.azimuth_deg for bed in beds for c in bed.currents if c.sense == "direction")
    currents = (CurrentSummary("all", "direction", azimuths, 80.0, 0.9, 20.0, 0.01),) if azimuths else ()
    gradings = tuple(Grading(bed.name, "normal", 0.8) for bed in beds if not bed.is_gap)
    return Results(estimates, gradings, tuple(packages), currents)
