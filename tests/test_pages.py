"""The generated pages, read as files: structure, links, sizes, numbers, determinism."""

import dataclasses
import hashlib
import itertools
import json
import math
import os
import re
import subprocess
import sys
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest

from bufferfolio import resources
from bufferfolio.definitions import Library
from bufferfolio.formatting import celsius, chemical, fixed, milli, percent, significant
from bufferfolio.hazards import STATEMENTS
from bufferfolio.page_scripts import EXPLORER_SCRIPTS, FIRST_SCRIPT, INDEX_SCRIPTS, SHEET_SCRIPTS
from bufferfolio.pages import PageReport, write_site
from bufferfolio.search_words import typed
from bufferfolio.sheets import Sheet, sheet_of
from bufferfolio.temperature import pK_at
from page_trees import Element, parsed
from recipes import shipped, shipped_tables

LARGEST_PAGE = 200_000  # bytes, beside the scripts that pages share
POLICY = (
    "default-src 'none'; script-src 'self'; style-src 'self' 'unsafe-inline'; "
    "img-src 'self' data: blob:; font-src 'self' data:"
)
LIBRARY = shipped()
FAMILIES = sorted(LIBRARY.families)
FORMULATIONS = sorted(LIBRARY.formulations)
PAGES = [
    "index.html",
    "reagents.html",
    "sources.html",
    "evidence.html",
    "method.html",
    *(f"families/{key}.html" for key in FAMILIES),
    *(f"formulations/{key}.html" for key in FORMULATIONS),
]


def built(library: Library, out: Path) -> tuple[PageReport, ...]:
    return write_site(library, out, lambda name: None, shipped_tables())


@dataclass(frozen=True)
class Site:
    """The whole site of the shipped definitions."""

    folder: Path
    reports: tuple[PageReport, ...]
    pages: Mapping[str, Element]


@pytest.fixture(scope="module")
def folio(tmp_path_factory: pytest.TempPathFactory) -> Site:
    folder = tmp_path_factory.mktemp("pages") / "dist"
    reports = built(LIBRARY, folder)
    pages = {
        path.relative_to(folder).as_posix(): parsed(path.read_text(encoding="utf-8"))
        for path in sorted(folder.rglob("*.html"))
    }
    return Site(folder=folder, reports=reports, pages=pages)


@pytest.fixture(scope="module")
def sheets() -> Mapping[str, Sheet]:
    return {key: sheet_of(item, LIBRARY) for key, item in LIBRARY.formulations.items()}


def test_every_formulation_and_every_family_has_its_page(folio: Site) -> None:
    assert sorted(folio.pages) == sorted(PAGES)


@pytest.mark.parametrize("name", PAGES)
def test_a_page_is_small(folio: Site, name: str) -> None:
    assert (folio.folder / name).stat().st_size <= LARGEST_PAGE


@pytest.mark.parametrize("name", PAGES)
def test_a_page_forbids_the_network_and_holds_no_code(folio: Site, name: str) -> None:
    page = folio.pages[name]
    policy = page.one("meta", http_equiv="Content-Security-Policy")
    assert policy.attributes["content"] == POLICY
    for script in page.all("script"):
        inline = script.attributes.get("type") == "application/json"
        first = script.attributes.get("src", "").endswith(f"assets/{FIRST_SCRIPT}.js")
        assert inline or ((first or "defer" in script.attributes) and not script.children)
    handlers = {n for element in page.walk() for n in element.attributes if n.startswith("on")}
    assert not handlers
    # The only address of the world outside is in words: no reader is sent there by a link.
    text = (folio.folder / name).read_text(encoding="utf-8")
    assert not re.search(r"(?:https?:)?//[a-z]", text)


@pytest.mark.parametrize("name", PAGES)
def test_links_lead_somewhere(folio: Site, name: str) -> None:
    page, place = folio.pages[name], (folio.folder / name).parent
    for element in page.walk():
        for attribute in ("href", "src"):
            if attribute not in element.attributes:
                continue
            path, _, anchor = element.attributes[attribute].partition("#")
            target = (place / path).resolve() if path else folio.folder / name
            assert target.is_file(), f"{name} leads to {path}"
            if anchor:
                other = (
                    folio.pages[target.relative_to(folio.folder.resolve()).as_posix()]
                    if (path)
                    else page
                )
                assert other.all(id=anchor), f"{name} leads to {path}#{anchor}"


