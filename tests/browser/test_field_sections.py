"""A reading judged and a batch corrected, as a technician with a meter does it."""

from pathlib import Path
from typing import Final

import pytest
from playwright.sync_api import Page, expect

from bufferfolio.band_words import contribution_words
from bufferfolio.definitions import Library
from bufferfolio.dosing import REFUSALS as DOSING_REFUSALS
from bufferfolio.dosing import Batch, corrected
from bufferfolio.formatting import fixed, signed, significant, volume
from bufferfolio.judging import VERDICTS, judged
from bufferfolio.measurements import REFUSALS, expected_pH, shown
from bufferfolio.reading import read_library
from bufferfolio.subjects import Subject, subject_of
from bufferfolio.uncertainty import band_of
from bufferfolio.water import ZERO_CELSIUS

from .conftest import Visitor
from .readers import SHEET, field
from .test_accessibility import violations

WIDTHS: Final = (1280, 390)


@pytest.fixture(scope="module")
def library(systems: Path) -> Library:
    return read_library(systems)


@pytest.fixture(scope="module")
def tris(library: Library) -> Subject:
    return subject_of(library.formulations["tris-assay"], library)


def told(page: Page, name: str) -> str:
    return page.locator(f'[data-judging] [data-shows="{name}"]').inner_text()


def dose(page: Page, name: str) -> str:
    return page.locator(f'[data-dosing] [data-dose="{name}"]').first.inner_text()


def verdict(page: Page) -> str:
    return page.locator("[data-judging]").get_attribute("data-verdict") or ""


@pytest.mark.parametrize("width", WIDTHS)
@pytest.mark.parametrize("off", [0.0, 0.045, 0.2])
def test_a_reading_is_judged_in_words_and_by_a_sign(
    visitor: Visitor, tris: Subject, width: int, off: float
) -> None:
    """The page's verdict is that of the Python engine, at once, with nothing else to press."""
    visitor.page.set_viewport_size({"width": width, "height": 900})
    page = visitor.open(SHEET)
    assert verdict(page) == "none"
    reading = fixed(expected_pH(tris, 12.0 + ZERO_CELSIUS) + off, 2)
    field(page, "temperature").fill("12")
    field(page, "reading").fill(reading.replace(".", ","))
    found = judged(tris, 12.0 + ZERO_CELSIUS, float(reading))
    assert verdict(page) == found.verdict
    said = VERDICTS[found.verdict]
    assert told(page, "mark") == said.mark
    assert told(page, "words") == said.words
    assert told(page, "action") == said.action
    assert told(page, "difference") == signed(found.difference, 2)
    assert told(page, "target") == f"{fixed(found.target, 2)} ± 0.05"
    assert found.band is not None
    assert told(page, "band").startswith(f"{fixed(found.expected, 2)} ± ")
    assert fixed(found.band.low, 2) in told(page, "band")


def test_what_makes_the_band_is_listed_largest_first(visitor: Visitor, tris: Subject) -> None:
    page = visitor.open(SHEET, "#temperature=3")
    band = band_of(tris, 3.0 + ZERO_CELSIUS)
    rows = page.locator("[data-contributions] tr")
    found = [tuple(row.locator("th, td").all_text_contents()) for row in rows.all()]
    assert found == [
        (contribution_words(item), signed(item.effect, 4), "stated" if item.stated else "assumed")
        for item in band.ranked
    ]
    sizes = [abs(float(effect.replace("−", "-"))) for _, effect, _ in found]
    assert sizes == sorted(sizes, reverse=True)
    assert len(sizes) > 3


def test_a_reading_that_is_none_is_answered(visitor: Visitor, tris: Subject) -> None:
    page = visitor.open(SHEET)
    field(page, "reading").fill("15.2")
    assert verdict(page) == "refused"
    assert told(page, "words") == REFUSALS["reading"]
    assert dose(page, "words") == REFUSALS["reading"]
    field(page, "reading").fill("eight")
    expect(page.locator("#message-reading")).to_have_text("“eight” is not a number. Give one.")
    assert verdict(page) == "none"
    field(page, "reading").fill("8.1")
    field(page, "temperature").fill("55")
    expect(page.locator("#message-temperature")).to_have_text(
        "55 is too high. Give a number from 2 to 40 °C."
    )
    expect(page.locator("#input-temperature")).to_have_attribute("aria-invalid", "true")
    assert told(page, "words").startswith("A condition above cannot be used")
    assert dose(page, "words").startswith("A condition above cannot be used")
    expect(page.locator(".portions")).to_be_hidden()
    expect(page.locator('[data-fault="results"]')).to_be_hidden()
    page.locator('[data-action="keep"]').last.click()
    expect(page.locator("[data-kept]").first).to_contain_text("no reading to keep")
    field(page, "temperature").fill("77 F")
    expect(page.locator("#message-temperature")).to_have_text("")
    warm = judged(tris, 25.0 + ZERO_CELSIUS, 8.1)
    assert verdict(page) == warm.verdict
    page.reload()
    assert field(page, "temperature").input_value() == "77F"
    assert verdict(page) == warm.verdict


