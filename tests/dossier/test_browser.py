"""The page in a real browser: nothing leaves it, nothing complains, pointing and the load switch work."""

from __future__ import annotations

import os
import shutil
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from crosscheck.dossier.composing import compose
from crosscheck.dossier.page import page_bytes
from crosscheck.dossier.paper import equation_pictures

from .sections import MARKUP
from .test_writers import plain_plates

CHROMIUM = os.environ.get("CHROMIUM") or shutil.which("chromium") or shutil.which("chromium-browser")
driver = pytest.importorskip(
    "playwright.sync_api", reason="playwright, which drives a browser, is not installed"
)
pytestmark = pytest.mark.skipif(CHROMIUM is None, reason="no Chromium on this machine")
FLAGS = (
    "--no-sandbox",
    "--disable-gpu",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-sync",
)


class Visit:
    """A page with everything it asked for and everything it complained of."""

    def __init__(self, page: Any, path: Path) -> None:
        self.page = page
        self.asked: list[str] = []
        self.complaints: list[str] = []
        page.on("request", lambda request: self.asked.append(request.url))
        page.on("console", lambda message: self.complaints.append(message.text))
        page.on("pageerror", lambda error: self.complaints.append(str(error)))
        self.address = path.resolve().as_uri()
        page.goto(self.address)

    @property
    def strangers(self) -> list[str]:
        """Requests for anything but the page itself."""
        return [url for url in self.asked if url != self.address and not url.startswith("data:")]


@pytest.fixture(scope="module")
def browser() -> Iterator[Any]:
    with driver.sync_playwright() as play:
        opened = play.chromium.launch(executable_path=CHROMIUM, args=list(FLAGS))
        yield opened
        opened.close()


@pytest.fixture
def visit(browser, package) -> Visit:
    return Visit(browser.new_page(viewport={"width": 1200, "height": 900}), package.folder / "dossier.html")


def test_nothing_leaves_the_page_and_nothing_complains(visit):
    assert visit.strangers == []
    assert visit.complaints == []
    shown = visit.page.evaluate("[...document.images].every(i => i.complete && i.naturalWidth > 0)")
    assert shown


def test_pointing_at_a_wall_shows_both_sides(visit, package):
    reading = visit.page.locator(".reading").first
    visit.page.locator(".wall .hit").nth(1).hover(force=True)
    assert reading.locator("h4").inner_text() == "web, pull"
    cells = reading.locator("tbody tr").first.locator("td").all_inner_texts()
    flow = next(f for f in package.result["flows"] if f["load"] == "pull" and f["wall"] == "web")
    most = max((p for p in flow["probes"] if p["fe"] is not None), key=lambda p: abs(p["fe"]))
    assert float(cells[1]) == pytest.approx(most["theory"], rel=1e-3)
    assert float(cells[2]) == pytest.approx(most["fe"], rel=1e-3)


def test_the_keyboard_reaches_every_wall(visit):
    page = visit.page
    page.locator(".point select").first.focus()
    names = []
    for _ in range(3):
        page.keyboard.press("Tab")
        names.append(page.locator(".reading h4").first.inner_text().split(",")[0])
    assert names == ["lower flange", "web", "upper flange"]


def test_the_load_switch_changes_flow_and_numbers(visit):
    page = visit.page
    before = page.locator(".reading").first.inner_text()
    page.locator(".point select").first.select_option(label="jerk")
    after = page.locator(".reading").first.inner_text()
    assert "jerk" in after
    assert before != after
    seen = page.evaluate(
        "[...document.querySelectorAll('.flow')].filter(g => getComputedStyle(g).display !== 'none')"
        ".map(g => g.dataset.load)"
    )
    assert seen == ["1"]


@pytest.mark.parametrize("width", [400, 800, 1600])
def test_nothing_is_wider_than_the_window(visit, width):
    visit.page.set_viewport_size({"width": width, "height": 900})
    assert visit.page.evaluate("document.documentElement.scrollWidth") <= width


def test_it_prints(visit):
    paper = visit.page.pdf(prefer_css_page_size=True)
    assert paper.startswith(b"%PDF")
    assert len(paper) > 100_000


@pytest.mark.long
def test_hostile_words_do_not_run(browser, hostile_evidence, tmp_path):
    document = compose([hostile_evidence], [plain_plates()], None, "2026-01-01", "crosscheck dossier")
    path = tmp_path / "dossier.html"
    path.write_bytes(page_bytes(document, equation_pictures()))
    found = Visit(browser.new_page(), path)
    found.page.locator(".wall .hit").first.hover(force=True)
    assert MARKUP in found.page.locator(".reading h4").first.inner_text()
    assert found.page.evaluate("typeof window.ran") == "undefined"
    assert found.strangers == []
    assert found.complaints == []