@pytest.mark.parametrize("name", PAGES)
def test_a_page_is_built_for_every_reader(folio: Site, name: str) -> None:
    page = folio.pages[name]
    assert page.one("html").attributes["lang"] == "en"
    assert page.one("meta", name="viewport")
    assert page.one("meta", name="color-scheme").attributes["content"] == "light dark"
    assert page.one("a", **{"class": "skip"}).attributes["href"] == "#content"
    ids = [element.attributes["id"] for element in page.walk() if "id" in element.attributes]
    assert len(ids) == len(set(ids))
    levels = [int(e.tag[1]) for e in page.walk() if re.fullmatch("h[1-6]", e.tag)]
    assert levels[0] == 1
    assert levels.count(1) == 1
    assert all(after <= before + 1 for before, after in itertools.pairwise(levels))
    for table in page.all("table"):
        assert table.one("caption").text()
        assert all("scope" in head.attributes for head in table.all("th"))
    for element in page.walk():
        for named in ("aria-labelledby", "aria-describedby", "for"):
            for each in element.attributes.get(named, "").split():
                assert each in ids, f"{name}: {named}={each}"


@pytest.mark.parametrize("name", PAGES)
def test_inputs_have_labels_and_wait_for_the_checks(folio: Site, name: str) -> None:
    page = folio.pages[name]
    labelled = {label.attributes["for"] for label in page.all("label")}
    for control in [*page.all("input"), *page.all("select")]:
        named = "aria-label" in control.attributes or control.attributes.get("id") in labelled
        assert named, control
        assert "disabled" in control.attributes or "data-filter" in control.attributes
    for button in page.all("button"):
        assert button.text()
        assert "disabled" in button.attributes or "data-tool" in button.attributes
    for tools in page.all("div", **{"class": "plot-tools"}):
        assert "hidden" in tools.attributes
    for form in page.all("form"):
        if form.all(data_filter="text"):
            assert "hidden" in form.attributes


@pytest.mark.parametrize("name", PAGES)
def test_nothing_half_made_shows(folio: Site, name: str) -> None:
    page = folio.pages[name]
    text = page.one("main").text()
    assert not re.search(r"\b(nan|inf|None|Undefined|True|False)\b", text)
    assert "{{" not in text
    assert "<" not in text.replace("< ", "")
    assert page.one("title").text().endswith("· bufferfolio")


def test_every_script_is_linked_and_served(folio: Site) -> None:
    there = {path.stem for path in (resources.templates() / "js").glob("*.js")}
    assert {FIRST_SCRIPT, *SHEET_SCRIPTS, *INDEX_SCRIPTS} == there
    expected = {
        "formulations/tris-assay.html": SHEET_SCRIPTS,
        "families/tris.html": EXPLORER_SCRIPTS,
    }
    for name, scripts in expected.items():
        linked = [s.attributes["src"] for s in folio.pages[name].all("script", defer="")]
        assert linked == [f"../assets/{script}.js" for script in scripts]
    for page in folio.pages.values():
        first = next(each for each in page.all("script") if "src" in each.attributes)
        assert first.attributes["src"].endswith(f"assets/{FIRST_SCRIPT}.js")
        assert "defer" not in first.attributes
    assets = {path.name for path in (folio.folder / "assets").iterdir()}
    shared = {"site.css", "bokeh.min.js", "skeletons.js"}
    assert assets == {*shared, *(f"{script}.js" for script in there)}


@pytest.mark.parametrize("key", FORMULATIONS)
def test_a_sheet_shows_what_was_computed(
    folio: Site, sheets: Mapping[str, Sheet], key: str
) -> None:
    page, sheet = folio.pages[f"formulations/{key}.html"], sheets[key]
    state = sheet.reference

    def shown(name: str) -> set[str]:
        return {element.text() for element in page.all(data_value=name)}

    assert shown("pH") == {fixed(state.pH, 2)}
    assert shown("temperature") == {celsius(state.temperature)}
    assert shown("ionic_strength") == {significant(state.ionic_strength)}
    assert shown("capacity") == {milli(state.capacity)}
    estimate = "none" if sheet.estimate.kind == "none" else fixed(sheet.estimate.pH, 2)
    assert shown("estimate") == {estimate}
    for side in sheet.sides:
        assert shown(f"reserve_{side.titrant.direction}") == {milli(side.reserve)}
    mixture = sheet.subject.mixture
    for index, family in enumerate(mixture.families):
        for row, form in enumerate(family.species):
            lines = page.all("tr", data_species=form.name)
            assert bool(lines) == (mixture.totals[index] > 0.0)
            for line in lines:
                molality = state.forms.families[index][row]
                assert line.one(data_value="molality").text() == significant(float(molality))
                share = state.forms.fractions[index][row]
                assert line.one(data_value="fraction").text() == percent(float(share))


