"""The sure way for mixtures on which Newton's method does not settle.

At a fixed ionic strength the charge residual rises strictly with ln a(H+): its root is unique and
can be bracketed. Along these roots the strength residual is negative in a thin solution and
positive beyond the largest strength the solutes can make, so that it too has a root; the lowest
one is taken, because dilution leads to it.
"""

from typing import Final

import numpy as np

from bufferfolio.balance import Problem, residuals
from bufferfolio.newton import sharpened
from bufferfolio.temperature import LN10
from bufferfolio.water import FloatArray

LOW_X: Final = -25.0 * LN10
HIGH_X: Final = 8.0 * LN10
LOW_U: Final = float(np.log(1e-9))
SCAN: Final = 40  # ionic strengths tried on the way up
HALVINGS: Final = 60
SATISFIED: Final = 1e-9  # residuals above this are no solution


def bracket(problem: Problem) -> tuple[FloatArray, FloatArray]:
    """Return the state of each mixture at its lowest possible ionic strength.

    Shapes: results n.
    Units: ln a(H+); ln (I kg/mol); NaN where the equations cannot be met.
    Raises: nothing.
    Source: bisection in two dimensions, one inside the other.
    """
    with np.errstate(all="ignore"):
        low, high = _scan(problem)
        x = np.full(problem.size, -7.0 * LN10)
        for _ in range(HALVINGS):
            middle = 0.5 * (low + high)
            x = balance_charge(problem, middle, x)
            above = residuals(problem, x, middle).strength > 0.0
            high = np.where(above, middle, high)
            low = np.where(above, low, middle)
        u = 0.5 * (low + high)
        x = sharpened(problem, balance_charge(problem, u, x), u)
        state = residuals(problem, x, u)
        good = np.maximum(np.abs(state.charge), np.abs(state.strength)) < SATISFIED
    return np.where(good, x, np.nan), np.where(good, u, np.nan)


def _scan(problem: Problem) -> tuple[FloatArray, FloatArray]:
    """Return two neighbouring ionic strengths between which the residual first turns positive."""
    largest = problem.strength + np.abs(problem.net)
    for charge, K, total in zip(problem.charges, problem.K, problem.totals, strict=True):
        most = max(abs(charge), abs(charge - K.shape[0]))
        largest = largest + total * (most * most + most)
    top = np.log(largest + 1e-5)
    low, high = np.full(problem.size, LOW_U), top.copy()
    x = np.full(problem.size, -7.0 * LN10)
    searching = np.ones(problem.size, dtype=bool)
    for share in np.linspace(0.0, 1.0, SCAN + 1):
        u = LOW_U + share * (top - LOW_U)
        x = balance_charge(problem, u, x)
        above = residuals(problem, x, u).strength > 0.0
        high = np.where(searching & above, u, high)
        searching &= ~above
        low = np.where(searching, u, low)
    return low, high


def balance_charge(problem: Problem, u: FloatArray, x: FloatArray) -> FloatArray:
    """Return ln a(H+) that balances charge at a given ionic strength.

    Shapes: u n; x n, where to begin; result n.
    Units: ln a(H+); ln (I kg/mol).
    Raises: nothing.
    Source: Newton's method inside a bracket that every evaluation narrows.
    """
    low, high = np.full_like(x, LOW_X), np.full_like(x, HIGH_X)
    last = high - low
    for _ in range(80):
        state = residuals(problem, x, u)
        low = np.where(state.charge < 0.0, np.maximum(low, x), low)
        high = np.where(state.charge > 0.0, np.minimum(high, x), high)
        step = -state.charge / state.charge_x
        target = x + step
        # Steps have to halve, or two points could take turns for ever.
        good = (target > low) & (target < high) & (np.abs(step) < 0.5 * last)
        # At the root the bracket's end is the root itself: a step of nothing is good too.
        good |= np.abs(step) < 1e-13 * (1.0 + np.abs(x))
        following = np.where(good, target, 0.5 * (low + high))
        following = np.where(state.charge == 0.0, x, following)
        last = np.abs(following - x)
        x = following
        if (last < 1e-13 * (1.0 + np.abs(x))).all():
            break
    return x
