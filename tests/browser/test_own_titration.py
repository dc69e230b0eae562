"""A titration of one's own, as a technician goes about it: paste, correct, fit, take along."""

import csv
import re
from dataclasses import dataclass
from typing import Final

import numpy as np
import pytest
from axe_playwright_python.sync_playwright import Axe
from playwright.sync_api import Locator, Page, expect

from bufferfolio.end_points import end_points
from bufferfolio.fit_words import gran_words, verdict_words, with_error
from bufferfolio.fitting import Fit, fit
from bufferfolio.gran import gran_lines
from bufferfolio.measured import default_precision, parsed
from bufferfolio.measured_plots import measured_figure
from measured_titrations import Plan, free_quantities, made, titration_of
from published_tables import Row, rows_of

from .conftest import Visitor
from .readers import field
from .test_accessibility import TAGS

SHEET: Final = "formulations/acetate-extract.html"
WEAK: Final = Plan("acetate-extract", 0, 4.0, "strength", (-0.03,))  # sodium hydroxide, 1 mol/L
FREED: Final = {"strength": "free", "total": "acetate", "pK": "acetate:1", "offset": "free"}
TRUTH: Final = 0.97  # mol/L
CELLS: Final = "(rows) => rows.map((row) => Array.from(row.cells, (cell) => cell.textContent))"
PUT: Final = """
  (field, text) => {
    field.value = text;
    field.dispatchEvent(new InputEvent("input", { bubbles: true }));
  }
"""
DROP: Final = """
  (field, text) => {
    const held = new DataTransfer();
    held.items.add(new File([text], "points.txt", { type: "text/plain" }));
    field.dispatchEvent(new DragEvent("drop", { dataTransfer: held, cancelable: true }));
  }
"""


@dataclass(frozen=True)
class Bench:
    """The section of one sheet, in the words of somebody who titrates."""

    page: Page

    @property
    def points(self) -> Locator:
        return self.page.locator("#titration-points")

    def part(self, name: str) -> Locator:
        return self.page.locator(f'.titration [data-part="{name}"]')

    def press(self, action: str) -> None:
        self.page.locator(f'[data-action="titration-{action}"]').click()

    def rows(self, part: str, table: int = 0) -> list[list[str]]:
        """Return the cells of a table once it is there."""
        body = self.part(part).locator("table").nth(table).locator("tbody tr")
        body.first.wait_for()
        return list(body.evaluate_all(CELLS))

    def free(self, **choices: str) -> None:
        for name, value in choices.items():
            field(self.page, f"titration-{name}").select_option(value)

    def fit(self) -> str:
        """Press the button, and return the verdict."""
        self.press("fit")
        verdict = self.part("fit").locator(".verdict")
        verdict.wait_for(timeout=60_000)
        return verdict.inner_text()


@pytest.fixture
def bench(visitor: Visitor) -> Bench:
    """Return the sheet with a sample of 50 mL."""
    page = visitor.open(SHEET)
    field(page, "titration-sample").fill("50")
    return Bench(page)


def pasted(plan: Plan = WEAK, count: int = 60, seed: int = 3) -> str:
    """Return measured points as a spreadsheet set to commas copies them."""
    case = made(plan, count, seed)
    volumes = [f"{each * 1e6:.4f}" for each in case.points.volume]
    rows = [f"{v};{r:.3f}" for v, r in zip(volumes, case.points.pH, strict=True)]
    return "Volume (mL);pH\n" + "\n".join(rows).replace(".", ",") + "\n"


def fitted(text: str, free: str = "strength") -> Fit:
    points = parsed(text).points
    assert points is not None
    experiment = titration_of(WEAK.formulation, WEAK.titrant)
    return fit(experiment, points, free_quantities(free))


