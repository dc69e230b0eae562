"""A measured titration as pictures: points over the predicted curve, and what is left of them.

`js/measured_plots.js` draws the same pictures in the page.
"""

import math
from collections.abc import Sequence
from typing import Final

import numpy as np

from bufferfolio.end_points import EndPoint
from bufferfolio.experiments import Experiment, predicted_curve
from bufferfolio.figures import Axis, Figure, Mark, Series
from bufferfolio.fit_model import modelled
from bufferfolio.fit_words import verdict_words, with_error
from bufferfolio.fitting import Fit
from bufferfolio.formatting import fixed, plain, signed
from bufferfolio.measured import Points
from bufferfolio.water import FloatArray

CURVE_POINTS: Final = 241
MARGIN: Final = 0.2  # pH, around the curve
LEAST_RESIDUAL: Final = 0.02  # pH, of the axis where nothing differs


def measured_figure(
    experiment: Experiment, points: Points, found: Sequence[EndPoint], fit: Fit | None = None
) -> tuple[Figure, Figure]:
    """Return measured points over the predicted curve and the best fit, and the differences."""
    unit, scale = volume_unit(points)
    end = float(np.max(points.volume))
    volume = np.linspace(0.0, end, CURVE_POINTS)
    # Points come first, and lie under the curves where there are thousands of them.
    series = [("measured", "measured", points.volume * scale, points.pH)]
    series.append(("recipe", RECIPE, volume * scale, predicted_curve(experiment, volume).state.pH))
    if fit is not None:
        free = tuple(each.free for each in fit.estimates)
        best = modelled(experiment, volume, free, fit.parameters)
        series.append(("fit", BEST, volume * scale, best.reading))
    x = Axis(label="volume of titrant", unit=unit, low=0.0, high=end * scale)
    readings = np.concatenate([pH for _, _, _, pH in series])
    low, high = float(np.nanmin(readings)) - MARGIN, float(np.nanmax(readings)) + MARGIN
    measured = Figure(
        key="measured",
        kind="lines",
        title="Measured and predicted",
        x=x,
        y=Axis(label="pH", unit="", low=math.floor(low), high=math.ceil(high)),
        series=tuple(
            Series(name=name, label=label, style=at, x=along, y=pH, points=name == "measured")
            for at, (name, label, along, pH) in enumerate(series)
        ),
        marks=tuple(
            Mark(axis="x", value=each.volume * scale, label=f"end point {_volume(each, scale)[0]}")
            for each in found
        ),
        cells=None,
        summary=_measured_words(points, found, unit, scale),
    )
    return measured, _residuals_figure(experiment, points, fit, x, scale)


def volume_unit(points: Points) -> tuple[str, float]:
    """Return the unit in which the volumes are easy to read, and how many make a m3."""
    largest = float(np.max(points.volume, initial=0.0))
    return next(((unit, per) for unit, per in VOLUME_UNITS if largest * per >= 1.0), SMALLEST)


def _residuals_figure(
    experiment: Experiment, points: Points, fit: Fit | None, x: Axis, scale: float
) -> Figure:
    if fit is None:
        left = points.pH - predicted_curve(experiment, points.volume).state.pH
    else:
        left = fit.residuals
    reference = RECIPE if fit is None else BEST
    most = max(1.15 * float(np.nanmax(np.abs(left), initial=0.0)), LEAST_RESIDUAL)
    return Figure(
        key="residuals",
        kind="lines",
        title="Measured less predicted",
        x=x,
        y=Axis(label="difference", unit="pH", low=-most, high=most),
        series=(
            Series(
                name="residuals",
                label=f"measured less {reference}",
                style=0,
                x=points.volume * scale,
                y=left,
                points=True,
            ),
        ),
        marks=(Mark(axis="y", value=0.0, label=reference),),
        cells=None,
        summary=_residual_words(left, x, scale, points, fit),
    )


def _volume(end_point: EndPoint, scale: float) -> tuple[str, str]:
    return with_error(end_point.volume * scale, end_point.standard_error * scale)


def _measured_words(points: Points, found: Sequence[EndPoint], unit: str, scale: float) -> str:
    low, high = fixed(float(np.min(points.pH)), 2), fixed(float(np.max(points.pH)), 2)
    parts = [f"{points.pH.size} readings from pH {low} to {high}"]
    for each in found:
        volume, error = _volume(each, scale)
        parts.append(f"end point at {volume} ± {error} {unit}, pH {fixed(each.pH, 2)}")
    if not found:
        parts.append("no end point shows")
    return "; ".join(parts) + "."


def _residual_words(
    left: FloatArray, x: Axis, scale: float, points: Points, fit: Fit | None
) -> str:
    at = int(np.argmax(np.nan_to_num(np.abs(left), nan=-1.0)))
    where = plain(float(points.volume[at] * scale))
    largest = f"The largest difference is {signed(float(left[at]), 3)} at {where} {x.unit}."
    return largest if fit is None else f"{largest} {verdict_words(fit)}"


RECIPE: Final = "recipe and label"
BEST: Final = "best fit"
VOLUME_UNITS: Final = (
    ("m³", 1.0),
    ("L", 1e3),
    ("mL", 1e6),
)  # the first in which the largest is ≥ 1
SMALLEST: Final = ("µL", 1e9)
