"""Notes in the margin: what the drawing cannot say, tied to the bed by a bracket and a leader.

Notes keep the order of the beds, so leaders never cross. What does not fit goes to the note table, and its bed names
are listed at the foot of the column: nothing is lost.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from logkit.drawing.metrics import MM_PER_POINT, clean, shorten, width_mm, wrap
from logkit.drawing.placement import spread
from logkit.drawing.scene import MeasuredBed, Scene, Tally, View
from logkit.drawing.shapes import Group, Paint, Path, Segment, Shape, Text, polyline
from logkit.drawing.tracks.labels import placed_labels
from logkit.drawing.tracks.ribbon import is_conflict
from logkit.model import Log, PhaseEstimate

BRACKET_TO_TEXT = 2.9
MOST_NAME_MM = 9.0
MOST_LISTED = 5


@dataclass(frozen=True, slots=True)
class Note:
    """A note of one bed: text, how much it matters (3 conflict, 2 bound, 1 sample or marker, 0 plain), its lines."""

    item: MeasuredBed
    text: str
    priority: int
    lines: tuple[str, ...]
    span: tuple[float, float]
    height: float


def note_text(scene: Scene, item: MeasuredBed, labelled: bool) -> tuple[str, int]:
    """What the margin says about a bed, and its priority.

    Parameters
    ----------
    labelled : True when samples and marker of the bed stand at the profile already
    """
    bed = item.bed
    parts: list[str] = []
    priority = 0
    for estimate in scene.estimates.get(item.index, ()):
        if is_conflict(estimate) and estimate.clash is not None:
            readings = [r for r in (estimate.clash.first_reading, estimate.clash.second_reading) if r]
            parts.append(
                "; ".join(readings) + ". Not averaged" if readings else "Clues disagree; not averaged"
            )
            priority = 3
        elif estimate.bound in ("above", "below"):
            priority = max(priority, 2)
    if bed.notes:
        parts.append(bed.notes)
    if bed.marker and not labelled:
        parts.append(f"Marker {bed.marker}")
        priority = max(priority, 1)
    if bed.samples and (bed.marker or not labelled):
        parts.append(_listed("Sample", bed.samples))
        priority = max(priority, 1)
    if bed.photos:
        parts.append(_listed("Photo", bed.photos))
    cleaned = [clean(part).rstrip(".") for part in parts]
    return ". ".join(part[0].upper() + part[1:] for part in cleaned if part), priority


def _listed(noun: str, names: Sequence[str]) -> str:
    """`Sample S1`, `Samples S1, S2`, or the ends of a long list."""
    if len(names) == 1:
        return f"{noun} {names[0]}"
    if len(names) > MOST_LISTED:
        return f"{noun}s {names[0]} … {names[-1]} ({len(names)} in all)"
    return f"{noun}s {', '.join(names)}"


def draw(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """Place as many notes as fit; the others, lowest priority and thinnest bed first, go to the note table."""
    style = scene.style
    labelled = set(placed_labels(scene, view)) if "texture" in scene.columns else set()
    name_mm = name_width(scene)
    notes = _collect(scene, view, labelled, name_mm)
    if not notes:
        return []
    low, high = view.position.y_top - 2.0, max(view.position.y_base + 2.0, view.floor)
    line = style.notes.line_height * style.fonts.note * MM_PER_POINT
    kept = _choose(notes, high - low, style.notes.gap)
    if len(kept) < len(notes):
        high -= 3 * line  # room for the list of what was moved
        kept = _choose(notes, high - low, style.notes.gap)
    beside = {note.item.index for note in kept}
    moved = [note for note in notes if note.item.index not in beside]
    wanted = [(note.span[0] + note.span[1]) / 2 for note in kept]
    centres = spread(wanted, [note.height for note in kept], low, high, style.notes.gap)
    shapes: list[Shape] = []
    leaders: list[Segment] = []
    for note, y in zip(kept, centres or [], strict=True):
        tally.lowest = max(tally.lowest, y + note.height / 2)
        shapes.extend(_note(scene, note, y, line, name_mm, leaders))
    if leaders:
        shapes.append(Path(tuple(leaders), Paint(stroke=style.colours.ink2, width=style.lines.hairline)))
    if moved:
        shapes.extend(_list_moved(scene, moved, high, line, tally))
        tally.lowest = max(tally.lowest, high + 3 * line)
    return shapes


def _collect(scene: Scene, view: View, labelled: set[int], name_mm: float) -> list[Note]:
    """Notes of a sheet from the top down; a bed that goes on over the sheet's edge keeps its note where it begins."""
    style = scene.style
    size = style.fonts.note
    line = style.notes.line_height * size * MM_PER_POINT
    column = scene.columns["notes"]
    width = column.x1 - column.x0 - BRACKET_TO_TEXT - name_mm - 1.6
    found = []
    for item, span in reversed(list(view.items())):
        if not view.shows(item.bed.base_m) and item is not view.beds[0]:
            continue
        if item.bed.base_m < view.position.base_m - 1e-9:
            continue
        text, priority = note_text(scene, item, item.index in labelled)
        if not text:
            continue
        lines = wrap(text, width, size)
        found.append(Note(item, text, priority, lines, span, len(lines) * line))
    return found


