"""The tables themselves: a source for each row, a test for each table, and no row passed over."""

import re
from pathlib import Path

import pytest

import published_tables
from published_tables import FOLDER, differences, rows_of

TABLES = sorted(path.name for path in FOLDER.glob("*.csv"))
HOW_KNOWN = {"seen", "seen-secondary", "recalled", "computed"}


@pytest.mark.parametrize("table", TABLES)
def test_every_row_names_its_source_and_how_it_is_known(table: str) -> None:
    for row in rows_of(table):
        assert row["source"].strip(), row
        assert row["how_known"] in HOW_KNOWN, row
        assert None not in row, f"a row of {table} has more cells than columns: {row}"


@pytest.mark.parametrize("table", TABLES)
def test_every_table_is_compared_whole(table: str) -> None:
    """Some test hands the table to `differences`, which takes every row of it."""
    calls = [
        re.findall(r"differences\(\s*\"([\w.]+)\"", path.read_text("utf-8"))
        for path in [*FOLDER.glob("test_*.py"), *FOLDER.parent.glob("test_*.py")]
    ]
    assert table in {name for found in calls for name in found}


def test_a_row_without_prediction_fails(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(published_tables, "FOLDER", tmp_path)
    (tmp_path / "two.csv").write_text("pH,value\n4,1.5\n5,2.5\n", "utf-8")
    assert [item.miss for item in differences("two.csv", lambda row: 2.0)] == [0.5, -0.5]
    for nothing in (None, float("nan")):
        with pytest.raises(AssertionError, match=r"not compared: .*'5'"):
            differences("two.csv", lambda row, n=nothing: 2.0 if row["pH"] == "4" else n)
