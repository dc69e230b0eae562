"""Live pages as a reader uses them: what is typed and slid is answered at once, and rightly."""

import json
import re
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from playwright.sync_api import Browser, Page, expect

from bufferfolio.buffering import henderson_hasselbalch
from bufferfolio.definitions import Library
from bufferfolio.formatting import fixed, significant
from bufferfolio.reading import read_library
from bufferfolio.subjects import state_at, subject_of
from bufferfolio.temperature import constants_at
from bufferfolio.water import ZERO_CELSIUS

from .conftest import Visitor

SHEET = "formulations/tris-assay.html"
EXPLORER = "families/phosphate.html"


@pytest.fixture(scope="module")
def library(systems: Path) -> Library:
    return read_library(systems)


def field(page: Page, name: str):
    """Return a text field or a choice by the name of its input."""
    return page.locator(f'[data-input="{name}"]:not([type=range])')


def slider(page: Page, name: str):
    """Return the first slider of an input."""
    return page.locator(f'[type=range][data-input="{name}"]').first


def shown(page: Page, name: str) -> str:
    """Return the first text of a live value."""
    return page.locator(f'[data-value="{name}"]').first.inner_text()


def pages_of(site: Path) -> list[str]:
    return sorted(path.relative_to(site).as_posix() for path in site.rglob("*.html"))


def test_every_page_opens_quietly_and_agrees_with_its_own_cases(visitor: Visitor) -> None:
    """All pages, each with its engine's cases; the visitor fails on any noise of any of them."""
    names = pages_of(visitor.site)
    assert len(names) >= 10 + 14 + 3
    for name in names:
        page = visitor.open(name)
        if name.startswith(("formulations/", "families/")):
            expect(page.locator("[data-checks]")).to_contain_text("all agree")
            expect(page.locator("body")).to_have_class("live")


def test_every_static_number_is_what_the_engine_says(visitor: Visitor) -> None:
    """Leaving a page's conditions and coming back changes no character of any live value."""
    texts = "() => Array.from(document.querySelectorAll('[data-value]'), (e) => e.textContent)"
    for name in pages_of(visitor.site):
        if not name.startswith(("formulations/", "families/")):
            continue
        written = visitor.page.context.browser.new_context(java_script_enabled=False)
        still = written.new_page()
        still.goto((visitor.site / name).as_uri())
        before = [each.strip() for each in still.locator("[data-value]").all_text_contents()]
        written.close()
        page = visitor.open(name)
        field(page, "temperature").fill(slider(page, "temperature").get_attribute("max") or "")
        page.locator('[data-action="defaults"]').first.click()
        assert [each.strip() for each in page.evaluate(texts)] == before, name


@pytest.mark.parametrize("key", ["tris-assay", "spent-cleaner", "holding-water"])
@pytest.mark.parametrize("strength", ["1", "0.35"])
def test_typed_conditions_give_the_numbers_of_the_build(
    visitor: Visitor, library: Library, key: str, strength: str
) -> None:
    """The page's answers are those of the Python engine under the same conditions."""
    page = visitor.open(f"formulations/{key}.html")
    subject = subject_of(library.formulations[key], library)
    celsius = float(field(page, "temperature").get_attribute("data-min") or "") + 3.7
    field(page, "temperature").fill(f"{celsius:.1f}")
    field(page, "strength").fill(strength)
    kelvin = float(f"{celsius:.1f}") + ZERO_CELSIUS
    state = state_at(subject, kelvin, float(strength))
    constants = constants_at(subject.mixture.families, np.array(kelvin))
    assert shown(page, "pH") == fixed(state.pH, 2)
    assert shown(page, "ionic_strength") == significant(state.ionic_strength)
    assert shown(page, "capacity") == significant(state.capacity * 1e3)
    if strength == "1":
        estimate = henderson_hasselbalch(subject.mixture, constants.pK)
        expected = "none" if np.isnan(estimate.pH) else fixed(estimate.pH, 2)
        assert shown(page, "estimate") == expected
    row = page.locator('tr[data-species="H+"] [data-value="molality"]')
    assert row.inner_text() == significant(float(state.forms.hydrogen))


