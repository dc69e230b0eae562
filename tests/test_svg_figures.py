"""The static drawing: true to the numbers, inside its frame, readable, small, always the same."""

import dataclasses
import itertools
import math
import re
from xml.etree import ElementTree as ET

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from bufferfolio import contours
from bufferfolio.figure_layout import FRAME, WIDTH, across, lines_layout, map_layout
from bufferfolio.figures import Axis, Cells, Figure, bands, rounded
from bufferfolio.line_paths import TOLERANCE, clipped, simplified
from bufferfolio.svg_figures import svg, tenths, thumbnail
from sample_figures import PH, fractions_sample, line, lines, map_sample, mark, random_figures

UNIT = Axis(label="share", unit="", low=0.0, high=1.0)
Point = tuple[float, float]


def paths_of(drawing: str, classes: str) -> list[list[Point]]:
    """Return the points of each part of the drawing's paths of one class."""
    found = []
    for path in ET.fromstring(drawing).iter("path"):
        if path.get("class") == classes:
            for part in path.get("d", "").strip("M").split("M"):
                numbers = re.findall(r"-?[\d.]+", part)
                found.append(
                    [(float(x), float(y)) for x, y in zip(numbers[::2], numbers[1::2], strict=True)]
                )
    return found


def off(point: Point, path: list[Point]) -> float:
    """Return the distance of a point from a path."""
    least = math.inf
    for start, end in itertools.pairwise(path):
        along = np.subtract(end, start)
        length = float(along @ along)
        part = 0.0 if length == 0 else float(np.subtract(point, start) @ along) / length
        nearest = np.add(start, min(max(part, 0.0), 1.0) * along)
        least = min(least, math.dist(point, nearest))
    return least


def test_lines_pass_where_the_numbers_say() -> None:
    figure = fractions_sample()
    for series in figure.series:
        (path,) = paths_of(svg(figure), f"line s{series.style}")
        for x, y in zip(series.x, series.y, strict=True):
            true = (
                across(figure.x, x, FRAME.left, FRAME.right),
                across(figure.y, y, FRAME.bottom, FRAME.top),
            )
            # A quarter px of simplification and half a tenth of writing, both ways.
            assert off(true, path) <= TOLERANCE + 0.08


@given(st.lists(st.tuples(st.floats(0, 500), st.floats(0, 300)), min_size=2, max_size=40))
def test_simplified_paths_stay_within_the_tolerance(points: list[Point]) -> None:
    kept = simplified(points)
    assert kept[0] == points[0]
    assert kept[-1] == points[-1]
    assert set(kept) <= set(points)
    assert all(off(point, kept) <= TOLERANCE + 1e-9 for point in points)


@given(st.lists(st.tuples(st.floats(-900, 1400), st.floats(-900, 1200)), min_size=2, max_size=30))
def test_clipped_lines_are_the_parts_inside(points: list[Point]) -> None:
    paths = clipped(points, FRAME)
    for x, y in itertools.chain.from_iterable(paths):
        assert FRAME.left - 1e-6 <= x <= FRAME.right + 1e-6
        assert FRAME.top - 1e-6 <= y <= FRAME.bottom + 1e-6
        assert off((x, y), points) < 1e-6
    for x, y in points:
        if FRAME.left <= x <= FRAME.right and FRAME.top <= y <= FRAME.bottom:
            assert min(off((x, y), path) for path in paths) < 1e-6


@pytest.mark.parametrize("gap", [math.nan, math.inf])
def test_a_gap_in_the_numbers_is_a_gap_in_the_line(gap: float) -> None:
    shown = line([1, 2, 3, 4, 5, 6], [0.2, 0.9, gap, 0.9, 0.1, 0.5])
    assert [len(part) for part in paths_of(svg(lines((shown,), UNIT)), "line s0")] == [2, 3]


