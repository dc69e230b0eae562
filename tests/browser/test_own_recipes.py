"""A recipe with no model and with a liquid in grams: the live page stays with both."""

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import pytest
from playwright.sync_api import expect

from bufferfolio.pages import write_site
from bufferfolio.reading import read_formulation, read_library

from .conftest import Visitor
from .readers import field, shown

BRINE = """\
title: Brine for a test
revision: "1"
purpose: To test.
medium: dilute
make_up:
  made_up_to: 1 L
  at: 20 °C
  reagents:
    - {reagent: tris, amount: 20 mmol/L}
    - {reagent: hydrochloric-acid-37, amount: 1.2 g}
    - {reagent: phosphoric-acid-85, amount: 1 mL}
    - {reagent: sodium-chloride, amount: 60 g}
use: {temperature: [10 °C, 30 °C], pH: [1, 9]}
"""


@pytest.fixture(scope="module")
def brine(systems: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("brine")
    library = read_library(systems)
    path = folder / "brine.yaml"
    path.write_text(BRINE, encoding="utf-8")
    own = {"brine": read_formulation(path, library)}
    write_site(replace(library, formulations=own), folder / "site", lambda name: None)
    return folder / "site"


def test_what_the_file_leaves_to_the_program(
    stranger: Callable[[Path], Visitor], brine: Path
) -> None:
    visitor = stranger(brine)
    page = visitor.open("formulations/brine.html")
    expect(page.locator("[data-checks]")).to_contain_text("all agree")
    model = page.get_by_text("Its definition names no model")
    expect(model).to_contain_text("Specific ion interaction")
    expect(model).to_contain_text("chosen by the ionic strength")
    expect(page.get_by_text("pair counts as zero").first).to_be_visible()
    amounts = page.locator('[data-portion] [data-value="amount"]')
    assert amounts.all_inner_texts() == ["2.428 g", "1.2 g", "1 mL", "60 g"]
    field(page, "batch").fill("10")
    assert amounts.all_inner_texts() == ["24.28 g", "12 g", "10 mL", "600 g"]
    # At a tenth of its strength Davies would do; the model stays what the sheet says it is.
    before = shown(page, "pH")
    field(page, "strength").fill("0,1")
    assert amounts.all_inner_texts() == ["2.428 g", "1.2 g", "1 mL", "60 g"]
    assert shown(page, "pH") != before
    assert page.locator("body.live").count() == 1
    visitor.assert_quiet()