def test_degrees_fahrenheit_are_the_same_temperatures(visitor: Visitor, tris: Subject) -> None:
    page = visitor.open(SHEET, "#temperature=20&reading=8.3")
    field(page, "temperature-unit").select_option("F")
    assert field(page, "temperature").input_value() == "68"
    field(page, "temperature-unit").select_option("C")
    field(page, "temperature").fill("77")  # meant in the other unit, and so it is taken
    field(page, "temperature-unit").select_option("F")
    assert field(page, "temperature").input_value() == "77"
    assert told(page, "band").startswith(fixed(expected_pH(tris, 25.0 + ZERO_CELSIUS), 2))
    field(page, "temperature").fill("50")
    assert told(page, "band").startswith(fixed(expected_pH(tris, 10.0 + ZERO_CELSIUS), 2))
    field(page, "temperature").fill("20")
    expect(page.locator("#message-temperature")).to_contain_text("from 35.6 to 104")
    field(page, "temperature").fill("35.6")
    expect(page.locator("#message-temperature")).to_have_text("")
    page.reload()
    assert field(page, "temperature").input_value() == "35.6"
    assert told(page, "band").startswith(fixed(expected_pH(tris, 2.0 + ZERO_CELSIUS), 2))


def test_a_meter_without_compensation_and_a_batch_elsewhere(
    visitor: Visitor, tris: Subject
) -> None:
    """The meter is set for 25 °C, the sample has 5 °C, the batch stands at 20 °C."""
    cold = 5.0 + ZERO_CELSIUS
    reading = fixed(shown(expected_pH(tris, cold), cold, 25.0 + ZERO_CELSIUS), 2)
    page = visitor.open(SHEET, f"#temperature=5&reading={reading}")
    assert verdict(page) == "off"
    page.locator("summary", has_text="Meter without compensation").click()
    field(page, "compensation").fill("25")
    assert verdict(page) == "right"
    assert told(page, "should_show") == reading
    field(page, "batch-temperature").fill("20")
    found = judged(tris, cold, float(reading), 25.0 + ZERO_CELSIUS, 20.0 + ZERO_CELSIUS)
    assert found.batch is not None
    assert told(page, "batch").startswith(fixed(found.batch.pH, 2))
    assert "within its limits of use" in told(page, "batch")


@pytest.mark.parametrize("width", WIDTHS)
def test_a_batch_is_brought_back_in_two_portions(
    visitor: Visitor, tris: Subject, width: int
) -> None:
    """What the page tells to add is what the Python engine says, to the figures shown."""
    visitor.page.set_viewport_size({"width": width, "height": 900})
    page = visitor.open(SHEET)
    field(page, "temperature").fill("18")
    field(page, "reading").fill("8.05")
    field(page, "volume").fill("20")
    field(page, "volume-unit").select_option("L")
    batch = Batch(temperature=18.0 + ZERO_CELSIUS, pH=8.05, volume=0.02)
    found = corrected(tris, batch)
    assert found.first.volume is not None
    assert found.rest.volume is not None
    assert dose(page, "first") == volume(found.first.volume, 3)
    assert dose(page, "rest") == volume(found.rest.volume, 3)
    assert dose(page, "titrant") == tris.formulation.titrants[found.titrant].label
    assert dose(page, "pH_first") == fixed(found.pH_first, 2)
    assert dose(page, "pH_after") == fixed(found.target, 2)
    assert dose(page, "strength_after") == significant(found.ionic_strength[1])
    by = {each.direction: each for each in found.reserves}
    assert dose(page, "before_upward") == significant(by["upward"].before * 1e3)
    assert dose(page, "after_downward") == significant(by["downward"].after * 1e3)
    now = page.locator('[data-dose="now_upward"]').inner_text()
    assert now.startswith(significant(by["upward"].before * 1e3))
    # Half of it first, of a batch that was thinned: other amounts, again as the engine says.
    page.locator("summary", has_text="First portion").click()
    field(page, "share").fill("50")
    field(page, "dilution").fill("1,25")
    thin = Batch(temperature=18.0 + ZERO_CELSIUS, pH=8.05, volume=0.02, dilution=1.25)
    again = corrected(tris, thin, share=0.5)
    assert again.first.volume is not None
    assert dose(page, "first") == volume(again.first.volume, 3)
    assert dose(page, "first") == dose(page, "rest")


