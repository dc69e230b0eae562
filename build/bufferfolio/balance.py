"""The two equations that decide a mixture's state, their residuals and their derivatives.

Unknowns are x = ln a(H+) and u = ln I. The residuals are

    charge    ln(positive charge / negative charge), nearly straight in x
    strength  u − ln(ionic strength of what is there)

Everything here is flat: n mixtures along the last axis, constants as K and not as pK.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Final

import numpy as np
from numpy.typing import NDArray

from bufferfolio.activity import ActivityModel, LongRange
from bufferfolio.speciation import Mixture
from bufferfolio.temperature import LN10, Constants
from bufferfolio.water import FloatArray

Index = slice | NDArray[np.intp] | NDArray[np.bool_]

TINY: Final = 1e-300  # mol/kg; keeps a logarithm finite where a charge is absent


@dataclass(frozen=True, slots=True, kw_only=True)
class Problem:
    """n mixtures with the same families, ready for arithmetic."""

    charges: tuple[int, ...]  # of the form with most protons, a family each
    K: tuple[FloatArray, ...]  # (steps, n), a family each
    totals: FloatArray  # (families, n), mol/kg
    net: FloatArray  # n, charge of the strong ions, mol/kg
    net_rest: FloatArray  # n, what rounding left out of `net`
    strength: FloatArray  # n, Σ z² m of the strong ions, mol/kg
    hydrogen: FloatArray  # n, m(H+) / a(H+) of an uncharged world: 1 but for interactions
    hydroxide: FloatArray  # n, m(OH-) a(H+) likewise: Kw but for interactions
    coefficient: FloatArray  # n, Debye–Hückel A
    long_range: LongRange

    @property
    def size(self) -> int:
        """How many mixtures."""
        return int(self.net.size)


@dataclass(frozen=True, slots=True, kw_only=True)
class Sums:
    """Sums over everything in the water, each n, with derivatives by x = ln a(H+) and u = ln I."""

    plus: FloatArray  # mol/kg, positive charge, opposite strong ions cancelled
    minus: FloatArray  # mol/kg, negative charge likewise
    squares: FloatArray  # mol/kg, Σ z² m
    by_x: tuple[FloatArray, FloatArray, FloatArray]  # of the three, in this order
    by_u: tuple[FloatArray, FloatArray, FloatArray]


@dataclass(frozen=True, slots=True, kw_only=True)
class Residuals:
    """The two residuals and their derivatives by x = ln a(H+) and u = ln I, each n."""

    charge: FloatArray
    strength: FloatArray
    charge_x: FloatArray
    charge_u: FloatArray
    strength_x: FloatArray
    strength_u: FloatArray


@dataclass(frozen=True, slots=True, kw_only=True)
class Slopes:
    """Derivatives of the charge and of Σ z² m by x = ln a(H+) and u = ln I, each n, mol/kg."""

    charge_x: FloatArray
    charge_u: FloatArray
    squares_x: FloatArray
    squares_u: FloatArray


def two_sum(a: FloatArray, b: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return a + b and what rounding left out of it.

    Shapes: a and b S; results S.
    Units: those of the arguments.
    Raises: nothing.
    Source: Knuth, The Art of Computer Programming, vol. 2, 4.2.2, theorem B.
    """
    total = a + b
    of_b = total - a
    return total, (a - (total - of_b)) + (b - of_b)


