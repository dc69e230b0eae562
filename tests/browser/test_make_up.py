"""Making a batch up in the page: as a technician at a balance does it, and as Python reckons it."""

from collections.abc import Iterator
from dataclasses import replace
from functools import cache
from pathlib import Path

import numpy as np
import pytest
from playwright.sync_api import Browser, Page, expect

from bufferfolio.engine_data import Data, subject_data
from bufferfolio.field_data import routes_data, ways_to
from bufferfolio.formatting import fixed
from bufferfolio.make_up_contexts import batch_of, bench_of
from bufferfolio.make_up_words import adjustment_words, order_words
from bufferfolio.recipes import recipe_water
from bufferfolio.routes import Route
from bufferfolio.subjects import Subject, reference_temperature, subject_of
from bufferfolio.uncertainty import Band, band_of
from bufferfolio.weighing import adjustment_of, as_weighed, times
from recipes import shipped

from .conftest import Visitor
from .engine_scripts import ENGINE, ask, assert_agrees, load, plain
from .readers import SHEET, field
from .test_accessibility import violations

FORMULATIONS = sorted(shipped().formulations)
SCRIPTS = (*ENGINE, "figure_ticks", "formatting", "panel_state", "make_up_words")
LIMIT = 1e-9


@pytest.fixture(scope="module")
def engine(browser: Browser) -> Iterator[Page]:
    context = browser.new_context(offline=True)
    yield load(context.new_page(), SCRIPTS)
    context.close()


def subject(key: str) -> Subject:
    return subject_of(shipped().formulations[key], shipped())


@cache
def ways_of(key: str) -> tuple[Route, ...]:
    return ways_to(subject(key), shipped())


def page_data(this: Subject) -> Data:
    """Return what the page's engine has of a formulation, as far as a make-up needs it."""
    batch, ways = batch_of(this.formulation.make_up), ways_of(this.formulation.key)
    return {
        "subject": subject_data(this),
        "field": {"routes": routes_data(ways)},
        "batch": {"quantity": batch.quantity, "amount": batch.amount},
        "shelf": bench_of(this, shipped(), ways).shelf,
    }


# Every way, and every other form of each of its reagents.
EVERY_WAY = """(bf, [data, strength, size]) => {
  const subject = bf.subjects.subjectOf(data.subject, strength);
  const values = { strength, batch: size, "batch-unit": data.batch.amount,
    balance: 1e-5, cylinder: 1e-7 };
  const told = (texts) => {
    const reading = { values, texts: new Map(Object.entries(texts)) };
    const recipe = bf.weighed_batch.recipeOf(data, subject, reading);
    if (recipe === null) return null;
    const mixture = bf.recipes.mixtureOf(recipe, subject.mixture);
    return { totals: mixture.totals, molalities: mixture.molalities.slice(0, ions),
      pH: bf.subjects.solvedAt(subject, subject.reference_temperature, mixture).pH,
      water: bf.recipes.recipeWater(recipe) };
  };
  const ions = subject.mixture.ions.length;
  return data.field.routes.ways.map((way, route) => [
    told({ route: String(route) }),
    ...way.instead.flatMap((forms, at) => forms.map((_, form) =>
      told({ route: String(route), ["form-" + at]: String(form + 1) }))),
  ]);
}"""


@pytest.mark.parametrize("key", FORMULATIONS)
def test_every_way_and_every_form_make_the_same_solution(engine: Page, key: str) -> None:
    """At another strength and size too; the recipe itself is no choice at all."""
    this = subject(key)
    ways = ways_of(key)
    for strength, size in ((1.0, 1.0), (0.35, 20.0)):
        found = ask(engine, EVERY_WAY, [plain(page_data(this)), strength, size])
        assert found[0][0] is None
        stronger = replace(this.recipe, parts=times(this.recipe, strength).parts)
        water = recipe_water(stronger)
        factor = strength * recipe_water(this.recipe) / water
        for way, answers in zip(ways, found, strict=True):
            assert len(answers) == 1 + sum(len(one) for one in way.instead)
            for answer in answers:
                if answer is None:
                    assert answer is found[0][0]
                    continue
                totals = factor * this.mixture.totals
                np.testing.assert_allclose(answer["totals"], totals, rtol=LIMIT, atol=1e-15)
                assert answer["water"] == pytest.approx(water, rel=LIMIT)
                if strength == 1.0:
                    assert answer["pH"] == pytest.approx(way.pH, abs=1e-7)
                if not way.differences:
                    ions = factor * this.mixture.molalities
                    np.testing.assert_allclose(answer["molalities"], ions, rtol=1e-7, atol=1e-9)


