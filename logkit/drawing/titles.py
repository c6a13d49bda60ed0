"""Words around the column: title block, summary line, caution, sheet numbers, scale bar."""

from __future__ import annotations

from logkit.drawing.metrics import MM_PER_POINT, clean, shorten, width_mm, wrap
from logkit.drawing.scene import Scene, Tally, View, position_unit
from logkit.drawing.shapes import Group, Paint, Path, Shape, Text, polyline
from logkit.drawing.tracks.position import shown_position
from logkit.drawing.tracks.ribbon import is_conflict
from logkit.vocabulary.terms import vocabulary

CAUTION = (
    "Flow and depth are ranges for the moment a bed formed, inferred from grain size and structure by published "
    "relations, not measured; no basis for design, safety or reserves without a qualified check of the source log. "
    "Blank means no estimate, not still water."
)
CAUTION_PLAIN = "Drawn from a typed log; check the source before any use that matters."
LINE_SPACING = 1.2
LEAST_TITLE = 0.7
"""A long title shrinks to this part of its size before it takes a second line."""

SYMBOLIC = "Ripples and clasts are drawn at symbolic size."


def title_block(scene: Scene, width: float, scale_words: str, sheet_words: str = "") -> list[Shape]:
    """Title and subtitle at the left, sheet, scale and authorship at the right, a rule below."""
    style, header = scene.style, scene.log.header
    page, fonts, colours = style.page, style.fonts, style.colours
    left, right = page.margin, width - page.margin
    made = ", ".join(part for part in (header.date, header.logged_by) if part)
    lines = [
        (sheet_words, fonts.label, colours.ink2),
        (scale_words, fonts.subtitle, colours.ink),
        (f"Logged {clean(made)}" if made else "", fonts.label, colours.ink2),
    ]
    shapes: list[Shape] = []
    widest = 0.0
    pitch = LINE_SPACING * max(fonts.subtitle, fonts.label) * MM_PER_POINT
    y = page.rule - 4.4 - 2 * pitch
    for text, size, colour in lines:
        shown = shorten(text, 0.42 * (right - left), size)
        if shown:
            widest = max(widest, width_mm(shown, size))
            shapes.append(Text((right, y), shown, size, colour, anchor="end"))
        y += pitch
    room = right - left - widest - 4
    title, size = clean(header.title or scene.log.name), fonts.title
    while size > LEAST_TITLE * fonts.title and width_mm(title, size, True) > room:
        size -= 0.5
    first, *rest = wrap(title, room, size, True) or ("",)
    title_lines = [first, shorten(" ".join(rest), room, size, True)] if rest else [first]
    for number, line in enumerate(reversed(title_lines)):
        above = number * LINE_SPACING * size * MM_PER_POINT
        shapes.append(Text((left, page.rule - 7.0 - above), line, size, colours.ink, bold=True))
    below = subtitle(scene, room, fonts.subtitle)
    shapes.append(Text((left, page.rule - 2.2), below, fonts.subtitle, colours.ink))
    rule = polyline(((left, page.rule), (right, page.rule)))
    return [Group(tuple(shapes)), Path(rule, Paint(stroke=colours.ink, width=style.lines.rule))]


def subtitle(scene: Scene, room: float, size: float) -> str:
    """Place, setting and extent of the section; a long place gives way to the extent."""
    header, log = scene.log.header, scene.log
    unit, metres = position_unit(scene)
    tail = [vocabulary_label("settings", header.setting)] if header.setting != "unknown" else []
    if log.beds:
        ends = sorted((shown_position(scene, log.base_m), shown_position(scene, log.top_m)))
        reference = f" below {clean(header.depth_reference)}" if header.depth_reference else ""
        if scene.downward:
            tail.append(f"cored {ends[0]:.1f} to {ends[1]:.1f}\u00a0{unit}{reference}")
        else:
            tail.append(f"section {log.thickness_m / metres:.1f}\u00a0{unit}")
    words = "; ".join(tail)
    if header.location:
        place = shorten(header.location, max(0.0, room - width_mm(f"; {words}", size)), size)
        words = f"{place}; {words}" if place and words else place or words
    return shorten(words[:1].upper() + words[1:], room, size)


def vocabulary_label(name: str, term: str) -> str:
    """Label of a term, or the term itself."""
    known = vocabulary(name)
    return known[term].label if term in known else term.replace("_", " ")


def summary(scene: Scene) -> str:
    """The line that counts ranges, bounds, conflicts and non-estimates: honesty first."""
    log = scene.log
    beds = log.real_beds
    number = len(beds)
    unit, metres = position_unit(scene)
    seen = sum(bed.thickness_m for bed in beds) / metres
    words = [f"{number} bed" if number == 1 else f"{number} beds"]
    verb = "Recovered" if scene.downward else "Exposed"
    words.append(
        f"{verb} {seen:.1f} of {log.thickness_m / metres:.1f}\u00a0{unit}" if log.beds else "No beds"
    )
    if scene.estimates:
        kinds = {"range": 0, "bound": 0, "conflict": 0, "none": 0}
        for index, estimates in scene.estimates.items():
            if log.beds[index].is_gap:
                continue
            if any(is_conflict(e) for e in estimates):
                kinds["conflict"] += 1
            elif any(e.status == "estimated" and e.bound == "range" for e in estimates):
                kinds["range"] += 1
            elif any(e.status == "estimated" for e in estimates):
                kinds["bound"] += 1
        kinds["none"] = number - kinds["range"] - kinds["bound"] - kinds["conflict"]
        words.append(
            f"Flow range from {kinds['range']}, one-sided bound from {kinds['bound']}, "
            f"conflict in {kinds['conflict']}, no estimate from {kinds['none']}"
        )
    mean = scene.currents[0] if scene.currents else None
    if mean is not None and mean.mean_deg is not None:
        words.append(f"Palaeocurrent mean {round(mean.mean_deg) % 360:03d}°")
    note = clean(dict(log.header.extra).get("note", "")).rstrip(".")
    if note:
        words.append(note[0].upper() + note[1:])
    return ". ".join(words) + "."


