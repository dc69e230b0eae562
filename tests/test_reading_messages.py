"""Every complaint about a file, as whole text: tests/broken/NAME.yaml beside NAME.txt.

The first word of a name says where the file belongs. It is read on top of tests/broken/library.
To accept new wording after reading it: `BUFFERFOLIO_WRITE_EXPECTED=1 pytest …`.
"""

import os
import shutil
from pathlib import Path

import pytest

from bufferfolio.errors import DefinitionErrors
from bufferfolio.reading import read_library

BROKEN = Path(__file__).parent / "broken"
LIBRARY = BROKEN / "library"
HOMES = {
    "family": "families/{}.yaml",
    "reagent": "reagents/{}.yaml",
    "formulation": "formulations/{}.yaml",
    "sources": "sources.yaml",
    "interactions": "interactions.yaml",
}
CASES = sorted(path.stem for path in BROKEN.glob("*.yaml"))


def place(path: Path, folder: Path) -> None:
    """Copy a file to where its kind belongs in a folder of definitions."""
    target = folder / HOMES[path.stem.split("-")[0]].format(path.stem)
    target.parent.mkdir(parents=True, exist_ok=True)
    shutil.copyfile(path, target)


@pytest.mark.parametrize("case", CASES)
def test_complaint_reads_as_expected(
    case: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    # Side by side, so that messages name both by short paths that are the same everywhere.
    shutil.copytree(LIBRARY, tmp_path / "library")
    place(BROKEN / f"{case}.yaml", tmp_path / "mine")
    monkeypatch.chdir(tmp_path / "mine")
    with pytest.raises(DefinitionErrors) as caught:
        read_library(Path(), Path("../library"))
    expected = BROKEN / f"{case}.txt"
    text = f"{caught.value}\n"
    if os.environ.get("BUFFERFOLIO_WRITE_EXPECTED"):
        expected.write_text(text, encoding="utf-8", newline="\n")
    assert text == expected.read_text(encoding="utf-8")


def test_every_expected_text_has_its_file() -> None:
    assert sorted(path.stem for path in BROKEN.glob("*.txt")) == CASES


@pytest.mark.parametrize("kind", ["family", "reagent", "formulation"])
def test_the_file_the_broken_ones_were_made_from_is_good(kind: str, tmp_path: Path) -> None:
    place(BROKEN / "good" / f"{kind}.yaml", tmp_path)
    library = read_library(tmp_path, LIBRARY)
    assert kind in {*library.families, *library.reagents, *library.formulations}
