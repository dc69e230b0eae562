"""What a picture shows: axes, series, marks, a map's cells, and the words that stand in for it.

A figure knows no renderer. `svg_figures` and `bokeh_figures` draw it, and their twins in the page
draw its data (`as_data`) the same way.
"""

import math
from collections.abc import Iterable
from dataclasses import dataclass, replace
from typing import Literal

import numpy as np

from bufferfolio.figure_styles import BAND_COLOURS, STYLES
from bufferfolio.figure_ticks import Scale, number_text, shifted, step_of
from bufferfolio.water import FloatArray

SIGNIFICANT_DIGITS = 6  # finer than a pixel on any axis, and half the bytes of a float's digits
BANDS_ABOUT = 8  # steps of colour that an eye can still name


@dataclass(frozen=True, slots=True, kw_only=True)
class Axis:
    """One side of the frame."""

    label: str
    unit: str  # "" where there is none
    low: float
    high: float
    scale: Scale = "linear"  # x axes are always linear

    @property
    def title(self) -> str:
        """The words beside the axis."""
        return f"{self.label} ({self.unit})" if self.unit else self.label


@dataclass(frozen=True, slots=True, kw_only=True)
class Series:
    """One line, or points of their own; NaN in `y` leaves a gap."""

    name: str  # key that a legend and the page's script use
    label: str
    style: int  # index into figure_styles.STYLES
    x: FloatArray
    y: FloatArray
    visible: bool = True
    points: bool = False  # small open circles in place of a line


@dataclass(frozen=True, slots=True, kw_only=True)
class Mark:
    """A labelled hairline: across an axis, or along an equal value of a map."""

    axis: Literal["x", "y", "value"]
    value: float
    label: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Cells:
    """A map: one value for each cell of a grid; NaN where there is none."""

    x: FloatArray  # edges, one more than cells
    y: FloatArray  # edges
    values: FloatArray  # (cells along y, cells along x)
    label: str
    unit: str
    decimals: int = 2  # of a value that is read off


@dataclass(frozen=True, slots=True, kw_only=True)
class Figure:
    """A picture, with the words that stand in for it.

    Points are for pages that do not compute: `svg_figures` draws them, and nothing else does.
    """

    key: str
    kind: Literal["lines", "map", "points"]
    title: str
    x: Axis
    y: Axis
    series: tuple[Series, ...]  # empty for a map
    marks: tuple[Mark, ...]
    cells: Cells | None  # None for lines
    summary: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Entry:
    """One line of a legend."""

    name: str
    label: str
    style: int  # of the swatch: class s<style>
    visible: bool
    points: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Band:
    """One step of a map's colour."""

    low: float
    high: float
    label: str
    colour: int  # index into figure_styles.BAND_COLOURS: class m<colour>


def legend(figure: Figure) -> tuple[Entry, ...]:
    """Return what a legend lists, in the order of the series."""
    return tuple(
        Entry(
            name=each.name,
            label=each.label,
            style=each.style % len(STYLES),
            visible=each.visible,
            points=each.points,
        )
        for each in figure.series
    )


def bands(figure: Figure) -> tuple[Band, ...]:
    """Return the steps of colour that cover a map's values, lowest first; none for lines."""
    if figure.cells is None:
        return ()
    values = [each for each in figure.cells.values.ravel().tolist() if math.isfinite(each)]
    if not values:
        return ()
    low, high = min(values), max(values)
    # Nearly equal values are one band of sensible width, not eight of rounding noise.
    mantissa, exponent = step_of(max(high - low, 0.01 * abs(high), 1e-6), BANDS_ABOUT)
    step = shifted(mantissa, exponent)
    first = math.floor(low / step + 1e-6)
    last = max(math.ceil(high / step - 1e-6), first + 1)
    return tuple(
        _band(count, count - first, last - first, mantissa, exponent)
        for count in range(first, last)
    )


def _band(count: int, place: int, places: int, mantissa: int, exponent: int) -> Band:
    low, high = count * mantissa, (count + 1) * mantissa
    deepest = len(BAND_COLOURS) - 1
    return Band(
        low=shifted(low, exponent),
        high=shifted(high, exponent),
        label=f"{number_text(low, exponent)} to {number_text(high, exponent)}",
        colour=math.floor(place * deepest / max(places - 1, 1) + 0.5),
    )


def rounded(figure: Figure) -> Figure:
    """Return the figure with its numbers rounded as its data has them, so that both draw alike."""
    cells = figure.cells
    return replace(
        figure,
        x=replace(figure.x, low=_significant(figure.x.low), high=_significant(figure.x.high)),
        y=replace(figure.y, low=_significant(figure.y.low), high=_significant(figure.y.high)),
        series=tuple(
            replace(each, x=_significant_array(each.x), y=_significant_array(each.y))
            for each in figure.series
        ),
        marks=tuple(replace(each, value=_significant(each.value)) for each in figure.marks),
        cells=cells
        and replace(
            cells,
            x=_significant_array(cells.x),
            y=_significant_array(cells.y),
            values=_significant_array(cells.values),
        ),
    )


def as_data(figure: Figure) -> dict[str, object]:
    """Return the figure as plain data for JSON: the same names, arrays as lists, NaN as None."""
    figure = rounded(figure)
    return {
        "key": figure.key,
        "kind": figure.kind,
        "title": figure.title,
        "x": _axis_data(figure.x),
        "y": _axis_data(figure.y),
        "series": [
            {
                "name": each.name,
                "label": each.label,
                "style": each.style,
                "x": _plain(each.x.tolist()),
                "y": _plain(each.y.tolist()),
                "visible": each.visible,
                "points": each.points,
            }
            for each in figure.series
        ],
        "marks": [
            {"axis": each.axis, "value": each.value, "label": each.label} for each in figure.marks
        ],
        "cells": None if figure.cells is None else _cells_data(figure.cells),
        "summary": figure.summary,
    }


def _axis_data(axis: Axis) -> dict[str, object]:
    return {
        "label": axis.label,
        "unit": axis.unit,
        "low": axis.low,
        "high": axis.high,
        "scale": axis.scale,
    }


def _cells_data(cells: Cells) -> dict[str, object]:
    return {
        "x": _plain(cells.x.tolist()),
        "y": _plain(cells.y.tolist()),
        "values": [_plain(row) for row in cells.values.tolist()],
        "label": cells.label,
        "unit": cells.unit,
        "decimals": cells.decimals,
    }


def _plain(numbers: Iterable[float]) -> list[float | None]:
    return [each if math.isfinite(each) else None for each in numbers]


def _significant(number: float) -> float:
    # Off by a hair from where halves lie, so that the page's engine, whose last bit may differ,
    # rounds every number the same way.
    return float(f"{number * (1.0 + 1e-11):.{SIGNIFICANT_DIGITS}g}")


def _significant_array(numbers: FloatArray) -> FloatArray:
    flat = [_significant(each) for each in np.asarray(numbers, dtype=np.float64).ravel().tolist()]
    return np.array(flat, dtype=np.float64).reshape(np.shape(numbers))
