"""What a fit is worth: standard errors, correlations, and a verdict from them."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Final, Literal

import numpy as np
from numpy.typing import NDArray

from bufferfolio import fit_parameters
from bufferfolio.fit_parameters import Free
from bufferfolio.water import FloatArray

Kind = Literal[
    "well determined",
    "poorly determined",
    "not separable",
    "at a bound",
    "does not fit",
    "too few points",
    "no solution",
]

RIDGE: Final = 1e-14  # keeps a matrix invertible where points do not tell two quantities apart
HIDDEN: Final = 1e9  # a variance so much enlarged by the other quantities is none
TIED: Final = 0.95  # a correlation beyond which two quantities are one
FEWEST: Final = 3  # points that have to be left over
MISFIT: Final = 4.0  # reduced chi-squared of a scatter twice as wide as expected


@dataclass(frozen=True, slots=True, kw_only=True)
class Verdict:
    """What a fit is worth."""

    kind: Kind
    about: tuple[str, ...]  # keys of the quantities that it concerns


def covariance(slopes: FloatArray) -> tuple[FloatArray, FloatArray, NDArray[np.bool_]]:
    """Return variances for a scatter of one, correlations, and which quantities stay hidden.

    Shapes: slopes (parameters, n); results (parameters,), (parameters, parameters), (parameters,).
    Units: slopes in standard deviations of a reading per parameter.
    Raises: nothing.
    Source: linear theory of least squares; a ridge of 1e-14 on the scaled normal matrix.
    """
    scale = np.sqrt(np.sum(slopes**2, axis=1))
    scale = np.where(scale > 0.0, scale, 1.0)
    scaled = slopes / scale[:, np.newaxis]
    inverse = np.linalg.inv(scaled @ scaled.T + RIDGE * np.eye(len(slopes)))
    enlarged = np.diag(inverse)
    correlation = inverse / np.sqrt(np.outer(enlarged, enlarged))
    hidden = (enlarged > HIDDEN) & (enlarged > 1e-3 * np.max(enlarged))
    return enlarged / scale**2, correlation, hidden


def verdict(
    free: Sequence[Free],
    errors: FloatArray,
    correlation: FloatArray,
    hidden: NDArray[np.bool_],
    at_bound: NDArray[np.bool_],
    chi_squared: float,
    freedom: int,
) -> Verdict:
    """Return what a fit is worth, the gravest objection first.

    Shapes: errors, hidden and at_bound (parameters,); correlation (parameters, parameters).
    Units: errors in those of the parameters.
    Raises: nothing.
    Source: own choice, the limits in this module.
    """
    keys = np.array([each.key for each in free])
    if freedom < FEWEST:
        return Verdict(kind="too few points", about=())
    if not np.isfinite(chi_squared):
        return Verdict(kind="no solution", about=())
    if hidden.any():
        return Verdict(kind="not separable", about=tuple(keys[hidden].tolist()))
    poor = errors > np.array([USEFUL[each.kind] for each in free])
    tied = _tied(correlation, poor)
    if at_bound.any() and not at_bound[tied].any():
        return Verdict(kind="at a bound", about=tuple(keys[at_bound].tolist()))
    if chi_squared > MISFIT and not at_bound.any():
        return Verdict(kind="does not fit", about=())
    if tied:
        return Verdict(kind="not separable", about=tuple(keys[tied].tolist()))
    if poor.any():
        return Verdict(kind="poorly determined", about=tuple(keys[poor].tolist()))
    return Verdict(kind="well determined", about=())


def _tied(correlation: FloatArray, poor: NDArray[np.bool_]) -> list[int]:
    """Return the two quantities, one of them poor, that are nearly one; none where none are."""
    ties = np.abs(correlation - np.eye(len(poor))) * poor
    first, second = (int(at) for at in np.unravel_index(np.argmax(ties), ties.shape))
    return sorted([first, second]) if ties[first, second] > TIED else []


# Standard errors up to which a result is of use: shares of strength and total, else pH.
USEFUL: Final[Mapping[fit_parameters.Kind, float]] = {
    "strength": 0.02,
    "total": 0.02,
    "pK": 0.05,
    "offset": 0.05,
    "slope": 0.02,
}