@pytest.mark.parametrize("width", [1280, 390])
def test_pasted_points_are_drawn_and_the_strength_is_found(bench: Bench, width: int) -> None:
    """What Python makes of the same text stands on the page, to the last digit shown."""
    text = pasted()
    bench.page.set_viewport_size({"width": width, "height": 900})
    bench.points.fill(text)
    here = fitted(text)
    points = parsed(text).points
    assert points is not None
    found = end_points(points)
    expect(bench.part("found")).to_contain_text("60 points; volumes in mL, decimal comma")
    expect(bench.part("found")).to_contain_text("titrated with sodium hydroxide, 1 mol/L")
    verdict = bench.fit()
    assert verdict == "✓ " + verdict_words(here)
    (cells,) = bench.rows("estimates")
    (estimate,) = here.estimates
    value, error = with_error(estimate.value, estimate.standard_error)
    assert cells[:5] == ["strength of the titrant", value, error, "mol/L", "1"]
    assert abs(float(value) - TRUTH) < 3.0 * float(error)

    figure = bench.page.locator('figure[data-figure="measured"]')
    figure.scroll_into_view_if_needed()
    expect(figure).to_have_class(re.compile(r"\blive\b"), timeout=30_000)
    drawn = measured_figure(here.experiment, points, found, here)
    for key, each in zip(("measured", "residuals"), drawn, strict=True):
        place = bench.page.locator(f'figure[data-figure="{key}"]')
        place.scroll_into_view_if_needed()
        expect(place.locator("figcaption")).to_have_text(each.summary)
    expect(figure.locator('[data-series="fit"]')).to_be_visible()

    told = {row[0]: row[1:] for row in bench.rows("meetings")}
    (end,) = found
    assert told["steepest slope"][:2] == list(
        with_error(end.volume * 1e6, end.standard_error * 1e6)
    )
    for line in gran_lines(here.experiment, points, found, default_precision(points)):
        volume, error, _, of = told[f"Gran line {line.side} it"]
        assert (volume, error) == with_error(line.volume * 1e6, line.standard_error * 1e6)
        assert of == f"{gran_words(line, here.experiment)}, {line.x.size} points"
    assert float(told["predicted by the recipe"][0]) == pytest.approx(end.volume * 0.97e6, rel=0.01)
    assert bench.page.evaluate("document.documentElement.scrollWidth <= innerWidth")


def test_four_quantities_and_their_correlation(bench: Bench) -> None:
    text = pasted()
    bench.points.fill(text)
    bench.free(**FREED)
    verdict = bench.fit()
    here = fitted(text, "strength,total:acetate,pK:acetate:1,offset")
    assert verdict.endswith(verdict_words(here))
    for cells, estimate in zip(bench.rows("estimates"), here.estimates, strict=True):
        expected = with_error(estimate.value, estimate.standard_error)
        assert (cells[1], cells[2]) == expected
    pairs = bench.rows("estimates", 1)
    assert len(pairs) == 6
    assert pairs[0][0] == "strength of the titrant and total of acetic acid"
    told = float(pairs[0][1].replace("−", "-"))
    assert told == pytest.approx(here.correlation[1, 0], abs=6e-4)
    bench.free(slope="free")
    bench.press("fit")
    refused = "5 quantities cannot be free: choose 1 to 4."
    expect(bench.part("refused")).to_have_text(refused.capitalize())


def test_nonsense_is_pointed_at_by_row_and_nothing_is_lost(bench: Bench) -> None:
    good = pasted()
    rows = good.splitlines()
    rows[11] = rows[11].split(";")[0] + ";pH 5"
    rows[21] = "x;5,1"
    bench.points.fill("\n".join(rows))
    entries = bench.part("complaints").locator("li")
    expect(entries).to_have_count(2)
    expect(entries.first).to_have_text(
        "row 12, column 8: the pH is not a number: 'pH 5'; accepted: a number such as 7.02"
    )
    expect(bench.part("told")).to_have_text("2 places cannot be read; the text stays as it is.")
    expect(bench.points).to_have_attribute("aria-invalid", "true")
    assert bench.points.input_value() == "\n".join(rows)
    entries.nth(1).locator("button").click()
    marked = "(field) => field.value.slice(field.selectionStart, field.selectionEnd)"
    assert bench.points.evaluate(marked) == "x;5,1"
    bench.points.fill(good)
    expect(bench.part("complaints")).to_be_hidden()
    expect(bench.part("found")).to_contain_text("60 points")
    # A faulty setting of the section sets its answers back, and nothing else on the page.
    field(bench.page, "titration-sample").fill("much")
    expect(bench.part("results")).to_have_class(re.compile("stale"))
    expect(bench.page.locator("[data-live].stale")).to_have_count(0)
    field(bench.page, "titration-sample").fill("50")
    expect(bench.part("results")).not_to_have_class(re.compile("stale"))


