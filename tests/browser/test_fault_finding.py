"""A technician whose reading is off looks for the fault: by touch width and by desk width."""

import re
from pathlib import Path

import pytest
from playwright.sync_api import Locator, Page, expect

from bufferfolio.faults import Reading, diagnosed, forecasts
from bufferfolio.measurements import expected_pH
from bufferfolio.reading import read_library
from bufferfolio.subjects import solved_at, subject_of
from bufferfolio.substitutes import Setting, setting_of
from bufferfolio.suspects import altered, scene_of, suspects_of

from .conftest import Visitor
from .readers import SHEET, field
from .test_accessibility import violations

ROOM = 298.15
DOUBLED = "twice as much of Tris"


@pytest.fixture(scope="module")
def tris(systems: Path) -> Setting:
    library = read_library(systems)
    return setting_of(subject_of(library.formulations["tris-assay"], library), library)


def doubled_pH(tris: Setting, dilution: float = 1.0, temperature: float = ROOM) -> float:
    """Return what a batch reads in which Tris was weighed in twice."""
    scene = scene_of(tris, ROOM)
    suspect = next(
        each for each in suspects_of(tris, ROOM) if (each.kind, each.name) == ("doubled", "Tris")
    )
    mixture = altered(scene, suspect, 2.0)
    thinned = type(mixture)(
        families=mixture.families,
        totals=mixture.totals / dilution,
        ions=mixture.ions,
        molalities=mixture.molalities / dilution,
    )
    return float(solved_at(tris.subject, temperature, thinned).pH)


def finding(page: Page) -> Locator:
    return page.locator('[data-fault="status"]')


def leading(page: Page) -> list[str]:
    rows = page.locator('[data-fault="leading"] th')
    return [re.sub(r"^\d+\. ", "", text) for text in rows.all_text_contents()]


def row_of(page: Page, words: str) -> Locator:
    return page.locator('[data-fault="leading"] tr', has_text=words)


def share(row: Locator) -> float:
    """Return the share of the weight as its bar shows it, in per cent."""
    return float(row.locator(".share-bar > span").evaluate("(e) => parseFloat(e.style.width)"))


@pytest.mark.parametrize("width", [1280, 390])
def test_a_reagent_doubled_is_found_and_a_second_reading_sharpens(
    visitor: Visitor, tris: Setting, width: int
) -> None:
    visitor.page.set_viewport_size({"width": width, "height": 800})
    page = visitor.open(SHEET)
    expect(finding(page)).to_contain_text("Give a reading")
    one = Reading(temperature=ROOM, pH=round(doubled_pH(tris), 2))
    field(page, "reading").fill(f"{one.pH:.2f}".replace(".", ","))
    expect(finding(page)).to_have_attribute("data-state", "found")
    row = row_of(page, DOUBLED)
    expect(row).to_contain_text("fits well")
    expect(row).to_contain_text(f"{one.pH:.2f}")
    expect(row).to_contain_text("Check the record of weighing")
    before = share(row)
    found = diagnosed(tris, (one,))
    expected = {each.words: 100.0 * each.weight for each in found.explanations}
    assert before == pytest.approx(expected[DOUBLED], abs=0.06)
    assert len(leading(page)) <= 8
    field(page, "second").select_option("temperature")
    expect(finding(page)).to_contain_text("second reading is still to be given")
    two = Reading(temperature=313.15, pH=round(doubled_pH(tris, temperature=313.15), 2))
    field(page, "second-reading").fill(f"{two.pH:.2f}")
    expect(finding(page)).to_contain_text("temperature of the second reading is still")
    field(page, "second-temperature").fill("40")
    expect(finding(page)).to_contain_text("both readings")
    row = row_of(page, DOUBLED)
    expect(row).to_contain_text(f", then {two.pH:.2f}")
    sharper = diagnosed(tris, (one, two))
    expected = {each.words: 100.0 * each.weight for each in sharper.explanations}
    assert share(row) == pytest.approx(expected[DOUBLED], abs=0.06)
    assert share(row) > before
    page.locator('[data-fault="summary"]').click()
    every = page.locator('[data-fault="every"] tr')
    expect(every).to_have_count(len(suspects_of(tris, ROOM)) - 1)
    assert page.evaluate("document.scrollingElement.scrollWidth - innerWidth") <= 0
    if width == 390:
        assert violations(page) == []


