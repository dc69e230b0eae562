"""Curves of equal value through a grid, for the bands and lines of a map.

The grid's corners carry values; between them values are taken as linear (marching squares). Each
curve is walked with the higher side on its left. The grid is wrapped in a ring without values,
lying on its border: so every curve closes, and what it encloses can be filled.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass

Point = tuple[float, float]


@dataclass(frozen=True, slots=True)
class Lattice:
    """Positions of grid corners and their values, the empty ring included."""

    x: list[float]
    y: list[float]
    values: list[list[float]]  # one row for each y


@dataclass(frozen=True, slots=True)
class Crossing:
    """A point of a curve; `inner` where values lie on both sides, not border or gap."""

    x: float
    y: float
    inner: bool


def lattice(
    x_edges: Sequence[float], y_edges: Sequence[float], values: Sequence[Sequence[float]]
) -> Lattice:
    """Return corners for a grid of cells: centres, the outer edges, and the empty ring.

    Values at the outer edges continue the slope between the two outermost centres.
    """
    rows = [_extended(row) for row in values]
    columns = [_extended([row[at] for row in rows]) for at in range(len(rows[0]))]
    height = len(columns[0])
    empty = [math.nan] * (len(columns) + 2)
    inner = [[math.nan, *(column[at] for column in columns), math.nan] for at in range(height)]
    return Lattice(_corners(x_edges), _corners(y_edges), [empty, *inner, empty])


def _corners(edges: Sequence[float]) -> list[float]:
    centres = [(edges[at] + edges[at + 1]) / 2 for at in range(len(edges) - 1)]
    return [edges[0], edges[0], *centres, edges[-1], edges[-1]]


def _extended(row: Sequence[float]) -> list[float]:
    return [_outer(row[0], row[1 % len(row)]), *row, _outer(row[-1], row[len(row) - 2])]


def _outer(last: float, before: float) -> float:
    beyond = last + (last - before) / 2
    return beyond if math.isfinite(beyond) else last


def loops(grid: Lattice, level: float) -> list[list[Crossing]]:
    """Return the closed curves that together enclose every value at or above a level."""
    follows = _segments(grid, level)
    found = []
    while follows:
        edge = next(iter(follows))
        loop = []
        while edge in follows:
            loop.append(_crossing(grid, level, edge))
            edge = follows.pop(edge)
        found.append(loop)
    return found


def lines(found: Sequence[Sequence[Crossing]]) -> list[list[Point]]:
    """Return the parts of closed curves that run between values, without border and gaps."""
    parts: list[list[Point]] = []
    for loop in found:
        outer = [at for at, each in enumerate(loop) if not each.inner]
        if not outer:
            parts.append([(each.x, each.y) for each in [*loop, loop[0]]])
            continue
        part: list[Point] = []
        for each in [*loop[outer[0] :], *loop[: outer[0] + 1]]:
            if each.inner:
                part.append((each.x, each.y))
            elif part:
                parts.append(part)
                part = []
    return [part for part in parts if len(part) > 1]


def _segments(grid: Lattice, level: float) -> dict[int, int]:
    """Return which edge of the grid a curve enters after which, for all cells."""
    width = len(grid.x)
    above = [[value >= level for value in row] for row in grid.values]
    follows: dict[int, int] = {}
    for row in range(len(grid.y) - 1):
        lower, upper = above[row], above[row + 1]
        for column in range(width - 1):
            case = lower[column] + 2 * lower[column + 1]
            case += 4 * upper[column + 1] + 8 * upper[column]
            if case in (0, 15):
                continue
            if case in (5, 10) and not _centre_above(grid, level, row, column):
                case = -case
            south = 2 * (row * width + column)
            edges = {"S": south, "W": south + 1, "N": south + 2 * width, "E": south + 3}
            for step in WALKS[case]:
                follows[edges[step[0]]] = edges[step[1]]
    return follows


def _centre_above(grid: Lattice, level: float, row: int, column: int) -> bool:
    lower, upper = grid.values[row], grid.values[row + 1]
    # A gap among the four makes the sum NaN, and the two corners are then kept apart.
    return lower[column] + lower[column + 1] + upper[column] + upper[column + 1] >= 4 * level


def _crossing(grid: Lattice, level: float, edge: int) -> Crossing:
    width = len(grid.x)
    row, column = edge // 2 // width, edge // 2 % width
    upright = edge % 2 == 1
    far_row, far_column = (row + 1, column) if upright else (row, column + 1)
    near, far = grid.values[row][column], grid.values[far_row][far_column]
    inner = math.isfinite(near) and math.isfinite(far)
    part = (level - near) / (far - near) if inner else 0.5
    return Crossing(
        grid.x[column] + part * (grid.x[far_column] - grid.x[column]),
        grid.y[row] + part * (grid.y[far_row] - grid.y[row]),
        inner,
    )


# Which corners of a cell lie above the level (south-west 1, south-east 2, north-east 4,
# north-west 8), and from which side to which the curve then crosses the cell. Opposite corners
# (5 and 10) are joined where the middle of the cell lies above too, and kept apart (negative)
# where it does not.
WALKS: dict[int, tuple[str, ...]] = {
    1: ("SW",),
    2: ("ES",),
    3: ("EW",),
    4: ("NE",),
    5: ("SE", "NW"),
    -5: ("SW", "NE"),
    6: ("NS",),
    7: ("NW",),
    8: ("WN",),
    9: ("SN",),
    10: ("WS", "EN"),
    -10: ("ES", "WN"),
    11: ("EN",),
    12: ("WE",),
    13: ("SE",),
    14: ("WS",),
}
