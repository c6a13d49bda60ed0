"""Whole sheets: nothing overlaps, nothing leaves the page, every bed is there, the file is well-formed."""

from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path as FilePath
from xml.etree import ElementTree

import pytest
from checks import bed_ids, inked_texts, outside, overlaps, texts_of
from random_logs import Results, quantiles, random_log

from logkit.drawing import Drawing, draw_column
from logkit.drawing.shapes import Group, Path, walk
from logkit.drawing.style import load_style
from logkit.errors import ArgumentError
from logkit.flow import infer_flow
from logkit.model import (
    Bed,
    Clash,
    Contact,
    GrainState,
    Header,
    Log,
    Phase,
    PhaseEstimate,
    SizeInterval,
    Structure,
)

SCALES = (20, 50, 100, 200, 500)
PLAIN = load_style("report", {"texture": {"dots": False, "least_segment": 1e6}})
PAGES = ("A4", "A3", "Letter", "Tabloid", "roll")


def sand(name: str, base: float, top: float, notes: str = "", **more: object) -> Bed:
    """A plain bed of medium sand."""
    grain = (GrainState(0.5, SizeInterval(0.25, 0.5, "m")),)
    return Bed(name, base, top, lithology="sandstone", grain=grain, notes=notes, **more)  # type: ignore[arg-type]


def words_on(drawing: Drawing) -> str:
    """All texts of a drawing, one after the other."""
    return " ".join(text.text for sheet in drawing.sheets for text, _ in texts_of(sheet))


def check_sheets(drawing: Drawing, log: Log) -> None:
    """The laws that hold for every drawing."""
    for number, sheet in enumerate(drawing.sheets, 1):
        assert overlaps(sheet) == [], f"sheet {number}"
        assert outside(sheet) == [], f"sheet {number}"
        root = ElementTree.fromstring(drawing.svg(number))
        ids = [element.get("id") for element in root.iter() if element.get("id")]
        assert len(ids) == len(set(ids)), "an id is used twice on a sheet"
    drawn = [name for sheet in drawing.sheets for name in bed_ids(sheet)]
    assert len(set(drawn)) == len(log.beds)