def test_a_logarithmic_axis_has_equal_decades_and_no_zero() -> None:
    axis = Axis(label="molality", unit="mol/kg", low=1e-6, high=1.0, scale="log")
    heights = [across(axis, value, FRAME.bottom, FRAME.top) for value in (1e-6, 1e-4, 1e-2, 1.0)]
    assert np.diff(heights) == pytest.approx([(FRAME.top - FRAME.bottom) / 3] * 3)
    assert math.isnan(across(axis, 0.0, FRAME.bottom, FRAME.top))
    assert ">10⁻⁶</text>" in svg(lines((line([1, 2], [0.1, 0.0]),), axis))


def test_hidden_series_are_not_drawn_and_leave_no_name() -> None:
    figure = fractions_sample()
    hidden = dataclasses.replace(figure.series[1], visible=False)
    drawing = svg(dataclasses.replace(figure, series=(figure.series[0], hidden)))
    assert 'class="line s0"' in drawing
    assert 'class="line s1"' not in drawing
    assert hidden.label not in drawing


def test_every_line_of_a_plain_figure_carries_its_name() -> None:
    """The key must not be the only way to tell lines apart."""
    figure = fractions_sample()
    named = {word.text for word in lines_layout(figure).words}
    assert named == {each.label for each in figure.series} | {"at 7.4"}


def test_names_stand_nearest_to_their_own_lines() -> None:
    figure = fractions_sample()
    inside = lines_layout(figure)
    by_label = dict(zip([each.label for each in figure.series], inside.paths, strict=True))
    for word in inside.words:
        if word.text in by_label:
            box = word.box
            corners = [
                (x, y)
                for x in (box.left, (box.left + box.right) / 2, box.right)
                for y in (box.top, box.bottom)
            ]
            distances = {
                label: min(off(corner, path) for corner in corners for path in paths)
                for label, paths in by_label.items()
            }
            assert min(distances, key=lambda label: distances[label]) == word.text


def test_words_stay_in_the_frame_and_apart() -> None:
    placed = 0
    for figure in [*random_figures(150, seed=7), fractions_sample(), map_sample()]:
        figure = rounded(figure)
        inside = lines_layout(figure) if figure.cells is None else map_layout(figure, figure.cells)
        placed += len(inside.words)
        for word in inside.words:
            assert FRAME.left <= word.box.left
            assert word.box.right <= FRAME.right
            assert FRAME.top <= word.box.top
            assert word.box.bottom <= FRAME.bottom
        for one, other in itertools.combinations([word.box for word in inside.words], 2):
            assert (
                one.right < other.left
                or other.right < one.left
                or one.bottom < other.top
                or other.bottom < one.top
            )
    assert placed > 300


def test_drawings_are_sound_markup_with_a_name_and_no_numbers_gone_wrong() -> None:
    for figure in random_figures(150, seed=8):
        drawing = svg(figure)
        root = ET.fromstring(drawing)
        assert root.get("role") == "img"
        assert root.get("aria-label") == f"{figure.title}. {figure.summary}"
        titles = [text.text for text in root.iter("text")]
        assert figure.x.title in titles
        assert figure.y.title in titles
        for path in root.iter("path"):
            assert re.fullmatch(r"[MLHVZvha\d. -]+", path.get("d", "")), path.get("d")


@pytest.mark.parametrize("figure", [fractions_sample(), map_sample()], ids=lambda each: each.kind)
def test_drawings_are_small_and_always_the_same(figure: Figure) -> None:
    assert len(svg(figure).encode()) < 6000
    assert svg(figure) == svg(figure)
    assert svg(figure) == svg(rounded(figure))


def test_text_can_be_read_on_a_phone() -> None:
    """14 px of a drawing 520 wide, shown 344 px wide (a phone of 360 with margins of 8)."""
    assert 14 * 344 / WIDTH >= 9


def test_px_are_written_in_tenths_by_one_rule() -> None:
    assert [tenths(each) for each in (0.05, 2.25, 2.0, 10.04, -3.25, -0.01)] == [
        "0.1",
        "2.3",
        "2",
        "10",
        "-3.3",
        "0",
    ]


