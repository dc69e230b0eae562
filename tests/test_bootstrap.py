"""The environment of the two commands: reused, mended, and honest about what is missing."""

import ast
import importlib.util
import json
import os
import subprocess
import sys
import venv
from pathlib import Path
from types import ModuleType

import pytest

import bootstrap
from bootstrap import CannotGoOn

PROJECT = Path(__file__).parents[1]
SCRIPTS = [PROJECT / "build" / "make_site.py", PROJECT / "tests" / "run.py"]


@pytest.fixture
def environment(tmp_path: Path) -> Path:
    """Return an environment that has the project, but no pip: made in no time, without network."""
    folder = tmp_path / ".venv"
    venv.create(folder, with_pip=False, symlinks=os.name != "nt")
    packages = next(folder.rglob("site-packages"))
    (packages / "project.pth").write_text(str(PROJECT / "build"), encoding="utf-8")
    return folder


@pytest.fixture
def installed(monkeypatch: pytest.MonkeyPatch) -> list[list[str]]:
    """Collect the extras of each installation instead of fetching packages."""
    calls: list[list[str]] = []
    monkeypatch.setattr(bootstrap, "install", lambda _, extras: calls.append(sorted(extras)))
    return calls


@pytest.fixture
def remade(monkeypatch: pytest.MonkeyPatch) -> list[Path]:
    """Collect the environments that would be made again."""
    calls: list[Path] = []
    monkeypatch.setattr(bootstrap, "make_environment", calls.append)
    return calls


def load(path: Path) -> ModuleType:
    spec = importlib.util.spec_from_file_location(f"script_{path.stem}", path)
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def test_a_stamped_environment_is_reused_without_a_word(
    environment: Path, installed: list[list[str]], capfd: pytest.CaptureFixture[str]
) -> None:
    bootstrap.write_stamp(environment, ["test"])
    for extra in (None, "test"):
        python = bootstrap.prepare_environment(environment, extra)
        assert python == bootstrap.program(environment, "python")
    assert installed == []
    assert capfd.readouterr() == ("", "")


def test_a_missing_extra_is_added_and_the_others_kept(
    environment: Path, installed: list[list[str]], remade: list[Path]
) -> None:
    bootstrap.write_stamp(environment, ["other"])
    bootstrap.prepare_environment(environment, "test")
    assert installed == [["other", "test"]]
    stamp = bootstrap.read_stamp(environment)
    assert stamp is not None
    assert stamp.extras == {"other", "test"}
    assert remade == [environment], "this one has no pip, so it has to be made again"


def test_changed_requirements_install_again(
    environment: Path, installed: list[list[str]], remade: list[Path]
) -> None:
    bootstrap.write_stamp(environment, [])
    stamp = environment / bootstrap.STAMP
    written = json.loads(stamp.read_text())
    stamp.write_text(json.dumps({**written, "fingerprint": "of an older pyproject.toml"}))
    bootstrap.prepare_environment(environment, None)
    assert installed == [[]]


def test_a_moved_project_makes_its_environment_again(
    environment: Path, installed: list[list[str]], remade: list[Path]
) -> None:
    bootstrap.write_stamp(environment, [])
    stamp = environment / bootstrap.STAMP
    stamp.write_text(json.dumps({**json.loads(stamp.read_text()), "root": "/elsewhere"}))
    bootstrap.prepare_environment(environment, None)
    assert remade == [environment]
    assert installed == [[]]


@pytest.mark.parametrize("rubbish", ["", "[]", "{}", '{"root": 1}', "\x00"])
def test_a_broken_stamp_counts_as_none(environment: Path, rubbish: str) -> None:
    (environment / bootstrap.STAMP).write_text(rubbish)
    assert bootstrap.read_stamp(environment) is None


@pytest.mark.parametrize("trouble", [KeyboardInterrupt, CannotGoOn])
def test_an_interrupted_installation_leaves_no_stamp(
    environment: Path,
    remade: list[Path],
    monkeypatch: pytest.MonkeyPatch,
    trouble: type[BaseException],
) -> None:
    bootstrap.write_stamp(environment, [])

    def interrupted(*_: object, **__: object) -> None:
        raise trouble

    monkeypatch.setattr(bootstrap, "print", interrupted, raising=False)
    with pytest.raises(trouble):
        bootstrap.prepare_environment(environment, "test")
    assert bootstrap.read_stamp(environment) is None


def test_a_python_that_does_not_start_is_seen(tmp_path: Path) -> None:
    python = bootstrap.program(tmp_path, "python")
    assert not bootstrap.answers(python, "")
    python.parent.mkdir()
    python.write_text("no program")
    python.chmod(0o755)
    assert not bootstrap.answers(python, "")
    assert bootstrap.answers(Path(sys.executable), "")
    assert not bootstrap.answers(Path(sys.executable), "import no_such_module")