@pytest.mark.parametrize("key", FORMULATIONS)
def test_a_sheet_says_the_scale_the_limits_and_the_cautions(folio: Site, key: str) -> None:
    page = folio.pages[f"formulations/{key}.html"]
    text = page.one("main").text()
    formulation = LIBRARY.formulations[key]
    assert "activity scale (IUPAC), −log10 a(H⁺)" in text
    assert "Local rules, licensed practice" in text
    for caution in formulation.cautions:
        assert " ".join(caution.split()) in text
    codes = {code for p in formulation.make_up.portions for code in p.reagent.hazards}
    codes |= {code for titrant in formulation.titrants for code in titrant.reagent.hazards}
    rows = page.one("table", **{"class": "hazards"}).one("tbody").all("tr") if codes else []
    said = {row.one("th").text(): row.all("td")[0].text() for row in rows}
    assert said == {code: STATEMENTS[code] for code in codes}


@pytest.mark.parametrize("key", FORMULATIONS)
def test_the_batch_of_the_recipe_is_what_the_recipe_says(folio: Site, key: str) -> None:
    """An amount stated as mass or volume comes back from molality as it was written."""
    page = folio.pages[f"formulations/{key}.html"]
    for index, portion in enumerate(LIBRARY.formulations[key].make_up.portions):
        row = page.one("tr", data_recipe=str(index))
        number, unit = portion.stated.split(maxsplit=1)
        factor = {"g": 1.0, "mg": 1e-3, "kg": 1e3, "mL": 1.0, "L": 1e3}.get(unit)
        if factor is None:
            continue
        amount, shown = row.one(data_own="amount").text().split()
        of_shown = {"g": 1.0, "mg": 1e-3, "kg": 1e3, "mL": 1.0, "L": 1e3, "µL": 1e-3}[shown]
        # Four figures are shown.
        assert float(amount) * of_shown == pytest.approx(float(number) * factor, rel=5.1e-4)


@pytest.mark.parametrize("name", [page for page in PAGES if "/" in page])
def test_each_figure_has_picture_words_numbers_and_data(folio: Site, name: str) -> None:
    page = folio.pages[name]
    block = page.one("script", id="page-data")
    data = json.loads("".join(child for child in block.children if isinstance(child, str)))
    figures = page.all("figure")
    expected = {
        "sheet": {"fractions", "capacity", "titration", "drift", "surface"},
        "explorer": {"fractions", "logs", "capacity", "pK"},
    }[data["kind"]]
    if name == "formulations/plain-water.html":
        expected = expected - {"fractions"}  # it holds no family
    assert set(data["figures"]) == expected
    assert {figure.attributes["data-figure"] for figure in figures} == set(data["figures"])
    for figure in figures:
        own = data["figures"][figure.attributes["data-figure"]]
        assert figure.one("h3").text() == own["title"]
        assert figure.one("figcaption").text() == own["summary"]
        picture = figure.one("div", **{"class": "plot-picture"}).one("svg")
        assert picture.attributes["aria-label"]
        rows = figure.one("tbody").all("tr")
        assert 2 <= len(rows) <= 34
        named = {
            button.attributes["data-series"]
            for button in figure.all("button", type="button")
            if "data-series" in button.attributes
        }
        series = {each["name"] for each in own["series"]}
        assert named == (series if len(series) > 1 else set())