def test_a_thousand_wrong_rows_are_not_a_thousand_lines(bench: Bench) -> None:
    bench.points.evaluate(PUT, "V;pH\n" + "\n".join(f"{at};x" for at in range(1000)))
    expect(bench.part("told")).to_contain_text("1000 places")
    entries = bench.part("complaints").locator("li")
    expect(entries).to_have_count(21)
    expect(entries.last).to_have_text("980 more places are wrong.")


def test_files_are_opened_and_dropped(bench: Bench) -> None:
    text = pasted()
    content = b"\xff\xfe" + text.encode("utf-16-le")
    chooser = bench.page.locator("#titration-file")
    chooser.set_input_files({"name": "a.csv", "mimeType": "text/csv", "buffer": content})
    expect(bench.points).to_have_value(text)
    expect(bench.part("found")).to_contain_text("60 points")
    bench.points.evaluate(DROP, "1 4.7\n2 4.9\n3 5.6\n4 9.8\n")
    expect(bench.part("found")).to_contain_text("4 points; volumes in mL (no heading says so)")
    field(bench.page, "titration-unit").select_option("µL")
    expect(bench.part("found")).to_contain_text("volumes in µL (no heading says so)")
    large = {"name": "b.csv", "mimeType": "text/csv", "buffer": b"1 2\n" * 1_300_000}
    chooser.set_input_files(large)
    expect(bench.part("told")).to_have_text(re.compile("^b.csv is too large"))
    assert bench.points.input_value().startswith("1 4.7")


def published(part: str) -> list[Row]:
    """Return a titration of OpenStax, Chemistry: Atoms First, table 14.4, in order."""
    rows = [each for each in rows_of("titrations") if each["source"] == "openstax-chemistry"]
    return sorted((r for r in rows if r["part"] == part), key=lambda row: float(row["added"]))


@pytest.mark.parametrize("part", ["strong-acid", "weak-acid"])
def test_published_points_meet_where_their_source_says(bench: Bench, part: str) -> None:
    """25.00 mL of 0.100 mol/L acid meet 25.00 mL of 0.100 mol/L sodium hydroxide."""
    rows = published(part)
    amounts = {(row["volume"], row["contents"][-5:], row["titrant"][-5:]) for row in rows}
    assert amounts == {("25.00", "0.100", "0.100")}
    bench.points.fill("mL\tpH\n" + "\n".join(f"{r['added']}\t{r['value']}" for r in rows))
    told = {row[0]: row[1:3] for row in bench.rows("meetings")}
    volume, error = map(float, told["steepest slope"])
    assert volume == pytest.approx(25.0, abs=0.01)
    assert error < 0.05


def test_points_survive_a_reload_and_settings_travel(bench: Bench) -> None:
    text = pasted(count=12)
    bench.points.fill(text)
    bench.free(offset="free")
    expect(bench.part("found")).to_contain_text("12 points")
    assert "titration-sample=50" in bench.page.url
    bench.page.reload()
    expect(bench.points).to_have_value(text)
    expect(bench.part("found")).to_contain_text("50 mL of sample")
    assert field(bench.page, "titration-offset").input_value() == "free"
    bench.press("clear")
    expect(bench.part("results")).to_be_hidden()
    bench.page.reload()
    expect(bench.points).to_have_value("")


def test_a_browser_that_keeps_nothing_is_said_so(visitor: Visitor) -> None:
    visitor.page.add_init_script(
        "Object.defineProperty(window, 'localStorage',"
        " { get() { throw new DOMException('no', 'SecurityError'); } })"
    )
    bench = Bench(visitor.open(SHEET))
    bench.points.fill(pasted(count=12))
    expect(bench.part("kept")).to_contain_text("This browser keeps nothing")
    expect(bench.part("found")).to_contain_text("12 points")


def test_the_example_says_that_it_is_invented_and_gives_way(bench: Bench) -> None:
    own = pasted(count=12)
    bench.points.fill(own)
    bench.press("example")
    expect(bench.part("found")).to_contain_text("Invented points, not measured")
    assert bench.points.input_value().startswith("# Invented, not measured")
    bench.fit()
    (cells,) = bench.rows("estimates")
    assert abs(float(cells[1]) - TRUTH) < 3.0 * float(cells[2])
    bench.press("example")
    expect(bench.points).to_have_value(own)
    expect(bench.part("found")).not_to_contain_text("Invented")
    bench.press("example")
    bench.page.reload()
    expect(bench.points).to_have_value(own)


