"""The card: what a printed sheet is, read from the PDF that the browser makes of it."""

import re
from collections.abc import Callable
from pathlib import Path

import pytest
from playwright.sync_api import Browser, Page
from pypdf import PdfReader

from bufferfolio.card_contexts import card_context
from bufferfolio.formatting import celsius
from bufferfolio.sheets import sheet_of
from recipes import shipped

from .conftest import Visitor
from .readers import SHEET, field

PAPERS = ("A4", "Letter")
# Many reagents; the longest cautions; gases; a batch by mass; nothing to correct with; refusals.
KEYS = (
    "tissue-ringer",
    "holding-water",
    "sanitising-bath",
    "meter-check-citrate",
    "plain-water",
    "alkaline-cleaner",
    "descaler-citric",
)
LEAST_LETTERS = 9.5  # points


@pytest.fixture
def printed(browser: Browser, site: Path, tmp_path: Path) -> Callable[[str, str], Path]:
    """Return what prints a formulation's sheet on a paper, JavaScript off."""
    context = browser.new_context(java_script_enabled=False, offline=True)

    def onto(key: str, paper: str) -> Path:
        page = context.new_page()
        page.goto((site / "formulations" / f"{key}.html").as_uri())
        return to_pdf(page, tmp_path / f"{key}-{paper}.pdf", paper)

    return onto


def to_pdf(page: Page, path: Path, paper: str) -> Path:
    page.pdf(path=path, format=paper)
    return path


def words_of(pdf: Path) -> str:
    """Return the text of a PDF in the order of the page's own words, single-spaced."""
    text = "\n".join(page.extract_text() for page in PdfReader(pdf).pages)
    return " ".join(text.split())


@pytest.mark.parametrize("key", KEYS)
def test_a_printed_sheet_is_a_card_of_two_pages(
    key: str, printed: Callable[[str, str], Path], site: Path
) -> None:
    """On both papers, with all that it has to say, all drawn, and nothing to slide or type."""
    form = shipped().formulations[key]
    card = card_context(sheet_of(form, shipped()))
    page = (site / "formulations" / f"{key}.html").read_text(encoding="utf-8")
    (fingerprint,) = re.findall(r"<code>([0-9a-f]{12})</code>", page)
    for paper in PAPERS:
        pdf = printed(key, paper)
        pages = PdfReader(pdf).pages
        assert len(pages) in (1, 2)
        words = words_of(pdf)
        for text in (form.title, f"Revision {form.revision}", *form.cautions):
            assert " ".join(text.split()) in words
        assert words.count(fingerprint) == 2
        for block in card.blocks:
            for row in block:
                line = f"{row.celsius} {row.target}{'*' * row.outside} {row.accepted}"
                assert f"{line} {row.expected} {row.band}" in words
        for side in card.sides:
            for line in side.lines:
                told = line.portions or (line.refusal,)
                assert " ".join([line.distance, line.reads, *told]) in words
        assert not re.search("× the recipe|Zoom|Download|Copy|slider|JavaScript|Numbers", words)
        assert [len(each.images) for each in pages] == [0] * len(pages)


def test_every_letter_of_a_card_is_large_enough(page: Page, site: Path) -> None:
    """Nothing below 9.5 pt, drawings included, at the width of A4 within its margins."""
    page.goto((site / SHEET).as_uri())
    page.emulate_media(media="print")
    page.set_viewport_size({"width": round((210 - 28) / 25.4 * 96), "height": 900})
    sizes = page.evaluate(
        """() => {
          const sizes = [];
          for (const element of document.querySelectorAll(".card *")) {
            const own = [...element.childNodes].some(
              (each) => each.nodeType === 3 && each.data.trim() !== "");
            if (!own || element.closest(".unseen")) continue;
            const drawing = element.closest("svg");
            const scale = drawing ? drawing.getBoundingClientRect().width /
              drawing.viewBox.baseVal.width : 1;
            sizes.push([parseFloat(getComputedStyle(element).fontSize) * scale * 0.75,
              element.outerHTML.slice(0, 60)]);
          }
          return sizes;
        }"""
    )
    assert len(sizes) > 200
    # Subscripts are a part of a letter.
    small = [each for each in sizes if each[0] < LEAST_LETTERS - 0.01 and "<sub>" not in each[1]]
    assert small == []
    assert max(size for size, _ in sizes) >= 18.0


def test_a_card_does_not_follow_the_inputs(visitor: Visitor, tmp_path: Path) -> None:
    """Another temperature, strength and batch on the screen print the same words."""
    page = visitor.open(SHEET)
    before = words_of(to_pdf(page, tmp_path / "before.pdf", "A4"))
    page.wait_for_selector("body.live")
    for name, value in (("temperature", "4"), ("strength", "2"), ("batch", "17")):
        field(page, name).fill(value)
    page.wait_for_timeout(200)
    assert words_of(to_pdf(page, tmp_path / "after.pdf", "A4")) == before
    assert field(page, "temperature").input_value() == "4"


def test_a_card_needs_no_script(
    visitor: Visitor, printed: Callable[[str, str], Path], tmp_path: Path
) -> None:
    page = visitor.open(SHEET)
    page.wait_for_selector("body.live")
    live = words_of(to_pdf(page, tmp_path / "live.pdf", "Letter"))
    assert live == words_of(printed("tris-assay", "Letter"))
    assert live.count("Corrin assay buffer, cold and warm") == 2


def test_paper_of_a_dark_screen_is_white(visitor: Visitor) -> None:
    page = visitor.open(SHEET)
    page.emulate_media(media="print", color_scheme="dark")
    look = "(name) => getComputedStyle(document.querySelector('.card'))[name]"
    assert page.evaluate(look, "color") == "rgb(0, 0, 0)"
    assert page.evaluate(look, "backgroundColor") == "rgb(255, 255, 255)"
    # What is not the card is not on the paper, and on the screen it is the other way round.
    for hidden in (".masthead", ".colophon", "form.controls", "figure.plot", ".cautions.block"):
        assert not any(each.is_visible() for each in page.locator(hidden).all()), hidden
    page.emulate_media(media="screen")
    assert page.locator(".card").is_hidden()


def test_other_pages_print_as_they_are(visitor: Visitor, tmp_path: Path) -> None:
    """The card's rules reach sheets only."""
    page = visitor.open("families/phosphate.html")
    headings = page.locator("main h2").all_inner_texts()
    words = words_of(to_pdf(page, tmp_path / "explorer.pdf", "A4"))
    assert len(headings) >= 2
    for heading in ("bufferfolio", *headings):
        assert heading in words
    page = visitor.open("method.html")
    words = words_of(to_pdf(page, tmp_path / "method.pdf", "A4"))
    assert "A page advises; it controls nothing." in words


def test_a_card_tells_its_reference_temperature(visitor: Visitor, tmp_path: Path) -> None:
    page = visitor.open(SHEET)
    words = words_of(to_pdf(page, tmp_path / "card.pdf", "A4"))
    expected = shipped().formulations["tris-assay"].expected
    assert expected is not None
    assert f"Target at {celsius(expected.temperature)} °C" in words
    assert "pH 8.16 ± 0.05" in words
    for written in ("Batch no.", "Made on", "Name", "Signature", "Date, time"):
        assert written in words