def test_the_index_lists_everything_and_can_be_filtered(
    folio: Site, sheets: Mapping[str, Sheet]
) -> None:
    index = folio.pages["index.html"]
    rows = [row for row in index.all("tr") if "data-text" in row.attributes]
    assert len(rows) == len(FORMULATIONS)
    by_link = {row.all("a")[0].attributes["href"]: row for row in rows}
    for key, sheet in sheets.items():
        row = by_link[f"formulations/{key}.html"].attributes
        low, high = float(row["data-ph-low"]), float(row["data-ph-high"])
        assert low <= float(row["data-ph"]) + 0.01
        assert float(row["data-ph"]) == pytest.approx(sheet.reference.pH, abs=0.0051)
        assert low == pytest.approx(sheet.drift.state.pH.min(), abs=0.0051)
        assert high == pytest.approx(sheet.drift.state.pH.max(), abs=0.0051)
        use = sheet.subject.formulation.use_temperature
        assert float(row["data-temperature-low"]) == pytest.approx(use.low - 273.15)
        assert float(row["data-temperature-high"]) == pytest.approx(use.high - 273.15)
        assert set(map(typed, sheet.subject.formulation.title.split())) <= {
            *row["data-text"].split(),
            "",
        }
    thumbnails = index.all("span", **{"class": "thumbnail"})
    assert len(thumbnails) == len(FAMILIES)
    assert all(each.one("svg") for each in thumbnails)


def test_the_index_finds_families_and_reagents_by_all_their_names(folio: Site) -> None:
    index = folio.pages["index.html"]
    found = {
        entry.all("a")[0].attributes["href"]: entry.attributes for entry in index.all(data_entry="")
    }
    assert len(found) == len(FORMULATIONS) + len(FAMILIES) + len(LIBRARY.reagents)
    for key, reagent in LIBRARY.reagents.items():
        entry = found[f"reagents.html#reagent-{key}"]
        names = [reagent.label, reagent.formula, *reagent.synonyms, reagent.cas or ""]
        for word in " ".join(names).split():
            assert typed(word) in entry["data-text"]
        steps = [step for family in reagent.families for step in LIBRARY.families[family].steps]
        assert len(entry.get("data-pk", "").split()) == len(steps)
    for key, family in LIBRARY.families.items():
        entry = found[f"families/{key}.html"]
        names = [family.label, *family.synonyms, *(form.name for form in family.species)]
        for word in " ".join(names).split():
            assert typed(word) in entry["data-text"]
        pK = [float(text) for text in entry["data-pk"].split()]
        reference = np.array(298.15)
        expected = [float(pK_at(step, reference)) for step in family.steps]
        assert pK == pytest.approx(expected, abs=0.0051)


@pytest.mark.parametrize(
    ("written", "plain"),
    [
        ("Na2HPO4·7H2O", "na2hpo47h2o"),
        ("Na₂HPO₄·7H₂O", "na2hpo47h2o"),
        ("HPO₄²⁻", "hpo42-"),
        ("HPO4-2", "hpo4-2"),
        ("7558-79-4", "7558-79-4"),
    ],
)
def test_words_are_compared_as_they_are_typed(written: str, plain: str) -> None:
    assert typed(written) == plain


def test_the_page_of_reagents_says_all_of_each(folio: Site) -> None:
    page = folio.pages["reagents.html"]
    for key, reagent in LIBRARY.reagents.items():
        row = page.one("tr", id=f"reagent-{key}")
        cells = {cell.attributes["data-label"]: cell for cell in row.all("td")}
        assert reagent.label in row.one("th").text()
        assert chemical(reagent.formula) in row.one("th").text()
        assert cells["CAS"].text() == (reagent.cas or "—")
        assert cells["Molar mass"].text() == fixed(1000.0 * reagent.molar_mass, 2)
        brought = {a.attributes["href"] for a in cells["Brings"].all("a")}
        assert brought == {f"families/{family}.html" for family in reagent.families}
        assert all(chemical(ion.name) in cells["Brings"].text() for ion in reagent.ions)
        said = cells["Hazards"].one("span").text()
        assert said == (", ".join(reagent.hazards) or "none assigned")
        assert " ".join(reagent.handling.split()) in cells["Hazards"].text()
        used = {a.attributes["href"] for a in cells["Used in"].all("a")}
        assert used == {
            f"formulations/{name}.html"
            for name, formulation in LIBRARY.formulations.items()
            if key in {portion.reagent.key for portion in formulation.make_up.portions}
            or key in {titrant.reagent.key for titrant in formulation.titrants}
        }
    codes = {code for reagent in LIBRARY.reagents.values() for code in reagent.hazards}
    rows = page.one("table", **{"class": "hazards"}).one("tbody").all("tr")
    assert {row.one("th").text(): row.one("td").text() for row in rows} == {
        code: STATEMENTS[code] for code in codes
    }