def test_a_python_without_venv_is_told_what_to_install(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    find_spec = importlib.util.find_spec
    monkeypatch.setattr(
        importlib.util, "find_spec", lambda name: None if name == "ensurepip" else find_spec(name)
    )
    monkeypatch.setattr("shutil.which", lambda name: f"/usr/bin/{name}")
    with pytest.raises(CannotGoOn) as refusal:
        bootstrap.make_environment(tmp_path / ".venv")
    version = f"{sys.version_info[0]}.{sys.version_info[1]}"
    assert str(refusal.value) == (
        f"This Python ({sys.executable}) cannot make virtual environments: it lacks ensurepip.\n"
        f"Run: sudo apt-get install python{version}-venv\n"
        "Then run the same command again."
    )
    assert not (tmp_path / ".venv").exists()


def test_an_installation_without_network_says_so(
    environment: Path, capfd: pytest.CaptureFixture[str]
) -> None:
    """Here pip itself is missing, which ends like a connection that is: the message is one."""
    with pytest.raises(CannotGoOn, match="Connect this machine"):
        bootstrap.install(environment, [])
    assert "No module named pip" in capfd.readouterr().err


def test_variables_that_lead_a_python_astray_are_dropped(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("PYTHONPATH", "/elsewhere")
    monkeypatch.setenv("PYTHONHOME", "/elsewhere")
    variables = bootstrap.clean_variables()
    assert not {"PYTHONPATH", "PYTHONHOME"} & set(variables)
    assert variables["PYTHONUTF8"] == "1"


@pytest.mark.parametrize("script", SCRIPTS, ids=lambda path: path.name)
def test_an_old_python_is_told_what_is_needed(script: Path) -> None:
    """Python 3.7 can read the file as far as its message, and then stops there."""
    ast.parse(script.read_text(encoding="utf-8"), feature_version=(3, 7))
    pretend = (
        "import sys, runpy; sys.version_info = (3, 8); "
        f"runpy.run_path({str(script)!r}, run_name='__main__')"
    )
    ended = subprocess.run([sys.executable, "-c", pretend], capture_output=True, encoding="utf-8")
    assert ended.returncode == 1
    needed = "bufferfolio needs Python 3.11 or later; this is Python 3.8"
    assert ended.stderr.startswith(needed)
    assert "Traceback" not in ended.stderr


def test_the_browser_named_by_the_variable_comes_first(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    mine = tmp_path / ("mine.exe" if os.name == "nt" else "mine")
    mine.write_text("")
    mine.chmod(0o755)
    monkeypatch.setenv(bootstrap.CHROMIUM_VARIABLE, str(mine))
    assert bootstrap.find_chromium() == mine
    monkeypatch.setenv(bootstrap.CHROMIUM_VARIABLE, str(tmp_path / "gone"))
    assert bootstrap.find_chromium() is None, "a wrong name is not replaced by a guess"


def test_without_a_browser_the_run_says_what_to_install(monkeypatch: pytest.MonkeyPatch) -> None:
    run = load(PROJECT / "tests" / "run.py")
    monkeypatch.delenv(bootstrap.CHROMIUM_VARIABLE, raising=False)
    monkeypatch.setattr(run, "find_chromium", lambda: None)
    monkeypatch.setattr(run, "as_administrator", lambda: None)
    with pytest.raises(Exception, match="Install it:") as refusal:
        run.install_chromium()
    assert "apt-get install chromium" in str(refusal.value)
    assert "--no-browser" in str(refusal.value)


def test_a_browser_variable_that_names_nothing_is_said(monkeypatch: pytest.MonkeyPatch) -> None:
    run = load(PROJECT / "tests" / "run.py")
    monkeypatch.setenv(bootstrap.CHROMIUM_VARIABLE, "no-such-browser")
    with pytest.raises(Exception, match="BUFFERFOLIO_CHROMIUM names no-such-browser, which is no"):
        run.install_chromium()


def test_a_failing_linter_fails_the_run_and_pytest_still_comes_last(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    run = load(PROJECT / "tests" / "run.py")
    started: list[str] = []

    def passed(command: list[str], variables: object) -> bool:
        started.append(" ".join(command))
        return command[0] != "mypy"

    monkeypatch.setattr(run, "prepare_environment", lambda *_, **__: None)
    monkeypatch.setattr(run, "passed", passed)
    assert run.main(["--no-browser", "-k", "water"]) == 1
    assert started[-1] == "pytest --no-browser -k water"
    assert len(started) == 5
