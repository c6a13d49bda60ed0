"""The page in a real browser, opened from disk with the network off."""

from __future__ import annotations

import csv
import io
import json
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner
from report_cases import SOURCES, outcome, small_log

from logkit.cli.why import command as why
from logkit.report import write_report
from logkit.words import digits

CHROMIUM = Path("/usr/bin/chromium")
AXE = Path(__file__).parent / "vendor/axe.min.js"

pytestmark = [
    pytest.mark.browser,
    pytest.mark.skipif(not CHROMIUM.exists(), reason="/usr/bin/chromium is not installed"),
]


@pytest.fixture(scope="module")
def browser() -> Iterator[Any]:
    """Chromium without a window."""
    from playwright.sync_api import sync_playwright

    with sync_playwright() as play:
        found = play.chromium.launch(
            executable_path=str(CHROMIUM), args=["--no-sandbox", "--disable-gpu"], headless=True
        )
        yield found
        found.close()


@pytest.fixture(scope="module")
def pages(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Path]:
    """The page of each example and of the small log."""
    folder = tmp_path_factory.mktemp("pages")
    result = {"small": write_report(small_log(), folder / "small.html")}
    for name in SOURCES:
        runs = outcome(name).runs
        result[name] = write_report(
            [r.log for r in runs],
            folder / f"{name}.html",
            histories=[r.history for r in runs],
            trends=[r.trends for r in runs],
        )
    return result


class Visit:
    """One open page and everything it complained about or asked for."""

    def __init__(self, browser: Any, path: Path, **context: Any) -> None:
        self.complaints: list[str] = []
        self.context = browser.new_context(offline=True, **context)
        self.page = self.context.new_page()
        self.page.on("console", lambda m: self.complaints.append(m.text) if m.type == "error" else None)
        self.page.on("pageerror", lambda error: self.complaints.append(str(error)))
        self.page.on("request", self._asked)
        self.page.goto(path.as_uri())

    def _asked(self, request: Any) -> None:
        if not request.url.startswith(("file:", "data:")):
            self.complaints.append(request.url)

    def card(self) -> str:
        """Title of the bed on the card."""
        return str(self.page.locator("#card-body h3").inner_text())

    def __enter__(self) -> Visit:
        return self

    def __exit__(self, *_: object) -> None:
        self.context.close()


@pytest.mark.parametrize("name", SOURCES)
def test_keyboard_from_first_to_last_bed(browser: Any, pages: dict[str, Path], name: str) -> None:
    """The arrow keys lead through all beds of the page, upward; nothing complains, nothing is fetched."""
    expected = [bed.name for run in outcome(name).runs for bed in run.log.beds]
    with Visit(browser, pages[name]) as visit:
        visit.page.locator("#column").focus()
        visit.page.keyboard.press("End")
        seen = [visit.card()]
        for _ in expected[1:]:
            visit.page.keyboard.press("ArrowUp")
            seen.append(visit.card())
        assert [title.split(" ")[-1] for title in seen] == [bed.split(" ")[-1] for bed in expected]
        visit.page.keyboard.press("ArrowUp")
        assert visit.card() == seen[-1]
        assert visit.complaints == []


def test_ledger_shows_the_numbers_of_why(browser: Any, pages: dict[str, Path]) -> None:
    """The card of a bed has the ledger that `logkit why` gives, row by row."""
    result = CliRunner().invoke(why, [str(SOURCES["river"]), "--bed", "12", "--json", "--quiet"])
    rows = json.loads(result.stdout)["ledger"]
    assert len(rows) == 3
    with Visit(browser, pages["river"]) as visit:
        key = visit.page.evaluate(
            "JSON.parse(document.getElementById('bed-data').textContent).beds.find(b => b.title.endsWith('bed 12')).key"
        )
        visit.page.locator(f'tr[data-bed="{key}"]').first.click()
        assert visit.card().endswith("bed 12")
        shown = visit.page.locator("#card-body .scroll tbody tr").all()
        assert len(shown) == len(rows)
        for line, row in zip(shown, rows, strict=True):
            cells = line.locator("td").all_inner_texts()
            assert cells[0] == row["label"]
            assert cells[2] == f"{digits(row['alone_p10_m_s'])}–{digits(row['alone_p90_m_s'])}"
            assert cells[3] == f"{digits(row['without_p10_m_s'])}–{digits(row['without_p90_m_s'])}"
            assert (cells[4], cells[5]) == (f"{row['narrows']:.1f}", f"{row['gain_bits']:.2f}")
            assert cells[8] == row["validity"]


def test_column_history_and_table_light_up_together(browser: Any, pages: dict[str, Path]) -> None:
    """A click on a bed in the column marks the bed in the history and in the tables, and the other way."""
    with Visit(browser, pages["turbidites"], reduced_motion="reduce") as visit:
        page = visit.page
        key = page.locator(".history g[data-bed]").first.get_attribute("data-bed")
        page.locator(f'tr[data-bed="{key}"]').first.click()
        for place in (".sheets g", ".history g", "tr"):
            assert page.locator(f'{place}[data-bed="{key}"].chosen').count() >= 1
        frame = page.locator(".chosen-frame").first
        assert frame.evaluate("f => getComputedStyle(f).vectorEffect") == "non-scaling-stroke"
        box, bed = frame.bounding_box(), page.locator(f'.sheets g[data-bed="{key}"]').first.bounding_box()
        assert box["height"] == pytest.approx(bed["height"], abs=4)
        assert box["y"] == pytest.approx(bed["y"], abs=4)
        other = page.locator(".sheets g[data-bed]").nth(3)
        other.dispatch_event("click")
        assert page.locator(f'tr[data-bed="{other.get_attribute("data-bed")}"].chosen').count() >= 1
        assert page.locator(f'tr[data-bed="{key}"].chosen').count() == 0
        assert visit.complaints == []


