"""Live pages as a reader uses them: what is typed and slid is answered at once, and rightly."""

from pathlib import Path

import numpy as np
import pytest
from playwright.sync_api import Page, expect

from bufferfolio.buffering import henderson_hasselbalch
from bufferfolio.definitions import Library
from bufferfolio.formatting import fixed, significant
from bufferfolio.reading import read_library
from bufferfolio.subjects import state_at, subject_of
from bufferfolio.temperature import constants_at
from bufferfolio.water import ZERO_CELSIUS

from .conftest import Visitor
from .readers import EXPLORER, SHEET, field, shown, slider


@pytest.fixture(scope="module")
def library(systems: Path) -> Library:
    return read_library(systems)


def pages_of(site: Path) -> list[str]:
    return sorted(path.relative_to(site).as_posix() for path in site.rglob("*.html"))


@pytest.mark.parametrize("quarter", range(4))
def test_every_page_opens_quietly_and_agrees_with_its_own_cases(
    visitor: Visitor, quarter: int
) -> None:
    """All pages, each with its engine's cases; the visitor fails on any noise of any of them."""
    names = pages_of(visitor.site)
    assert len(names) >= 30 + 60 + 3
    for name in names[quarter::4]:
        page = visitor.open(name)
        if name.startswith(("formulations/", "families/")):
            expect(page.locator("[data-checks]")).to_contain_text("all agree")
            expect(page.locator("body")).to_have_class("live")


@pytest.mark.parametrize("name", [SHEET, EXPLORER, "formulations/plain-water.html"])
def test_away_and_back_every_number_is_as_before(visitor: Visitor, name: str) -> None:
    """The engine's words at a page's own conditions are those the page came with."""
    texts = "() => Array.from(document.querySelectorAll('[data-value]'), (e) => e.textContent)"
    page = visitor.open(name)
    before = page.evaluate(texts)
    field(page, "temperature").fill(slider(page, "temperature").get_attribute("max") or "")
    assert page.evaluate(texts) != before
    page.locator('[data-action="defaults"]').first.click()
    assert page.evaluate(texts) == before


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


def counts(page: Page) -> dict[str, tuple[int, int]]:
    """Return shown and all of each group, as the status says, after comparing it with the page."""
    found = {}
    for group in ("formulations", "families", "reagents"):
        said, every = map(int, shown(page, f"shown-{group}").split(" of "))
        entries = page.locator(f'[data-group="{group}"] [data-entry]')
        assert entries.count() == every
        visible = entries.evaluate_all("(all) => all.filter((e) => e.checkVisibility()).length")
        assert visible == said
        assert page.locator(f'[data-group="{group}"]').is_visible() == (said > 0)
        found[group] = (said, every)
    return found


def named(page: Page, group: str) -> list[str]:
    return page.locator(f'[data-group="{group}"] [data-entry]:visible a').all_inner_texts()


def test_the_index_is_searched_by_words_pH_and_temperature(visitor: Visitor) -> None:
    page = visitor.open("index.html")
    text, pH = page.locator('[data-filter="text"]'), page.locator('[data-filter="ph"]')
    assert all(said == every > 40 for said, every in counts(page).values())
    text.fill("corrin TRIS-assay")
    assert named(page, "formulations") == ["Corrin assay buffer, cold and warm"]
    assert counts(page)["families"][0] == counts(page)["reagents"][0] == 0
    pH.fill("2")
    assert [said for said, _ in counts(page).values()] == [0, 0, 0]
    expect(page.locator("[data-filter-empty]")).to_be_visible()
    text.fill("")
    pH.fill("8,2")
    some = counts(page)
    assert all(1 <= said < every for said, every in some.values())
    assert {"Tris", "HEPES"} <= set(named(page, "families"))
    assert "acetic acid" not in named(page, "families")
    pH.fill("7.4 to 9")
    wide = counts(page)
    assert wide["families"][0] > some["families"][0]
    pH.fill("8,2")
    page.locator('[data-filter="temperature"]').fill("3")
    cold = counts(page)
    assert cold["formulations"][0] < some["formulations"][0]
    assert cold["families"] == some["families"]
    pH.fill("acid")
    expect(page.get_by_text("“acid” is neither a number nor a range")).to_be_visible()
    page.locator('[data-filter="temperature"]').fill("cold")
    expect(page.get_by_text("“cold” is not a number")).to_be_visible()
    assert all(said == every for said, every in counts(page).values())


@pytest.mark.parametrize(
    ("typed", "key"),
    [
        ("Na2HPO4", "disodium-hydrogen-phosphate"),
        ("Na2HPO4", "disodium-hydrogen-phosphate-heptahydrate"),
        ("na2hpo4.7h2o", "disodium-hydrogen-phosphate-heptahydrate"),
        ("Na2HPO4 7H2O", "disodium-hydrogen-phosphate-heptahydrate"),
        ("Na2HPO4*7H2O", "disodium-hydrogen-phosphate-heptahydrate"),
        ("Na₂HPO₄·7H₂O", "disodium-hydrogen-phosphate-heptahydrate"),
        ("7681-52-9", "sodium-hypochlorite-solution"),
        ("bleach", "sodium-hypochlorite-solution"),
    ],
)
def test_a_reagent_is_found_however_it_is_typed(visitor: Visitor, typed: str, key: str) -> None:
    page = visitor.open("index.html")
    page.locator('[data-filter="text"]').fill(typed)
    found = page.locator(f'[href="reagents.html#reagent-{key}"]')
    expect(found).to_be_visible()
    assert 1 <= counts(page)["reagents"][0] <= 6
    found.click()
    expect(page.locator(f"#reagent-{key}")).to_be_in_viewport()


def test_a_family_is_found_by_one_of_its_species(visitor: Visitor) -> None:
    page = visitor.open("index.html")
    for typed in ("HPO4-2", "HPO₄²⁻", "orthophosphate"):
        page.locator('[data-filter="text"]').fill(typed)
        assert named(page, "families") == ["phosphoric acid"], typed
