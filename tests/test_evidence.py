"""How predictions are compared with published tables: statistics, every row, one set of numbers."""

import json
import math
import re
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from bufferfolio.activity import MODELS
from bufferfolio.command import main
from bufferfolio.command.arguments import ExitCode
from bufferfolio.equilibrium import solve
from bufferfolio.evidence import NotCompared, TableResult, compared, difference, misfit
from bufferfolio.evidence_plots import evidence_figures
from bufferfolio.formatting import fixed, signed
from bufferfolio.published import PublishedTable, Target
from bufferfolio.svg_figures import svg
from published_tables import rows_of
from recipes import recipe, shipped, shipped_tables
from solutions import constants_of

Printed = pytest.CaptureFixture[str]
TABLES = {table.key: table for table in shipped_tables()}
LARGEST_PAGE = 200_000  # bytes


@pytest.fixture(scope="module")
def results() -> dict[str, TableResult]:
    return {result.table.key: result for result in compared(shipped_tables(), shipped())}


def test_statistics_by_hand() -> None:
    """Mean 1/4, mean square (1 + 4 + 4 + 0) / 4, and the first of two that are equally far off."""
    found = misfit(np.array([1.0, -2.0, 2.0, 0.0]))
    assert (found.count, found.mean, found.largest, found.at) == (4, 0.25, -2.0, 1)
    assert found.root_mean_square == pytest.approx(1.5)
    some = misfit(np.array([1.0, -2.0, 2.0, 0.0]), [0, 3])
    assert (some.count, some.mean, some.largest, some.at) == (2, 0.5, 1.0, 0)
    assert some.root_mean_square == pytest.approx(math.sqrt(0.5))


def test_a_difference_is_counted_as_its_table_says() -> None:
    computed, published = np.array([0.55]), np.array([0.50])
    table = TABLES["primary-standards"]
    assert difference(table, computed, published) == pytest.approx(0.05)
    assert difference(replace(table, quantity="share"), computed, published) == pytest.approx(5.0)
    ratio = replace(table, quantity="share", compared_by="ratio")
    assert difference(ratio, computed, published) == pytest.approx(10.0)


@pytest.mark.parametrize("key", TABLES)
def test_every_row_of_every_table_is_compared(key: str, results: dict[str, TableResult]) -> None:
    """As many rows as the file has lines below its first, each with a finite difference."""
    result, printed = results[key], rows_of(key)
    assert [row.value for row in result.table.rows] == [float(row["value"]) for row in printed]
    for way, differences in result.differences.items():
        assert np.isfinite(differences).all()
        assert result.misfits[way].count == len(printed)
    if result.parts:
        assert sorted(row for part in result.parts for row in part.rows) == [*range(len(printed))]


def test_a_row_without_a_prediction_stops_the_comparison() -> None:
    table = TABLES["mcilvaine-1921"]
    broken = replace(table.rows[3], temperature=math.nan)
    spoilt = replace(table, rows=(*table.rows[:3], broken, *table.rows[4:]))
    with pytest.raises(NotCompared, match=r"mcilvaine-1921.csv:5:1: .* has no prediction"):
        compared([spoilt], shipped())


def test_many_rows_at_once_are_the_same_as_one_by_one(results: dict[str, TableResult]) -> None:
    """Solved singly from salts written out by hand, in the tests' own way."""
    result = results["primary-standards"]
    settings = {"library": shipped().interactions, "no pairs": (), "davies": ()}
    for way, pairs in settings.items():
        model = MODELS["davies" if way == "davies" else "specific-ion"]
        for number, row in enumerate(rows_of("primary-standards")):
            if number % 9 == 0:
                mixture = recipe(row["contents"])
                constants = constants_of(mixture, 273.15 + float(row["celsius"]))
                alone = float(solve(mixture, constants, model, pairs).pH)
                assert result.computed[way][number] == pytest.approx(alone, abs=1e-9)


def test_a_litre_counts_as_a_litre_of_water(results: dict[str, TableResult]) -> None:
    """0.05 mol/L and 0.0495 mol/L at 25 °C, where water has 0.99705 kg to the litre."""
    mixture = recipe("KH phthalate=0.05; HCl=0.0495", 1.0 / 0.99705)
    alone = float(solve(mixture, constants_of(mixture), MODELS["davies"]).pH)
    result = results["bower-bates-1955"]
    (number,) = (
        number
        for number, row in enumerate(result.table.rows)
        if row.solution is not None and row.solution.stated == "KH phthalate=0.05; HCl=0.0495"
    )
    assert result.computed["davies"][number] == pytest.approx(alone, abs=1e-5)


def test_titrants_are_mixed_by_volume(results: dict[str, TableResult]) -> None:
    """25 mL of 0.100 mol/L HCl with 10 mL of NaOH: 1.5 mmol left in 35 mL, pH 1.368."""
    result = results["titrations"]
    (number,) = (
        number
        for number, row in enumerate(result.table.rows)
        if row.solution is not None
        and row.solution.stated == "HCl=0.100"
        and (row.volume, row.added) == (pytest.approx(25e-6), pytest.approx(10e-6))
    )
    assert result.computed["no activity"][number] == pytest.approx(-math.log10(0.1 * 15 / 35))