def test_numbers_stand_before_the_input_event_is_over(visitor: Visitor) -> None:
    """No frame lies between an input and its numbers."""
    page = visitor.open(SHEET)
    before, after = page.evaluate(
        """() => {
          const slider = document.querySelector("[type=range][data-input=temperature]");
          const pH = document.querySelector("[data-value=pH]");
          const before = pH.textContent;
          slider.value = slider.min;
          slider.dispatchEvent(new Event("input", { bubbles: true }));
          return [before, pH.textContent];
        }"""
    )
    assert float(after) > float(before) + 0.5  # Tris, 25 °C to 2 °C


def test_fields_and_sliders_move_together(visitor: Visitor) -> None:
    page = visitor.open(SHEET)
    field(page, "temperature").fill("10")
    for each in page.locator("[type=range][data-input=temperature]").all():
        assert each.input_value() == "10"
    slider(page, "temperature").press("ArrowRight")
    assert float(field(page, "temperature").input_value()) > 10
    page = visitor.open(EXPLORER)
    field(page, "total").fill("0.001")
    assert float(slider(page, "total").input_value()) == pytest.approx(-3.0, abs=0.01)
    slider(page, "total").press("Home")
    lowest = float(field(page, "total").get_attribute("data-min") or "")
    assert float(field(page, "total").input_value()) == pytest.approx(lowest)


def test_a_decimal_comma_is_a_decimal_point(visitor: Visitor) -> None:
    page = visitor.open(SHEET)
    field(page, "temperature").fill("12.5")
    with_point = shown(page, "pH")
    field(page, "temperature").fill("25")
    field(page, "temperature").fill("12,5")
    assert shown(page, "pH") == with_point
    assert page.evaluate("location.hash") == "#temperature=12.5"


@pytest.mark.parametrize(
    ("typed", "words"),
    [
        ("warm", "“warm” is not a number."),
        ("", "Give a number"),
        ("99", "99 is too high."),
        ("-40", "-40 is too low."),
        ("1.2.3", "“1.2.3” is not a number."),
        ("1e999", "too high"),
    ],
)
def test_a_faulty_input_is_answered_and_the_last_answer_kept(
    visitor: Visitor, typed: str, words: str
) -> None:
    page = visitor.open(SHEET)
    field(page, "temperature").fill("10")
    answer = shown(page, "pH")
    field(page, "temperature").fill(typed)
    expect(page.locator('[data-message="temperature"]')).to_contain_text(words)
    expect(field(page, "temperature")).to_have_attribute("aria-invalid", "true")
    assert page.locator("[data-live].stale").count() == page.locator("[data-live]").count() > 0
    assert shown(page, "pH") == answer
    assert page.evaluate("location.hash") == "#temperature=10"
    field(page, "temperature").fill("25")
    expect(page.locator('[data-message="temperature"]')).to_have_text("")
    assert page.locator("[data-live].stale").count() == 0
    assert field(page, "temperature").get_attribute("aria-invalid") is None


def test_conditions_are_kept_in_the_address(visitor: Visitor) -> None:
    """A bookmark, an edited address and the way back all set the conditions."""
    page = visitor.open(SHEET, "#temperature=4&strength=0.5&batch=20")
    assert field(page, "temperature").input_value() == "4"
    assert field(page, "strength").input_value() == "0.5"
    assert field(page, "batch").input_value() == "20"
    cold = shown(page, "pH")
    field(page, "temperature").fill("25")
    assert page.evaluate("location.hash") == "#strength=0.5&batch=20"
    page.evaluate("location.hash = '#temperature=4'")
    expect(field(page, "temperature")).to_have_value("4")
    expect(field(page, "strength")).to_have_value("1")
    page.go_back()
    expect(field(page, "temperature")).to_have_value("25")
    expect(field(page, "strength")).to_have_value("0.5")
    page = visitor.open(SHEET, "#temperature=4&strength=0.5&colour=red")
    assert shown(page, "pH") == cold