def test_a_correction_that_is_unwise_is_refused_with_a_reason(visitor: Visitor) -> None:
    page = visitor.open(SHEET, "#temperature=25&reading=8.3")
    page.locator('select[data-input="titrant"]').select_option(label="sodium hydroxide, 1 mol/L")
    assert dose(page, "words") == DOSING_REFUSALS["direction"]
    expect(page.locator("[data-plan]")).to_have_attribute("data-plan", "refused")
    expect(page.locator(".portions")).to_be_hidden()
    field(page, "titrant").select_option("")
    field(page, "reading").fill("6.9")  # below the limits of use
    assert dose(page, "words") == DOSING_REFUSALS["reserve"]
    field(page, "reading").fill("8.3")
    field(page, "volume").fill("0.001")
    field(page, "volume-unit").select_option("mL")
    assert dose(page, "words") == "Give a volume from 1 mL to 100 m³."
    field(page, "volume").fill("100")
    field(page, "volume-unit").select_option("m3")
    assert dose(page, "first").endswith((" L", " m³"))


def test_what_is_never_corrected_shows_its_reserve_only(visitor: Visitor) -> None:
    page = visitor.open("formulations/meter-check-phosphate.html", "#reading=6.83")
    assert dose(page, "words") == DOSING_REFUSALS["forbidden"]
    assert "mmol/kg" in page.locator('[data-dose="now_upward"]').inner_text()
    expect(page.locator("[data-dosing]")).to_contain_text("is never corrected")


def test_a_gas_that_may_come_off_is_named(visitor: Visitor) -> None:
    page = visitor.open("formulations/sanitising-bath.html", "#temperature=15&reading=7.4")
    danger = page.locator('[data-dose="dangers"]')
    expect(danger).to_be_visible()
    assert "chlorine (with acid)" in danger.inner_text()
    expect(page.locator(".portions")).to_be_visible()
    # So acid that the gas is there already.
    field(page, "reading").fill("5.2")
    expect(danger).to_contain_text("may be giving off chlorine (with acid)")
    expect(page.locator('[data-judging] [data-shows="gas"]')).to_contain_text("chlorine")
    expect(page.locator(".portions")).to_be_hidden()
    field(page, "reading").fill("8.4")
    expect(danger).not_to_contain_text("may be giving off")


@pytest.mark.parametrize("key", ["tris-assay", "sanitising-bath", "plain-water", "spent-cleaner"])
def test_inputs_survive_a_reload(visitor: Visitor, key: str) -> None:
    page = visitor.open(f"formulations/{key}.html")
    field(page, "reading").fill("7.25")
    words = told(page, "words")
    assert words != "Type what the meter reads, above, and it is judged here."
    page.reload()
    assert field(page, "reading").input_value() == "7.25"
    assert told(page, "words") == words


def test_a_result_is_taken_along(visitor: Visitor) -> None:
    page = visitor.page
    page.context.grant_permissions(["clipboard-read", "clipboard-write"])
    visitor.open(SHEET, "#temperature=18&reading=8.05&volume=20&volume-unit=L")
    page.locator('[data-action="copy-correct"]').click()
    expect(page.locator(".plan .copied")).to_have_text("Copied.")
    text = page.evaluate("navigator.clipboard.readText()")
    for words in ["Corrin assay buffer", "meter reads: pH 8.05", "18 °C", dose(page, "first")]:
        assert words in text
    page.evaluate(
        "() => { navigator.clipboard.writeText = () => Promise.reject(new Error('no')); }"
    )
    page.locator('[data-action="copy-judge"]').click()
    by_hand = page.locator(".verdict .copied textarea")
    assert "meter reads: pH 8.05" in by_hand.input_value()


@pytest.mark.parametrize("reading", ["8.05", "15", "8.41"])  # off, refused, doubtful
def test_axe_finds_nothing_wrong_with_an_answer(visitor: Visitor, reading: str) -> None:
    visitor.page.emulate_media(color_scheme="light" if reading == "8.05" else "dark")
    page = visitor.open(SHEET, f"#temperature=18&reading={reading}")
    for summary in page.locator("details.more > summary").all():
        summary.click()
    assert violations(page) == []
