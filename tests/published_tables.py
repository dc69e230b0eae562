"""Published numbers: tables of the library and of tests/published/, and comparing every row of one.

A table that the page of evidence shows has its home in systems/evidence/ and is named by its key;
the others stand in tests/published/ and are named by their file. `differences` asks for a
prediction of each row in turn, so that a row cannot be passed over: one without a prediction fails
the test that asked.
"""

import csv
import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path

import yaml

from bufferfolio import resources

FOLDER = Path(__file__).parent / "published"
DEFAULTS = ("source", "where", "how_known", "form", "constants")

Row = Mapping[str, str]


@dataclass(frozen=True, slots=True)
class Difference:
    """One published number and what the project computes for it."""

    row: Row
    published: float
    computed: float

    @property
    def miss(self) -> float:
        """Computed less published."""
        return self.computed - self.published


def rows_of(table: str) -> tuple[Row, ...]:
    """Return every row of a table, those of the library with what their index says of them all."""
    if table.endswith(".csv"):
        return _read(FOLDER / table)
    index = _index()["tables"][table]
    common = {name: index[name] for name in DEFAULTS if name in index}
    if "at" in index:
        common["celsius"] = index["at"].removesuffix(" °C")
    rows = _read(resources.systems() / "evidence" / f"{table}.csv")
    return tuple(
        {**common, "table": table, **{key: value for key, value in row.items() if value}}
        for row in rows
    )


def _read(path: Path) -> tuple[Row, ...]:
    with path.open(encoding="utf-8", newline="") as lines:
        return tuple(csv.DictReader(lines))


@lru_cache(maxsize=1)
def _index() -> dict:  # type: ignore[type-arg]
    text = (resources.systems() / "evidence" / "index.yaml").read_text(encoding="utf-8")
    return yaml.safe_load(text)


def differences(
    table: str, predict: Callable[[Row], float | None], *, column: str = "value"
) -> list[Difference]:
    """Return the difference of every row of a table; fail where a row has no prediction."""
    found = []
    for row in rows_of(table):
        computed = predict(row)
        if computed is None or not math.isfinite(float(computed)):
            raise AssertionError(f"{table}: a published row was not compared: {dict(row)}")
        found.append(Difference(row, float(row[column]), float(computed)))
    assert found, f"{table}: no rows"
    return found


def assert_within(found: Sequence[Difference], tolerance: Callable[[Difference], float]) -> None:
    """Fail where a row misses by more than its tolerance, naming all that do."""
    wrong = [item for item in found if not abs(item.miss) <= tolerance(item)]
    told = "\n".join(
        f"  computed {item.computed:.6g}, published {item.published:.6g}, "
        f"miss {item.miss:+.2g}, allowed {tolerance(item):.2g}: {dict(item.row)}"
        for item in wrong[:20]
    )
    assert not wrong, f"{len(wrong)} of {len(found)} published rows miss:\n{told}"


def root_mean_square(found: Sequence[Difference]) -> float:
    """Return the r.m.s. miss."""
    return math.sqrt(sum(item.miss**2 for item in found) / len(found))


def largest(found: Sequence[Difference]) -> float:
    """Return the largest miss, without its sign."""
    return max(abs(item.miss) for item in found)
