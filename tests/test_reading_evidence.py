"""Published tables: what good files become, and every complaint about one as whole text.

tests/broken/evidence/ holds one wrong file a case: TABLE-what.csv or index-what.yaml, and what is
to be said beside it. The rest of its folder is tests/broken/evidence/good/.
To accept new wording after reading it: `BUFFERFOLIO_WRITE_EXPECTED=1 pytest …`.
"""

import os
import shutil
from pathlib import Path

import pytest

from bufferfolio.definitions import Ion, Library
from bufferfolio.errors import DefinitionErrors
from bufferfolio.reading import read_evidence, read_library
from bufferfolio.reading.csv_files import load_csv

BROKEN = Path(__file__).parent / "broken" / "evidence"
LIBRARY = BROKEN.parent / "library"
CASES = sorted(path.name for path in BROKEN.iterdir() if path.suffix in (".csv", ".yaml"))


@pytest.fixture(scope="module")
def library() -> Library:
    return read_library(LIBRARY)


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Give the good files; messages name them from here."""
    shutil.copytree(BROKEN / "good", tmp_path / "evidence")
    monkeypatch.chdir(tmp_path)
    return Path()


@pytest.mark.parametrize("case", CASES)
def test_complaint_reads_as_expected(case: str, folder: Path, library: Library) -> None:
    path = BROKEN / case
    table = path.stem.partition("-")[0]
    shutil.copyfile(path, folder / "evidence" / f"{table}{path.suffix}")
    with pytest.raises(DefinitionErrors) as caught:
        read_evidence(folder, library)
    expected = path.with_suffix(".txt")
    text = f"{caught.value}\n"
    if os.environ.get("BUFFERFOLIO_WRITE_EXPECTED"):
        expected.write_text(text, encoding="utf-8", newline="\n")
    assert text == expected.read_text(encoding="utf-8")


def test_every_expected_text_has_its_file() -> None:
    assert {path.stem for path in BROKEN.glob("*.txt")} == {Path(case).stem for case in CASES}


def test_good_tables_become_records(folder: Path, library: Library) -> None:
    mixtures, shares = read_evidence(folder, library)
    acid, salt = mixtures.rows
    assert [part.key for part in mixtures.parts] == ["acid", "salt"]
    assert acid.solution is not None
    assert dict(acid.solution.families) == {"acetate": 0.1}
    assert salt.solution is not None
    sodium, chloride = Ion(name="Na+", charge=1), Ion(name="Cl-", charge=-1)
    assert dict(salt.solution.ions) == {chloride: pytest.approx(0.2), sodium: 0.1}
    assert (salt.temperature, salt.value, salt.doubtful) == (298.15, 1.1, None)
    (row,) = shares.rows
    assert (row.form, row.pH, row.citation.where) == (("acetate", 0), 4.756, "page 1")
    assert str(row.place) == "evidence/shares.csv:2:1"


def test_a_folder_of_ones_own_adds_tables(folder: Path, library: Library) -> None:
    own = folder / "mine"
    shutil.copytree(BROKEN / "good", own / "evidence")
    with pytest.raises(DefinitionErrors, match="the table 'mixtures' is already defined in"):
        read_evidence(own, library, folder)
    for name in ("mixtures", "shares"):
        (own / "evidence" / f"{name}.csv").rename(own / "evidence" / f"my-{name}.csv")
    index = own / "evidence" / "index.yaml"
    text = index.read_text("utf-8")
    text = text.replace("  mixtures:", "  my-mixtures:").replace("  shares:", "  my-shares:")
    index.write_text(text, "utf-8")
    tables = read_evidence(own, library, folder)
    assert [table.key for table in tables] == ["mixtures", "shares", "my-mixtures", "my-shares"]


def test_a_file_that_the_index_does_not_name_is_refused(folder: Path, library: Library) -> None:
    (folder / "evidence" / "other.csv").write_text("value\n1\n", "utf-8")
    with pytest.raises(DefinitionErrors) as caught:
        read_evidence(folder, library)
    assert str(caught.value) == (
        "evidence/other.csv:1:1: the index names no such table\n"
        "accepted: a table other in index.yaml"
    )


def test_no_evidence_is_no_error(tmp_path: Path, library: Library) -> None:
    assert read_evidence(tmp_path, library) == ()


def test_cells_with_quotation_marks(tmp_path: Path) -> None:
    path = tmp_path / "t.csv"
    path.write_bytes(b'\xef\xbb\xbfvalue,note\r\n1,"a ""b"", c"\r\n\r\n2,\r\n')
    sheet = load_csv(path, ["value", "note"])
    assert [[cell.text for cell in row.values()] for row in sheet.rows] == [
        ["1", 'a "b", c'],
        ["2", ""],
    ]
    assert (sheet.rows[0]["note"].place.line, sheet.rows[0]["note"].place.column) == (2, 3)
