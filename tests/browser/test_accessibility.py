"""WCAG 2.2 AA as far as a program can tell, and what it cannot: names, states and the keyboard."""

from typing import Final

import pytest
from axe_playwright_python.sync_playwright import Axe
from playwright.sync_api import Page, expect

from .conftest import Visitor

TAGS: Final = ("wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa")
KINDS: Final = (
    "index.html",
    "formulations/sanitising-bath.html",
    "families/citrate.html",
    "reagents.html",
    "sources.html",
    "evidence.html",
    "method.html",
)


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("width", [1280, 390])
@pytest.mark.parametrize("name", KINDS)
def test_axe_finds_no_violation(visitor: Visitor, name: str, width: int, scheme: str) -> None:
    """Where a page has figures: plots drawn, tables open and an input complained of."""
    page = visitor.page
    page.set_viewport_size({"width": width, "height": 900})
    page.emulate_media(color_scheme=scheme, reduced_motion="reduce")
    visitor.open(name)
    if page.locator("figure.plot").count():
        use(page)
    assert violations(page) == []


def violations(page: Page) -> list[tuple[str, list[str]]]:
    """Return the rules that a page breaks, each with where."""
    # Without preloading: axe would ask for style sheets, which the page's own policy forbids.
    options = {"runOnly": {"type": "tag", "values": list(TAGS)}, "preload": False}
    response = Axe().run(page, options=options).response
    passed = {each["id"] for each in response["passes"]}
    assert {"color-contrast", "html-has-lang", "document-title"} <= passed, "axe did not look"
    return [
        (each["id"], [str(node["target"]) for node in each["nodes"]])
        for each in response["violations"]
    ]


def use(page: Page) -> None:
    """Bring a page into the state that has most on it."""
    for figure in page.locator("figure.plot").all():
        figure.scroll_into_view_if_needed()
        figure.locator("details.numbers summary").click()
        page.wait_for_timeout(400)
    figure.locator('[data-tool="zoom"]').click()
    buttons = page.locator("button[data-series]")
    if buttons.count():
        buttons.first.click()
    page.locator('[data-input="temperature"]:not([type=range])').fill("hot")
    expect(page.locator("[data-live].stale, [data-page=explorer]").first).to_be_attached()


@pytest.mark.parametrize("name", KINDS[1:3])
def test_plots_have_names_and_no_nameless_stops(visitor: Visitor, name: str) -> None:
    """A plot is one picture with words; nothing inside it takes the keyboard."""
    page = visitor.open(name)
    first = page.locator("figure.plot").first
    first.scroll_into_view_if_needed()
    page.locator("figure.live").first.wait_for(timeout=30_000)
    plot = page.locator("figure.live .plot-live").first
    expect(plot).to_have_attribute("role", "img")
    assert len(plot.get_attribute("aria-label") or "") > 30
    stops = plot.evaluate(
        """(root) => {
          const inside = (node) => Array.from(node.querySelectorAll("*")).flatMap(
            (each) => [each, ...(each.shadowRoot ? inside(each.shadowRoot) : [])]);
          return inside(root).filter((each) => each.tabIndex >= 0).length;
        }"""
    )
    assert stops == 0


def test_a_sheet_can_be_used_with_the_keyboard_alone(visitor: Visitor) -> None:
    """From the top: past the menu, to the temperature, to a plot's tools and its legend."""
    page = visitor.open(KINDS[1])
    for figure in page.locator("figure.plot").all():
        figure.scroll_into_view_if_needed()
        page.wait_for_timeout(400)
    page.locator("figure.live").nth(4).wait_for(timeout=30_000)
    page.locator("h1").click()
    reached: list[str] = []
    for _ in range(90):
        page.keyboard.press("Tab")
        reached.append(
            page.evaluate(
                """() => {
                  const at = document.activeElement;
                  return [at.dataset.input, at.type, at.dataset.action, at.dataset.tool,
                    at.dataset.series === undefined ? "" : "series"].filter(Boolean).join(" ");
                }"""
            )
        )
    assert "temperature text" in reached
    assert "temperature range" in reached
    assert any("defaults" in each for each in reached)
    for tool in ("zoom", "wheel", "reset", "save"):
        assert any(tool in each for each in reached), tool
    assert any("series" in each for each in reached)


def test_every_input_has_a_name_and_its_message(visitor: Visitor) -> None:
    for name in KINDS[1:3]:
        page = visitor.open(name)
        for each in page.locator("[data-input]").all():
            assert each.evaluate("(e) => (e.labels[0] || {}).textContent || e.ariaLabel || ''"), (
                name
            )
        for each in page.locator('[data-input][aria-describedby]:not([type="range"])').all():
            for target in (each.get_attribute("aria-describedby") or "").split():
                assert page.locator(f"#{target}").count() == 1