def test_going_to_a_place_on_the_page_keeps_the_conditions(visitor: Visitor) -> None:
    page = visitor.open(SHEET)
    page.locator('nav a[href="#species"]').click()
    expect(field(page, "temperature")).to_have_value("25")
    field(page, "temperature").fill("7")
    answer = shown(page, "pH")
    page.locator('nav a[href="#species"]').click()
    page.wait_for_timeout(100)
    assert field(page, "temperature").input_value() == "7"
    assert shown(page, "pH") == answer
    assert page.evaluate("location.hash") == "#temperature=7"


def test_reset_goes_back_to_the_definition(visitor: Visitor) -> None:
    page = visitor.open(SHEET)
    own = shown(page, "pH")
    field(page, "temperature").fill("3")
    field(page, "strength").fill("2")
    assert shown(page, "pH") != own
    page.locator('[data-action="defaults"]').first.click()
    assert shown(page, "pH") == own
    assert page.evaluate("location.hash") == ""


def test_return_in_a_field_does_not_leave_the_page(visitor: Visitor) -> None:
    page = visitor.open(SHEET)
    field(page, "batch").fill("3")
    field(page, "batch").press("Enter")
    assert field(page, "batch").input_value() == "3"
    assert "?" not in page.url


def test_the_make_up_follows_batch_and_strength(visitor: Visitor) -> None:
    """Six grams to the litre are 120 g for 20 L, and half of it at half strength."""
    page = visitor.open(SHEET)
    amount = page.locator('tr[data-portion="0"] [data-value="amount"]')
    assert amount.inner_text() == "6.06 g"
    field(page, "batch").fill("20")
    assert amount.inner_text() == "121.2 g"
    assert shown(page, "water") == "20 L"
    field(page, "strength").fill("0,5")
    assert amount.inner_text() == "60.6 g"
    field(page, "batch-unit").select_option("mL")
    assert amount.inner_text() == "60.6 mg"
    field(page, "batch-unit").select_option("m3")
    assert amount.inner_text() == "60.6 kg"
    assert "batch-unit=m3" in page.evaluate("location.hash")


def first_drawing(page: Page) -> str:
    return page.locator(".plot-picture").first.inner_html()


def bring(page: Page, key: str) -> None:
    """Bring a figure into sight and wait for its plot."""
    figure = page.locator(f'figure[data-figure="{key}"]')
    figure.scroll_into_view_if_needed()
    expect(figure).to_have_class(re.compile(r"\blive\b"), timeout=30_000)


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


@pytest.mark.parametrize(
    ("path", "before", "after"),
    [
        (SHEET, '"enthalpy":47450', '"enthalpy":47451'),
        ("assets/activity.js", "0.3 * ionicStrength", "0.30001 * ionicStrength"),
        ("assets/water.js", "999.83952", "999.8396"),
    ],
)
def test_a_page_that_no_longer_agrees_withholds_its_answers(
    stranger: Callable[[Path], Visitor],
    site: Path,
    tmp_path: Path,
    path: str,
    before: str,
    after: str,
) -> None:
    """One constant changed in its seventh digit is enough."""
    copy = copied(site, tmp_path / "copy")
    tamper(copy / path, before, after)
    page = stranger(copy).open(SHEET)
    expect(page.locator("body")).to_have_class("withheld")
    expect(page.locator("[data-checks]")).to_contain_text("Live answers are withheld")
    assert page.locator("[data-input]:enabled").count() == 0
    assert shown(page, "pH") == "8.16"
    assert page.locator(".plot-picture svg").count() == 5


def copied(site: Path, folder: Path) -> Path:
    """Copy what one sheet needs, Bokeh left out."""
    for name in [SHEET, *(path.relative_to(site) for path in (site / "assets").glob("*"))]:
        if Path(name).name == "bokeh.min.js":
            continue
        target = folder / name
        target.parent.mkdir(parents=True, exist_ok=True)
        target.write_bytes((site / name).read_bytes())
    return folder


def tamper(path: Path, before: str, after: str) -> None:
    text = path.read_text("utf-8")
    if path.suffix == ".html":
        head, data, tail = re.split(r"(?<=id=\"page-data\">)(.*?)(?=</script>)", text, flags=re.S)
        data = json.dumps(json.loads(data), ensure_ascii=False, separators=(",", ":"))
        text = head + data + tail
    assert before in text, f"{before} is not in {path.name} any more"
    path.write_text(text.replace(before, after), "utf-8")


