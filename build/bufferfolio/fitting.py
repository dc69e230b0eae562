"""Fitting a titration: which strength, total, pK or electrode explains the measured readings best.

The squares of (measured − predicted) are summed, each over the variance that reading and burette
lead one to expect where the curve is as steep as there. These weights follow the curve, so that the
least squares are found again with the weights of the last curve until nothing moves.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import lru_cache
from typing import Final

import numpy as np
from scipy.optimize import least_squares

from bufferfolio.experiments import Experiment
from bufferfolio.fit_model import Modelled, modelled
from bufferfolio.fit_parameters import Free, bounds, check_free, nominal, units
from bufferfolio.fit_quality import Verdict, covariance, verdict
from bufferfolio.measured import Points, Precision, default_precision
from bufferfolio.water import FloatArray

ROUNDS: Final = 50
STANDS: Final = 1e-6  # of a standard error: a round that moves no farther is the last
SCANNED_FACTORS: Final = (0.25, 0.35, 0.5, 0.7, 1.0, 1.4, 2.0, 2.8, 4.0)
SCANNED_POINTS: Final = 40


@dataclass(frozen=True, slots=True, kw_only=True)
class Estimate:
    """One fitted quantity, in mol/L (strength), mol/kg (total) or without a unit."""

    free: Free
    value: float
    standard_error: float  # from the scatter of the points; infinite where they do not tell
    recipe: float  # what recipe, label and constants say
    low: float  # bounds of the fit
    high: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Fit:
    """The best curve and how good it is."""

    experiment: Experiment
    precision: Precision
    estimates: tuple[Estimate, ...]
    parameters: FloatArray  # (parameters,), as `fit_model` takes them
    correlation: FloatArray  # (parameters, parameters)
    predicted: FloatArray  # n, readings of the best curve
    residuals: FloatArray  # n, measured minus predicted
    expected_scatter: FloatArray  # n, standard deviation that the precision leads to
    reduced_chi_squared: float  # NaN where no point is left over
    freedom: int  # points less parameters
    verdict: Verdict


def fit(
    experiment: Experiment,
    points: Points,
    free: Sequence[Free],
    precision: Precision | None = None,
) -> Fit:
    """Return the least-squares fit of the model curve to measured points.

    Shapes: points n; results see `Fit`.
    Units: see `Estimate`.
    Raises: CannotFit where the quantities cannot be free together.
    Source: nonlinear least squares, weights by the effective variance: Orear, Am. J. Phys. 50
        (1982) 912. Standard errors are scaled with the scatter that is there.
    """
    check_free(experiment, free)
    precision = precision or default_precision(points)

    # scipy asks for readings and for slopes one after the other: the last answer is kept.
    @lru_cache(maxsize=1)
    def remembered(parameters: tuple[float, ...]) -> Modelled:
        return modelled(experiment, points.volume, free, np.array(parameters))

    def model(parameters: FloatArray) -> Modelled:
        return remembered(tuple(parameters.tolist()))

    start = nominal(experiment, free)
    if points.pH.size <= len(free):
        return _result(experiment, points, free, precision, start, model(start))
    low, high = bounds(start, free)
    parameters = _start(experiment, points, free, start, precision)
    scatter = np.full(points.pH.size, precision.pH)
    for _ in range(ROUNDS):
        last, parameters = parameters, _least(model, points.pH, scatter, parameters, low, high)
        curve = model(parameters)
        moved = np.nan_to_num((parameters - last) @ curve.by_parameter / scatter)
        following = expected_scatter(curve, precision)
        if np.linalg.norm(moved) < STANDS or np.array_equal(following, scatter):
            break
        scatter = following
    return _result(experiment, points, free, precision, parameters, model(parameters))


def expected_scatter(model: Modelled, precision: Precision) -> FloatArray:
    """Return the standard deviation of readings that precision and steepness lead to.

    Shapes: result n.
    Units: pH.
    Raises: nothing.
    Source: propagation of uncertainty.
    """
    result: FloatArray = np.hypot(precision.pH, model.by_volume * precision.volume)
    return result


def _start(
    experiment: Experiment,
    points: Points,
    free: Sequence[Free],
    start: FloatArray,
    precision: Precision,
) -> FloatArray:
    """Return where to begin: the best of some strengths (or totals), the rest as in the recipe."""
    kinds = [each.kind for each in free]
    scanned = next((kinds.index(kind) for kind in ("strength", "total") if kind in kinds), None)
    if scanned is None:
        return start
    chosen = np.linspace(0, points.pH.size - 1, min(points.pH.size, SCANNED_POINTS)).astype(int)
    best, least = start, np.inf
    for factor in SCANNED_FACTORS:
        trial = start.copy()
        trial[scanned] = factor
        curve = modelled(experiment, points.volume[chosen], free, trial)
        misses = (points.pH[chosen] - curve.reading) / expected_scatter(curve, precision)
        cost = float(np.nansum(misses**2))
        if cost < least:
            best, least = trial, cost
    return best


def _least(
    model: Callable[[FloatArray], Modelled],
    pH: FloatArray,
    scatter: FloatArray,
    start: FloatArray,
    low: FloatArray,
    high: FloatArray,
) -> FloatArray:
    """Return the parameters with the least sum of squares at given weights."""

    # A point without a solution must not end the fit; the verdict speaks of it.
    def misses(parameters: FloatArray) -> FloatArray:
        return np.nan_to_num((model(parameters).reading - pH) / scatter)

    def slopes(parameters: FloatArray) -> FloatArray:
        return np.nan_to_num(model(parameters).by_parameter / scatter).T

    margin = 1e-9 * (high - low)
    inside = np.clip(start, low + margin, high - margin)
    # A step so small leaves an error of its square.
    exact = {"xtol": 1e-10, "ftol": None, "gtol": None}
    found = least_squares(misses, inside, slopes, bounds=(low, high), x_scale="jac", **exact)
    result: FloatArray = found.x
    return result


def _result(
    experiment: Experiment,
    points: Points,
    free: Sequence[Free],
    precision: Precision,
    parameters: FloatArray,
    model: Modelled,
) -> Fit:
    scatter = expected_scatter(model, precision)
    residuals = points.pH - model.reading
    freedom = points.pH.size - len(free)
    chi_squared = float(np.sum((residuals / scatter) ** 2)) / freedom if freedom > 0 else np.nan
    spread, correlation, hidden = covariance(np.nan_to_num(model.by_parameter / scatter))
    errors = np.where(hidden, np.inf, np.sqrt(spread * chi_squared))
    start = nominal(experiment, free)
    low, high = bounds(start, free)
    at_bound = (parameters - low < 1e-6 * (high - low)) | (high - parameters < 1e-6 * (high - low))
    factor = units(experiment, free)
    return Fit(
        experiment=experiment,
        precision=precision,
        estimates=tuple(
            Estimate(
                free=each,
                value=float(parameters[at] * factor[at]),
                standard_error=float(errors[at] * factor[at]),
                recipe=float(start[at] * factor[at]),
                low=float(low[at] * factor[at]),
                high=float(high[at] * factor[at]),
            )
            for at, each in enumerate(free)
        ),
        parameters=parameters,
        correlation=correlation,
        predicted=model.reading,
        residuals=residuals,
        expected_scatter=scatter,
        reduced_chi_squared=chi_squared,
        freedom=freedom,
        verdict=verdict(free, errors, correlation, hidden, at_bound, chi_squared, freedom),
    )