@pytest.mark.parametrize("part", range(10))
def test_random_logs_keep_the_laws(part: int) -> None:
    """200 random logs over scales and pages: no text on text, nothing off the page, every bed, well-formed XML."""
    for seed in range(20 * part, 20 * part + 20):
        log, results = random_log(seed)
        scale = SCALES[seed % 5]
        if log.thickness_m * 1000 / scale > 1200:  # more than a few sheets show nothing new
            scale = 500
        style = "report" if seed % 3 == 0 else PLAIN  # marks inside beds do not move what the laws are about
        page, cut_gaps = PAGES[seed // 5 % 5], seed % 2 == 0
        drawing = draw_column(log, results, results, style, scale, page, cut_gaps=cut_gaps)
        check_sheets(drawing, log)


def test_same_input_same_bytes() -> None:
    """Drawing twice gives the same SVG and the same PDF."""
    log, results = random_log(6, beds=20)
    first, second = (draw_column(log, results, results) for _ in range(2))
    assert [first.svg(n + 1) for n in range(len(first.sheets))] == [
        second.svg(n + 1) for n in range(len(second.sheets))
    ]
    assert first.pdf() == second.pdf()


@pytest.mark.parametrize(
    "style", ["report", "field-mono", "journal-single", "journal-double", "poster", "dark"]
)
def test_every_style_keeps_the_laws(style: str) -> None:
    """The laws hold in all shipped styles."""
    log, results = random_log(11, beds=30, thickness_m=(0.05, 0.8))
    check_sheets(draw_column(log, results, results, style=style), log)


@pytest.mark.parametrize(("seed", "scale"), [(1, 50), (2, 100), (3, 20)])
def test_no_text_stands_on_ink(seed: int, scale: float) -> None:
    """Rendered without its texts, a sheet is light under every one of them."""
    log, results = random_log(seed, beds=25, thickness_m=(0.05, 0.8))
    assert inked_texts(draw_column(log, results, results, scale=scale), 1) == []


def test_a_millimetre_bed_is_drawn() -> None:
    """A bed of 1 mm at 1:50 is 0.02 mm on paper: still a group of its own, merged only by name."""
    beds = [sand("1", 0, 0.5), sand("2", 0.5, 0.501), sand("3", 0.501, 0.502), sand("4", 0.502, 1.0)]
    log = Log(Header(title="Thin"), tuple(beds))
    drawing = draw_column(log)
    check_sheets(drawing, log)
    assert "2–3" in words_on(drawing)


def test_a_long_note_is_complete() -> None:
    """A note of 400 characters stands in the margin, every word of it."""
    note = " ".join(f"word{number}" for number in range(57))
    log = Log(Header(title="Note"), (sand("1", 0, 2.0, note), sand("2", 2.0, 4.0)))
    drawing = draw_column(log)
    check_sheets(drawing, log)
    assert set(note.split()) - {"word0"} <= set(words_on(drawing).split())


def test_sixty_notes_in_a_metre() -> None:
    """Notes that find no room beside the column are in the note table and counted; none is lost."""
    beds = tuple(sand(str(n), n / 60, (n + 1) / 60, f"note number {n:03d}") for n in range(60))
    log = Log(Header(title="Crowd"), beds)
    drawing = draw_column(log)
    check_sheets(drawing, log)
    said = words_on(drawing)
    assert all(f"{n:03d}" in said for n in range(60))
    assert dict(drawing.counts)["notes moved to the note table"] > 40
    assert "In the note table" in said


def test_conflict_notes_stay_beside_the_column() -> None:
    """Where notes are too many, those on conflicts stay."""
    beds = tuple(sand(str(n), n / 60, (n + 1) / 60, f"note number {n:03d}") for n in range(60))
    phase = Phase("", "30", 0, beds[30].base_m, beds[30].top_m, "bed", "river")
    clash = Clash(
        "bed_state",
        "motion",
        0.9,
        "ripples say slow",
        "grains say fast",
        quantiles(0.2, 0.1),
        quantiles(1, 0.1),
    )
    estimate = PhaseEstimate(phase, "estimated", bound="range", velocity=quantiles(0.2, 0.1), clash=clash)

    class History:
        estimates = (estimate,)

    drawing = draw_column(Log(Header(title="Crowd"), beds), History())
    beside = [
        shape
        for shape in walk(drawing.sheets[0].shapes)
        if isinstance(shape, Group) and shape.id == "track-notes"
    ]
    said = " ".join(t.text for t in walk((beside[0],)) if hasattr(t, "text"))
    assert "Ripples say" in said


def test_a_single_bed_and_gaps_only() -> None:
    """The smallest logs make a sheet: one bed, gaps alone, nothing at all."""
    gaps = tuple(Bed(f"gap {n}", n, n + 1, kind="gap", gap_reason="no_exposure") for n in range(3))
    for beds in ((sand("1", 0, 0.1),), gaps, ()):
        log = Log(Header(title="Small"), beds)
        check_sheets(draw_column(log), log)
    assert "No exposure" in words_on(draw_column(Log(Header(title="Small"), gaps)))


def test_long_sections_break_at_beds() -> None:
    """Sheets break at bed boundaries, carry their number, and the legend stands on the last."""
    beds = tuple(sand(str(n), n * 0.7, (n + 1) * 0.7, contact=Contact("sharp")) for n in range(60))
    drawing = draw_column(Log(Header(title="Long"), beds), scale=50)
    assert len(drawing.sheets) > 3
    counted = [bed_ids(sheet) for sheet in drawing.sheets]
    assert sum(map(len, counted)) == 60, "a bed was broken over two sheets"
    for number, sheet in enumerate(drawing.sheets, 1):
        said = " ".join(text.text for text, _ in texts_of(sheet))
        assert f"Sheet {number} of {len(drawing.sheets)}" in said
        assert ("sand, quartz-rich" in said) == (number == len(drawing.sheets))


def test_a_bed_taller_than_a_sheet_goes_on() -> None:
    """A bed that fills more than a sheet is drawn on as many as it needs."""
    log = Log(Header(title="Tall"), (sand("1", 0, 30.0),))
    drawing = draw_column(log, scale=50)
    assert [bed_ids(sheet) for sheet in drawing.sheets][:2] == [bed_ids(drawing.sheets[0])] * 2


def test_a_well_counts_depth_downward() -> None:
    """A well's axis shows depths in the log's unit with their reference; the first sheet holds the top."""
    beds = (
        sand("2", -101.0, -100.6, depth_base=331.36, depth_top=330.05),
        sand("1", -100.6, -100.0, depth_base=330.05, depth_top=328.08),
    )
    header = Header(title="Well", direction="down", unit="ft", depth_reference="kelly bushing")
    said = words_on(draw_column(Log(header, beds), scale=20))
    assert "Depth" in said
    assert "ft below kelly bushing" in said
    assert "330" in said
    assert "Height" not in said


def test_part_of_a_section() -> None:
    """`from_m` and `to_m` draw a part; a part outside the section is refused."""
    log = Log(Header(title="Part"), tuple(sand(str(n), n, n + 1) for n in range(10)))
    drawing = draw_column(log, from_m=2.0, to_m=5.0)
    assert len(bed_ids(drawing.sheets[0])) == 3
    with pytest.raises(ArgumentError, match="from 0 to 10 m"):
        draw_column(log, from_m=11.0)


def test_fit_to_height_prints_its_scale() -> None:
    """Fitting sets the scale and prints it."""
    log = Log(Header(title="Fit"), tuple(sand(str(n), n, n + 1) for n in range(10)))
    drawing = draw_column(log, fit_height_mm=125.0)
    assert drawing.scale == pytest.approx(80.0)
    assert len(drawing.sheets) == 1
    assert "1:80" in words_on(drawing)
    assert "fitted" in words_on(drawing)


def test_a_cut_gap_says_so() -> None:
    """A cut gap is 10 mm tall, and words give its true height; without the option it keeps its height."""
    beds = (sand("1", 0, 1), Bed("gap 1", 1, 9, kind="gap", gap_reason="no_exposure"), sand("2", 9, 10))
    log = Log(Header(title="Gap"), beds)
    assert "scale cut here: 8 m drawn as 10 mm" in words_on(draw_column(log, cut_gaps=True)).replace(
        "\u00a0", " "
    )
    assert "scale cut" not in words_on(draw_column(log))


@pytest.mark.parametrize("bad", [0, -5, float("nan"), float("inf")])
def test_impossible_scales_are_refused(bad: float) -> None:
    """A scale must be a positive finite number."""
    with pytest.raises(ArgumentError, match="50 for 1:50"):
        draw_column(Log(Header(title="x"), (sand("1", 0, 1),)), scale=bad)


def test_too_narrow_a_page_is_refused() -> None:
    """A page too narrow for the tracks says how wide it must be."""
    log, results = random_log(4, beds=10)
    with pytest.raises(ArgumentError, match="mm wide"):
        draw_column(log, results, results, page=(60, 300))


@pytest.mark.parametrize(
    ("page", "size"),
    [
        ("A4", (210, 297)),
        ("a4 landscape", (297, 210)),
        ("Letter portrait", (215.9, 279.4)),
        ("180x240", (180, 240)),
        ("180 × 240 mm", (180, 240)),
        ((180, 240.5), (180, 240.5)),
    ],
)
def test_pages_are_named_or_measured(page: str | tuple[float, float], size: tuple[float, float]) -> None:
    """A page is a paper, turned if wanted, or a width and a height in mm."""
    sheet = draw_column(Log(Header(), (sand("1", 0, 1),)), page=page).sheets[0]
    assert (sheet.width, sheet.height) == size


@pytest.mark.parametrize("page", ["A9", "A4 sideways", "", "letterx", "A4 landscape now"])
def test_a_page_that_is_none_names_those_there_are(page: str) -> None:
    """A page nobody knows is answered with the papers and the form of a measured page."""
    with pytest.raises(ArgumentError) as caught:
        draw_column(Log(Header(), (sand("1", 0, 1),)), page=page)
    assert f"page is {page!r}, but it must be A0, A1," in str(caught.value)
    assert "roll, or WIDTHxHEIGHT in mm" in str(caught.value)
    with pytest.raises(ArgumentError, match="at least 40 mm"):
        draw_column(Log(Header(), (sand("1", 0, 1),)), page="10x200")


def test_an_erosive_base_draws_nothing_into_a_gap() -> None:
    """Scours over a gap would read as data there: the base stays straight; over a bed they are drawn."""
    cut_in = {"contact": Contact("erosive", relief_m=0.2)}
    gap = Bed("g", 1, 2, kind="gap", gap_reason="no_exposure")
    for below, reaches in ((gap, False), (sand("g", 1, 2), True)):
        log = Log(Header(), (sand("1", 0, 1), below, sand("2", 2, 3, **cut_in)))
        sheet = draw_column(log, page="roll").sheets[0]
        (bed,) = (s for s in walk(sheet.shapes) if isinstance(s, Group) and s.title.startswith("2:"))
        lines = [s for s in walk(bed.children) if isinstance(s, Path)]
        assert any(step == "C" for line in lines for step, _ in line.segments) == reaches


def test_a_very_long_title_takes_a_second_line() -> None:
    """A title of ordinary length stands whole; one that is longer goes on below before it is cut."""
    title = "Left bank above the old weir, from the lower bridge up to the bend with the fallen alders"
    drawing = draw_column(Log(Header(title=title), (sand("1", 0, 1),)))
    bold = [t.text for t, _ in texts_of(drawing.sheets[0]) if t.bold and t.size > 9]
    assert len(bold) == 2
    assert set(" ".join(reversed(bold)).split()) == set(title.split())
    check_sheets(drawing, Log(Header(title=title), (sand("1", 0, 1),)))


@pytest.mark.parametrize("style", ["journal-single", "journal-double", "report"])
def test_the_caution_keeps_clear_of_the_axes(style: str) -> None:
    """A bed that fills its sheets to the edge leaves room for all lines of the caution, more on a narrow page."""
    trough = (Structure("trough_cross_bedding"),)
    thin = [sand(f"{n + 1}", 0.02 * n, 0.02 * n + 0.02, structures=trough) for n in range(50)]
    phase = Phase("", "51", 0, 1, 60, "bed", "river", bed_index=50)
    estimate = PhaseEstimate(
        phase, "estimated", bound="range", velocity=quantiles(0.6, 0.3), bed_state="dune"
    )
    log, results = (
        Log(Header(), (*thin, sand("51", 1, 60, structures=trough))),
        Results((estimate,), (), (), ()),
    )
    check_sheets(draw_column(log, results, results, style, scale=100), log)


def test_beds_carry_what_a_page_filters_by() -> None:
    """Every bed is a group with a stable id, a title and data attributes."""
    log, results = random_log(12, beds=15, thickness_m=(0.2, 0.6))
    svg = draw_column(log, results, results, page="roll").svg()
    bed = log.real_beds[0]
    found = re.search(rf'<g id="(b-[0-9a-f]+)" data-bed="{re.escape(bed.name)}"[^>]*><title>', svg)
    assert found
    again = draw_column(log, page="roll", scale=200).svg()
    assert f'id="{found[1]}"' in again, "the id depends on more than the bed"


def test_saving_by_ending(tmp_path: FilePath) -> None:
    """One file for a PDF, a file a sheet for SVG and PNG; another ending is refused."""
    log = Log(Header(title="Save"), tuple(sand(str(n), n, n + 1) for n in range(20)))
    drawing = draw_column(log)
    assert [path.name for path in drawing.save(tmp_path / "a.svg")] == ["a-1.svg", "a-2.svg"]
    assert [path.name for path in drawing.save(tmp_path / "a.pdf")] == ["a.pdf"]
    assert (tmp_path / "a.pdf").read_bytes().startswith(b"%PDF")
    pngs = drawing.save(tmp_path / "a.png", dpi=50)
    assert all(path.read_bytes().startswith(b"\x89PNG") for path in pngs)
    with pytest.raises(ArgumentError, match=r"\.svg, \.pdf, \.png"):
        drawing.save(tmp_path / "a.docx")
    assert drawing._repr_svg_() == drawing.svg(1)
    with pytest.raises(ArgumentError, match="from 1 to 2"):
        drawing.svg(3)


def test_no_thread_joins_two_turbidites() -> None:
    """Two turbidites are two currents: the same estimates lose the link that a river's beds have."""
    ripples = (Structure("current_ripples"),)
    log = Log(
        Header(section="S", setting="river"),
        tuple(sand(str(i), i, i + 1.0, structures=ripples) for i in (0, 1)),
    )
    found = infer_flow(log).estimates
    apart = tuple(replace(e, phase=replace(e.phase, setting="turbidity")) for e in found)
    river, turbidites = (
        draw_column(log, Results(estimates, (), (), ())).svg() for estimates in (found, apart)
    )
    assert turbidites.count("<path") == river.count("<path") - 1


def test_wind_is_called_wind() -> None:
    """A track of wind speeds does not say flow velocity."""
    dunes = (Structure("aeolian_cross_bedding"),)
    log = Log(Header(section="S", setting="wind"), (sand("1", 0.0, 1.0, structures=dunes),))
    svg = draw_column(log, infer_flow(log)).svg()
    assert ">Wind 10 m up<" in svg
    assert ">Flow velocity<" not in svg
