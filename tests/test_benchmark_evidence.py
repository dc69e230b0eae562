"""How long it takes to compare every published table."""

import time

from bufferfolio.evidence import compared
from recipes import shipped, shipped_tables


def test_all_tables_take_less_than_three_seconds() -> None:
    """Rows of the same families are solved together; one by one they would take ten times that."""
    tables, library = shipped_tables(), shipped()
    start = time.perf_counter()
    compared(tables, library)
    assert time.perf_counter() - start < 3.0