def test_without_bokeh_drawings_stay_and_follow(
    stranger: Callable[[Path], Visitor], site: Path, tmp_path: Path
) -> None:
    """Live answers, legends and tables do not need it."""
    copy = copied(site, tmp_path / "copy")
    visitor = stranger(copy)
    page = visitor.open(SHEET)
    figure = page.locator('figure[data-figure="fractions"]')
    figure.scroll_into_view_if_needed()
    page.wait_for_timeout(1500)
    assert page.locator("figure.live, figure.embedding").count() == 0
    assert page.locator(".plot-live").count() == 0
    expect(figure.locator(".plot-tools")).to_be_hidden()
    before = first_drawing(page)
    field(page, "temperature").fill("40")
    figure.scroll_into_view_if_needed()
    expect(figure.locator(".plot-picture")).to_be_visible()
    page.wait_for_timeout(300)
    assert first_drawing(page) != before
    line = figure.locator(".plot-picture path.s0")
    assert line.count() == 1
    figure.locator("button[data-series]").first.click()
    assert line.count() == 0
    assert all("bokeh.min.js" in line or "ERR_FILE" in line for line in visitor.complaints)


def test_the_first_live_drawing_is_the_static_one(
    stranger: Callable[[Path], Visitor], site: Path, tmp_path: Path
) -> None:
    """Bokeh left out; away from the page's conditions and back, every drawing is the same text."""
    copy = copied(site, tmp_path / "copy")
    page = stranger(copy).open(SHEET)
    pictures = page.locator(".plot-picture")
    # Both sides as the browser writes them.
    before = [each.inner_html().strip() for each in pictures.all()]
    away = []
    for place, typed in ((away, "40"), (None, "25")):
        field(page, "temperature").fill(typed)
        for each in pictures.all():
            each.scroll_into_view_if_needed()
            page.wait_for_timeout(150)
        if place is not None:
            place += [each.inner_html().strip() for each in pictures.all()]
    assert away != before
    assert [each.inner_html().strip() for each in pictures.all()] == before


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


def test_without_javascript_everything_is_there(browser: Browser, site: Path) -> None:
    context = browser.new_context(java_script_enabled=False, offline=True)
    page = context.new_page()
    page.goto((site / SHEET).as_uri())
    assert shown(page, "pH") == "8.16"
    assert page.locator(".plot-picture svg path").count() > 20
    expect(page.locator(".plot-picture").first).to_be_visible()
    assert page.locator("[data-input]:enabled").count() == 0
    expect(page.locator("noscript p").first).to_be_visible()
    assert "JavaScript is off" in page.locator("noscript p").first.inner_text()
    page.goto((site / "index.html").as_uri())
    assert page.locator("tr[data-text]").count() >= 10
    expect(page.locator("tr[data-text]").first).to_be_visible()
    context.close()


def test_the_index_is_filtered_by_words_pH_and_temperature(visitor: Visitor) -> None:
    page = visitor.open("index.html")
    rows = page.locator("tr[data-text]")
    every = rows.count()
    assert shown(page, "shown") == f"{every} of {every}"
    page.locator('[data-filter="text"]').fill("tris ASSAY")
    expect(page.locator("tr[data-text]:visible")).to_have_count(1)
    assert shown(page, "shown") == f"1 of {every}"
    page.locator('[data-filter="ph"]').fill("2")
    expect(page.locator("tr[data-text]:visible")).to_have_count(0)
    expect(page.locator("[data-filter-empty]")).to_be_visible()
    page.locator('[data-filter="text"]').fill("")
    page.locator('[data-filter="ph"]').fill("8,2")
    some = page.locator("tr[data-text]:visible").count()
    assert 1 <= some < every
    page.locator('[data-filter="temperature"]').fill("3")
    assert page.locator("tr[data-text]:visible").count() <= some
    page.locator('[data-filter="ph"]').fill("acid")
    expect(page.get_by_text("“acid” is not a number")).to_be_visible()