def test_a_sample_diluted_with_as_much_water(visitor: Visitor, tris: Setting) -> None:
    page = visitor.open(SHEET)
    one, two = doubled_pH(tris), doubled_pH(tris, dilution=2.0)
    field(page, "reading").fill(f"{one:.3f}")
    field(page, "second").select_option("dilution")
    field(page, "second-reading").fill(f"{two:.3f}")
    expect(page.locator('[data-fault="caption"]')).to_contain_text("diluted with as much water")
    expect(row_of(page, DOUBLED)).to_contain_text(f", then {two:.2f}")
    field(page, "second-reading").fill("eight")
    expect(page.locator('[data-fault="results"]')).to_have_class(re.compile("stale"))
    field(page, "second").select_option("none")
    expect(page.locator('[data-fault="results"]')).not_to_have_class(re.compile("stale"))
    expect(row_of(page, DOUBLED)).not_to_contain_text("then")


def test_a_right_reading_none_of_these_and_a_refusal(visitor: Visitor, tris: Setting) -> None:
    page = visitor.open(SHEET)
    field(page, "reading").fill(f"{expected_pH(tris.subject, ROOM):.2f}")
    expect(finding(page)).to_have_attribute("data-state", "right")
    expect(finding(page)).to_contain_text("Nothing is wrong")
    expect(page.locator('[data-fault="table"]')).to_be_hidden()
    field(page, "reading").fill("15")
    expect(finding(page)).to_have_attribute("data-state", "refused")
    expect(finding(page)).to_contain_text("no reading of this solution")
    field(page, "reading").fill("")
    expect(finding(page)).to_contain_text("Give a reading")
    page = visitor.open("formulations/meter-check-phthalate.html", "#reading=9")
    expect(finding(page)).to_have_attribute("data-state", "none")
    expect(finding(page)).to_contain_text("None of these")


def test_readings_travel_in_the_address_and_answers_can_be_copied(
    visitor: Visitor, tris: Setting
) -> None:
    pH = round(doubled_pH(tris), 2)
    page = visitor.open(SHEET, f"#reading={pH}&second=dilution&second-reading=8.6")
    expect(field(page, "second-reading")).to_have_value("8.6")
    expect(finding(page)).to_contain_text("both readings")
    page.evaluate("navigator.clipboard.writeText = (text) => { window.taken = text; }")
    page.locator('[data-action="copy-fault"]').click()
    expect(page.locator('[data-fault="results"] .copied')).to_contain_text("Copied")
    taken = page.evaluate("window.taken").split("\n")
    assert taken[0] == "Corrin assay buffer, cold and warm"
    assert any(line.startswith("1. ") and "% " in line for line in taken)


def test_forecasts_stand_in_the_page_itself(site: Path, tris: Setting) -> None:
    """What each fault would read needs no script, and adds 10 kB at most to the largest page."""
    largest = (site / "formulations/tissue-ringer.html").read_text("utf-8")
    forecasts_there = re.search(r'<details class="forecasts">.*?</details>', largest, re.S)
    assert forecasts_there is not None
    assert len(forecasts_there[0].encode()) <= 10_000
    text = (site / SHEET).read_text("utf-8")
    told = re.search(r'<details class="forecasts">.*?</details>', text, re.S)
    assert told is not None
    by_words = {each.words: each.pH for each in forecasts(tris, ROOM)}
    line = re.search(r"<tr>[^\n]*" + re.escape(DOUBLED), told[0])
    assert line is not None
    assert f">{by_words[DOUBLED][0]:.2f}</th>" in line[0]
