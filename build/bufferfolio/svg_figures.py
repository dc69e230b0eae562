"""Figures as static SVG text: first sight, print, and the small pictures of the index.

The page redraws these pictures in JavaScript while numbers move, and gets the same characters. So
coordinates are written by one rule (tenths of a px, halves up), and only arithmetic is used that
every machine does alike. Colours and text styles come from figure_styles.stylesheet().
"""

import math
from collections.abc import Sequence

from bufferfolio.figure_layout import (
    FRAME,
    TALL,
    WIDTH,
    Word,
    across,
    lines_layout,
    map_layout,
    mark_position,
    series_paths,
)
from bufferfolio.figure_styles import STYLES
from bufferfolio.figure_ticks import fixed, ticks
from bufferfolio.figures import Cells, Figure, Series, bands, rounded
from bufferfolio.line_paths import Box, Path, Point

SMALL_WIDTH, SMALL_TALL = 160, 100
SMALL_FRAME = Box(4.0, 4.0, 156.0, 96.0)
CARD_WIDTH, CARD_TALL = 340, 172  # at 90 mm its 14 px text is 10.5 pt
CARD_FRAME = Box(44.0, 24.0, 322.0, 130.0)
TICKS, CARD_TICKS = (9, 7), (6, 5)  # at most, across and along
CIRCLE = "a2.5 2.5 0 1 0 5 0a2.5 2.5 0 1 0-5 0"  # around a point, from its left end
RADIUS = 2.5
BASELINE = 10.5  # px from a text box's top to the text's baseline


def svg(figure: Figure) -> str:
    """Return the figure as an SVG element."""
    figure = rounded(figure)
    words = f"{figure.title}. {figure.summary}"
    if figure.kind == "points":
        inside = _marks(figure) + "".join(_points(figure, each) for each in figure.series)
    else:
        inside = _lines(figure) if figure.cells is None else _map(figure, figure.cells)
    return (
        f'<svg class="figure" viewBox="0 0 {WIDTH} {TALL}" role="img" '
        f'aria-label="{escaped(words)}">{inside}{_axes(figure)}</svg>'
    )


def card_svg(figure: Figure) -> str:
    """Return a figure of lines as a printed card shows it, where its words are not too small."""
    figure = rounded(figure)
    words = f"{figure.title}. {figure.summary}"
    return (
        f'<svg class="figure" viewBox="0 0 {CARD_WIDTH} {CARD_TALL}" role="img" '
        f'aria-label="{escaped(words)}">{_lines(figure, CARD_FRAME)}'
        f"{_axes(figure, CARD_FRAME, CARD_TICKS)}</svg>"
    )


def thumbnail(figure: Figure) -> str:
    """Return the lines of a figure as a small SVG element without any words inside."""
    figure = rounded(figure)
    drawn = "".join(
        _series(series, series_paths(figure, series, SMALL_FRAME))
        for series in figure.series
        if series.visible
    )
    return (
        f'<svg class="figure" viewBox="0 0 {SMALL_WIDTH} {SMALL_TALL}" role="img" '
        f'aria-label="{escaped(figure.title)}">{drawn}{_frame(SMALL_FRAME)}</svg>'
    )


def _lines(figure: Figure, frame: Box = FRAME) -> str:
    inside = lines_layout(figure, frame)
    visible = [each for each in figure.series if each.visible]
    drawn = [_series(each, paths) for each, paths in zip(visible, inside.paths, strict=True)]
    return _marks(figure, frame) + "".join(drawn) + _words(inside.words)


def _map(figure: Figure, cells: Cells) -> str:
    inside = map_layout(figure, cells)
    filled = [
        _path(f"m{band.colour}", "".join(path_text(each) + "Z" for each in region))
        for band, region in zip(bands(figure), inside.regions, strict=True)
    ]
    between = _path("iso", "".join(path_text(each) for each in inside.between))
    limits = _path("limit", "".join(path_text(each) for each in inside.limits))
    return "".join(filled) + between + limits + _marks(figure) + _words(inside.words)


