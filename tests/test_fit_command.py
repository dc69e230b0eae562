"""`bufferfolio fit`: what it prints, and what it refuses."""

import json
from pathlib import Path

import numpy as np
import pytest

from bufferfolio.command import main
from bufferfolio.command.arguments import ExitCode
from bufferfolio.fit_model import modelled
from bufferfolio.fit_parameters import nominal
from measured_titrations import free_quantities, titration_of

Printed = pytest.CaptureFixture[str]
SAMPLE = ("--sample-volume", "50 mL")


def run(*words: str) -> int:
    """Return the exit code of the command, whichever way it ends."""
    try:
        return main(words)
    except SystemExit as end:
        return int(end.code or 0)


@pytest.fixture
def points(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Return a file of 41 points with decimal commas: titrant 3 % weak, electrode 0.05 high."""
    monkeypatch.chdir(tmp_path)
    experiment = titration_of("acetate-extract", 0)
    free = free_quantities("strength,offset")
    volume = np.round(np.linspace(0.0, 4e-6, 41), 8)
    values = nominal(experiment, free) + np.array([-0.03, 0.05])
    pH = modelled(experiment, volume, free, values).reading
    noise = 0.005 * np.random.default_rng(1).normal(size=41)
    rows = [
        f"{v * 1e6:.2f};{r:.3f}".replace(".", ",") for v, r in zip(volume, pH + noise, strict=True)
    ]
    path = tmp_path / "points.csv"
    path.write_text("Volume (mL);pH\n" + "\n".join(rows) + "\n", encoding="utf-8")
    return path


def found(capsys: Printed, *words: str) -> dict[str, object]:
    assert run("fit", *words, "--json") == ExitCode.DONE
    result = json.loads(capsys.readouterr().out, parse_constant=pytest.fail)
    assert isinstance(result, dict)
    return result


def test_a_fit_is_told_in_words(points: Path, capsys: Printed) -> None:
    options = ("--free", "strength,offset", "--reading-uncertainty", "0.005")
    words = ("acetate-extract", "points.csv", *SAMPLE, *options, "--volume-uncertainty", "0.002 mL")
    assert run("fit", *words) == ExitCode.DONE
    lines = capsys.readouterr().out.splitlines()
    assert lines[:4] == [
        "Haddow sediment extract, acetate, revision 2",
        "sample: 50 mL, 25 °C; titrant: sodium hydroxide, 1 mol/L",
        "41 points; volumes to 4 mL",
        "",
    ]
    assert lines[4].split("  ")[0] == "quantity"
    strength, offset = lines[5].split(), lines[6].split()
    assert strength[:4] == ["strength", "of", "the", "titrant"]
    assert float(strength[4]) == pytest.approx(0.97, abs=4 * float(strength[5]))
    assert offset[:4] == ["offset", "of", "the", "electrode"]
    assert float(offset[4]) == pytest.approx(0.05, abs=4 * float(offset[5]))
    assert lines[8] == "correlation"
    assert lines[9].startswith("  strength, offset: ")
    assert lines[11].startswith("reduced chi-squared ")
    assert lines[11].endswith("a reading is taken to be good to 0.005, a volume to 2 µL)")
    assert lines[12] == "Well determined: every standard error is small enough to be of use."
    assert lines[14] == "end points"
    assert lines[15].startswith("  steepest at 2.55")
    assert [line.split(":")[0] for line in lines[16:]] == ["  Gran, before", "  Gran, after"]
    assert "(pK 1 of acetic acid, " in lines[16]
    assert "(titrant in excess, " in lines[17]


def test_in_json_it_has_the_documented_keys(points: Path, capsys: Printed) -> None:
    result = found(capsys, "acetate-extract", "points.csv", *SAMPLE, "--free", "strength,offset")
    assert list(result) == [
        "formulation", "titrant", "temperature_celsius", "points", "estimates", "correlation",
        "reduced_chi_squared", "freedom", "precision", "verdict", "end_points", "gran",
        "volumes_m3", "predicted", "residuals",
    ]  # fmt: skip
    strength, offset = result["estimates"]
    assert list(strength) == [
        "quantity", "value", "standard_error", "unit", "recipe", "bounds",
    ]  # fmt: skip
    assert (strength["quantity"], strength["unit"], strength["recipe"]) == (
        "strength",
        "mol/L",
        1.0,
    )
    assert offset["value"] == pytest.approx(0.05, abs=0.01)
    assert result["precision"]["volume_m3"] == pytest.approx(4e-9)
    assert result["freedom"] == 39
    assert len(result["residuals"]) == 41
    assert result["correlation"][0][1] == result["correlation"][1][0]


def test_without_a_sample_the_whole_make_up_is_titrated(points: Path, capsys: Printed) -> None:
    """Forty times as much titrant into the 2 L of the recipe is the same titration."""
    text = points.read_text()
    rows = [line.split(";") for line in text.splitlines()[1:]]
    larger = [f"{float(v.replace(',', '.')) * 40:.1f} {pH.replace(',', '.')}" for v, pH in rows]
    Path("whole.txt").write_text("\n".join(larger))
    small = found(capsys, "acetate-extract", "points.csv", *SAMPLE, "--volume-uncertainty", "4 µL")
    whole = found(capsys, "acetate-extract", "whole.txt", "--volume-uncertainty", "0.16 mL")
    # A sample at 25 °C holds 0.1 % less water than one at the 20 °C of the make-up.
    value = small["estimates"][0]["value"]
    assert whole["estimates"][0]["value"] == pytest.approx(value, rel=2e-3)


def test_a_titrant_may_be_any_reagent(points: Path, capsys: Printed) -> None:
    own = found(capsys, "acetate-extract", "points.csv", *SAMPLE)
    same = found(
        capsys, "acetate-extract", "points.csv", *SAMPLE, "--titrant", "sodium-hydroxide-1-molar"
    )
    solid = found(
        capsys, "acetate-extract", "points.csv", *SAMPLE, "--titrant", "sodium-hydroxide 2 mol/L"
    )
    assert same == own
    assert solid["titrant"] == "sodium hydroxide, 2 mol/L"
    assert solid["estimates"][0]["recipe"] == 2.0
    assert solid["estimates"][0]["value"] == pytest.approx(own["estimates"][0]["value"], rel=0.01)


def test_a_unit_may_be_said_where_the_heading_has_none(points: Path, capsys: Printed) -> None:
    text = points.read_text()
    Path("bare.csv").write_text(text.replace("Volume (mL)", "Volume"), encoding="utf-8")
    in_millilitres = found(capsys, "acetate-extract", "points.csv", *SAMPLE)
    assert found(capsys, "acetate-extract", "bare.csv", *SAMPLE) == in_millilitres
    litres = found(capsys, "acetate-extract", "bare.csv", "--sample-volume", "50 L", "--unit", "L")
    assert litres["volumes_m3"][-1] == pytest.approx(4e-3)
    assert run("fit", "acetate-extract", "bare.csv", *SAMPLE) == ExitCode.DONE
    assert "41 points; volumes to 4 mL (taken to be in mL)" in capsys.readouterr().out


def test_every_complaint_about_the_data_has_its_place(points: Path, capsys: Printed) -> None:
    Path("bad.csv").write_text("V;pH\n0;7,0\n1;x\n2;7,1;4\n", encoding="utf-8")
    assert run("fit", "acetate-extract", "bad.csv") == ExitCode.WRONG_INPUT
    assert capsys.readouterr().err == (
        "bad.csv:3:3: the pH is not a number: 'x'\n"
        "    3 | 1;x\n"
        "      |   ^\n"
        "accepted: a number such as 7.02\n"
        "\n"
        "bad.csv:4:7: the row has 3 cells where 2 are expected\n"
        "    4 | 2;7,1;4\n"
        "      |       ^\n"
        "accepted: a volume and a pH in each row; more columns only below a heading\n"
    )


def test_a_thousand_complaints_end_in_a_count(points: Path, capsys: Printed) -> None:
    Path("bad.csv").write_text("0 7\n" + "1 x\n" * 1000, encoding="utf-8")
    assert run("fit", "acetate-extract", "bad.csv") == ExitCode.WRONG_INPUT
    told = capsys.readouterr().err
    assert told.count("the pH is not a number") == 50
    assert told.endswith("bad.csv:52:3: 950 more places are wrong\naccepted: as above\n")


WATER = """\
title: Water
revision: "1"
purpose: A test.
medium: dilute
model: davies
make_up:
  made_up_to: 1 L
  at: 20 °C
  reagents:
    - {reagent: sodium-chloride, amount: 1 g}
use: {temperature: [5 °C, 35 °C], pH: [4, 9]}
"""
FREE_WORDS = (
    "accepted: strength, total:FAMILY, pK:FAMILY:STEP, offset, slope, such as pK:phosphate:2\n"
)


@pytest.mark.parametrize(
    ("options", "complaint"),
    [
        (("--free", "strenght"), f"'strenght' in --free is no quantity\n{FREE_WORDS}"),
        (("--free", "pK:acetate"), f"'pK:acetate' in --free is no quantity\n{FREE_WORDS}"),
        (("--free", "pK:acetate:one"), f"'pK:acetate:one' in --free is no quantity\n{FREE_WORDS}"),
        (("--free", "pK:acetate:2"), "acetate has no step 2; its steps are 1 to 1\n"),
        (("--free", "total:tris"), "the sample does not hold 'tris'; it holds: acetate\n"),
        (("--free", "offset,offset"), "more than one offset is free: choose one\n"),
        (("--unit", "gal"), "unknown unit 'gal' in --unit\naccepted: µL, mL, L, m3\n"),
        (
            ("--titrant", "sodium-hydroxid"),
            "unknown reagent 'sodium-hydroxid' in --titrant; did you mean 'sodium-hydroxide'?\n",
        ),
        (
            ("--titrant", "sodium-hydroxide"),
            "sodium hydroxide is a solid: its solution needs a strength\n",
        ),
        (
            ("--titrant", "sodium-hydroxide 5 mL"),
            "strength in --titrant has the unknown unit 'mL'",
        ),
        (("--sample-volume", "50"), "sample volume has no unit: '50'\naccepted: L, mL, µL, "),
        (
            ("--sample-volume", "0 mL"),
            "sample volume is not positive: '0 mL'\naccepted: such as 1 L\n",
        ),
        (
            ("--temperature", "25"),
            "temperature has no unit: '25'\naccepted: °C, degC, K, °F, degF\n",
        ),
        (
            ("--reading-uncertainty", "0.0x"),
            "reading uncertainty is not a number: '0.0x'\naccepted: a number such as 4.756\n",
        ),
        (
            ("--reading-uncertainty", "0"),
            "reading uncertainty is not positive: '0'\naccepted: such as 0.02\n",
        ),
    ],
)
def test_what_it_refuses(
    options: tuple[str, ...], complaint: str, points: Path, capsys: Printed
) -> None:
    assert run("fit", "acetate-extract", "points.csv", *options) == ExitCode.WRONG_COMMAND_LINE
    printed = capsys.readouterr()
    assert printed.err.startswith(f"bufferfolio: {complaint}")
    assert printed.out == ""


def test_a_formulation_without_a_fitting_titrant_says_so(points: Path, capsys: Printed) -> None:
    text = (Path(points).read_text()).splitlines()
    Path("falling.csv").write_text("\n".join([text[0], "0;7", "1;6", "2;5,5", "3;5"]), "utf-8")
    Path("water.yaml").write_text(WATER, encoding="utf-8")
    assert run("fit", "water.yaml", "falling.csv") == ExitCode.WRONG_COMMAND_LINE
    assert capsys.readouterr().err == (
        "bufferfolio: the formulation has no liquid titrant that moves the pH the way it went\n"
        'accepted: --titrant a reagent, with its strength if it is diluted: "sodium-hydroxide 0.1 '
        'mol/L"\n'
    )


def test_files_that_cannot_be_read_are_a_sentence(points: Path, capsys: Printed) -> None:
    assert run("fit", "acetate-extract", "none.csv") == ExitCode.WRONG_INPUT
    assert capsys.readouterr().err == "none.csv: No such file or directory\n"
    with Path("huge.csv").open("wb") as file:
        file.truncate(6_000_000)
    assert run("fit", "acetate-extract", "huge.csv") == ExitCode.WRONG_INPUT
    assert capsys.readouterr().err == (
        "huge.csv:1:1: the file is too large\naccepted: at most 5000000 bytes\n"
    )
