"""Pages that lack something or have been tampered with: they say so, and what stands, stands."""

import json
import re
from collections.abc import Callable
from pathlib import Path

import pytest
from playwright.sync_api import Browser, expect

from .conftest import Visitor
from .readers import SHEET, field, first_drawing, shown


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
