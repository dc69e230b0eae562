"""Building the site by the command: what it prints, writes, refuses, and that it repeats."""

import filecmp
import os
import subprocess
import sys
from pathlib import Path

import pytest

from bufferfolio.command import main
from bufferfolio.command.arguments import ExitCode

Printed = pytest.CaptureFixture[str]

RINSE = """\
title: Rinse water
revision: "1"
purpose: A short one for tests.
medium: dilute
model: davies
make_up:
  made_up_to: 1 L
  at: 20 °C
  reagents:
    - {reagent: potassium-dihydrogen-phosphate, amount: 25 mmol/L}
    - {reagent: disodium-hydrogen-phosphate, amount: 25 mmol/L}
expected: {pH: PH, at: 25 °C, tolerance: 0.05}
use: {temperature: [10 °C, 30 °C], pH: [6.5, 7.5]}
"""


def written(folder: Path, expected: str) -> str:
    """Return a folder of definitions with one formulation that expects some pH."""
    path = folder / "mine" / "formulations" / "rinse-water.yaml"
    path.parent.mkdir(parents=True, exist_ok=True)
    path.write_text(RINSE.replace("PH", expected), encoding="utf-8")
    return str(folder / "mine")


def test_build_ends_with_a_table_and_what_to_open(tmp_path: Path, capsys: Printed) -> None:
    out = tmp_path / "my site"
    assert main(["build", written(tmp_path, "6.85"), "--out", str(out)]) == ExitCode.DONE
    printed = capsys.readouterr()
    head, row, *rest = printed.out.splitlines()
    assert head.split() == [
        "formulation", "pH", "at", "expected", "difference", "warnings", "time",
    ]  # fmt: skip
    assert row.split()[0] == "rinse-water"
    assert "25 °C" in row
    assert "6.85" in row
    assert rest[-2:] == [f"  {out / 'index.html'}", f"  {(out / 'index.html').as_uri()}"]
    assert "Rinse water" in printed.err.splitlines(), "each page is told on a line of its own"
    assert (out / "formulations" / "rinse-water.html").is_file()


@pytest.mark.parametrize(
    ("strict", "code"), [((), ExitCode.DONE), (("--strict",), ExitCode.STRICT_WARNING)]
)
def test_a_pH_beyond_its_tolerance_is_a_warning(
    strict: tuple[str, ...], code: ExitCode, tmp_path: Path, capsys: Printed
) -> None:
    out = tmp_path / "site"
    assert main(["build", written(tmp_path, "7.2"), "--out", str(out), *strict]) == code
    printed = capsys.readouterr().out
    assert "\n1 warning:\n  rinse-water: " in printed
    assert (out / "index.html").is_file(), "a warning does not keep the site back"


def test_a_source_still_to_be_named_is_a_warning(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: Printed
) -> None:
    monkeypatch.chdir(tmp_path)
    for kind in ("family", "reagent"):
        assert main(["new", kind, f"my-{kind}", "--systems", "mine"]) == ExitCode.DONE
    assert main(["build", "mine", "--out", "site", "--strict"]) == ExitCode.STRICT_WARNING
    printed = capsys.readouterr().out
    assert "  family my-family: a source is still to be named\n" in printed
    assert "  reagent my-reagent: a source is still to be named\n" in printed


def test_wrong_input_leaves_the_site_as_it_was(tmp_path: Path, capsys: Printed) -> None:
    out = tmp_path / "site"
    assert main(["build", written(tmp_path, "6.85"), "--out", str(out)]) == ExitCode.DONE
    before = (out / "contents.txt").read_bytes()
    broken = written(tmp_path, "soft")
    assert main(["build", broken, "--out", str(out)]) == ExitCode.WRONG_INPUT
    assert "rinse-water.yaml:12:" in capsys.readouterr().err
    assert (out / "contents.txt").read_bytes() == before


def test_a_folder_of_somebody_else_is_refused(tmp_path: Path, capsys: Printed) -> None:
    systems = written(tmp_path, "6.85")
    assert main(["build", systems, "--out", systems]) == ExitCode.WRONG_INPUT
    assert "holds files that bufferfolio did not write" in capsys.readouterr().err
    assert [path.name for path in Path(systems).iterdir()] == ["formulations"]


def test_the_same_input_gives_the_same_bytes(site: Path, systems: Path, tmp_path: Path) -> None:
    """The site of this run, built by another process with another hash seed."""
    out = tmp_path / "again"
    ended = subprocess.run(
        [sys.executable, "-m", "bufferfolio", "build", str(systems), "--out", str(out)],
        cwd=tmp_path,
        env={**os.environ, "PYTHONHASHSEED": "20260131"},
        capture_output=True,
        encoding="utf-8",
    )
    assert ended.returncode == 0, ended.stderr
    files = [path.relative_to(site).as_posix() for path in site.rglob("*") if path.is_file()]
    assert len(files) > 60
    same, different, missing = filecmp.cmpfiles(site, out, files, shallow=False)
    assert (different, missing) == ([], [])
    assert len(same) == len(files)
    assert (site / "contents.txt").read_bytes() == (out / "contents.txt").read_bytes()


def test_the_site_names_no_place_of_this_machine(site: Path) -> None:
    project = str(Path(__file__).parents[1])
    for path in site.rglob("*"):
        if path.is_file():
            text = path.read_bytes().decode("utf-8", errors="replace")
            assert project not in text, path.name
            assert "file:///" not in text or path.suffix == ".js", path.name
