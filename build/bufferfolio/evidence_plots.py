"""Pictures of a published table: computed less published, against pH and against temperature."""

from collections.abc import Iterator, Sequence
from typing import Final

import numpy as np

from bufferfolio.evidence import TableResult, measure_of
from bufferfolio.figures import Axis, Figure, Mark, Series
from bufferfolio.water import ZERO_CELSIUS, FloatArray


def evidence_figures(result: TableResult) -> tuple[Figure, ...]:
    """Return a picture for each condition that varies within a table."""
    return tuple(
        _figure(result, key, label, unit, values)
        for key, label, unit, values in _conditions(result)
    )


def _conditions(result: TableResult) -> Iterator[tuple[str, str, str, FloatArray]]:
    """Yield (key, label, unit, value of each row) of what the rows may be laid out along."""
    rows = result.table.rows
    if _varies(result.pH):
        yield "pH", "pH", "", result.pH
    elif _varies(result.ionic_strength):
        yield "strength", "ionic strength", "mol/kg", result.ionic_strength
    celsius = np.array([row.temperature for row in rows]) - ZERO_CELSIUS
    if len(set(celsius.tolist())) >= FEWEST_TEMPERATURES:
        yield "temperature", "temperature", "°C", celsius


def _varies(values: FloatArray) -> bool:
    known = values[np.isfinite(values)]
    return known.size > 1 and float(np.ptp(known)) > 1e-3


def _figure(result: TableResult, key: str, label: str, unit: str, values: FloatArray) -> Figure:
    differences = result.differences[result.way]
    largest = result.misfits[result.way].largest
    target = result.table.target
    limits = [] if target is None else [target.largest or target.root_mean_square]
    marks = [0.0, *(sign * limit for limit in limits for sign in (1.0, -1.0))]
    x, y = _span(values), _span(np.array([*differences, *marks]))
    measure = measure_of(result.table)
    lines = "".join(f", and at ±{limit:g}" for limit in limits)
    return Figure(
        key=f"{result.table.key}-{key}",
        kind="points",
        title=f"{result.table.title}, against {label}",
        x=Axis(label=label, unit=unit, low=x[0], high=x[1]),
        y=Axis(label="computed less published", unit=measure.unit, low=y[0], high=y[1]),
        series=tuple(_series(result, values, differences)),
        marks=tuple(Mark(axis="y", value=value, label="") for value in marks),
        cells=None,
        summary=(
            f"{len(values)} rows; the largest difference is "
            f"{largest:+.{measure.decimals}f}. Lines at 0{lines}."
        ).replace("-", "−"),
    )


def _series(result: TableResult, values: FloatArray, differences: FloatArray) -> Iterator[Series]:
    groups: Sequence[tuple[str, str, Sequence[int]]] = [
        (part.part.key, part.part.title, part.rows) for part in result.parts
    ] or [("rows", result.table.title, range(len(values)))]
    for style, (name, label, rows) in enumerate(groups):
        chosen = list(rows)
        yield Series(name=name, label=label, style=style, x=values[chosen], y=differences[chosen])


def _span(values: FloatArray) -> tuple[float, float]:
    known = values[np.isfinite(values)]
    low, high = float(known.min()), float(known.max())
    room = MARGIN * (high - low)
    return low - room, high + room


FEWEST_TEMPERATURES: Final = 3  # that say anything about a trend
MARGIN: Final = 0.06  # of the span, free at either end of an axis