@pytest.mark.parametrize("key", FORMULATIONS)
def test_a_sheet_says_who_chose_its_model_and_what_counts_as_zero(
    folio: Site, sheets: Mapping[str, Sheet], key: str
) -> None:
    text = folio.pages[f"formulations/{key}.html"].one("main").text()
    chosen = LIBRARY.formulations[key].model is None
    assert ("this one was chosen by the ionic strength" in text) == chosen
    assert ("Its definition names this model." in text) != chosen
    subject = sheets[key].subject
    assert ("pair counts as zero" in text) == subject.model.uses_interactions
    if subject.model.uses_interactions and subject.interactions:
        cited = {pair.citation.source.cite for pair in subject.interactions}
        assert all(cite in text for cite in cited)


def test_every_source_is_listed_with_what_rests_on_it(folio: Site) -> None:
    page = folio.pages["sources.html"]
    for key, source in LIBRARY.sources.items():
        work = page.one("article", id=f"source-{key}")
        assert source.cite in work.text()
    shown = " ".join(page.one("main").text().split())
    for family in LIBRARY.families.values():
        for index, step in enumerate(family.steps):
            assert f"step {index + 1} of {family.label}: {step.citation.where}" in shown


def test_every_hazard_code_is_spelled_out() -> None:
    codes = {code for reagent in LIBRARY.reagents.values() for code in reagent.hazards}
    assert codes <= set(STATEMENTS)


def test_the_reports_tell_what_was_built(folio: Site, sheets: Mapping[str, Sheet]) -> None:
    assert [report.key for report in folio.reports] == FORMULATIONS
    for report in folio.reports:
        sheet = sheets[report.key]
        assert report.pH == sheet.reference.pH
        assert report.difference == sheet.deviation
        assert report.warnings == sheet.warnings
        assert report.seconds > 0.0


def changed(library: Library, key: str, **changes: object) -> Library:
    formulation = dataclasses.replace(library.formulations[key], **changes)
    return dataclasses.replace(library, formulations={key: formulation}, families=library.families)


def test_warnings_stand_above_the_reading(tmp_path: Path) -> None:
    expected = LIBRARY.formulations["tris-assay"].expected
    assert expected is not None
    wrong = dataclasses.replace(expected, pH=7.0)
    (report,) = built(changed(LIBRARY, "tris-assay", expected=wrong), tmp_path / "dist")
    assert len(report.warnings) == 1
    text = (tmp_path / "dist" / "formulations" / "tris-assay.html").read_text(encoding="utf-8")
    page = parsed(text)
    (warning,) = page.one("aside", **{"class": "warnings"}).all("li")
    assert warning.text().startswith("Computed pH 8.156 is +1.156 from the expected 7")
    assert text.index('class="warnings"') < text.index('id="reading"')
    index = (tmp_path / "dist" / "index.html").read_text(encoding="utf-8")
    assert "is +1.156 from the expected 7" in index


def test_a_formulation_without_titrants_and_expectation_has_a_sheet(tmp_path: Path) -> None:
    (report,) = built(changed(LIBRARY, "tris-assay", titrants=(), expected=None), tmp_path / "dist")
    assert report.expected is None
    text = (tmp_path / "dist" / "formulations" / "tris-assay.html").read_text(encoding="utf-8")
    page = parsed(text)
    assert not page.all(id="reserve")
    assert 'href="#reserve"' not in text
    keys = [figure.attributes["data-figure"] for figure in page.all("figure")]
    assert keys == ["fractions", "capacity", "drift"]


def test_text_of_definitions_is_escaped(tmp_path: Path) -> None:
    title = 'A & B <script>alert("1")</script>'
    built(changed(LIBRARY, "tris-assay", title=title), tmp_path / "dist")
    for name in ["formulations/tris-assay.html", "index.html"]:
        text = (tmp_path / "dist" / name).read_text(encoding="utf-8")
        assert "<script>alert" not in text
        assert "A &amp; B &lt;script&gt;" in text


