"""Results of the examples and of one hostile log, made once for the tests of the report."""

from __future__ import annotations

from functools import cache
from pathlib import Path

from logkit.model import Bed, Contact, GrainState, Header, Log, SizeInterval, Structure
from logkit.pipeline import Outcome, Settings, run
from logkit.report.content import build_document
from logkit.report.document import Document
from logkit.report.settings import make_settings
from logkit.report.wells import Well, make_well

EXAMPLES = Path(__file__).parents[2] / "examples"
SOURCES = {
    "river": EXAMPLES / "river/tarrow_bend.csv",
    "turbidites": EXAMPLES / "turbidites/skerry_point.csv",
    "core": EXAMPLES / "well/kestrel_1.xlsx",
    "wells": EXAMPLES / "wells",
}
HOSTILE = '<script>window.hacked = 1</script>\u0007"\'</td>&amp;\u2028<img src=x onerror="window.hacked=1">'


@cache
def outcome(name: str) -> Outcome:
    """Logs of an example with flow and trends."""
    return run(Settings((str(SOURCES[name]),), frozenset({"flow", "trends"})))


@cache
def wells_of(name: str) -> list[Well]:
    """Wells of an example."""
    return [make_well(found.log, found.history, found.trends) for found in outcome(name).runs]


@cache
def document_of(name: str) -> Document:
    """The report of an example before it has a form."""
    return build_document(wells_of(name), make_settings(None))


def small_log() -> Log:
    """Three beds, one of two phases, and a gap, with text meant to break pages."""

    def sand(label: str, low: float) -> SizeInterval:
        return SizeInterval(low, 1.41 * low, label)

    beds = (
        Bed("1", 0.0, 1.0, lithology="sandstone", grain=(GrainState(0.5, sand("mL", 0.25)),),
            structures=(Structure("trough_cross_bedding"),), contact=Contact("erosive", relief_m=0.3),
            notes=HOSTILE, written=(("notes", HOSTILE), ("grain", "mL"))),
        Bed("2 <b>", 1.0, 1.6, lithology="sandstone",
            grain=(GrainState(0.0, sand("mL", 0.25)), GrainState(1.0, sand("vfU", 0.088))),
            structures=(Structure("planar_cross_bedding"), Structure("current_ripples")), structures_upward=True),
        Bed("gap 1", 1.6, 2.0, kind="gap", gap_reason="no_exposure"),
        Bed("3", 2.0, 2.2, lithology="mudstone", grain=(GrainState(0.5, SizeInterval(0.002, 0.004, "mud")),)),
    )  # fmt: skip
    header = Header(
        title="Ash Gill & <i>Co</i>", section="AG", setting="river", logged_by="A. Tester", unit="m"
    )
    return Log(header=header, beds=beds)
