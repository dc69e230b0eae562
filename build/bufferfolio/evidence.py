"""Predictions of published tables: every row, several ways, and how far off each way is.

Rows that hold the same families and ions are solved together. A row that cannot be predicted is an
error: no published number is passed over.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np

from bufferfolio.definitions import Library
from bufferfolio.errors import BufferfolioError
from bufferfolio.evidence_batches import Way
from bufferfolio.predicted import WAYS_OF, predicted
from bufferfolio.published import PublishedTable, Quantity, TablePart, Target
from bufferfolio.water import FloatArray


class NotCompared(BufferfolioError):
    """A published number has no prediction."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Misfit:
    """How far computed numbers lie from published ones, in the table's own measure."""

    count: int
    mean: float
    root_mean_square: float
    largest: float  # with its sign
    at: int  # row of the largest


@dataclass(frozen=True, slots=True, kw_only=True)
class Verdict:
    """Whether a table's target is met."""

    root_mean_square: bool
    largest: bool
    as_good_as_davies: bool  # r.m.s. to three decimals

    @property
    def met(self) -> bool:
        """Whether all of it is."""
        return self.root_mean_square and self.largest and self.as_good_as_davies


@dataclass(frozen=True, slots=True, kw_only=True)
class PartResult:
    """Some rows of a table that belong together."""

    part: TablePart
    rows: tuple[int, ...]
    misfits: Mapping[Way, Misfit]
    verdict: Verdict | None  # of the table's target


@dataclass(frozen=True, slots=True, kw_only=True)
class TableResult:
    """A published table with what is computed for it."""

    table: PublishedTable
    ways: tuple[Way, ...]  # the library's own first
    computed: Mapping[Way, FloatArray]  # (rows,)
    differences: Mapping[Way, FloatArray]  # (rows,), see `difference`
    pH: FloatArray  # (rows,), where the rows stand on a pH axis; NaN: nowhere
    ionic_strength: FloatArray  # (rows,), mol/kg; NaN where it plays no part
    misfits: Mapping[Way, Misfit]
    parts: tuple[PartResult, ...]
    verdict: Verdict | None  # None: the table has no target

    @property
    def way(self) -> Way:
        """The library's own way."""
        return self.ways[0]


@dataclass(frozen=True, slots=True, kw_only=True)
class Measure:
    """What the differences of a table are counted in."""

    unit: str  # "" for pH and logarithms
    decimals: int  # that are worth printing


def measure_of(table: PublishedTable) -> Measure:
    """Return what the differences of a table are counted in."""
    return RATIO if table.compared_by == "ratio" else MEASURES[table.quantity]


def compared(tables: Sequence[PublishedTable], library: Library) -> tuple[TableResult, ...]:
    """Return every table with its predictions; raises NotCompared for a row without one."""
    return tuple(_result(table, library) for table in tables)


def _result(table: PublishedTable, library: Library) -> TableResult:
    ways = WAYS_OF[table.quantity]
    found = {way: predicted(table, library, way) for way in ways}
    published = np.array([row.value for row in table.rows])
    computed = {way: found[way].value for way in ways}
    differences = {way: difference(table, computed[way], published) for way in ways}
    for values in differences.values():
        for number in np.flatnonzero(~np.isfinite(values)).tolist():
            row = table.rows[number]
            raise NotCompared(f"{row.place}: this row of {table.key} has no prediction")
    misfits = {way: misfit(differences[way]) for way in ways}
    return TableResult(
        table=table,
        ways=ways,
        computed=computed,
        differences=differences,
        pH=found[ways[0]].pH,
        ionic_strength=found[ways[0]].ionic_strength,
        misfits=misfits,
        parts=tuple(_part(table, part, differences) for part in table.parts),
        verdict=_verdict(table.target, misfits),
    )


def _part(
    table: PublishedTable, part: TablePart, differences: Mapping[Way, FloatArray]
) -> PartResult:
    rows = [number for number, row in enumerate(table.rows) if row.part == part.key]
    misfits = {way: misfit(values, rows) for way, values in differences.items()}
    return PartResult(
        part=part, rows=tuple(rows), misfits=misfits, verdict=_verdict(table.target, misfits)
    )


def difference(table: PublishedTable, computed: FloatArray, published: FloatArray) -> FloatArray:
    """Return computed less published, or how much larger the computed numbers are, in per cent.

    Shapes: computed and published S; result S.
    Units: those of the table, shares as per cent of the whole; a ratio in per cent.
    Raises: nothing.
    Source: definition.
    """
    if table.compared_by == "ratio":
        ratio: FloatArray = 100.0 * (computed / published - 1.0)
        return ratio
    scale = 100.0 if table.quantity == "share" else 1.0
    result: FloatArray = scale * (computed - published)
    return result


def misfit(differences: FloatArray, rows: Sequence[int] | None = None) -> Misfit:
    """Return the statistics of some rows, or of all.

    Shapes: differences (rows,); result scalars.
    Units: those of the differences.
    Raises: ValueError where there are no rows.
    Source: definitions; the r.m.s. is about zero, not about the mean.
    """
    chosen = list(range(len(differences))) if rows is None else list(rows)
    values = differences[chosen]
    furthest = int(np.argmax(np.abs(values)))
    return Misfit(
        count=len(chosen),
        mean=float(np.mean(values)),
        root_mean_square=float(np.sqrt(np.mean(values * values))),
        largest=float(values[furthest]),
        at=chosen[furthest],
    )


def _verdict(target: Target | None, misfits: Mapping[Way, Misfit]) -> Verdict | None:
    if target is None:
        return None
    own = next(iter(misfits.values()))
    plain = misfits.get("davies", own)
    return Verdict(
        root_mean_square=own.root_mean_square <= target.root_mean_square,
        largest=target.largest is None or abs(own.largest) <= target.largest,
        as_good_as_davies=round(own.root_mean_square, 3) <= round(plain.root_mean_square, 3),
    )


RATIO: Final = Measure(unit="%", decimals=1)
MEASURES: Final[Mapping[Quantity, Measure]] = {
    "pH": Measure(unit="", decimals=3),
    "pH after titrant": Measure(unit="", decimals=3),
    "buffer value": Measure(unit="mol/L per pH", decimals=4),
    "dilution value": Measure(unit="", decimals=3),
    "temperature coefficient": Measure(unit="1/K", decimals=4),
    "mean activity coefficient": Measure(unit="", decimals=3),
    "ion activity coefficient": Measure(unit="", decimals=3),
    "share": Measure(unit="% of the whole", decimals=2),
    "percent": Measure(unit="% of the whole", decimals=2),
    "-log10 share": Measure(unit="", decimals=3),
    "CO2 over alkalinity": Measure(unit="", decimals=3),
    "density": Measure(unit="kg/m³", decimals=4),
    "permittivity": Measure(unit="", decimals=3),
    "Debye-Hückel coefficient": Measure(unit="√(kg/mol)", decimals=4),
    "pKw": Measure(unit="", decimals=3),
}
