"""The view for bright sunlight: black on white, remembered, and carried by every page."""

import re

import pytest
from playwright.sync_api import expect

from .conftest import Visitor
from .readers import EXPLORER, SHEET, bring, field
from .test_accessibility import violations

REFUSE = """
  Object.defineProperty(window, "localStorage", {
    get() { throw new DOMException("refused", "SecurityError"); } });
"""
# WCAG 2.2, relative luminance; of every text that is seen, against what lies under it.
PALEST = """
  () => {
    const parse = (text) => text.match(/[\\d.]+/g).map(Number);
    const luminance = ([r, g, b]) => {
      const [x, y, z] = [r, g, b].map((each) => each / 255).map((each) =>
        each <= 0.04045 ? each / 12.92 : ((each + 0.055) / 1.055) ** 2.4);
      return 0.2126 * x + 0.7152 * y + 0.0722 * z;
    };
    const under = (element) => {
      for (let at = element; at; at = at.parentElement) {
        const colour = parse(getComputedStyle(at).backgroundColor);
        if (colour.length === 3 || colour[3] === 1) return colour;
      }
      return [255, 255, 255];
    };
    const found = [];
    const walker = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
    while (walker.nextNode()) {
      const element = walker.currentNode.parentElement;
      if (walker.currentNode.data.trim() === "" || !element.checkVisibility()) continue;
      if (element.closest("svg.figure, .plot-live") !== null) continue; // test_figures has them
      const style = getComputedStyle(element);
      const [one, other] = [luminance(parse(style.color)), luminance(under(element))];
      const ratio = (Math.max(one, other) + 0.05) / (Math.min(one, other) + 0.05);
      let seen = 1;
      for (let at = element; at; at = at.parentElement) {
        seen *= Number(getComputedStyle(at).opacity);
      }
      found.push([seen < 1 ? 0 : ratio, element.tagName + "." + element.className]);
    }
    return found.sort((a, b) => a[0] - b[0])[0].concat(found.length);
  }
"""


@pytest.mark.parametrize(("width", "scheme"), [(1280, "light"), (390, "dark")])
def test_sunlight_is_kept_from_page_to_page(visitor: Visitor, width: int, scheme: str) -> None:
    page = visitor.page
    page.set_viewport_size({"width": width, "height": 800})
    page.emulate_media(color_scheme=scheme, reduced_motion="reduce")
    visitor.open(SHEET)
    button = page.locator('[data-action="contrast"]')
    expect(button).to_have_attribute("aria-pressed", "false")
    size = page.evaluate("parseFloat(getComputedStyle(document.body).fontSize)")
    button.click()
    expect(button).to_have_attribute("aria-pressed", "true")
    page.reload()
    expect(button).to_have_attribute("aria-pressed", "true")
    look = page.evaluate(
        "() => { const style = getComputedStyle(document.body);"
        "return [style.color, style.backgroundColor, parseFloat(style.fontSize)]; }"
    )
    assert look[:2] == ["rgb(0, 0, 0)", "rgb(255, 255, 255)"]
    assert look[2] > size
    field(page, "reading").fill("8.3")
    expect(page.locator('[data-fault="status"]')).to_have_attribute("data-state", "found")
    others = ("index.html", "evidence.html") if width == 390 else (EXPLORER, "reagents.html")
    for name in (SHEET, *others):
        if name != SHEET:
            visitor.open(name)
        expect(page.locator("html")).to_have_attribute("data-contrast", "high")
        palest, where, texts = page.evaluate(PALEST)
        assert palest >= 7.0, f"{name}: {where}"
        assert texts > 40
        assert page.evaluate("document.scrollingElement.scrollWidth - innerWidth") <= 0, name
        if (name, width) in ((SHEET, 390), (EXPLORER, 1280)):
            assert violations(page) == []
    button.click()
    visitor.open(SHEET)
    expect(button).to_have_attribute("aria-pressed", "false")
    expect(page.locator("html")).not_to_have_attribute("data-contrast", "high")


def test_plots_follow(visitor: Visitor) -> None:
    """Drawings and plots take their colours and widths from the page, before and after."""
    page = visitor.page
    page.emulate_media(color_scheme="dark")
    visitor.open(SHEET)
    bring(page, page.locator("figure.plot").first.get_attribute("data-figure") or "")
    plot = page.locator("figure.live .plot-live").first
    assert plot.evaluate("(e) => e.style.background") != "rgb(255, 255, 255)"
    page.locator('[data-action="contrast"]').click()
    expect(plot).to_have_attribute("style", re.compile(r"background: rgb\(255, 255, 255\)"))
    width = page.locator("svg.figure .line").first.evaluate(
        "(e) => getComputedStyle(e).strokeWidth"
    )
    assert width == "3.2px"


def test_without_storage_it_holds_for_the_page_at_hand(visitor: Visitor) -> None:
    visitor.page.add_init_script(REFUSE)
    page = visitor.open("method.html")
    page.locator('[data-action="contrast"]').click()
    expect(page.locator("html")).to_have_attribute("data-contrast", "high")
