"""The tables themselves: a source for each row, a test for each table, and no row passed over."""

from pathlib import Path

import pytest

import published_tables
from bufferfolio import resources
from published_tables import FOLDER, differences, rows_of

LIBRARY = resources.systems() / "evidence"
TABLES = [
    *sorted(path.name for path in FOLDER.glob("*.csv")),
    *sorted(path.stem for path in LIBRARY.glob("*.csv")),
]
# Tables that the page of evidence shows and that nothing holds to a tolerance: older scales, and
# what no activity model here describes. tests/test_evidence.py sees that they are compared.
SHOWN_ONLY = {
    "britton-robinson-1931",
    "clark-lubs-1917",
    "delory-king-1945",
    "gomori-1955",
    "ion-activity",
    "kolthoff-1925",
    "lurie-borax",
    "mcilvaine-1921",
    "pharmacopoeia-buffers",
    "sorensen-1909",
}
HOW_KNOWN = {"seen", "seen-secondary", "recalled", "computed"}


@pytest.mark.parametrize("table", TABLES)
def test_every_row_names_its_source_and_how_it_is_known(table: str) -> None:
    for row in rows_of(table):
        assert row["source"].strip(), row
        assert row["how_known"] in HOW_KNOWN, row
        assert None not in row, f"a row of {table} has more cells than columns: {row}"


@pytest.mark.parametrize("table", sorted(set(TABLES) - SHOWN_ONLY))
def test_every_table_is_compared_whole(table: str) -> None:
    """Some test names the table and hands it to `differences`, which takes every row of it."""
    tests = [*FOLDER.glob("test_*.py"), *FOLDER.parent.glob("test_*.py")]
    texts = [path.read_text("utf-8") for path in tests if path != Path(__file__)]
    assert any(f'"{table}"' in text and "differences(" in text for text in texts)


def test_what_is_shown_only_is_there() -> None:
    assert set(TABLES) >= SHOWN_ONLY


def test_a_row_without_prediction_fails(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(published_tables, "FOLDER", tmp_path)
    (tmp_path / "two.csv").write_text("pH,value\n4,1.5\n5,2.5\n", "utf-8")
    assert [item.miss for item in differences("two.csv", lambda row: 2.0)] == [0.5, -0.5]
    for nothing in (None, float("nan")):
        with pytest.raises(AssertionError, match=r"not compared: .*'5'"):
            differences("two.csv", lambda row, n=nothing: 2.0 if row["pH"] == "4" else n)