@pytest.mark.parametrize("key", FORMULATIONS)
def test_words_and_what_was_weighed_are_those_of_python(engine: Page, key: str) -> None:
    """Every part a few per cent off, three times the batch, each by the last way."""
    this = subject(key)
    way = ways_of(key)[-1]
    expected = this.formulation.expected
    tolerance = None if expected is None else expected.tolerance
    body = """(bf, [data, route, grams]) => {
      const subject = bf.subjects.subjectOf(data.subject);
      const values = { strength: 1, batch: 3, "batch-unit": data.batch.amount,
        balance: 1e-5, cylinder: 1e-7, "weighed-water": 3.06 };
      grams.forEach((each, at) => { values["weighed-" + at] = each; });
      const reading = { values, texts: new Map([["route", String(route)]]) };
      const { tolerance } = subject.expected ?? { tolerance: null };
      const recipe = bf.weighed_batch.recipeOf(data, subject, reading);
      return {
        band: bf.uncertainty.bandOf(subject, subject.reference_temperature, recipe),
        order: bf.make_up_words.orderWords(recipe),
        advice: bf.make_up_words.adjustmentWords(
          bf.weighing.adjustmentOf(subject), tolerance, subject.additions.length > 0),
      };
    }"""
    typed = {}
    for at, part in enumerate(way.recipe.parts):
        wanted = part.added.mass if part.added.volume is None else part.added.volume
        typed[at] = 3.0 * part.amount * wanted * (1.0 + 0.02 * (at + 1))
    units = [1e3 if part.added.volume is None else 1e6 for part in way.recipe.parts]
    shown = [value * unit for value, unit in zip(typed.values(), units, strict=True)]
    route = len(ways_of(key)) - 1
    found = ask(engine, body, [plain(page_data(this)), route, shown])
    made = as_weighed(times(way.recipe, 3.0), typed, 3.06 * this.recipe.water)
    answer = {
        "band": plain(band_of(this, reference_temperature(this.formulation), made)),
        "order": plain(order_words(made)),
        "advice": list(
            adjustment_words(
                adjustment_of(this), tolerance, can_be_set=bool(this.formulation.titrants)
            )
        ),
    }
    assert_agrees(found, answer, LIMIT, key)


def row(page: Page, at: int, name: str) -> str:
    return page.locator(f'tr[data-portion="{at}"] [data-part="{name}"]').inner_text()


def read(page: Page, name: str) -> str:
    return page.locator(f"[data-{name}]").inner_text().replace("\N{NO-BREAK SPACE}", " ")


def words(band: Band) -> str:
    return f"pH {fixed(band.pH, 2)} ± {fixed(band.half_width, 2)} at 25 °C"


@pytest.mark.parametrize("width", [1280, 390])
def test_a_technician_makes_twenty_litres_another_way(visitor: Visitor, width: int) -> None:
    page = visitor.page
    page.set_viewport_size({"width": width, "height": 900})
    visitor.open(SHEET)
    assert [row(page, at, "out") for at in range(3)] == ["6.06 g", "2.15 mL", "5.84 g"]
    expect(page.locator("[data-going-by]")).to_have_text("Judging and correcting go by the recipe.")
    # A balance for potatoes will not do for a litre, and does for twenty.
    warning = page.locator('tr[data-portion="0"] [data-part="warning"]')
    field(page, "balance").select_option("1 g")
    expect(warning).to_contain_text("Too little to weigh on this balance: half a step of it is 8.3")
    assert row(page, 0, "out") == "6 g"
    assert row(page, 0, "rounding") == "rounded by −0.99 %"
    field(page, "batch").fill("20")
    expect(warning).to_be_hidden()
    assert row(page, 0, "out") == "121 g"
    field(page, "balance").select_option("0.01 g")
    assert row(page, 0, "out") == "121.20 g"
    # The hydrochloride and lye, with what they hurt.
    field(page, "route").select_option("2")
    assert row(page, 0, "name") == "Tris hydrochloride"
    assert "more Na⁺" in read(page, "difference")
    handling = page.locator("[data-handling]")
    expect(handling).to_contain_text("sodium hydroxide, 1 mol/L")
    expect(handling).to_contain_text("H314 causes severe skin burns")
    expect(page.locator("[data-other]")).to_be_visible()
    expect(page.locator("[data-order]")).to_contain_text("sodium hydroxide, 1 mol/L: add it slowly")
    this = subject("tris-assay")
    recipe = ways_of("tris-assay")[2].recipe
    assert read(page, "outlook-reading") == words(band_of(this, 298.15, recipe))
    # Too much of the salt, with a decimal comma.
    field(page, "weighed-0").fill("175,5")
    made = as_weighed(times(recipe, 20.0), {0: 0.1755})
    band = band_of(this, 298.15, made)
    assert read(page, "outlook-reading") == words(band)
    assert abs(band.pH - 8.16) > 0.05
    assert read(page, "outlook-verdict").startswith("✗ Outside the tolerance")
    assert "what was weighed" in read(page, "going-by")
    assert "+10" in row(page, 0, "off")
    field(page, "weighed-water").fill("20.4")
    made = as_weighed(times(recipe, 20.0), {0: 0.1755}, 20.4 * this.recipe.water)
    kept = words(band_of(this, 298.15, made))
    assert read(page, "outlook-reading") == kept
    page.reload()
    assert read(page, "outlook-reading") == kept
    assert field(page, "route").input_value() == "2"
    assert field(page, "weighed-0").input_value() == "175.5"
    assert page.evaluate("document.scrollingElement.scrollWidth") <= width
    # What was typed for one reagent never counts for another.
    field(page, "route").select_option("1")
    assert field(page, "weighed-0").input_value() == ""
    page.locator("[data-make-up-back]").click()
    assert row(page, 0, "name") == "Tris"
    expect(page.locator("[data-going-by]")).to_have_text("Judging and correcting go by the recipe.")
    assert page.evaluate("location.hash") == "#batch=20"


