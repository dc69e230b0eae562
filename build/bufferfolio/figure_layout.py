"""Where everything inside a figure's frame lies, in px of the drawing: lines, marks and words."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

from bufferfolio import contours
from bufferfolio.figure_styles import STYLES
from bufferfolio.figures import Axis, Cells, Figure, Mark, Series, bands
from bufferfolio.label_places import (
    HEIGHT,
    Profile,
    clear,
    line_place,
    mark_place,
    profile,
    text_width,
)
from bufferfolio.line_paths import Box, Path, Point, clipped, scattered, simplified

WIDTH, TALL = 520, 336  # of the drawing; 14 px text stays above 9 px on a phone of 360 px
FRAME = Box(54.0, 30.0, 510.0, 290.0)


@dataclass(frozen=True, slots=True)
class Word:
    """A text inside the frame, and where."""

    text: str
    box: Box
    classes: str


@dataclass(frozen=True, slots=True)
class Lines:
    """The inside of a lines figure: drawn lines, and words that fit among them."""

    paths: tuple[list[Path], ...]  # of each visible series, clipped to the frame
    words: tuple[Word, ...]


@dataclass(frozen=True, slots=True)
class Map:
    """The inside of a map: regions from each band's low end upwards, lines of equal value, words.

    Each region lies over the one before, so the last one seen at a place is that place's band.
    """

    regions: tuple[list[Path], ...]  # one for each band; the first point is not repeated
    between: tuple[Path, ...]  # where one band ends and the next begins
    limits: tuple[Path, ...]  # where the value is a mark's
    words: tuple[Word, ...]


def across(axis: Axis, value: float, start: float, end: float) -> float:
    """Return where a value lies, in px, on an axis drawn from `start` to `end`; NaN if nowhere."""
    low, high = axis.low, axis.high
    if axis.scale == "log":
        if not value > 0:
            return math.nan
        low, high, value = math.log10(low), math.log10(high), math.log10(value)
    return start + (value - low) / (high - low) * (end - start)


def series_paths(figure: Figure, series: Series, frame: Box) -> list[Path]:
    """Return a series in px: cut at gaps and at the frame, and simplified; points stay alone."""
    points = [
        (
            across(figure.x, x, frame.left, frame.right),
            across(figure.y, y, frame.bottom, frame.top),
        )
        for x, y in zip(series.x.tolist(), series.y.tolist(), strict=True)
    ]
    if series.points:
        return scattered(points, frame)
    return [simplified(path) for path in clipped(points, frame)]


def lines_layout(figure: Figure, frame: Box = FRAME) -> Lines:
    """Return the visible lines of a figure, and its marks' and lines' words where they fit."""
    visible = [each for each in figure.series if each.visible]
    paths = tuple(series_paths(figure, each, frame) for each in visible)
    profiles = [profile(each, frame) for each in paths]
    words = mark_words(figure, profiles, frame)
    for at, each in enumerate(visible):
        others = [*profiles[:at], *profiles[at + 1 :]]
        taken = [*mark_boxes(figure, frame), *(word.box for word in words)]
        box = line_place(each.label, profiles[at], others, taken, frame)
        if box is not None:
            words.append(Word(each.label, box, f"halo name t{each.style % len(STYLES)}"))
    return Lines(paths, tuple(words))


def map_layout(figure: Figure, cells: Cells) -> Map:
    """Return the bands of a map, the lines between them, and the words that fit on it."""
    grid = _lattice(figure, cells)
    words = mark_words(figure, [])
    limits: list[Path] = []
    for mark in figure.marks:
        if mark.axis == "value":
            lines = [simplified(each) for each in contours.lines(contours.loops(grid, mark.value))]
            limits += lines
            words += _value_word(mark.label, lines, words, "halo name")
    marked = [mark.value for mark in figure.marks if mark.axis == "value"]
    regions: list[list[Path]] = []
    between: list[Path] = []
    for band in bands(figure):
        loops = contours.loops(grid, band.low)
        outlines = [simplified([(each.x, each.y) for each in [*loop, loop[0]]]) for loop in loops]
        regions.append([each[:-1] for each in outlines if len(each) > 3])
        if len(regions) > 1:
            lines = [simplified(each) for each in contours.lines(loops)]
            between += lines
            if band.low not in marked:
                words += _value_word(band.label.split(" ")[0], lines, words, "halo")
    return Map(tuple(regions), tuple(between), tuple(limits), tuple(words))


def _lattice(figure: Figure, cells: Cells) -> contours.Lattice:
    return contours.lattice(
        [across(figure.x, each, FRAME.left, FRAME.right) for each in cells.x.tolist()],
        [across(figure.y, each, FRAME.bottom, FRAME.top) for each in cells.y.tolist()],
        cells.values.tolist(),
    )


def mark_words(figure: Figure, profiles: Sequence[Profile], frame: Box = FRAME) -> list[Word]:
    """Return the words of marks across an axis."""
    words: list[Word] = []
    for mark in figure.marks:
        at = mark_position(figure, mark, frame)
        if at is None:
            continue
        taken = [*mark_boxes(figure), *(word.box for word in words)]
        box = mark_place(_mark_choices(mark, at, frame), profiles, taken, frame)
        if box is not None:
            words.append(Word(mark.label, box, "halo"))
    return words


def mark_boxes(figure: Figure, frame: Box = FRAME) -> list[Box]:
    """Return the hairlines of marks as boxes that no word should cross."""
    boxes = []
    for mark in figure.marks:
        at = mark_position(figure, mark, frame)
        if at is not None and mark.axis == "x":
            boxes.append(Box(at, frame.top, at, frame.bottom))
        elif at is not None:
            boxes.append(Box(frame.left, at, frame.right, at))
    return boxes


def mark_position(figure: Figure, mark: Mark, frame: Box = FRAME) -> float | None:
    """Return where a mark crosses its axis, in px; None outside the frame or on no axis."""
    if mark.axis == "x":
        at = across(figure.x, mark.value, frame.left, frame.right)
        return at if frame.left <= at <= frame.right else None
    if mark.axis == "y":
        at = across(figure.y, mark.value, frame.bottom, frame.top)
        return at if frame.top <= at <= frame.bottom else None
    return None


def _mark_choices(mark: Mark, at: float, frame: Box) -> list[Box]:
    width = text_width(mark.label)
    if mark.axis == "y":
        lefts = [frame.right - 6 - width, frame.left + 6]
        lefts += [frame.left + part * (frame.right - frame.left) / 8 for part in (2, 4, 1, 3)]
        tops = [at - 3 - HEIGHT, at + 3]
        return [Box(left, top, left + width, top + HEIGHT) for left in lefts for top in tops]
    rows = [frame.top + 4 + row * HEIGHT for row in range(4)]
    rows += [frame.bottom - 6 - (row + 1) * HEIGHT for row in range(12)]
    return [
        Box(left, top, left + width, top + HEIGHT)
        for top in rows
        for left in (at + 5, at - 5 - width)
    ]


def _value_word(
    text: str, lines: Sequence[Path], words: Sequence[Word], classes: str
) -> list[Word]:
    """Return the text of an equal-value line, as near the middle of the map as it fits."""
    half = text_width(text) / 2
    middle = (FRAME.top + FRAME.bottom) / 2
    taken = [word.box for word in words]
    best, best_distance = None, math.inf
    for x, y in _spots(lines):
        distance = abs(y - middle)
        box = Box(x - half, y - HEIGHT / 2, x + half, y + HEIGHT / 2)
        if distance < best_distance and clear(box, taken, FRAME):
            best, best_distance = box, distance
    return [] if best is None else [Word(text, best, classes)]


def _spots(lines: Sequence[Path]) -> list[Point]:
    """Return points along lines where a text may sit: five on each straight piece."""
    return [
        (x0 + part / 5 * (x1 - x0), y0 + part / 5 * (y1 - y0))
        for line in lines
        for (x0, y0), (x1, y1) in pairwise(line)
        for part in range(5)
    ]
