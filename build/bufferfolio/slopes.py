"""Derivatives of the two balances that stay good where salt hides little buffering."""

from dataclasses import dataclass

import numpy as np

from bufferfolio.balance import TINY, Problem, added, weighted, weights
from bufferfolio.temperature import LN10
from bufferfolio.water import FloatArray


@dataclass(frozen=True, slots=True, kw_only=True)
class Slopes:
    """Derivatives of the charge and of Σ z² m by x = ln a(H+) and u = ln I, each n, mol/kg."""

    charge_x: FloatArray
    charge_u: FloatArray
    squares_x: FloatArray
    squares_u: FloatArray


def slopes(problem: Problem, x: FloatArray, u: FloatArray) -> Slopes:
    """Return derivatives that stay good where salt hides little buffering.

    `sums` takes a mean of squares minus a square of means, which is enough to find a root; here
    every form counts by its distance from the mean, so that nothing large cancels.

    Shapes: x and u n; results n.
    Units: x = ln a(H+), u = ln (I kg/mol); results mol/kg.
    Raises: nothing.
    Source: as `sums`.
    """
    term, slope = problem.long_range(problem.coefficient, np.exp(u))
    g, g_u = np.exp(LN10 * term), LN10 * slope
    h = np.exp(x)
    hydrogen, hydroxide = problem.hydrogen * h * g, problem.hydroxide / h * g
    charge_x = squares_g = hydrogen + hydroxide
    charge_g = squares_x = hydrogen - hydroxide
    for charge, K, total in zip(problem.charges, problem.K, problem.totals, strict=True):
        forms = weights(charge, K, h, g)
        scale = total / added(forms)
        amounts = [form * scale for form in forms]
        squares = [(charge - lost) ** 2 for lost in range(len(forms))]
        lost_mean = weighted(range(len(forms)), amounts) / (total + TINY)
        square_mean = weighted(squares, amounts) / (total + TINY)
        for lost, (square, amount) in enumerate(zip(squares, amounts, strict=True)):
            lost_away, square_away = lost - lost_mean, square - square_mean
            charge_x = charge_x + amount * lost_away * lost_away
            charge_g = charge_g - amount * lost_away * square_away
            squares_x = squares_x - amount * lost_away * square_away
            squares_g = squares_g + amount * square_away * square_away
    return Slopes(
        charge_x=charge_x, charge_u=g_u * charge_g, squares_x=squares_x, squares_u=g_u * squares_g
    )