def test_filter_leaves_the_beds_that_fit(browser: Any, pages: dict[str, Path]) -> None:
    """A structure chosen in the filter hides other rows, dims other beds, and the keys step through what is left."""
    with Visit(browser, pages["river"]) as visit:
        page = visit.page
        page.select_option('select[name="structure"]', "climbing ripples")
        fitting = page.evaluate(
            "JSON.parse(document.getElementById('bed-data').textContent).beds"
            ".filter(b => (b.tags.structure || []).includes('climbing ripples')).map(b => b.key)"
        )
        assert 0 < len(fitting) < 60
        rows = page.locator('table[id^="t-beds"] tbody tr:visible')
        assert [row.get_attribute("data-bed") for row in rows.all()] == fitting
        assert page.locator("#filter-status").inner_text().startswith(f"{len(fitting)} of ")
        page.locator("#column").focus()
        page.keyboard.press("End")
        assert page.locator(".sheets g.chosen").first.get_attribute("data-bed") == fitting[0]
        page.locator('button[type="reset"]').click()
        page.wait_for_function("document.querySelectorAll('tr.hidden').length === 0")
        assert visit.complaints == []


def test_hostile_notes_stay_inert(browser: Any, pages: dict[str, Path]) -> None:
    """Notes with scripts and broken markup are shown as text and never run."""
    with Visit(browser, pages["small"]) as visit:
        visit.page.locator("#column").focus()
        visit.page.keyboard.press("End")
        assert "<script>window.hacked = 1</script>" in visit.page.locator("#card-body").inner_text()
        assert visit.page.evaluate("window.hacked === undefined")
        assert visit.page.locator("#card-body img, #card-body script").count() == 0
        assert visit.complaints == []


def test_every_table_copies_as_csv(browser: Any, pages: dict[str, Path]) -> None:
    """Each table has a button that gives CSV with as many columns in each line as in its heading."""
    with Visit(browser, pages["turbidites"]) as visit:
        page = visit.page
        page.evaluate(
            "navigator.clipboard.writeText = (text) => { window.copied = text; return Promise.resolve(); }"
        )
        tables = page.locator("section table").count()
        buttons = page.locator("button.copy").all()
        assert len(buttons) == tables > 5
        for button in buttons:
            button.click()
            lines = list(csv.reader(io.StringIO(page.evaluate("window.copied"))))
            heading = page.locator(f"#{button.get_attribute('data-table')} thead th").all_inner_texts()
            assert lines[0][-len(heading) :] == heading
            assert {len(line) for line in lines} == {len(lines[0])}
            assert len(lines) > 1
        ledger = page.locator('button[data-table^="t-ledger"]')
        ledger.click()
        lines = list(csv.reader(io.StringIO(page.evaluate("window.copied"))))
        assert lines[0][0] == "rows of"
        assert lines[1][0].startswith("Bed")


@pytest.mark.parametrize(
    ("name", "scheme"),
    [*((name, "light") for name in SOURCES if name != "turbidites"), ("turbidites", "dark")],
)
def test_nothing_serious_for_accessibility(
    browser: Any, pages: dict[str, Path], name: str, scheme: str
) -> None:
    """The accessibility check has no serious or critical finding, in light and dark, with a bed on the card."""
    with Visit(browser, pages[name], color_scheme=scheme, bypass_csp=True) as visit:
        visit.page.locator("#column").focus()
        visit.page.keyboard.press("End")
        visit.page.add_script_tag(path=str(AXE))
        found = visit.page.evaluate("axe.run(document, { resultTypes: ['violations'] })")
        grave = [
            (v["id"], [n["target"] for n in v["nodes"][:3]])
            for v in found["violations"]
            if v["impact"] in ("serious", "critical")
        ]
        assert grave == []


def test_phone_width_needs_no_sideways_scroll(browser: Any, pages: dict[str, Path]) -> None:
    """At 390 pixels the page itself does not scroll sideways; wide tables scroll in their own box."""
    with Visit(browser, pages["river"], viewport={"width": 390, "height": 844}) as visit:
        visit.page.locator("#column").focus()
        visit.page.keyboard.press("End")
        assert visit.page.evaluate("document.documentElement.scrollWidth") <= 390


def test_dark_page_has_a_dark_ground(browser: Any, pages: dict[str, Path]) -> None:
    """The page follows the wish for light or dark."""
    for scheme, dark in (("light", False), ("dark", True)):
        with Visit(browser, pages["small"], color_scheme=scheme) as visit:
            colour = visit.page.evaluate("getComputedStyle(document.body).backgroundColor")
            shade = sum(int(part) for part in colour.removeprefix("rgb(").removesuffix(")").split(", "))
            assert (shade < 150) == dark


def test_page_prints(browser: Any, pages: dict[str, Path]) -> None:
    """Printed to PDF the page has its tables and no controls."""
    with Visit(browser, pages["turbidites"]) as visit:
        visit.page.emulate_media(media="print")
        assert visit.page.locator("button:visible, select:visible").count() == 0
        assert visit.page.pdf(format="A4").startswith(b"%PDF")