def test_marks_are_hairlines_with_words_and_none_outside_the_axes() -> None:
    figure = lines((), UNIT, (mark("x", 7.0), mark("y", 0.5), mark("x", 15.0)))
    drawing = svg(figure)
    assert 'class="mark" d="M282 30V290M54 160H510"' in drawing
    assert "at 7.0" in drawing
    assert "at 0.5" in drawing
    assert "at 15.0" not in drawing


def enclosed(point: Point, rings: list[list[Point]]) -> bool:
    """Say whether rings enclose a point, by counting crossings of a ray (even and odd)."""
    x, y = point
    crossings = 0
    for ring in rings:
        for (x0, y0), (x1, y1) in itertools.pairwise([*ring, ring[0]]):
            if (y0 > y) != (y1 > y) and x < x0 + (y - y0) / (y1 - y0) * (x1 - x0):
                crossings += 1
    return crossings % 2 == 1


def test_regions_of_a_map_hold_the_cells_of_their_bands() -> None:
    """Of cells whose value is well inside its band, each centre lies in that band's region."""
    checked = 0
    for figure in [map_sample(), *random_figures(24, seed=9)]:
        if figure.cells is None:
            continue
        figure = rounded(figure)
        checked += _check_regions(figure, figure.cells)
    assert checked > 1500


def _check_regions(figure: Figure, cells: Cells) -> int:
    steps, regions = bands(figure), map_layout(figure, cells).regions
    checked = 0
    for up, along in np.ndindex(cells.values.shape):
        value = cells.values[up, along]
        x = across(figure.x, (cells.x[along] + cells.x[along + 1]) / 2, FRAME.left, FRAME.right)
        y = across(figure.y, (cells.y[up] + cells.y[up + 1]) / 2, FRAME.bottom, FRAME.top)
        for band, region in zip(steps, regions, strict=True):
            if not math.isfinite(value):
                assert not enclosed((x, y), region)
            elif abs(value - band.low) > 0.1 * (band.high - band.low):
                # A simplified outline may pass a centre that it touches; not one a px away.
                near = min((off((x, y), [*ring, ring[0]]) for ring in region), default=9.0)
                if near > 1.0:
                    assert enclosed((x, y), region) == (value > band.low)
                    checked += 1
    return checked


def test_lines_of_equal_value_lie_at_their_value() -> None:
    x, y = np.linspace(0, 10, 21), np.linspace(0, 10, 31)
    centres = (x[1:] + x[:-1]) / 2, (y[1:] + y[:-1]) / 2
    values = 2.0 * centres[0] + centres[1][:, None]
    grid = contours.lattice(x.tolist(), y.tolist(), values.tolist())
    parts = contours.lines(contours.loops(grid, 12.3))
    assert len(parts) == 1
    assert all(2.0 * along + up == pytest.approx(12.3) for along, up in parts[0])
    ends = sorted(parts[0][0] + parts[0][-1])
    # From the bottom (6.15, 0) to the top (1.15, 10): the lines reach the border.
    assert ends == pytest.approx([0.0, 1.15, 6.15, 10.0])


def test_a_limit_is_drawn_once_and_replaces_the_number_of_its_line() -> None:
    drawing = svg(map_sample())
    texts = [text.text for text in ET.fromstring(drawing).iter("text")]
    assert texts.count("pH 7.0") == 1
    assert texts.count("7") == 0
    assert 'class="limit"' in drawing


def test_a_thumbnail_has_lines_and_a_name_only() -> None:
    drawing = thumbnail(fractions_sample())
    root = ET.fromstring(drawing)
    assert root.get("aria-label") == "Lines"
    assert [each.tag for each in root] == ["path"] * 5
    assert len(drawing) < 2500


def test_an_empty_figure_is_a_frame() -> None:
    drawing = svg(lines((), UNIT))
    assert "line s" not in drawing
    assert f">{PH.title}</text>" in drawing
