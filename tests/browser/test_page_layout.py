"""Every kind of page in a browser: widths, light and dark, without scripts, and for readers."""

from collections.abc import Iterator
from pathlib import Path

import pytest
from axe_playwright_python.sync_playwright import Axe
from playwright.sync_api import Browser, BrowserContext, Page

KINDS = [
    "index.html",
    "formulations/citrate-phosphate.html",
    "formulations/plain-water.html",
    "formulations/sanitising-bath.html",
    "families/pyrophosphate.html",
    "reagents.html",
    "sources.html",
    "evidence.html",
    "method.html",
]
SMALLEST_TARGET = 24  # px, WCAG 2.2 success criterion 2.5.8
LIVE = "[...document.querySelectorAll('[data-value]')].map(e => e.dataset.value + e.textContent)"
BEYOND = """() => [...document.querySelectorAll('main *')]
    .filter(e => e.getBoundingClientRect().right > innerWidth + 1)
    .filter(e => !e.closest('.scroll') && !e.closest('svg'))
    .map(e => e.outerHTML.slice(0, 80))"""
SMALL = """(least) => [...document.querySelectorAll('button, input, select, summary')]
    .filter(e => e.checkVisibility())
    .filter(e => e.getBoundingClientRect().height < least)
    .map(e => e.outerHTML.slice(0, 80))"""


@pytest.fixture(params=[(1280, "light"), (390, "dark"), (360, "light")], ids=str)
def screen(request: pytest.FixtureRequest, browser: Browser) -> Iterator[BrowserContext]:
    width, scheme = request.param
    # axe is put into the page from outside, which the page's own policy would refuse.
    fresh = browser.new_context(
        viewport={"width": width, "height": 900},
        color_scheme=scheme,
        offline=True,
        bypass_csp=True,
    )
    yield fresh
    fresh.close()


def opened(context: BrowserContext, path: Path) -> Page:
    page = context.new_page()
    page.goto(path.as_uri())
    return page


@pytest.mark.parametrize("name", KINDS)
def test_a_page_fits_its_width_and_its_readers(
    screen: BrowserContext, site: Path, name: str
) -> None:
    page = opened(screen, site / name)
    assert page.evaluate("document.documentElement.scrollWidth <= innerWidth")
    assert page.evaluate(BEYOND) == []
    assert page.evaluate(SMALL, SMALLEST_TARGET) == []
    violations = Axe().run(page).response["violations"]
    assert [(each["id"], each["nodes"][0]["html"]) for each in violations] == []


@pytest.mark.parametrize("name", KINDS)
def test_a_page_is_whole_without_scripts(browser: Browser, site: Path, name: str) -> None:
    context = browser.new_context(java_script_enabled=False, offline=True)
    page = opened(context, site / name)
    assert page.locator("h1").is_visible()
    for picture in page.locator(".plot-picture > svg").all():
        box = picture.bounding_box()
        assert box is not None
        assert box["width"] > 300
    for control in page.locator("main :is(input, select, button)").all():
        assert control.is_disabled() or not control.is_visible()
    context.close()


@pytest.mark.parametrize("folder", ["formulations", "families"])
def test_the_engine_starts_with_the_numbers_of_the_build(
    browser: Browser, page: Page, site: Path, folder: str
) -> None:
    """A page that comes alive at its own conditions changes none of its words."""
    context = browser.new_context(java_script_enabled=False, offline=True)
    still = context.new_page()
    for path in sorted((site / folder).glob("*.html")):
        page.goto(path.as_uri())
        page.wait_for_selector("body.live")
        still.goto(path.as_uri())
        words = [
            (element.get_attribute("data-value") or "") + (element.text_content() or "")
            for element in still.query_selector_all("[data-value]")
        ]
        assert page.evaluate(LIVE) == words, path.name
    context.close()


def test_an_explorer_prints_its_pictures_and_no_controls(page: Page, site: Path) -> None:
    page.goto((site / "families" / "phosphate.html").as_uri())
    page.emulate_media(media="print")
    assert page.locator(".plot-picture > svg").first.is_visible()
    for hidden in ["nav", ".controls", ".plot-tools", ".numbers"]:
        assert not any(each.is_visible() for each in page.locator(hidden).all()), hidden