def fingerprint(folder: Path) -> str:
    text = (folder / "formulations" / "tris-assay.html").read_text(encoding="utf-8")
    found = re.search(r"<code>([0-9a-f]{12})</code>", text)
    assert found is not None
    return found[1]


def test_the_fingerprint_follows_the_constants(folio: Site, tmp_path: Path) -> None:
    tris = LIBRARY.families["tris"]
    step = tris.steps[0]
    moved = dataclasses.replace(step, law=dataclasses.replace(step.law, pK=step.law.pK + 1e-9))
    families = {**LIBRARY.families, "tris": dataclasses.replace(tris, steps=(moved,))}
    other = dataclasses.replace(changed(LIBRARY, "tris-assay"), families=families)
    built(other, tmp_path / "moved")
    built(changed(LIBRARY, "tris-assay", purpose="other words"), tmp_path / "reworded")
    assert fingerprint(tmp_path / "moved") != fingerprint(folio.folder)
    assert fingerprint(tmp_path / "reworded") == fingerprint(folio.folder)


def test_two_builds_in_two_processes_are_the_same_bytes(tmp_path: Path) -> None:
    program = (
        "import sys; from pathlib import Path; from bufferfolio import resources;"
        "from bufferfolio.reading import read_library; from bufferfolio.pages import write_site;"
        "write_site(read_library(resources.systems()), Path(sys.argv[1]), lambda name: None)"
    )
    found = []
    for seed in ("1", "77"):
        out = tmp_path / seed / "dist"
        variables = {**os.environ, "PYTHONHASHSEED": seed, "TZ": f"UTC{seed}"}
        subprocess.run([sys.executable, "-c", program, str(out)], check=True, env=variables)
        found.append(
            {
                path.relative_to(out).as_posix(): hashlib.sha256(path.read_bytes()).hexdigest()
                for path in sorted(out.rglob("*"))
                if path.is_file()
            }
        )
    assert found[0] == found[1]
    assert len(found[0]) > len(PAGES)


STYLE = (resources.templates() / "css" / "site.css").read_text(encoding="utf-8")
LIGHT, DARK = (
    dict(re.findall(r"--([a-z-]+): (#[0-9a-f]{6});", block))
    for block in re.findall(r":root \{(.*?)\}", STYLE, re.DOTALL)
)
# Ink, ground, and the least contrast of WCAG 2.2 AA: 4.5 for words, 3 for what only has a shape.
PAIRS = [
    ("ink", "paper", 4.5),
    ("ink", "panel", 4.5),
    ("soft", "paper", 4.5),
    ("soft", "panel", 4.5),
    ("accent", "paper", 4.5),
    ("accent", "panel", 4.5),
    ("on-accent", "accent", 4.5),
    ("warn-ink", "paper", 4.5),
    ("warn-ink", "panel", 4.5),
    ("warn-ink", "warn-paper", 4.5),
    ("danger-ink", "paper", 4.5),
    ("danger-ink", "danger-paper", 4.5),
    ("rule", "paper", 3.0),
    ("focus", "paper", 3.0),
    ("focus", "panel", 3.0),
    ("danger-line", "paper", 3.0),
    ("warn-line", "paper", 3.0),
]


def luminance(colour: str) -> float:
    """WCAG 2.2, relative luminance."""
    parts = [int(colour[at : at + 2], 16) / 255.0 for at in (1, 3, 5)]
    linear = [p / 12.92 if p <= 0.04045 else ((p + 0.055) / 1.055) ** 2.4 for p in parts]
    return math.fsum(w * p for w, p in zip((0.2126, 0.7152, 0.0722), linear, strict=True))


@pytest.mark.parametrize("scheme", [LIGHT, DARK], ids=["light", "dark"])
@pytest.mark.parametrize(("ink", "ground", "least"), PAIRS)
def test_colours_have_contrast(
    scheme: Mapping[str, str], ink: str, ground: str, least: float
) -> None:
    pale, deep = sorted([luminance(scheme[ink]), luminance(scheme[ground])], reverse=True)
    assert (pale + 0.05) / (deep + 0.05) >= least


def test_light_and_dark_name_the_same_colours() -> None:
    assert set(LIGHT) == set(DARK)
    assert {name for pair in PAIRS for name in pair[:2]} <= set(LIGHT)
