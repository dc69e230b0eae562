"""Pages on wide and narrow screens, on dark ones, and on paper."""

import re
from pathlib import Path
from typing import Final

import pytest
from playwright.sync_api import Browser, Page

from .conftest import Visitor

WIDTHS: Final = (1280, 390, 360)
KINDS: Final = (
    "index.html",
    "formulations/citrate-phosphate.html",
    "families/phosphate.html",
    "sources.html",
    "evidence.html",
    "method.html",
)

TOO_WIDE: Final = """
  () => {
    const room = document.documentElement.clientWidth;
    const scrolls = (element) => {
      for (let at = element.parentElement; at; at = at.parentElement) {
        if (["auto", "scroll", "hidden"].includes(getComputedStyle(at).overflowX)) return true;
      }
      return false;
    };
    return Array.from(document.querySelectorAll("body *"))
      .filter((each) => each.getBoundingClientRect().right > room + 1 && !scrolls(each))
      .map((each) => each.tagName + "." + each.className).slice(0, 5);
  }
"""


def test_no_page_scrolls_sideways(visitor: Visitor) -> None:
    """Every seventh page, its engine answering a reading, at every width, tablets' too."""
    page = visitor.page
    for path in sorted(visitor.site.rglob("*.html"))[::7]:
        name = path.relative_to(visitor.site).as_posix()
        visitor.open(name, "#reading=7.1" if name.startswith("formulations/") else "")
        for width in (*WIDTHS, 768, 1024):
            page.set_viewport_size({"width": width, "height": 800})
            assert sideways(page) <= 0, f"{name} at {width} px: {page.evaluate(TOO_WIDE)}"


@pytest.mark.parametrize("width", WIDTHS)
def test_no_page_scrolls_sideways_with_plots_and_tables_open(visitor: Visitor, width: int) -> None:
    """Plots drawn, every table of numbers open, conditions away from the page's own."""
    page = visitor.page
    page.set_viewport_size({"width": width, "height": 800})
    for name in KINDS[1:3]:
        visitor.open(name, "#temperature=12.5")
        for figure in page.locator("figure.plot").all():
            figure.scroll_into_view_if_needed()
            figure.locator("details.numbers summary").click()
            page.wait_for_timeout(400)
        page.locator("figure.live").nth(3).wait_for(timeout=30_000)
        assert sideways(page) <= 0, f"{name}: {page.evaluate(TOO_WIDE)}"
        for figure in page.locator("figure.live").all():
            plot = figure.locator(".plot-live").bounding_box()
            assert plot is not None
            assert plot["width"] == pytest.approx(plot["height"] * 520 / 336, rel=0.02)


def sideways(page: Page) -> int:
    """Return by how many px a page is wider than its window, once plots have its new width."""
    for _ in range(20):
        excess = int(page.evaluate("document.scrollingElement.scrollWidth - innerWidth"))
        if excess <= 0:
            break
        page.wait_for_timeout(100)
    return excess


@pytest.mark.parametrize("name", KINDS)
def test_a_dark_screen_gets_a_dark_page(visitor: Visitor, name: str) -> None:
    page = visitor.page
    lightness = """(name) => {
      const [red, green, blue] = getComputedStyle(document.body)[name].match(/[0-9.]+/g);
      return (0.2126 * red + 0.7152 * green + 0.0722 * blue) / 255;
    }"""
    page.emulate_media(color_scheme="light")
    visitor.open(name)
    assert page.evaluate(lightness, "backgroundColor") > 0.9
    assert page.evaluate(lightness, "color") < 0.25
    page.emulate_media(color_scheme="dark")
    assert page.evaluate(lightness, "backgroundColor") < 0.15
    assert page.evaluate(lightness, "color") > 0.75


def test_on_paper_drawings_take_the_place_of_plots(visitor: Visitor) -> None:
    """An explorer that shows a plot on the screen prints the drawing, dark screen or not."""
    page = visitor.open(KINDS[2])
    page.emulate_media(color_scheme="dark")
    figure = page.locator("figure.plot").first
    figure.scroll_into_view_if_needed()
    page.locator("figure.live").first.wait_for(timeout=30_000)
    page.emulate_media(media="print", color_scheme="dark")
    for each in page.locator("figure.plot").all():
        assert each.locator(".plot-picture svg").is_visible()
        assert each.locator(".plot-tools").is_hidden()
    assert page.locator(".plot-live:visible").count() == 0
    ink = "() => getComputedStyle(document.querySelector('.plot-picture svg')).color"
    assert max(int(part) for part in re.findall(r"\d+", page.evaluate(ink))[:3]) < 100


def test_without_javascript_no_page_scrolls_sideways(browser: Browser, site: Path) -> None:
    """Every page of the site on the narrowest screen, where the longest formulas show."""
    context = browser.new_context(
        java_script_enabled=False, offline=True, viewport={"width": 360, "height": 800}
    )
    page = context.new_page()
    for path in sorted(site.rglob("*.html")):
        page.goto(path.as_uri())
        assert page.evaluate("document.scrollingElement.scrollWidth") <= 360, path.name
        assert page.locator("main").inner_text().strip() != "", path.name
    context.close()