def _exact_charge(charges: Sequence[int], amounts: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Sum z m so exactly that opposite ions cancel and leave what is really left."""
    total = np.zeros(amounts.shape[1:])
    rest = np.zeros(amounts.shape[1:])
    for charge, amount in zip(charges, amounts, strict=True):
        for _ in range(abs(charge)):
            total, lost = two_sum(total, np.copysign(1.0, charge) * amount)
            rest = rest + lost
    return two_sum(total, rest)


def prepare(
    mixture: Mixture, constants: Constants, model: ActivityModel
) -> tuple[Problem, tuple[int, ...]]:
    """Return the flat problem of some mixtures and the shape that its results take.

    Shapes: totals and molalities (…, *S) broadcast against constants S; n is the size of S.
    Units: mol/kg.
    Raises: ValueError where shapes do not broadcast.
    Source: definition.
    """
    shape = np.broadcast_shapes(
        mixture.totals.shape[1:], mixture.molalities.shape[1:], constants.pKw.shape
    )

    size = int(np.prod(shape, dtype=int))

    def flat(values: FloatArray) -> FloatArray:
        return np.ascontiguousarray(np.broadcast_to(values, shape).reshape(-1))

    def rows(values: FloatArray) -> FloatArray:
        count = values.shape[0]
        return np.array([flat(values[row]) for row in range(count)]).reshape(count, size)

    net, rest = _exact_charge([ion.charge for ion in mixture.ions], mixture.molalities)
    problem = Problem(
        charges=tuple(family.charge for family in mixture.families),
        K=tuple(rows(np.exp(-LN10 * pK)) for pK in constants.pK),
        totals=rows(mixture.totals),
        net=flat(net),
        net_rest=flat(rest),
        strength=flat(mixture.strong_strength),
        hydrogen=np.ones(size),
        hydroxide=flat(np.exp(-LN10 * constants.pKw)),
        coefficient=flat(constants.debye_huckel),
        long_range=model.long_range,
    )
    return problem, shape


def part(problem: Problem, index: Index) -> Problem:
    """Return the mixtures that an index picks out."""
    return replace(
        problem,
        K=tuple(constant[:, index] for constant in problem.K),
        totals=problem.totals[:, index],
        net=problem.net[index],
        net_rest=problem.net_rest[index],
        strength=problem.strength[index],
        hydrogen=problem.hydrogen[index],
        hydroxide=problem.hydroxide[index],
        coefficient=problem.coefficient[index],
    )


def with_offsets(problem: Problem, offsets: FloatArray) -> Problem:
    """Return the problem with Σ ε m of each species folded into its constants.

    Shapes: offsets (species, n) in log10 γ, in the order of `Mixture.species`.
    Units: dimensionless.
    Raises: nothing.
    Source: mass action.
    """
    constants = []
    start = 2
    for K in problem.K:
        own = offsets[start : start + K.shape[0] + 1]
        constants.append(K * np.exp(LN10 * (own[:-1] - own[1:])))
        start += K.shape[0] + 1
    return replace(
        problem,
        K=tuple(constants),
        hydrogen=problem.hydrogen * np.exp(-LN10 * offsets[0]),
        hydroxide=problem.hydroxide * np.exp(-LN10 * offsets[1]),
    )


def weights(charge: int, K: FloatArray, h: FloatArray, g: FloatArray) -> list[FloatArray]:
    """Return each form's amount relative to the form with most protons.

    Shapes: K (steps, n); h and g n; result a list of forms, each n.
    Units: h activity; g = 10^D; result dimensionless.
    Raises: nothing.
    Source: m_j / m_(j−1) = K_j / a(H+) · γ_(j−1) / γ_j with γ = g^(−z²).
    """
    square = g * g
    # z² grows by 1 − 2 z on losing a proton; each further step adds 2 to that.
    ratio = g ** (1 - 2 * charge) / h
    forms = [np.ones_like(h)]
    for constant in K:
        forms.append(forms[-1] * (constant * ratio))
        ratio = ratio * square
    return forms


def residuals(problem: Problem, x: FloatArray, u: FloatArray) -> Residuals:
    """Return both residuals and their derivatives.

    Shapes: x and u n; results n.
    Units: x = ln a(H+), u = ln (I kg/mol); results dimensionless.
    Raises: nothing; overflow gives infinities that the caller has to refuse.
    Source: electroneutrality and the definition of ionic strength.
    """
    there = sums(problem, x, u)
    return Residuals(
        charge=np.log(there.plus / there.minus),
        strength=u - np.log(0.5 * there.squares),
        charge_x=there.by_x[0] / there.plus - there.by_x[1] / there.minus,
        charge_u=there.by_u[0] / there.plus - there.by_u[1] / there.minus,
        strength_x=-there.by_x[2] / there.squares,
        strength_u=1.0 - there.by_u[2] / there.squares,
    )


def sums(problem: Problem, x: FloatArray, u: FloatArray) -> Sums:
    """Return charge of either sign and Σ z² m, with their derivatives.

    Shapes: x and u n; results n.
    Units: x = ln a(H+), u = ln (I kg/mol); results mol/kg.
    Raises: nothing.
    Source: a derivative of a mean over a family's forms is a covariance: d⟨f⟩/dx = −cov(f, j),
        d⟨f⟩/dln g = cov(f, z²), with j the number of protons lost and g = 10^D.
    """
    term, slope = problem.long_range(problem.coefficient, np.exp(u))
    g, g_u = np.exp(LN10 * term), LN10 * slope
    h = np.exp(x)
    hydrogen, hydroxide = problem.hydrogen * h * g, problem.hydroxide / h * g
    both = hydrogen + hydroxide
    values = [
        np.maximum(problem.net, 0.0) + hydrogen + TINY,
        np.maximum(-problem.net, 0.0) + hydroxide + TINY,
        problem.strength + both,
    ]
    by_x = [hydrogen, -hydroxide, hydrogen - hydroxide]
    by_g = [hydrogen, hydroxide, both]
    for charge, K, total in zip(problem.charges, problem.K, problem.totals, strict=True):
        forms = weights(charge, K, h, g)
        scale = total / sum(forms)
        amounts = [form * scale for form in forms]
        z = [charge - lost for lost in range(len(forms))]
        by_sign = [max(q, 0) for q in z], [max(-q, 0) for q in z], [q * q for q in z]
        lost_mean = _moment(range(len(forms)), amounts) / (total + TINY)
        square_mean = _moment(by_sign[2], amounts) / (total + TINY)
        for row, weight in enumerate(by_sign):
            if any(weight):
                mean = _moment(weight, amounts)
                with_lost = _moment([w * j for j, w in enumerate(weight)], amounts)
                with_square = _moment([w * q * q for w, q in zip(weight, z, strict=True)], amounts)
                values[row] = values[row] + mean
                by_x[row] = by_x[row] - (with_lost - mean * lost_mean)
                by_g[row] = by_g[row] + (with_square - mean * square_mean)
    return Sums(
        plus=values[0],
        minus=values[1],
        squares=values[2],
        by_x=(by_x[0], by_x[1], by_x[2]),
        by_u=(g_u * by_g[0], g_u * by_g[1], g_u * by_g[2]),
    )


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
        scale = total / sum(forms)
        amounts = [form * scale for form in forms]
        squares = [(charge - lost) ** 2 for lost in range(len(forms))]
        lost_mean = _moment(range(len(forms)), amounts) / (total + TINY)
        square_mean = _moment(squares, amounts) / (total + TINY)
        for lost, (square, amount) in enumerate(zip(squares, amounts, strict=True)):
            lost_away, square_away = lost - lost_mean, square - square_mean
            charge_x = charge_x + amount * lost_away * lost_away
            charge_g = charge_g - amount * lost_away * square_away
            squares_x = squares_x - amount * lost_away * square_away
            squares_g = squares_g + amount * square_away * square_away
    return Slopes(
        charge_x=charge_x, charge_u=g_u * charge_g, squares_x=squares_x, squares_u=g_u * squares_g
    )


def _moment(values: Sequence[int], amounts: Sequence[FloatArray]) -> FloatArray:
    terms = [value * amount for value, amount in zip(values, amounts, strict=True) if value]
    return sum(terms[1:], start=terms[0]) if terms else np.zeros_like(amounts[0])