def summary_block(scene: Scene, words: str, width: float) -> list[Shape]:
    """The summary above the heads, in as many lines as there is room for; its counts come first."""
    style = scene.style
    room = width - 2 * style.page.margin
    free = style.page.heads - style.page.summary - 3.0
    size = style.fonts.subtitle
    lines = wrap(words, room, size)
    if (len(lines) - 1) * LINE_SPACING * size * MM_PER_POINT > free:
        size = style.fonts.label
        lines = wrap(words, room, size)
    pitch = LINE_SPACING * size * MM_PER_POINT
    most = 1 + max(0, int(free / pitch + 1e-6))
    if len(lines) > most:
        lines = (*lines[: most - 1], shorten(" ".join(lines[most - 1 :]), room, size))
    return [
        Text((style.page.margin, style.page.summary + number * pitch), line, size, style.colours.ink2)
        for number, line in enumerate(lines)
    ]


def scale_words(scene: Scene, fitted: bool) -> str:
    """The scale as a ratio and as lengths."""
    on_paper = 1000.0 / scene.scale
    ratio = f"1:{scene.scale:.4g}"
    lengths = (
        f"1\u00a0m = {on_paper:.3g}\u00a0mm" if on_paper >= 1 else f"10\u00a0m = {10 * on_paper:.3g}\u00a0mm"
    )
    return f"{ratio} ({lengths}{', fitted' if fitted else ''})"


def scale_bar(scene: Scene, x: float, y: float, room: float) -> list[Shape]:
    """A bar of a round length: it keeps its meaning when the drawing is resized."""
    style = scene.style
    unit, metres = position_unit(scene)
    rate = 1000.0 / scene.scale * metres
    length = 0.01
    for step in (0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1, 2, 5, 10, 20, 50, 100, 200, 500):
        if step * rate <= room:
            length = step
    end = x + length * rate
    middle = (x + end) / 2
    ink = style.colours.ink
    left = polyline(((x, y - 0.5), (middle, y - 0.5), (middle, y + 0.5), (x, y + 0.5)), closed=True)
    whole = polyline(((x, y - 0.5), (end, y - 0.5), (end, y + 0.5), (x, y + 0.5)), closed=True)
    label = f"{length:g}\u00a0{unit}"
    size = style.fonts.label
    return [
        Path(left, Paint(fill=ink)),
        Path(whole, Paint(stroke=ink, width=style.lines.hairline)),
        Text((x, y + 3.0), label, size, ink),
    ]


def closing_lines(scene: Scene, tally: Tally, width: float) -> list[str]:
    """Caution and what was left out, broken to the width of the page, bold word excepted."""
    style = scene.style
    size = style.fonts.caution
    caution = CAUTION if scene.estimates else CAUTION_PLAIN
    if tally.structures or "gravel" in tally.families:
        caution = f"{caution} {SYMBOLIC}"
    room = width - 2 * style.page.margin
    indent = width_mm("Read with care", size, True) + 1.5
    first, *rest = wrap(caution, room - indent, size)
    lines = [first]
    if rest:
        lines.extend(wrap(" ".join(rest), room, size))
    left_out = left_out_words(tally)
    if left_out:
        lines.extend(wrap(left_out, room, size))
    return lines


def left_out_words(tally: Tally) -> str:
    """What the margin counts as left out or moved for want of room; "" for nothing."""
    counted = [f"{number} {what}" for what, number in sorted(tally.left_out.items()) if number]
    return f"Not on the column for want of room: {', '.join(counted)}." if counted else ""


def crowded_tally(scene: Scene) -> Tally:
    """What a crowded sheet leaves out: room for these words is kept before anything is drawn."""
    usual = {
        "names": "bed names",
        "glyphs": "glyphs",
        "velocity": "state letters",
        "texture": "structures drawn inside a bed",
        "notes": "notes moved to the note table",
    }
    tally = Tally(structures={"": 1})
    tally.left_out.update({words: 999 for track, words in usual.items() if track in scene.columns})
    return tally


def closing_height(scene: Scene, lines: list[str]) -> float:
    """Height of the caution block with its rule, mm."""
    return 4.2 + len(lines) * 1.25 * scene.style.fonts.caution * MM_PER_POINT


def closing_block(scene: Scene, lines: list[str], y: float, width: float) -> list[Shape]:
    """Rule and caution lines; `y` is the upper edge."""
    style = scene.style
    page, size, colours = style.page, style.fonts.caution, style.colours
    pitch = 1.25 * size * MM_PER_POINT
    rule = polyline(((page.margin, y), (width - page.margin, y)))
    shapes: list[Shape] = [Path(rule, Paint(stroke=colours.ink, width=style.lines.contact))]
    baseline = y + 3.4
    indent = width_mm("Read with care", size, True) + 1.5
    shapes.append(Text((page.margin, baseline), "Read with care", size, colours.ink, bold=True))
    for number, line in enumerate(lines):
        x = page.margin + (indent if number == 0 else 0.0)
        shapes.append(Text((x, baseline + number * pitch), line, size, colours.ink))
    return shapes


def sheet_words(view: View | None, sheet: int, sheets: int, downward: bool) -> str:
    """Sheet number and where the column goes on."""
    if sheets == 1:
        return ""
    words = f"Sheet {sheet} of {sheets}"
    if view is not None and view.number < view.of:
        words += f", continued {'below' if downward else 'above'} on sheet {sheet + 1}"
    return words
