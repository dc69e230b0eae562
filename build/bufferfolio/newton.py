"""Newton's method on both balances together, every mixture at once."""

from typing import Final

import numpy as np
from numpy.typing import NDArray

from bufferfolio.balance import Problem, added, part, residuals, weighted, weights
from bufferfolio.exact_sums import two_sum
from bufferfolio.temperature import LN10
from bufferfolio.water import FloatArray

ROUNDS: Final = 40
HALVINGS: Final = 4  # of the pH scale before the first step; each is a quarter of a step's work
LONGEST_STEP: Final = 6.0  # in ln a(H+); farther than that a tangent says little
# Convergence is quadratic: a step this small leaves an error of its square.
SETTLED: Final = 1e-8
# Below this share of charge that answers to pH, rounding of the rest would show in a pH.
LOOSE: Final = 1e-3
PAYS: Final = 1.3  # how many times more mixtures than are left make it worth to part them


def first_guess(problem: Problem) -> tuple[FloatArray, FloatArray]:
    """Return where to begin: the right quarter of the pH scale, the strong ions' strength.

    Shapes: results n.
    Units: ln a(H+); ln (I kg/mol).
    Raises: nothing.
    Source: bisection of the charge balance at that ionic strength.
    """
    strength = 0.5 * (problem.strength + np.abs(problem.net)) + 0.01 * problem.totals.sum(0) + 1e-7
    term, _ = problem.long_range(problem.coefficient, np.minimum(strength, 0.5))
    g = np.exp(LN10 * term)
    x, reach = np.full(problem.size, -7.0 * LN10), 3.5 * LN10
    for _ in range(HALVINGS):
        x = x - np.copysign(reach, _net_charge(problem, np.exp(x), g))
        reach = 0.5 * reach
    return x, np.log(strength)


def _net_charge(problem: Problem, h: FloatArray, g: FloatArray) -> FloatArray:
    """Return the charge of everything in the water, without derivatives."""
    charge = problem.net + problem.hydrogen * h * g - problem.hydroxide / h * g
    for first, K, total in zip(problem.charges, problem.K, problem.totals, strict=True):
        forms = weights(first, K, h, g)
        lost = weighted(range(len(forms)), forms) / added(forms)
        charge = charge + total * (first - lost)
    return charge


def newton(
    problem: Problem, guess: tuple[FloatArray, FloatArray] | None
) -> tuple[FloatArray, FloatArray, NDArray[np.intp]]:
    """Return the solved state of each mixture and the indices of those that did not settle.

    Shapes: guess two arrays n; results n, n and the indices left over.
    Units: ln a(H+); ln (I kg/mol).
    Raises: nothing; what is at an index left over has no meaning.
    Source: Newton's method; settled mixtures are retired from the arrays.
    """
    x, u = first_guess(problem) if guess is None else guess
    found_x, found_u = np.empty(problem.size), np.empty(problem.size)
    whole = problem
    loose = np.zeros(problem.size, dtype=bool)
    active = np.arange(problem.size)
    last = np.zeros(problem.size)
    for _ in range(ROUNDS):
        with np.errstate(all="ignore"):
            state = residuals(problem, x, u)
            slope = state.charge_x * state.strength_u - state.charge_u * state.strength_x
            step_x = (state.charge_u * state.strength - state.charge * state.strength_u) / slope
            step_u = (state.charge * state.strength_x - state.charge_x * state.strength) / slope
        # Hopping to and fro across a steep part: more than half the way back, unless the step is
        # so tiny that it may well turn round. The last hop is halved instead.
        hopping = step_x * last < -0.5 * last * last - SETTLED * SETTLED
        step = _clipped(step_x, LONGEST_STEP)
        last = np.where(hopping, -0.5 * last, step) if hopping.any() else step
        x = x + last
        u = u + _clipped(step_u, 2.0)
        # A negative slope is a root that dilution does not lead to: left to the bracket.
        settled = (np.maximum(np.abs(step_x), np.abs(step_u)) < SETTLED) & (slope > 0.0)
        still = np.flatnonzero(~settled)
        # Taking arrays apart costs as much as half a round: wait until it pays.
        if active.size < still.size * PAYS:
            continue
        done = np.flatnonzero(settled)
        found_x[active[done]], found_u[active[done]] = x[done], u[done]
        loose[active[done]] = state.charge_x[done] < LOOSE
        active, x, u, last = active[still], x[still], u[still], last[still]
        if not active.size:
            break
        problem = part(problem, still)
    if loose.any():
        found_x[loose] = sharpened(part(whole, loose), found_x[loose], found_u[loose])
    return found_x, found_u, active


def _clipped(step: FloatArray, longest: float) -> FloatArray:
    return np.minimum(np.maximum(step, -longest), longest)


def sharpened(problem: Problem, x: FloatArray, u: FloatArray) -> FloatArray:
    """Return ln a(H+) free of the rounding of large charges that cancel.

    Where little buffers, moles of sodium and chloride hide the last 1e-9 mol/kg of acid. Each
    family's charge is therefore reckoned from the integer nearest to its mean, so that only
    small differences are left to add.

    Shapes: x and u n; result n.
    Units: ln a(H+); ln (I kg/mol).
    Raises: nothing.
    Source: Newton's method at constant ionic strength.
    """
    term, _ = problem.long_range(problem.coefficient, np.exp(u))
    g = np.exp(LN10 * term)
    for _ in range(2):
        h = np.exp(x)
        hydrogen, hydroxide = problem.hydrogen * h * g, problem.hydroxide / h * g
        total, rest = problem.net, problem.net_rest
        small = np.zeros_like(x)
        buffering = hydrogen + hydroxide
        for charge, K, amount in zip(problem.charges, problem.K, problem.totals, strict=True):
            forms = weights(charge, K, h, g)
            scale = 1.0 / sum(forms)
            lost = sum(j * form for j, form in enumerate(forms)) * scale
            nearest = np.rint(lost)
            away = [(j - nearest) * form * scale for j, form in enumerate(forms)]
            buffering = buffering + amount * (
                sum((j - lost) ** 2 * form * scale for j, form in enumerate(forms))
            )
            small = small - amount * sum(away)
            for protons in range(1, len(forms)):
                total, left = two_sum(total, np.where(nearest >= protons, -amount, 0.0))
                rest = rest + left
            for _unit in range(abs(charge)):
                total, left = two_sum(total, np.copysign(1.0, charge) * amount)
                rest = rest + left
        excess = total + (rest + small + (hydrogen - hydroxide))
        x = x - excess / buffering
    return x