def test_every_sheet_can_invent_a_titration_that_it_understands(visitor: Visitor) -> None:
    """A sample of sheets of all kinds; none complains of its own example."""
    for name in ("citrate-phosphate", "sanitising-bath", "spent-pickle", "meter-check-borax"):
        bench = Bench(visitor.open(f"formulations/{name}.html"))
        bench.press("example")
        expect(bench.part("found")).to_contain_text("points")
        expect(bench.part("complaints")).to_be_hidden()
    page = visitor.open("formulations/plain-water.html")
    expect(page.locator(".titration")).to_contain_text("a titration has nothing to tell of it")
    assert page.locator("#titration-points").count() == 0


def test_the_prediction_follows_the_conditions(bench: Bench) -> None:
    bench.points.fill(pasted())
    caption = bench.page.locator('figure[data-figure="residuals"] figcaption')
    caption.scroll_into_view_if_needed()
    expect(caption).to_have_text(re.compile("largest difference"))
    before = caption.inner_text()
    field(bench.page, "titration-temperature").fill("5")
    expect(caption).not_to_have_text(before)
    expect(bench.part("found")).to_contain_text("5 °C")
    field(bench.page, "titration-titrant").select_option("1")
    expect(bench.part("found")).to_contain_text("titrated with hydrochloric acid")


def test_a_long_fit_leaves_the_page_alive_and_can_be_ended(bench: Bench) -> None:
    # As quick as a paste; typing so much as `fill` does takes the browser half a minute.
    bench.points.evaluate(PUT, pasted(count=5000))
    expect(bench.part("found")).to_contain_text("5000 points")
    bench.free(**FREED)
    bench.press("fit")
    cancel = bench.page.locator('[data-action="titration-cancel"]')
    expect(cancel).to_be_visible()
    field(bench.page, "batch").fill("3")  # something else on the page is answered meanwhile
    cancel.click()
    expect(bench.part("refused")).to_contain_text("The fit was ended")
    expect(cancel).to_be_hidden()
    assert bench.part("fit").inner_text() == ""


def test_results_are_taken_along(bench: Bench) -> None:
    """The file holds the points beside Python's predictions, after remarks."""
    text = pasted(count=12)
    bench.points.fill(text)
    bench.fit()
    with bench.page.expect_download() as download:
        bench.press("download")
    content = download.value.path().read_text("utf-8-sig")
    remarks = [line for line in content.splitlines() if line.startswith("#")]
    assert remarks[0] == "# Haddow sediment extract, acetate"
    table = list(csv.DictReader(content.splitlines()[len(remarks) :]))
    here = fitted(text)
    # The file has seven figures.
    for name, values in (("best fit", here.predicted), ("measured less fit", here.residuals)):
        np.testing.assert_allclose([float(row[name]) for row in table], values, atol=6e-6)
    assert [int(row["row"]) for row in table] == list(range(2, 14))
    bench.page.evaluate("navigator.clipboard.writeText = async (text) => { window.copied = text; }")
    bench.press("copy")
    expect(bench.page.locator(".taking .copied")).to_have_text("Copied.")
    assert bench.page.evaluate("copied").splitlines() == [line[2:] for line in remarks]


@pytest.mark.parametrize(("width", "scheme"), [(1280, "dark"), (390, "light")])
def test_axe_finds_no_violation_in_a_titration(bench: Bench, width: int, scheme: str) -> None:
    page = bench.page
    page.set_viewport_size({"width": width, "height": 900})
    page.emulate_media(color_scheme=scheme, reduced_motion="reduce")
    bench.points.fill(pasted())
    bench.free(offset="free")
    bench.fit()
    page.locator(".titration figure details summary").click()
    if scheme == "light":  # with what is wrong, and results set back
        bench.points.press("x")
        expect(bench.part("complaints")).to_be_visible()
    assert violations(page) == []


def violations(page: Page) -> list[tuple[str, list[str]]]:
    """Return the rules that the section breaks, each with where."""
    options = {"runOnly": {"type": "tag", "values": list(TAGS)}, "preload": False}
    response = Axe().run(page, context=".titration", options=options).response
    passed = {each["id"] for each in response["passes"]}
    assert {"color-contrast", "label", "select-name"} <= passed, "axe did not look"
    return [
        (each["id"], [str(node["target"]) for node in each["nodes"]])
        for each in response["violations"]
    ]