def test_another_form_of_a_reagent_has_its_own_amount(visitor: Visitor) -> None:
    """13.6 g of the trihydrate, 99.5 %, are 8.2 g without its water."""
    page = visitor.open("formulations/acetate-extract.html")
    assert row(page, 1, "out") == "13.60 g"
    field(page, "form-1").select_option(label="sodium acetate, anhydrous")
    assert float(row(page, 1, "out").split()[0]) == pytest.approx(13.6 * 82.03 / 136.08, rel=0.01)
    assert "reagents that are chosen" in read(page, "going-by")
    assert row(page, 1, "name") == "sodium acetate, anhydrous"
    expect(page.locator("[data-outlook-than]")).to_have_text("The same as by the recipe.")
    page.reload()
    assert row(page, 1, "name") == "sodium acetate, anhydrous"


def test_a_scale_in_kilograms_and_water_by_volume(visitor: Visitor) -> None:
    page = visitor.open("formulations/meter-check-borax.html")
    field(page, "batch").fill("400")
    field(page, "batch-unit").select_option("L")
    assert page.locator("[data-water] [data-part=out]").inner_text() == "399.3 kg"
    grams = row(page, 0, "out")
    assert grams.endswith(" g")
    field(page, "weighed-0").fill("1500")
    before = read(page, "outlook-reading")
    field(page, "balance").select_option("10 g")
    assert row(page, 0, "out").endswith(" kg")
    assert field(page, "weighed-0").input_value() == "1.5"
    assert read(page, "outlook-reading") == before


def test_a_fault_in_one_weight_leaves_the_page_and_the_last_answer(visitor: Visitor) -> None:
    page = visitor.open(SHEET)
    field(page, "weighed-0").fill("6.5")
    before = read(page, "outlook-reading")
    field(page, "weighed-0").fill("six")
    expect(page.locator('[data-message="weighed-0"]')).to_contain_text("“six” is not a number")
    expect(page.locator("[data-made]")).to_have_class("made stale")
    assert page.locator("[data-live].stale").count() == 0
    assert read(page, "outlook-reading") == before
    field(page, "weighed-0").fill("6,06")
    expect(page.locator("[data-made]")).to_have_class("made")
    expect(page.locator("[data-outlook-than]")).to_have_text("The same as by the recipe.")


def test_the_weigh_out_can_be_taken_along(visitor: Visitor) -> None:
    page = visitor.open(SHEET, "#batch=2&weighed-1=4,4")
    page.context.grant_permissions(["clipboard-read", "clipboard-write"])
    page.locator("[data-make-up-copy]").click()
    expect(page.locator(".made-tools")).to_contain_text("Copied")
    text = page.evaluate("navigator.clipboard.readText()")
    assert "Tris: 12.12 g" in text
    assert "hydrochloric acid, 37 %: 4.30 mL (taken: 4.4 mL)" in text.replace("4,4", "4.4")
    assert "what was weighed" in text


@pytest.mark.parametrize(("width", "scheme"), [(1280, "dark"), (390, "light")])
def test_axe_finds_no_violation_at_the_balance(visitor: Visitor, width: int, scheme: str) -> None:
    page = visitor.page
    page.set_viewport_size({"width": width, "height": 900})
    page.emulate_media(color_scheme=scheme, reduced_motion="reduce")
    visitor.open(
        "formulations/acetate-extract.html",
        "#batch=0.1&balance=0.1+g&route=1&form-1=1&weighed-0=2",
    )
    field(page, "weighed-1").fill("none")
    assert violations(page) == []


def test_without_javascript_the_recipe_stands(browser: Browser, site: Path) -> None:
    context = browser.new_context(java_script_enabled=False, offline=True)
    page = context.new_page()
    page.goto((site / SHEET).as_uri())
    section = page.locator('section[aria-labelledby="make-up"]')
    told = section.inner_text().replace("\N{NO-BREAK SPACE}", " ")
    for text in ("6.06 g", "hydrochloric acid, 37 %: add it slowly", "At 20 °C set it to pH 8.30"):
        assert text in told
    assert "Really taken" not in told
    assert "Made from" not in told
    assert "need JavaScript" in told
    context.close()
