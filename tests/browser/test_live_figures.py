"""Figures while numbers move: plots, legends, tools, tables, files, and paper."""

import re
from pathlib import Path

from playwright.sync_api import expect

from .conftest import Visitor
from .readers import EXPLORER, SHEET, bring, field, first_drawing, shown


def test_plots_take_the_place_of_drawings_when_they_come_into_sight(visitor: Visitor) -> None:
    page = visitor.open(SHEET)
    page.wait_for_timeout(1500)
    assert page.locator("figure.live").count() == 0
    assert "bokeh.min.js" not in "".join(visitor.requests)
    bring(page, "drift")
    plot = page.locator('figure[data-figure="drift"]')
    expect(plot.locator(".plot-picture")).to_be_hidden()
    expect(plot.locator(".plot-live")).to_be_visible()
    expect(plot.locator(".plot-live")).to_have_attribute("aria-label", re.compile("pH goes from"))
    assert sum(url.endswith("bokeh.min.js") for url in visitor.requests) == 1


def test_figures_out_of_sight_wait(visitor: Visitor) -> None:
    """The last figure's words stay as they are until somebody looks."""
    page = visitor.open(EXPLORER)
    words = page.locator('figure[data-figure="logs"] [data-summary]')
    before = words.inner_text()
    page.evaluate("scrollTo(0, document.scrollingElement.scrollHeight)")
    page.wait_for_timeout(200)
    page.set_viewport_size({"width": 1280, "height": 300})
    page.evaluate("scrollTo(0, document.scrollingElement.scrollHeight)")
    page.wait_for_timeout(200)
    page.evaluate(
        """() => {
          const slider = document.querySelector("[type=range][data-input=total]");
          slider.value = slider.min;
          slider.dispatchEvent(new Event("input", { bubbles: true }));
        }"""
    )
    page.wait_for_timeout(300)
    assert words.inner_text() == before
    words.scroll_into_view_if_needed()
    expect(words).not_to_have_text(before)


def test_a_legend_switches_lines_of_a_plot(visitor: Visitor) -> None:
    page = visitor.open(SHEET)
    bring(page, "fractions")
    figure = page.locator('figure[data-figure="fractions"]')
    button = figure.locator("button[data-series]").first
    visible = """() => Bokeh.documents.map((each) => each.roots()[0].renderers[0].visible)"""
    assert page.evaluate(visible)[0] is True
    button.click()
    expect(button).to_have_attribute("aria-pressed", "false")
    assert page.evaluate(visible)[0] is False
    field(page, "temperature").fill("30")
    figure.scroll_into_view_if_needed()
    page.wait_for_timeout(300)
    assert page.evaluate(visible)[0] is False, "new numbers bring a hidden line back"
    button.press("Enter")
    expect(button).to_have_attribute("aria-pressed", "true")
    assert page.evaluate(visible)[0] is True


def test_tools_zoom_and_show_all_again(visitor: Visitor) -> None:
    page = visitor.open(SHEET)
    bring(page, "fractions")
    figure = page.locator('figure[data-figure="fractions"]')
    zoom = figure.locator('[data-tool="zoom"]')
    zoom.press("Enter")
    expect(zoom).to_have_attribute("aria-pressed", "true")
    figure.locator('[data-tool="wheel"]').click()
    expect(zoom).to_have_attribute("aria-pressed", "false")
    zoom.click()
    box = figure.locator(".plot-live").bounding_box()
    assert box is not None
    x_range = "() => { const r = Bokeh.documents[0].roots()[0].x_range; return [r.start, r.end]; }"
    page.mouse.move(box["x"] + 0.4 * box["width"], box["y"] + 0.3 * box["height"])
    page.mouse.down()
    page.mouse.move(box["x"] + 0.6 * box["width"], box["y"] + 0.7 * box["height"], steps=5)
    page.mouse.up()
    low, high = page.evaluate(x_range)
    assert 3 < low < high < 10
    figure.locator('[data-tool="reset"]').click()
    assert page.evaluate(x_range) == [0, 14]


def test_a_picture_can_be_saved(visitor: Visitor) -> None:
    page = visitor.open(SHEET)
    bring(page, "fractions")
    with page.expect_download() as download:
        page.locator('figure[data-figure="fractions"] [data-tool="save"]').click()
    assert download.value.suggested_filename == "tris-assay-fractions.png"
    saved = Path(download.value.path()).read_bytes()
    assert saved.startswith(b"\x89PNG")
    assert len(saved) > 5_000


def test_numbers_follow_and_can_be_taken_away(visitor: Visitor) -> None:
    """The table under a figure is of the conditions typed; the file has every point and says so."""
    page = visitor.open(SHEET)
    figure = page.locator('figure[data-figure="titration"]')
    field(page, "temperature").fill("5")
    before = figure.locator("tbody").inner_text()
    figure.locator("details.numbers summary").click()
    expect(figure.locator("tbody")).not_to_have_text(before)
    rows = figure.locator("tbody tr").count()
    with page.expect_download() as download:
        figure.locator('[data-action="download"]').click()
    assert download.value.suggested_filename == "tris-assay-titration.csv"
    text = Path(download.value.path()).read_text("utf-8-sig")
    remarks = [line for line in text.splitlines() if line.startswith("#")]
    body = [line for line in text.splitlines() if not line.startswith("#")]
    assert any("temperature 5" in line for line in remarks)
    assert any("°C" in line for line in remarks)
    assert body[0].startswith('"acid ← added → base (mmol/kg)","pH: ')
    assert len(body) - 1 == 161 > rows
    numbers = [[float(cell) for cell in line.split(",")] for line in body[1:]]
    assert min(x for x, *_ in numbers) < 0 < max(x for x, *_ in numbers)


def test_paper_shows_the_definition(visitor: Visitor) -> None:
    """While it prints, a page is back at its own conditions; then it is where it was."""
    page = visitor.open(SHEET)
    own, drawing = shown(page, "pH"), first_drawing(page)
    field(page, "temperature").fill("4")
    cold = shown(page, "pH")
    page.evaluate("dispatchEvent(new Event('beforeprint'))")
    assert shown(page, "pH") == own
    assert field(page, "temperature").input_value() == "25"
    assert first_drawing(page) == drawing
    page.evaluate("dispatchEvent(new Event('afterprint'))")
    assert shown(page, "pH") == cold
    assert field(page, "temperature").input_value() == "4"


def test_plots_take_the_colours_of_a_dark_screen(visitor: Visitor) -> None:
    page = visitor.open(SHEET)
    bring(page, "fractions")
    ink = "() => Bokeh.documents[0].roots()[0].title.text_color"
    colour = "() => getComputedStyle(document.body).getPropertyValue('--figure-ink').trim()"
    light = page.evaluate(ink)
    page.emulate_media(color_scheme="dark")
    page.wait_for_timeout(300)
    dark = page.evaluate(ink)
    assert dark != light
    assert dark == page.evaluate(colour)