def test_verdicts(results: dict[str, TableResult]) -> None:
    """Each of the three can be missed by itself, and whatever is met is met at its very limit."""
    table = TABLES["older-phthalate"]
    found = results["older-phthalate"].misfits["library"]
    rms, largest = found.root_mean_square, abs(found.largest)

    def verdict(target: Target) -> tuple[bool, bool, bool]:
        (result,) = compared([replace(table, target=target)], shipped())
        assert result.verdict is not None
        assert result.verdict.met == (result.verdict.root_mean_square and result.verdict.largest)
        return (
            result.verdict.root_mean_square,
            result.verdict.largest,
            result.verdict.as_good_as_davies,
        )

    assert verdict(Target(root_mean_square=rms, largest=largest)) == (True, True, True)
    assert verdict(Target(root_mean_square=rms - 1e-6, largest=None)) == (False, True, True)
    assert verdict(Target(root_mean_square=1.0, largest=largest - 1e-6)) == (True, False, True)
    carbonate = next(p for p in results["primary-standards"].parts if p.part.key == "carbonate")
    davies = carbonate.misfits["davies"].root_mean_square
    assert carbonate.verdict is not None
    assert carbonate.verdict.as_good_as_davies == (
        round(carbonate.misfits["library"].root_mean_square, 3) <= round(davies, 3)
    )


def test_targets_are_those_that_were_set() -> None:
    """Whether they are met is for the page to say; they must not be moved to be met."""
    targets = {table.key: table.target for table in TABLES.values() if table.target}
    assert targets == {
        "primary-standards": Target(root_mean_square=0.009, largest=0.02),
        "bower-bates-1955": Target(root_mean_square=0.02, largest=None),
        "bates-bower-1956": Target(root_mean_square=0.02, largest=None),
    }


def test_points_are_drawn_where_differences_lie(results: dict[str, TableResult]) -> None:
    result = results["tris-standard"]
    pH, temperature = evidence_figures(result)
    assert (pH.kind, pH.x.label, temperature.x.label) == ("points", "pH", "temperature")
    (series,) = temperature.series
    np.testing.assert_allclose(series.y, result.differences["library"])
    (drawn,) = re.findall(r'<path class="point s0 t0" d="([^"]*)"', svg(temperature))
    assert drawn.count("h0") == len(result.table.rows)


def test_page_and_command_print_the_same(site: Path, systems: Path, capsys: Printed) -> None:
    """The figures of every table, as the overview of the page has them."""
    assert main(["evidence", str(systems), "--json"]) == ExitCode.DONE
    told = json.loads(capsys.readouterr().out)
    page = (site / "evidence.html").read_text("utf-8")
    assert len(page.encode()) <= LARGEST_PAGE
    overview = page[page.index('id="overview"') : page.index('id="group-')]
    assert {table["key"] for table in told["tables"]} == set(TABLES)
    for table in told["tables"]:
        start = overview.index(f'href="#{table["key"]}"')
        cells = re.sub(r"<[^>]+>", " ", overview[start : overview.index("</tr>", start)]).split()
        own = next(iter(table["misfits"].values()))
        decimals = len(
            next(cell for cell in cells if re.fullmatch(r"\d+\.\d+", cell)).partition(".")[2]
        )
        for text in (
            str(own["n"]),
            signed(own["mean"], decimals),
            fixed(own["root_mean_square"], decimals),
            signed(own["largest"], decimals),
        ):
            assert text in cells, (table["key"], text, cells)
        assert len(table["rows"]) == own["n"]
        assert f'id="{table["key"]}"' in page


def test_the_page_says_what_is_missed(site: Path, results: dict[str, TableResult]) -> None:
    page = (site / "evidence.html").read_text("utf-8")
    targets = page[page.index('id="targets"') : page.index('id="overview"')]
    missed = [r for r in results.values() if r.verdict is not None and not r.verdict.met]
    assert targets.count("outcome missed") == len(missed)


def test_the_command_names_every_table(systems: Path, capsys: Printed) -> None:
    assert main(["evidence", str(systems)]) == ExitCode.DONE
    printed = capsys.readouterr().out
    for key, table in TABLES.items():
        assert re.search(rf"^{key} +{len(table.rows)} ", printed, re.MULTILINE), key
    for target in ("Primary standards", "Bower & Bates 1955", "Bates & Bower 1956"):
        assert re.search(rf"^{target}.*: (met|missed: .*)$", printed, re.MULTILINE)


def test_the_command_refuses_a_broken_table(tmp_path: Path, capsys: Printed) -> None:
    folder = tmp_path / "mine" / "evidence"
    folder.mkdir(parents=True)
    (folder / "index.yaml").write_text("tables: {mine: {}}\n", "utf-8")
    assert main(["evidence", str(tmp_path / "mine")]) == ExitCode.WRONG_INPUT
    assert "mine lacks the key 'group'" in capsys.readouterr().err
    assert main(["evidence", str(tmp_path / "nowhere")]) == ExitCode.WRONG_COMMAND_LINE


def test_sources_of_tables_are_listed_with_their_rows(site: Path) -> None:
    page = (site / "sources.html").read_text("utf-8")
    table: PublishedTable = TABLES["tris-standard"]
    assert f'href="evidence.html#{table.key}"' in page
    assert "evidence, Tris standard: 12 rows" in page
