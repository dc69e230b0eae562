"""The wheel carries everything, and works from any folder without the project beside it."""

import os
import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

PROJECT = Path(__file__).parents[1]


@pytest.fixture(scope="module")
def unpacked(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Return a folder with the wheel's contents, as an installation lays them out."""
    folder = tmp_path_factory.mktemp("wheel")
    command = [sys.executable, "-m", "hatchling", "build", "-t", "wheel", "-d", str(folder)]
    ended = subprocess.run(command, cwd=PROJECT, capture_output=True, encoding="utf-8")
    assert ended.returncode == 0, ended.stderr
    (wheel,) = folder.glob("*.whl")
    with zipfile.ZipFile(wheel) as archive:
        archive.extractall(folder / "installed")
    return folder / "installed"


def files_below(folder: Path) -> set[str]:
    found = (path for path in folder.rglob("*") if path.is_file() and path.suffix != ".pyc")
    return {path.relative_to(folder).as_posix() for path in found}


def test_templates_library_and_code_travel_inside(unpacked: Path) -> None:
    package = unpacked / "bufferfolio"
    expected = files_below(PROJECT / "build" / "bufferfolio")
    for name in ("site_templates", "systems"):
        below = files_below(PROJECT / name)
        assert below, f"{name} is empty"
        expected |= {f"{name}/{file}" for file in below}
    assert files_below(package) == expected


def test_nothing_else_is_installed_beside_the_package(unpacked: Path) -> None:
    names = {path.name for path in unpacked.iterdir()}
    assert {name for name in names if not name.endswith(".dist-info")} == {"bufferfolio"}


@pytest.mark.parametrize("words", [("check",), ("predict", "tris-assay"), ("build", "--out", "a")])
def test_the_command_works_from_any_folder(
    words: tuple[str, ...], unpacked: Path, tmp_path: Path
) -> None:
    # Ahead of the project's own installation, so that this one is found.
    code = (
        f"import sys; sys.path.insert(0, {str(unpacked)!r}); import bufferfolio.command; "
        f"assert bufferfolio.__path__ == [{str(unpacked / 'bufferfolio')!r}]; "
        f"sys.exit(bufferfolio.command.main({words!r}))"
    )
    ended = subprocess.run(
        [sys.executable, "-c", code],
        cwd=tmp_path,
        env={**os.environ, "PYTHONDONTWRITEBYTECODE": "1"},
        capture_output=True,
        encoding="utf-8",
    )
    assert ended.returncode == 0, ended.stderr
