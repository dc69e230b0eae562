"""The numbers behind a figure, thinned to what a reader scans; the page's download has them all."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

from bufferfolio.figure_ticks import power_of_ten
from bufferfolio.figures import Axis, Cells, Figure
from bufferfolio.formatting import fixed, plain, significant

MOST_ROWS: Final = 33
MOST_MAP_ROWS: Final = 7
MOST_MAP_COLUMNS: Final = 9
MOST_DECIMALS: Final = 5


@dataclass(frozen=True, slots=True, kw_only=True)
class NumbersTable:
    """Cells as text; the first cell of each row names it."""

    head: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]


def numbers_table(figure: Figure) -> NumbersTable:
    """Return some of a figure's numbers: every so many points, and the last."""
    if figure.cells is not None:
        return _of_map(figure, figure.cells)
    if not figure.series:
        return NumbersTable(head=(figure.x.title,), rows=())
    x = figure.series[0].x.tolist()
    if any(series.x.tolist() != x for series in figure.series):
        return _one_after_the_other(figure)
    columns = [series.y.tolist() for series in figure.series]
    return NumbersTable(
        head=(figure.x.title, *(series.label for series in figure.series)),
        rows=tuple(
            (plain(x[at]), *(_text(column[at], figure.y) for column in columns))
            for at in _thinned(len(x), MOST_ROWS)
        ),
    )


def _one_after_the_other(figure: Figure) -> NumbersTable:
    """Return lines that do not share their points."""
    most = max(2, MOST_ROWS // len(figure.series))
    return NumbersTable(
        head=("", figure.x.title, figure.y.title),
        rows=tuple(
            (series.label, plain(float(series.x[at])), _text(float(series.y[at]), figure.y))
            for series in figure.series
            for at in _thinned(len(series.x), most)
        ),
    )


def _of_map(figure: Figure, cells: Cells) -> NumbersTable:
    across, along = _centres(cells.x.tolist()), _centres(cells.y.tolist())
    values = cells.values.tolist()
    shown = _thinned(len(across), MOST_MAP_COLUMNS)
    return NumbersTable(
        head=(figure.y.title, *(plain(across[column], 3) for column in shown)),
        rows=tuple(
            (plain(along[row]), *(fixed(values[row][column], cells.decimals) for column in shown))
            for row in _thinned(len(along), MOST_MAP_ROWS)
        ),
    )


def _thinned(count: int, most: int) -> list[int]:
    every = max(1, math.ceil((count - 1) / (most - 1)))
    chosen = list(range(0, count, every))
    return chosen if not chosen or chosen[-1] == count - 1 else [*chosen, count - 1]


def _centres(edges: Sequence[float]) -> list[float]:
    """Return the points that cells stand for: the outermost two lie on the frame itself."""
    centres = [edges[0]]
    for edge in edges[1:-2]:
        centres.append(2.0 * edge - centres[-1])
    if len(edges) > 2:
        centres.append(edges[-1])
    # Rounding must not make a tiny number of the point that is zero.
    tiny = 1e-4 * (edges[-1] - edges[0])
    return [0.0 if abs(centre) < tiny else centre for centre in centres]


def _text(value: float, axis: Axis) -> str:
    """Write a value more finely than a reader could take it from the picture."""
    if axis.scale == "log":
        return significant(value)
    finest = (axis.high - axis.low) / 200.0
    decimals = 0
    while decimals < MOST_DECIMALS and power_of_ten(-decimals) > finest:
        decimals += 1
    return fixed(value, decimals)
