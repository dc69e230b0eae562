"""Readings kept on the device: kept, found again, taken away, and what stands in the way."""

import csv
import io
import json
from pathlib import Path

import pytest
from playwright.sync_api import BrowserContext, Page, expect

from .conftest import Visitor, watched
from .readers import SHEET, field
from .test_accessibility import violations

KEY = "bufferfolio-log"
OTHER = "formulations/plain-water.html"
REFUSE = """
  Object.defineProperty(window, "localStorage", {
    get() { throw new DOMException("refused", "SecurityError"); } });
"""
FULL = """
  Storage.prototype.setItem = function (key) {
    if (key === "bufferfolio-log") throw new DOMException("full", "QuotaExceededError"); };
"""


def keep(page: Page, reading: str, note: str = "", initials: str = "") -> None:
    """Keep a reading as a technician does."""
    before = page.locator('[data-log="rows"] tr').count()
    field(page, "reading").fill(reading)
    page.locator("#log-note").fill(note)
    page.locator("#log-initials").fill(initials)
    page.locator('[data-log] [data-action="keep"]').click()
    expect(page.locator('[data-log="rows"] tr')).to_have_count(before + 1)
    expect(page.locator('[data-log="told"]')).to_contain_text("Kept: pH")


def rows(page: Page) -> list[str]:
    return page.locator('[data-log="rows"] tr').all_inner_texts()


def downloaded(page: Page, action: str) -> list[dict[str, str]]:
    """Download a log and read it as a program does."""
    with page.expect_download() as waiting:
        page.locator(f'[data-action="{action}"]').click()
    raw = Path(waiting.value.path()).read_bytes()
    assert raw.startswith(b"\xef\xbb\xbf")
    assert raw.count(b"\n") == raw.count(b"\r\n")
    return list(csv.DictReader(io.StringIO(raw.decode("utf-8-sig"), newline="")))


@pytest.mark.parametrize("width", [1280, 390])
def test_a_reading_is_kept_found_again_and_taken_away(visitor: Visitor, width: int) -> None:
    page = visitor.page
    page.set_viewport_size({"width": width, "height": 800})
    visitor.open(SHEET)
    page.locator('[data-log] [data-action="keep"]').click()
    expect(page.locator('[data-log="told"]')).to_contain_text("no reading to keep")
    keep(page, "8,35", '=cmd|"x"!A1, second line', "AB")
    keep(page, "8.16")
    page.reload()
    assert len(rows(page)) == 2
    assert "8.16" in rows(page)[0]
    assert "AB" in rows(page)[1]
    newest, first = downloaded(page, "log-own")
    assert first["formulation"] == "Corrin assay buffer, cold and warm"
    assert first["key"] == "tris-assay"
    assert first["temperature (°C)"] == "25"
    assert float(first["reading (pH)"]) == 8.35
    assert first["expected (pH)"] == "8.16"
    assert float(first["band (± pH)"]) > 0.0
    assert "Outside tolerance" in first["verdict"]
    assert first["suggested first portion"].endswith("mL")
    assert first["likeliest fault"]
    assert first["note"] == '\'=cmd|"x"!A1, second line'
    assert first["initials"] == "AB"
    assert newest["likeliest fault"] == "nothing is wrong"
    assert newest["time"] >= first["time"]
    assert page.evaluate("(time) => Math.abs(new Date(time) - new Date()) < 1e6", first["time"])
    if width == 390:
        assert violations(page) == []


def test_all_formulations_share_one_log(visitor: Visitor, context: BrowserContext) -> None:
    """A second page keeps its own reading; the first hears of it; the index hands out both."""
    page = visitor.open(SHEET)
    keep(page, "8.2")
    other = watched(context.new_page(), visitor.site)
    keep(other.open(OTHER), "6.1")
    assert len(rows(other.page)) == 1
    expect(page.locator('[data-action="log-all"]')).to_contain_text("(2)")
    keep(page, "8.3")
    assert [row["key"] for row in downloaded(other.page, "log-all")] == [
        "tris-assay",
        "plain-water",
        "tris-assay",
    ]
    index = visitor.open("index.html")
    expect(index.locator('[data-log="count"]')).to_contain_text("3 readings of 2 formulations")
    assert len(downloaded(index, "log-all")) == 3
    other.assert_quiet()


def test_what_was_deleted_can_be_brought_back(visitor: Visitor) -> None:
    page = visitor.open(SHEET)
    for reading in ("8.1", "8.2", "8.3"):
        keep(page, reading)
    before = rows(page)
    page.get_by_role("button", name="Delete the reading").nth(1).click()
    assert rows(page) == [before[0], before[2]]
    undo = page.locator('[data-log="undo"]')
    expect(undo).to_be_focused()
    undo.press("Enter")
    assert rows(page) == before
    expect(undo).to_be_hidden()


@pytest.mark.parametrize("trouble", [REFUSE, FULL])
def test_a_browser_that_keeps_nothing(visitor: Visitor, trouble: str) -> None:
    """The page says so, keeps readings while it stands, and answers as ever."""
    visitor.page.add_init_script(trouble)
    page = visitor.open(SHEET)
    keep(page, "8.3", "kept here")
    expect(page.locator('[data-log="trouble"]')).to_contain_text(
        "only as long as this page is open"
    )
    assert "kept here" in rows(page)[0]
    assert downloaded(page, "log-own")[0]["note"] == "kept here"
    field(page, "temperature").fill("10")
    expect(page.locator('[data-fault="caption"]')).to_contain_text("at 10 °C")
    page.get_by_role("button", name="Delete the reading").click()
    assert rows(page) == []
    index = visitor.open("index.html")
    expect(index.locator("h1")).to_be_visible()


@pytest.mark.parametrize("text", ["[{", '[{"time": 3}]'])
def test_a_text_that_is_no_log_is_put_aside(visitor: Visitor, text: str) -> None:
    page = visitor.open("method.html")
    page.evaluate("([key, text]) => localStorage.setItem(key, text)", [KEY, text])
    visitor.open(SHEET)
    expect(page.locator('[data-log="trouble"]')).to_contain_text("put aside")
    keep(page, "8.3")
    kept = page.evaluate("Object.entries(localStorage)")
    aside = {key: value for key, value in kept if key.startswith(f"{KEY}-unreadable-")}
    assert list(aside.values()) == [text]
    assert len(json.loads(dict(kept)[KEY])) == 1
