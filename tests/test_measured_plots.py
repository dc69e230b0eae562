"""Pictures of a measured titration: what they show, say, and how they are drawn."""

from dataclasses import replace
from xml.etree import ElementTree as ET

import numpy as np
import pytest

from bufferfolio.end_points import end_points
from bufferfolio.figure_layout import FRAME, across
from bufferfolio.figures import Figure, as_data, legend
from bufferfolio.fitting import fit
from bufferfolio.measured import Points
from bufferfolio.measured_plots import measured_figure, volume_unit
from bufferfolio.svg_figures import CIRCLE, svg
from measured_titrations import PLANS, Made, Plan, made

CASE = made(Plan("acetate-extract", 0, 4.0, "strength,offset", (-0.05, 0.1)), 41, seed=1)


def pictures(case: Made, *, fitted: bool = True) -> tuple[Figure, Figure]:
    found = end_points(case.points)
    result = fit(case.experiment, case.points, case.free, case.precision) if fitted else None
    return measured_figure(case.experiment, case.points, found, result)


def circles(drawing: str) -> list[tuple[float, float]]:
    """Return the middles of the circles of a drawing."""
    found = []
    for path in ET.fromstring(drawing).iter("path"):
        if path.get("class", "").startswith("circles "):
            parts = path.get("d", "").split(CIRCLE)
            assert parts.pop() == ""
            for part in parts:
                x, y = part.removeprefix("M").split(" ")
                found.append((float(x) + 2.5, float(y)))
    return found


def test_points_lie_over_both_curves() -> None:
    measured, residuals = pictures(CASE)
    assert [(each.label, each.points) for each in measured.series] == [
        ("measured", True),
        ("recipe and label", False),
        ("best fit", False),
    ]
    assert [each.style for each in measured.series] == [0, 1, 2]
    points, recipe, best = measured.series
    inside = np.interp(points.x, best.x, best.y)
    assert np.sqrt(np.mean((points.y - inside)[points.x < 2.0] ** 2)) < 0.02
    off = np.interp(points.x, recipe.x, recipe.y)
    assert np.mean((points.y - off)[points.x < 2.0]) == pytest.approx(0.1, abs=0.06)
    assert [each.points for each in residuals.series] == [True]
    assert residuals.y.high == -residuals.y.low
    assert np.abs(residuals.series[0].y).max() < residuals.y.high


def test_without_a_fit_the_recipe_is_what_differs() -> None:
    measured, residuals = pictures(CASE, fitted=False)
    assert [each.label for each in measured.series] == ["measured", "recipe and label"]
    assert residuals.series[0].label == "measured less recipe and label"
    assert residuals.marks[0].label == "recipe and label"


def test_the_words_say_what_is_seen() -> None:
    measured, residuals = pictures(CASE)
    (end_point,) = end_points(CASE.points)
    assert measured.marks[0].label.startswith("end point 2.6")
    assert measured.marks[0].value == pytest.approx(end_point.volume * 1e6)
    low, high = CASE.points.pH.min(), CASE.points.pH.max()
    assert measured.summary.startswith(
        f"41 readings from pH {low:.2f} to {high:.2f}; end point at 2.6"
    )
    assert f" mL, pH {end_point.pH:.2f}." in measured.summary
    assert residuals.summary.startswith("The largest difference is ")
    assert residuals.summary.endswith(
        "Well determined: every standard error is small enough to be of use."
    )
    few = Points(volume=CASE.points.volume[:9], pH=CASE.points.pH[:9], rows=())
    assert measured_figure(CASE.experiment, few, ())[0].summary.endswith("; no end point shows.")


@pytest.mark.parametrize(
    ("largest", "unit", "shown"),
    [
        (2.0, "m³", 2.0),
        (0.5, "L", 500.0),
        (2.5e-5, "mL", 25.0),
        (5e-7, "µL", 500.0),
        (0.0, "µL", 0.0),
    ],
)
def test_volumes_stand_in_a_readable_unit(largest: float, unit: str, shown: float) -> None:
    found, scale = volume_unit(Points(volume=np.array([0.0, largest]), pH=np.ones(2), rows=()))
    assert found == unit
    assert largest * scale == pytest.approx(shown)


def test_circles_stand_where_the_points_are() -> None:
    measured, _ = pictures(CASE)
    points = measured.series[0]
    expected = [
        (
            across(measured.x, x, FRAME.left, FRAME.right),
            across(measured.y, y, FRAME.bottom, FRAME.top),
        )
        for x, y in zip(points.x, points.y, strict=True)
    ]
    found = circles(svg(measured))
    assert len(found) == 41
    np.testing.assert_allclose(found, expected, atol=0.11)


def test_of_thousands_of_points_those_are_drawn_that_can_be_seen() -> None:
    case = made(PLANS[0], 5000, seed=1)
    drawing = svg(pictures(case, fitted=False)[0])
    found = circles(drawing)
    assert 200 < len(found) < 1500
    assert len(drawing.encode()) < 120_000
    assert len(set(found)) == len(found)


def test_a_point_outside_the_frame_or_without_a_number_is_not_drawn() -> None:
    measured, _ = pictures(CASE)
    points = measured.series[0]
    y = points.y.copy()
    y[3], y[5], y[7] = np.nan, 99.0, np.inf
    changed = replace(measured, series=(replace(points, y=y),))
    assert len(circles(svg(changed))) == 38


def test_points_are_said_in_data_and_legend() -> None:
    measured, _ = pictures(CASE)
    assert [each["points"] for each in as_data(measured)["series"]] == [True, False, False]
    assert [each.points for each in legend(measured)] == [True, False, False]