def name_width(scene: Scene) -> float:
    """Room for the bed names before the notes, mm."""
    size = scene.style.fonts.note
    widest = max(
        (width_mm(m.bed.name, size, True) for m in scene.beds if m.bed.notes and not m.bed.is_gap),
        default=3.0,
    )
    return min(MOST_NAME_MM, max(3.0, widest))


def _choose(notes: list[Note], room: float, gap: float) -> list[Note]:
    """The notes that fit together, the important and the thick first, in their order on the page."""
    needed = sum(note.height for note in notes) + gap * (len(notes) - 1)
    if needed <= room:
        return notes
    ranked = sorted(notes, key=lambda n: (n.priority, n.span[0] - n.span[1], -n.height), reverse=True)
    kept: set[int] = set()
    used = -gap
    for note in ranked:
        if used + gap + note.height <= room:
            kept.add(id(note))
            used += gap + note.height
    return [note for note in notes if id(note) in kept]


def _note(
    scene: Scene, note: Note, y: float, line: float, name_mm: float, leaders: list[Segment]
) -> list[Shape]:
    style, column = scene.style, scene.columns["notes"]
    size = style.fonts.note
    x = column.x0
    y_base, y_top = note.span
    inset = min(0.2, (y_base - y_top) / 4)
    middle = (y_base + y_top) / 2
    leaders.extend(polyline(((x, y_top + inset), (x, y_base - inset))))
    first = y - note.height / 2 + 0.5 * line
    leaders.extend(polyline(((x, middle), (x + 0.7, middle), (x + 1.6, first), (x + 2.5, first))))
    name_x = x + BRACKET_TO_TEXT + name_mm
    text_x = name_x + 1.6
    drop = 0.36 * size * MM_PER_POINT
    strong = style.colours.conflict if note.priority == 3 else style.colours.ink
    texts: list[Shape] = []
    if not note.item.bed.is_gap:  # a gap stands in the column in words
        name = shorten(note.item.bed.name, name_mm, size, True)
        texts.append(Text((name_x, first + drop), name, size, strong, bold=True, anchor="end"))
    words: list[Shape] = []
    for number, words_line in enumerate(note.lines):
        words.append(Text((text_x, first + drop + number * line), words_line, size, style.colours.ink))
    return [Group((*texts, Group(tuple(words))))]


def _list_moved(scene: Scene, moved: list[Note], y: float, line: float, tally: Tally) -> list[Shape]:
    """At the foot: which notes stand in the table."""
    style, column = scene.style, scene.columns["notes"]
    for note in moved:
        tally.moved_notes.append((note.item.bed.name, note.text, note.priority == 3))
    tally.left_out["notes moved to the note table"] += len(moved)
    names = ", ".join(note.item.bed.name for note in reversed(moved))
    size = style.fonts.note
    width = column.x1 - column.x0 - BRACKET_TO_TEXT
    lines = list(wrap(f"In the note table: {names}", width, size))
    if len(lines) > 2:
        lines = list(
            wrap(
                f"In the note table: {len(moved)} notes, beds {moved[-1].item.bed.name} to {moved[0].item.bed.name}",
                width,
                size,
            )
        )[:2]
    return [
        Text((column.x0 + BRACKET_TO_TEXT, y + (number + 1.2) * line), text, size, style.colours.ink2)
        for number, text in enumerate(lines)
    ]


def any_notes(log: Log, estimates: Sequence[PhaseEstimate]) -> bool:
    """True when the margin would have something to say."""
    written = any(bed.notes or bed.photos or bed.samples or bed.marker for bed in log.beds)
    return written or any(is_conflict(estimate) for estimate in estimates)