def _series(series: Series, paths: Sequence[Path]) -> str:
    style = f"s{series.style % len(STYLES)}"
    if series.points:
        starts = [f"M{tenths(each[0][0] - RADIUS)} {tenths(each[0][1])}" for each in paths]
        return _path(f"circles {style}", "".join(start + CIRCLE for start in starts))
    return _path(f"line {style}", "".join(path_text(each) for each in paths))


def _points(figure: Figure, series: Series) -> str:
    style = series.style % len(STYLES)
    places: dict[str, None] = {}  # in order, each once: a mark on a mark cannot be seen
    for x, y in zip(series.x.tolist(), series.y.tolist(), strict=True):
        across_x = across(figure.x, x, FRAME.left, FRAME.right)
        along_y = across(figure.y, y, FRAME.bottom, FRAME.top)
        if math.isfinite(across_x) and math.isfinite(along_y):
            places[f"M{fixed(across_x, 0)} {fixed(along_y, 0)}"] = None
    drawn = "".join(place + STYLES[style].mark for place in places)
    return _path(f"point s{style} t{style}", drawn)


def swatch(style: int) -> str:
    """Return the mark of a series of points as a small SVG element, for a legend."""
    shown = style % len(STYLES)
    drawn = _path(f"point s{shown} t{shown}", f"M7 7{STYLES[shown].mark}")
    return f'<svg class="figure swatch spot" viewBox="0 0 14 14" aria-hidden="true">{drawn}</svg>'


def _marks(figure: Figure, frame: Box = FRAME) -> str:
    drawn = ""
    for mark in figure.marks:
        at = mark_position(figure, mark, frame)
        if at is not None and mark.axis == "x":
            drawn += f"M{tenths(at)} {tenths(frame.top)}V{tenths(frame.bottom)}"
        elif at is not None:
            drawn += f"M{tenths(frame.left)} {tenths(at)}H{tenths(frame.right)}"
    return _path("mark", drawn)


def _words(words: Sequence[Word]) -> str:
    return "".join(
        _text(each.box.left, each.box.top + BASELINE, each.classes, each.text) for each in words
    )


def _axes(figure: Figure, frame: Box = FRAME, most: tuple[int, int] = TICKS) -> str:
    drawn = ""
    words = []
    for each in ticks(figure.x.low, figure.x.high, figure.x.scale, most[0]):
        at = across(figure.x, each.value, frame.left, frame.right)
        drawn += f"M{tenths(at)} {tenths(frame.bottom)}v-5"
        words.append(_text(at, frame.bottom + 17, "c", each.text))
    for each in ticks(figure.y.low, figure.y.high, figure.y.scale, most[1]):
        at = across(figure.y, each.value, frame.bottom, frame.top)
        drawn += f"M{tenths(frame.left)} {tenths(at)}h5"
        words.append(_text(frame.left - 6, at + 5, "n", each.text))
    words.append(_text(frame.right, frame.bottom + 36.0, "n", figure.x.title))
    words.append(_text(8.0, frame.top - 12.0, "", figure.y.title))
    return _frame(frame) + _path("frame", drawn) + "".join(words)


def _frame(frame: Box) -> str:
    left, right = tenths(frame.left), tenths(frame.right)
    top, bottom = tenths(frame.top), tenths(frame.bottom)
    return _path("frame", f"M{left} {top}H{right}V{bottom}H{left}Z")


def _path(classes: str, drawn: str) -> str:
    return f'<path class="{classes}" d="{drawn}"/>' if drawn else ""


def _text(x: float, y: float, classes: str, text: str) -> str:
    named = f' class="{classes}"' if classes else ""
    return f'<text x="{tenths(x)}" y="{tenths(y)}"{named}>{escaped(text)}</text>'


def path_text(path: Sequence[Point]) -> str:
    """Return the path data of a line."""
    return "M" + "L".join(f"{tenths(x)} {tenths(y)}" for x, y in path)


def tenths(value: float) -> str:
    """Write px in tenths, without a tail of zero."""
    text = fixed(value, 1).replace("−", "-")
    return text[:-2] if text.endswith(".0") else text


def escaped(text: str) -> str:
    """Return text as it may stand in markup and in quoted attributes."""
    return (
        text.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;").replace('"', "&quot;")
    )
