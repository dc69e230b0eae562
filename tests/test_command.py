"""The command line: what it prints, what it refuses, and the code it ends with."""

import json
import os
import shlex
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from bufferfolio.command import main
from bufferfolio.command.arguments import ExitCode, parse
from bufferfolio.command.console import progress, table

Printed = pytest.CaptureFixture[str]


def run(*words: str) -> int:
    """Return the exit code of the command, whichever way it ends."""
    try:
        return main(words)
    except SystemExit as end:
        return int(end.code or 0)


def external(*words: str, cwd: Path, **variables: str) -> "subprocess.CompletedProcess[str]":
    """Return what the command does as a process of its own."""
    return subprocess.run(
        [sys.executable, "-m", "bufferfolio", *words],
        cwd=cwd,
        env={**os.environ, **variables},
        capture_output=True,
        encoding="utf-8",
    )


@pytest.fixture
def elsewhere(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Make an empty folder the current one."""
    monkeypatch.chdir(tmp_path)
    return tmp_path


# check


def test_check_prints_a_line_for_each_file(systems: Path, elsewhere: Path, capsys: Printed) -> None:
    assert run("check", str(systems)) == ExitCode.DONE
    lines = capsys.readouterr().out.splitlines()
    files = [*systems.rglob("*.yaml"), *systems.rglob("*.csv")]
    assert lines[-1] == f"{len(files)} files, no errors"
    assert len(lines) == len(files) + 1
    assert all(line.endswith((".yaml: ok", ".csv: ok")) for line in lines[:-1])


def test_check_without_a_folder_takes_the_shipped_library(elsewhere: Path, capsys: Printed) -> None:
    assert run("check") == ExitCode.DONE
    assert "families/phosphate.yaml: ok" in capsys.readouterr().out


def test_check_prefers_the_folder_that_is_there(elsewhere: Path, capsys: Printed) -> None:
    (elsewhere / "systems" / "formulations").mkdir(parents=True)
    (elsewhere / "systems" / "formulations" / "mine.yaml").write_text("title: mine\n")
    assert run("check") == ExitCode.WRONG_INPUT
    printed = capsys.readouterr()
    assert printed.out.splitlines()[0].startswith("systems/formulations/mine.yaml: ")
    assert "systems/formulations/mine.yaml:1:1: " in printed.err
    assert "Traceback" not in printed.err


def test_check_reports_all_files_at_once(elsewhere: Path, capsys: Printed) -> None:
    families = elsewhere / "mine" / "families"
    families.mkdir(parents=True)
    for name in ("one", "two"):
        (families / f"{name}.yaml").write_text("label: [\n")
    assert run("check", "mine") == ExitCode.WRONG_INPUT
    printed = capsys.readouterr()
    assert printed.out.splitlines() == [
        "mine/families/one.yaml: 1 error",
        "mine/families/two.yaml: 1 error",
        "2 errors in 2 files",
        "",
    ]
    assert "mine/families/one.yaml:" in printed.err
    assert "mine/families/two.yaml:" in printed.err


# the command line itself


@pytest.mark.parametrize(
    ("words", "complaint"),
    [
        ((), "the following arguments are required: ACTION"),
        (("bild",), "invalid choice: 'bild'"),
        (("check", "--fast"), "unrecognized arguments: --fast"),
        (("check", "no-such-folder"), "bufferfolio: there is no folder no-such-folder\n"),
        (("new", "salt", "x"), "invalid choice: 'salt'"),
        (
            ("predict", "tris-asay"),
            "bufferfolio: unknown formulation 'tris-asay'; did you mean 'tris-assay'?\naccepted: ",
        ),
        (("predict", "no-such.yaml"), "bufferfolio: there is no file no-such.yaml\n"),
        (
            ("predict", "tris-assay", "--temperature", "4"),
            "bufferfolio: temperature has no unit: '4'\naccepted: °C, degC, K, °F, degF\n",
        ),
        (
            ("predict", "tris-assay", "--temperature", "400 °C"),
            "bufferfolio: temperature is out of bounds: '400 °C'\n",
        ),
        (
            ("predict", "tris-assay", "--add", "sodium-hydroxid 5 mmol"),
            "unknown reagent 'sodium-hydroxid' in --add; did you mean 'sodium-hydroxide'?\n",
        ),
        (
            ("predict", "tris-assay", "--add", "sodium-hydroxide"),
            "bufferfolio: amount of sodium-hydroxide in --add ",
        ),
        (
            ("predict", "tris-assay", "--add", "sodium-hydroxide 5 mL"),
            "in --add is a volume, and sodium-hydroxide is a solid: '5 mL'\n",
        ),
        (
            ("predict", "tris-assay", "--add", "sodium-hydroxide 5 mol/L"),
            "bufferfolio: amount of sodium-hydroxide in --add has the unknown unit 'mol/L'",
        ),
        (
            ("predict", "tris-assay", "--add", "sodium-hydroxide -5 mmol"),
            "bufferfolio: amount of sodium-hydroxide in --add is negative: '-5 mmol'\n",
        ),
    ],
)
def test_a_wrong_command_line_ends_with_2(
    words: tuple[str, ...], complaint: str, elsewhere: Path, capsys: Printed
) -> None:
    assert run(*words) == ExitCode.WRONG_COMMAND_LINE
    printed = capsys.readouterr()
    assert complaint in printed.err
    assert "Traceback" not in printed.err
    assert printed.out == ""


@pytest.mark.parametrize(
    "words", [("--help",), *((a, "--help") for a in ("check", "build", "fit"))]
)
def test_help_ends_with_0_and_names_the_codes(words: tuple[str, ...], capsys: Printed) -> None:
    assert run(*words) == ExitCode.DONE
    out = capsys.readouterr().out
    assert "exit codes: 0 done, 1 the input is wrong, 2 the command line is wrong" in out


def test_every_example_in_the_help_is_understood(capsys: Printed) -> None:
    """Each example gets past the parser: none of them may end as a wrong command line."""
    seen = 0
    for action in ("check", "build", "predict", "fit", "new"):
        assert run(action, "--help") == ExitCode.DONE
        _, _, rest = capsys.readouterr().out.partition("examples:\n")
        for line in rest.split("\n\n")[0].splitlines():
            program, *words = shlex.split(line)
            assert program == "bufferfolio"
            assert parse(words).action == action
            seen += 1
    assert seen >= 8


# predict


def predicted(capsys: Printed, *words: str) -> dict[str, object]:
    assert run("predict", *words, "--json") == ExitCode.DONE
    found = json.loads(capsys.readouterr().out, parse_constant=pytest.fail)
    assert isinstance(found, dict)
    return found


def test_predict_shows_pH_with_its_scale_and_what_is_there(
    elsewhere: Path, capsys: Printed
) -> None:
    assert run("predict", "meter-check-phosphate", "--temperature", "25 °C") == ExitCode.DONE
    out = capsys.readouterr().out
    assert "at 25 °C\n  pH                6.8" in out
    assert "activity scale, −log10 a(H+)" in out
    assert "ionic strength    0.1 mol/kg" in out
    assert "mol/kg per pH" in out
    assert "H₂PO₄⁻" in out


def test_predict_in_json_has_the_documented_keys(elsewhere: Path, capsys: Printed) -> None:
    found = predicted(capsys, "tris-assay", "--temperature", "277.15 K", "37 °C")
    assert list(found) == [
        "formulation", "title", "revision", "model", "model_chosen_by", "pH_scale", "added",
        "states",
    ]  # fmt: skip
    states = found["states"]
    assert [state["temperature_celsius"] for state in states] == [4.0, 37.0]
    assert list(states[0]) == [
        "temperature_celsius", "pH", "ionic_strength", "buffer_capacity", "status", "warnings",
        "species",
    ]  # fmt: skip
    assert list(states[0]["species"][0]) == [
        "name", "label", "family", "charge", "molality", "fraction",
    ]  # fmt: skip
    assert states[0]["pH"] > states[1]["pH"] + 0.8, "Tris loses about 0.028 a kelvin"


def test_predicted_charges_balance_and_fractions_sum_to_one(
    elsewhere: Path, capsys: Printed
) -> None:
    for key in ("citrate-phosphate", "holding-water", "spent-cleaner"):
        (state,) = predicted(capsys, key)["states"]
        species = state["species"]
        charge = sum(form["charge"] * form["molality"] for form in species)
        assert abs(charge) < 1e-10 * state["ionic_strength"]
        for family in {form["family"] for form in species} - {None}:
            shares = [form["fraction"] for form in species if form["family"] == family]
            assert sum(shares) == pytest.approx(1.0, abs=1e-11)


def test_additions_go_in_together_in_any_order(elsewhere: Path, capsys: Printed) -> None:
    acid, salt = "hydrochloric-acid-1-molar 5 mL", "sodium-chloride 1 g"
    plain = predicted(capsys, "tris-assay")
    one = predicted(capsys, "tris-assay", "--add", acid, "--add", salt)
    other = predicted(capsys, "tris-assay", "--add", salt, "--add", acid)
    assert one["added"] == [acid, salt]
    assert one["states"][0]["pH"] < plain["states"][0]["pH"] - 0.05
    assert one["states"][0]["pH"] == pytest.approx(other["states"][0]["pH"], abs=1e-9)


def test_one_addition_equals_two_halves(elsewhere: Path, capsys: Printed) -> None:
    """Volumes of liquid carry water, so this holds only if each half finds the right water."""
    whole = predicted(capsys, "warm-wash", "--add", "hydrochloric-acid-1-molar 200 mL")
    half = ("--add", "hydrochloric-acid-1-molar 100 mL")
    halves = predicted(capsys, "warm-wash", *half, *half)
    for key in ("pH", "ionic_strength", "buffer_capacity"):
        assert halves["states"][0][key] == pytest.approx(whole["states"][0][key], rel=1e-10)


def test_an_addition_may_bring_a_family_that_was_not_there(
    elsewhere: Path, capsys: Printed
) -> None:
    (state,) = predicted(capsys, "tris-assay", "--add", "citric-acid-monohydrate 1 g")["states"]
    assert "citrate" in {form["family"] for form in state["species"]}


def test_predict_takes_a_file(systems: Path, elsewhere: Path, capsys: Printed) -> None:
    shutil.copy(systems / "formulations" / "tris-assay.yaml", elsewhere / "copy.yaml")
    mine = predicted(capsys, "copy.yaml")
    assert mine["formulation"] == "copy"
    assert mine["states"] == predicted(capsys, "tris-assay")["states"]


def test_predict_marks_what_lies_outside_the_limits(elsewhere: Path, capsys: Printed) -> None:
    added = ("--add", "hydrochloric-acid-37 1 L")
    found = predicted(capsys, "tris-assay", "--temperature", "90 °C", *added)
    (state,) = found["states"]
    assert state["status"] != "solved"
    assert "the temperature is outside the limits of use" in state["warnings"]
    assert "the pH is outside the limits of use" in state["warnings"]
    assert len(state["warnings"]) == 3


def test_a_broken_file_ends_with_1(elsewhere: Path, capsys: Printed) -> None:
    (elsewhere / "mine.yaml").write_text("title: mine\nmodell: davies\n")
    assert run("predict", "mine.yaml") == ExitCode.WRONG_INPUT
    printed = capsys.readouterr()
    assert "mine.yaml:2:1: " in printed.err
    assert "Traceback" not in printed.err


# new


@pytest.mark.parametrize("kind", ["family", "reagent", "formulation"])
def test_a_draft_is_accepted_at_once(kind: str, elsewhere: Path, capsys: Printed) -> None:
    assert run("new", kind, "my-first") == ExitCode.DONE
    assert run("new", kind, "my-second", "--systems", "systems") == ExitCode.DONE
    assert run("check") == ExitCode.DONE
    printed = capsys.readouterr()
    assert printed.out.splitlines()[-1].endswith("files, no errors")
    if kind == "formulation":
        assert run("predict", "my-first") == ExitCode.DONE


def test_drafts_of_all_kinds_work_together(elsewhere: Path, capsys: Printed) -> None:
    for kind in ("family", "reagent", "formulation"):
        assert run("new", kind, f"my-{kind}", "--systems", "mine") == ExitCode.DONE
    assert run("check", "mine") == ExitCode.DONE
    assert "4 files, no errors" in capsys.readouterr().out
    assert (elsewhere / "mine" / "sources.yaml").read_text() == (
        "to-be-named:\n  cite: To be named\n"
    )


def test_a_source_to_be_named_goes_below_those_that_are_there(
    elsewhere: Path, capsys: Printed
) -> None:
    (elsewhere / "mine").mkdir()
    sources = elsewhere / "mine" / "sources.yaml"
    sources.write_text("me2026:\n  cite: my own work", encoding="utf-8")
    assert run("new", "reagent", "my-salt", "--systems", "mine") == ExitCode.DONE
    assert run("check", "mine") == ExitCode.DONE
    assert sources.read_text().startswith("me2026:\n  cite: my own work\nto-be-named:\n")


@pytest.mark.parametrize(
    ("words", "complaint"),
    [
        (("reagent", "Tris Base"), "'Tris Base' cannot be the name of a reagent\naccepted: "),
        (("reagent", "../tris"), "'../tris' cannot be the name of a reagent\naccepted: "),
        (("reagent", "tris"), "there is a reagent 'tris' already (the shipped library)"),
        (("family", "phosphate"), "there is a family 'phosphate' already (the shipped library)"),
    ],
)
def test_new_refuses_names(
    words: tuple[str, str], complaint: str, elsewhere: Path, capsys: Printed
) -> None:
    assert run("new", *words) == ExitCode.WRONG_COMMAND_LINE
    assert complaint in capsys.readouterr().err
    assert list(elsewhere.iterdir()) == []


def test_new_never_writes_over_a_file(elsewhere: Path, capsys: Printed) -> None:
    path = elsewhere / "systems" / "formulations" / "mine.yaml"
    path.parent.mkdir(parents=True)
    path.write_text("precious")
    assert run("new", "formulation", "mine") == ExitCode.WRONG_COMMAND_LINE
    assert path.read_text() == "precious"


# as a process


def test_the_output_is_utf8_whatever_the_console(elsewhere: Path) -> None:
    words = ("predict", "tris-assay")
    ended = external(*words, cwd=elsewhere, PYTHONIOENCODING="cp1252", PYTHONUTF8="0", LC_ALL="C")
    assert ended.returncode == ExitCode.DONE
    assert "−log10 a(H+)" in ended.stdout


@pytest.mark.skipif(os.name == "nt", reason="Windows has neither sh nor broken pipes")
@pytest.mark.parametrize("words", ["check", "check mine"], ids=["sound", "broken"])
def test_a_reader_that_leaves_is_no_traceback(words: str, elsewhere: Path) -> None:
    (elsewhere / "mine" / "families").mkdir(parents=True)
    (elsewhere / "mine" / "families" / "broken.yaml").write_text("label: [")
    command = f"{sys.executable} -m bufferfolio {words} | true"
    ended = subprocess.run(["sh", "-c", command], cwd=elsewhere, capture_output=True)
    assert ended.stderr == b""


def test_stopping_is_said_in_a_word(
    elsewhere: Path, monkeypatch: pytest.MonkeyPatch, capsys: Printed
) -> None:
    def interrupted(*_: object) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr("bufferfolio.command.checking.read_library", interrupted)
    assert run("check") == ExitCode.STOPPED
    assert capsys.readouterr().err == "stopped\n"


def test_a_full_disk_is_a_sentence(
    elsewhere: Path, monkeypatch: pytest.MonkeyPatch, capsys: Printed
) -> None:
    def full(*_: object, **__: object) -> None:
        raise OSError(28, "No space left on device", "mine.yaml")

    monkeypatch.setattr(Path, "open", full)
    assert run("new", "formulation", "mine") == ExitCode.WRONG_INPUT
    assert capsys.readouterr().err == "mine.yaml: No space left on device\n"


# console


def test_progress_without_a_terminal_is_plain_lines(capsys: Printed) -> None:
    with progress(2) as show:
        show("index")
        show("method")
    assert capsys.readouterr().err == "index\nmethod\n"


def test_progress_on_a_terminal_is_a_bar_that_goes_away(
    monkeypatch: pytest.MonkeyPatch, capsys: Printed
) -> None:
    monkeypatch.setattr(sys.stderr, "isatty", lambda: True)
    with progress(2) as show:
        show("index")
        show("method")
    drawn = capsys.readouterr().err
    assert "0/2" in drawn
    assert drawn.rpartition("\r")[2].strip() == ""
    assert "\n" not in drawn


def test_a_table_lines_up() -> None:
    rows = [["a", "1.5"], ["longer", "10.25"]]
    assert table(["name", "value"], rows, right=frozenset({1})) == (
        "name    value\na         1.5\nlonger  10.25"
    )


# the documents


def test_the_formulation_in_the_readme_is_accepted_and_meets_its_pH(
    elsewhere: Path, capsys: Printed
) -> None:
    readme = (Path(__file__).parents[1] / "README.md").read_text(encoding="utf-8")
    _, _, rest = readme.partition("```yaml\n")
    (elsewhere / "rinse-water.yaml").write_text(rest.partition("```")[0], encoding="utf-8")
    (state,) = predicted(capsys, "rinse-water.yaml")["states"]
    assert state["pH"] == pytest.approx(7.11, abs=0.05)


def test_every_command_in_the_readme_is_understood(elsewhere: Path) -> None:
    readme = (Path(__file__).parents[1] / "README.md").read_text(encoding="utf-8")
    lines = [line.strip() for line in readme.splitlines() if line.startswith("    bufferfolio ")]
    assert len(lines) >= 5
    for line in lines:
        _, *words = shlex.split(line, comments=True)
        assert parse(words).action == words[0]
