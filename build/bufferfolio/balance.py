"""The two equations that decide a mixture's state, their residuals and their derivatives.

Unknowns are x = ln a(H+) and u = ln I. The residuals are

    charge    ln(positive charge / negative charge), nearly straight in x
    strength  u − ln(ionic strength of what is there)

Everything here is flat: n mixtures along the last axis, constants as K and not as pK.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Final, NamedTuple

import numpy as np
from numpy.typing import NDArray

from bufferfolio.activity import ActivityModel, LongRange
from bufferfolio.exact_sums import exact_charge
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
    positive: FloatArray  # n, `net` where it is positive, else next to nothing
    negative: FloatArray  # n, −`net` likewise
    strength: FloatArray  # n, Σ z² m of the strong ions, mol/kg
    hydrogen: FloatArray  # n, m(H+) / a(H+) of an uncharged world: 1 but for interactions
    hydroxide: FloatArray  # n, m(OH-) a(H+) likewise: Kw but for interactions
    coefficient: FloatArray  # n, Debye–Hückel A
    long_range: LongRange

    @property
    def size(self) -> int:
        """How many mixtures."""
        return int(self.net.size)


class Sum(NamedTuple):
    """A sum over species, n, mol/kg, with its derivatives by x = ln a(H+) and by ln g."""

    value: FloatArray
    by_x: FloatArray
    by_g: FloatArray

    def and_(self, other: "Sum") -> "Sum":
        """Return both together."""
        return Sum(self.value + other.value, self.by_x + other.by_x, self.by_g + other.by_g)


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
        return np.broadcast_to(_aligned(values, len(shape)), (count, *shape)).reshape(count, size)

    net, rest = exact_charge([ion.charge for ion in mixture.ions], mixture.molalities)
    problem = Problem(
        charges=tuple(family.charge for family in mixture.families),
        K=tuple(rows(np.exp(-LN10 * pK)) for pK in constants.pK),
        totals=rows(mixture.totals),
        net=flat(net),
        net_rest=flat(rest),
        positive=np.maximum(flat(net), TINY),
        negative=np.maximum(-flat(net), TINY),
        strength=flat(mixture.strong_strength),
        hydrogen=np.ones(size),
        hydroxide=flat(np.exp(-LN10 * constants.pKw)),
        coefficient=flat(constants.debye_huckel),
        long_range=model.long_range,
    )
    return problem, shape


def _aligned(values: FloatArray, dimensions: int) -> FloatArray:
    """Put axes of length one between the first axis and S, so that S broadcasts."""
    missing = dimensions - values.ndim + 1
    return values.reshape(values.shape[0], *([1] * missing), *values.shape[1:])


def part(problem: Problem, index: Index) -> Problem:
    """Return the mixtures that an index picks out."""
    return replace(
        problem,
        K=tuple(constant[:, index] for constant in problem.K),
        totals=problem.totals[:, index],
        net=problem.net[index],
        net_rest=problem.net_rest[index],
        positive=problem.positive[index],
        negative=problem.negative[index],
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
    ratio = g / h
    for _ in range(abs(charge)):
        ratio = ratio / square if charge > 0 else ratio * square
    forms = [np.ones_like(h), K[0] * ratio]
    for constant in K[1:]:
        ratio = ratio * square
        forms.append(forms[-1] * (constant * ratio))
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
    plus = Sum(problem.positive + hydrogen, hydrogen, hydrogen)
    minus = Sum(problem.negative + hydroxide, -hydroxide, hydroxide)
    squares = Sum(problem.strength + both, hydrogen - hydroxide, both)
    for charge, K, total in zip(problem.charges, problem.K, problem.totals, strict=True):
        positive, negative, square = _family_sums(charge, weights(charge, K, h, g), total)
        plus = plus if positive is None else plus.and_(positive)
        minus = minus if negative is None else minus.and_(negative)
        squares = squares.and_(square)
    return Sums(
        plus=plus.value,
        minus=minus.value,
        squares=squares.value,
        by_x=(plus.by_x, minus.by_x, squares.by_x),
        by_u=(g_u * plus.by_g, g_u * minus.by_g, g_u * squares.by_g),
    )


def _family_sums(
    charge: int, forms: Sequence[FloatArray], total: FloatArray
) -> tuple[Sum | None, Sum | None, Sum]:
    """Return one family's positive charge, negative charge and Σ z² m; None where it has none.

    Everything follows from the moments Σ j^k m of the number j of protons lost, with z = z0 − j.
    """
    scale = total / added(forms)
    amounts = [scale, *(form * scale for form in forms[1:])]
    one, two, three, four = _moments(amounts)
    share = 1.0 / (total + TINY)
    mean, mean_square = one * share, two * share
    jj = two - one * mean  # C cov(j, j), and so on
    jq, qq = three - one * mean_square, four - two * mean_square
    if charge:
        jq, qq = jq - 2 * charge * jj, qq - 4 * charge * jq + 4 * charge * charge * jj
    if charge <= 0:
        negative = one - charge * total if charge else one
        squares = two - 2 * charge * one + charge * charge * total if charge else two
        return None, Sum(negative, -jj, jq), Sum(squares, -jq, qq)
    # Where forms of both signs meet, nothing may be left to a difference.
    z = [charge - lost for lost in range(len(forms))]
    of_squares = Sum(weighted([q * q for q in z], amounts), -jq, qq)
    positive = weighted([max(q, 0) for q in z], amounts)
    if z[-1] >= 0:
        return Sum(positive, jj, -jq), None, of_squares
    by_x = positive * mean - weighted([j * max(q, 0) for j, q in enumerate(z)], amounts)
    by_g = weighted([max(q, 0) ** 3 for q in z], amounts) - positive * of_squares.value * share
    negative = weighted([max(-q, 0) for q in z], amounts)
    return Sum(positive, by_x, by_g), Sum(negative, by_x - jj, by_g + jq), of_squares


def _moments(amounts: Sequence[FloatArray]) -> tuple[FloatArray, ...]:
    """Return Σ j^k m for k = 1 … 4."""
    moments = [amounts[1]] * 4
    for lost, amount in enumerate(amounts[2:], 2):
        for power in range(4):
            amount = amount * float(lost)
            moments[power] = moments[power] + amount
    return tuple(moments)


def added(terms: Sequence[FloatArray]) -> FloatArray:
    """Return the sum of some arrays.

    Shapes: terms S each, at least one; result S.
    Units: those of the terms.
    Raises: nothing.
    Source: definition.
    """
    return sum(terms[1:], start=terms[0])


def weighted(factors: Sequence[int], amounts: Sequence[FloatArray]) -> FloatArray:
    """Return Σ factor · amount, with no work for factors of 0 and 1.

    Shapes: amounts S each; result S.
    Units: those of the amounts.
    Raises: nothing.
    Source: definition.
    """
    terms = [
        amount if factor == 1 else amount * float(factor)
        for factor, amount in zip(factors, amounts, strict=True)
        if factor
    ]
    return added(terms) if terms else np.zeros_like(amounts[0])
