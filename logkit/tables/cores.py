"""Core runs: what was cut and not recovered becomes a gap, by default at the base of the run.

Only the placing of lost core belongs here; the note itself (`cut 30' rec 27.4'`) is read as a cell.
"""

from __future__ import annotations

from itertools import zip_longest

from logkit.model import Level
from logkit.tables.cells.lengths import Length
from logkit.tables.draft import Draft
from logkit.tables.sheet import Collector
from logkit.units import METRES

_LEAST_M = 0.005


def add_lost_core(drafts: list[Draft], found: Collector, unit: str) -> None:
    """Insert a gap for the core lost in each run, at its base, and ask whether it belongs there.

    Parameters
    ----------
    drafts : placed rows of a downward log, in order; changed in place
    unit : length unit of the log, for messages
    """
    for draft in [d for d in drafts if d.core is not None and d.placed]:
        core = draft.core
        if core is None or core.cut_m is None or core.recovered_m is None:
            continue
        per_unit = METRES[unit]
        lost = core.cut_m - core.recovered_m
        percent = 100.0 * core.recovered_m / core.cut_m if core.cut_m > 0 else 0.0
        recovery = f"recovery {percent:.1f} %"
        start = min(draft.start_m, core.span.low.metres) if core.span else draft.start_m
        if lost < -_LEAST_M:
            _say(draft, found, "note", "core.expanded",
                 f"{recovery}: {-lost / per_unit:.3g} {unit} more than was cut",
                 "the core has expanded, or holds a piece of the run above")  # fmt: skip
        elif lost > _LEAST_M:
            _place(drafts, draft, start + core.recovered_m, start + core.cut_m, recovery, found, unit)


def stack_lost_core(drafts: list[Draft], found: Collector, unit: str) -> bool:
    """Insert a gap for the core lost in each run of a table of thicknesses; True when there is one.

    A run goes from the row with the core note to the row before the next note.

    Parameters
    ----------
    drafts : rows of a downward log, in order, not placed yet; changed in place
    unit : length unit of the log, for messages
    """
    noted = [d for d in drafts if d.core is not None]
    for draft, after in zip_longest(noted, noted[1:]):
        core = draft.core
        if core is None or core.lost_m is None or core.lost_m <= _LEAST_M or core.recovered_m is None:
            continue
        end = drafts.index(after) if after is not None else len(drafts)
        run = drafts[drafts.index(draft) : end]
        sizes = [d.thickness.metres for d in run if d.thickness is not None]
        size = f"{core.lost_m / METRES[unit]:.3g} {unit}"
        if any(d.gap for d in run):
            _say(draft, found, "note", "core.lost", f"{size} lost; a row of the run is this gap")
        elif sum(sizes) > core.recovered_m + max(_LEAST_M, 0.05 * core.recovered_m):
            _say(draft, found, "question", "core.lost_described",
                 f"{size} lost, but the rows of the run are {sum(sizes) / METRES[unit]:.4g} {unit} thick, more than "
                 "was recovered, so no gap is placed", "add a row for the lost core where it belongs",
                 choices=("lost elsewhere in the run", "a slip in cut or recovered"))  # fmt: skip
        else:
            _say(draft, found, "question", "core.lost", f"{size} lost, placed at the base of the run",
                 "add a row for the lost core if it belongs elsewhere",
                 choices=("base of the run", "top of the run"))  # fmt: skip
            lost = Length(core.lost_m, unit)
            drafts.insert(end, Draft(row=None, section=draft.section, gap="lost_core", thickness=lost))
    return any(d.row is None for d in drafts)


def _place(
    drafts: list[Draft], draft: Draft, start: float, end: float, recovery: str, found: Collector, unit: str
) -> None:
    size = (end - start) / METRES[unit]
    inside = [d for d in drafts if d.placed and d.start_m < end - _LEAST_M and d.end_m > start + _LEAST_M]
    if any(d.gap for d in inside):
        _say(
            draft,
            found,
            "note",
            "core.lost",
            f"{recovery}: {size:.3g} {unit} lost; a row of the table is this gap",
        )
        return
    if any(d is not draft for d in inside):
        _say(
            draft,
            found,
            "question",
            "core.lost_described",
            f"{recovery}: {size:.3g} {unit} lost, but rows fill the run to its base, so no gap is placed",
            "add a row for the lost core where it belongs",
            choices=("lost elsewhere in the run", "a slip in cut or recovered"),
        )
        return
    if draft in inside:
        _say(
            draft,
            found,
            "question",
            "core.lost_described",
            f"{recovery}: {size:.3g} {unit} lost, but the row itself reaches into the base of the run",
            "split the row, or add one for the lost core",
            choices=("no gap placed", "lost core at the base"),
        )
        return
    _say(
        draft,
        found,
        "question",
        "core.lost",
        f"{recovery}: {size:.3g} {unit} lost, placed at the base of the run ({start / METRES[unit]:.6g} to "
        f"{end / METRES[unit]:.6g} {unit})",
        "add a row for the lost core if it belongs elsewhere",
        choices=("base of the run", "top of the run"),
    )
    gap = Draft(row=None, section=draft.section, gap="lost_core", start_m=start, end_m=end)
    index = next((i for i, d in enumerate(drafts) if d.placed and d.start_m >= end - _LEAST_M), len(drafts))
    drafts.insert(index, gap)


def _say(draft: Draft, found: Collector, level: Level, code: str, message: str, remedy: str = "",
         choices: tuple[str, ...] = ()) -> None:  # fmt: skip
    column = next((c for c in ("core", "bed", "notes") if draft.cells.get(c)), "core")
    found.add(level, code, message, remedy, row=draft.row, column=column, cell=draft.cells.get(column, ""),
              choices=choices, section=draft.section, bed=draft.name)  # fmt: skip
