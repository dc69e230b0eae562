"""What a mixture does at every pH that strong acid or base could bring it to.

All results are explicit in pH: the amount of strong base that belongs to a pH, the forms there, and
the buffer capacity as the derivative of that amount, never a difference of neighbouring points.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final, Literal

import numpy as np

from bufferfolio.activity import ActivityModel
from bufferfolio.balance import Problem, prepare, sums, with_offsets
from bufferfolio.definitions import Interaction
from bufferfolio.equilibrium import Equilibrium
from bufferfolio.slopes import Slopes, slopes
from bufferfolio.speciation import Forms, Mixture, forms_at, interaction_matrix, stacked
from bufferfolio.temperature import LN10, Constants
from bufferfolio.water import FloatArray

ROUNDS: Final = 100
SETTLED: Final = 1e-13
LOW_U: Final = float(np.log(1e-9))  # of ionic strength, where a search begins
HIGH_U: Final = float(np.log(1e3))
NEGLIGIBLE: Final = 1e-6  # a share of a pair too small to speak of a ratio


@dataclass(frozen=True, slots=True, kw_only=True)
class Sweep:
    """A mixture brought to each pH with strong acid or base."""

    pH: FloatArray  # S
    ionic_strength: FloatArray  # S, mol/kg
    base: FloatArray  # S, mol/kg of strong monovalent base; negative: of strong acid
    capacity: FloatArray  # S, mol/kg per pH, d base / d pH
    forms: Forms


def sweep(
    mixture: Mixture,
    constants: Constants,
    model: ActivityModel,
    pH: FloatArray,
    interactions: Sequence[Interaction] = (),
    ionic_strength: FloatArray | None = None,
) -> Sweep:
    """Return what strong acid or base makes of each mixture.

    The ion that comes with the acid or base counts in the ionic strength and has no pair terms.
    With `ionic_strength` given, an inert salt is taken to hold it there.

    Shapes: mixture (…, *S); constants S; pH S; ionic_strength S or None; results S.
    Units: mol/kg; pH dimensionless.
    Raises: nothing.
    Source: electroneutrality, the ionic strength solved at each pH.
    """
    problem, shape = prepare(mixture, constants, model)
    matrix = interaction_matrix(mixture, interactions) if model.uses_interactions else None
    x = (-LN10 * pH).reshape(-1)
    held = None if ionic_strength is None else np.log(ionic_strength).reshape(-1)
    u = _strength(problem, x) if held is None else held
    offsets: FloatArray | None = None
    if matrix is not None:
        u, offsets = _settle_pairs(mixture, constants, model, pH, held, matrix)
        problem = with_offsets(problem, offsets.reshape(len(offsets), -1))
    there = sums(problem, x, u)
    base = there.minus - there.plus
    there_slopes = slopes(problem, x, u)
    slope = _capacity(there_slopes, np.exp(u), np.copysign(1.0, base), held=held is not None)
    strength = np.exp(u).reshape(shape)
    return Sweep(
        pH=pH,
        ionic_strength=strength,
        base=base.reshape(shape),
        capacity=slope.reshape(shape),
        forms=forms_at(mixture, constants, model, pH, strength, offsets),
    )


def _settle_pairs(
    mixture: Mixture,
    constants: Constants,
    model: ActivityModel,
    pH: FloatArray,
    held: FloatArray | None,
    matrix: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """Return ln I and the pair terms at each pH, repeated until these stand still."""
    problem, shape = prepare(mixture, constants, model)
    x = (-LN10 * pH).reshape(-1)
    u = _strength(problem, x) if held is None else held
    offsets = np.zeros((matrix.shape[0], *shape))
    for _ in range(ROUNDS):
        forms = forms_at(mixture, constants, model, pH, np.exp(u).reshape(shape), offsets)
        last, offsets = offsets, np.tensordot(matrix, stacked(forms, mixture), axes=1)
        if held is None:
            u = _strength(with_offsets(problem, offsets.reshape(len(offsets), -1)), x)
        if np.max(np.abs(offsets - last)) < SETTLED:
            break
    moving = np.max(np.abs(offsets - last), axis=0).reshape(-1)
    return np.where(moving < SETTLED, u, np.nan), offsets


def buffer_capacity(
    mixture: Mixture,
    constants: Constants,
    model: ActivityModel,
    state: Equilibrium,
) -> FloatArray:
    """Return the buffer capacity of mixtures at their own pH, towards strong base.

    The ionic strength moves along; pair terms of the specific-ion model are held.

    Shapes: mixture (…, *S); constants and state S; result S.
    Units: mol/kg per pH.
    Raises: nothing.
    Source: Van Slyke, J. Biol. Chem. 52 (1922) 525, extended by implicit differentiation of
        charge balance and ionic strength.
    """
    problem, shape = prepare(mixture, constants, model)
    if state.offsets is not None:
        problem = with_offsets(problem, state.offsets.reshape(len(state.offsets), -1))
    strength = state.ionic_strength.reshape(-1)
    there = slopes(problem, (-LN10 * state.pH).reshape(-1), np.log(strength))
    flat = _capacity(there, strength, np.ones_like(strength), held=False)
    result: FloatArray = flat.reshape(shape)
    return result


def _capacity(there: Slopes, strength: FloatArray, sign: FloatArray, *, held: bool) -> FloatArray:
    """Differentiate the charge by pH; `sign` is +1 where base is added, −1 where acid is taken."""
    if held:
        at_held: FloatArray = LN10 * there.charge_x
        return at_held
    # I = ½ (Σ z² m + |b|) with b = −charge, so both sides of it move with x.
    u_x = (there.squares_x - sign * there.charge_x) / (
        2.0 * strength - there.squares_u + sign * there.charge_u
    )
    result: FloatArray = LN10 * (there.charge_x + there.charge_u * u_x)
    return result


def _strength(problem: Problem, x: FloatArray) -> FloatArray:
    """Return ln I at a given pH, strong acid or base balancing the charge."""
    low, high = np.full_like(x, LOW_U), np.full_like(x, HIGH_U)
    guess = 0.5 * (problem.strength + np.abs(problem.net)) + problem.totals.sum(axis=0) + 1e-7
    u: FloatArray = np.log(guess)
    last = high - low
    for _ in range(ROUNDS):
        there = sums(problem, x, u)
        charge = there.plus - there.minus
        excess = np.exp(u) - 0.5 * (there.squares + np.abs(charge))
        slope = np.exp(u) - 0.5 * (
            there.by_u[2] + np.sign(charge) * (there.by_u[0] - there.by_u[1])
        )
        low = np.where(excess < 0.0, u, low)
        high = np.where(excess > 0.0, u, high)
        step = -excess / slope
        target = u + step
        # As in `bracketing.balance_charge`.
        good = (target > low) & (target < high) & (np.abs(step) < 0.5 * last)
        good |= np.abs(step) < SETTLED
        following = np.where(good, target, 0.5 * (low + high))
        following = np.where(excess == 0.0, u, following)
        last = np.abs(following - u)
        u = following
        if (last < SETTLED).all():
            break
    return u


@dataclass(frozen=True, slots=True, kw_only=True)
class Estimate:
    """What a textbook would say from the recipe alone: one conjugate pair, ideal solution."""

    kind: Literal["pair", "ampholyte", "none"]
    pH: float  # NaN for "none"
    family: str  # key
    step: int  # counted from zero; the later one for an ampholyte
    ratio: float  # base form to acid form, as the recipe has them; NaN but for a pair


NO_ESTIMATE: Final = Estimate(kind="none", pH=float("nan"), family="", step=0, ratio=float("nan"))


def henderson_hasselbalch(mixture: Mixture, pK: Sequence[FloatArray]) -> Estimate:
    """Return the Henderson–Hasselbalch estimate of one mixture.

    Strong ions are taken up by the families one pair after the other, strongest acid first. The
    pair that is left partly neutralised gives the estimate; where a pair ends exactly, the form
    between two steps of one family gives half the sum of their pK. Water's own ions do not count.

    Shapes: mixture of one, S = (); pK one array (steps,) a family; result scalar.
    Units: dimensionless.
    Raises: nothing.
    Source: Henderson (1908) and Hasselbalch (1917), as in any textbook.
    """
    protonated = sum(
        family.charge * float(total)
        for family, total in zip(mixture.families, mixture.totals, strict=True)
    )
    to_lose = float(mixture.strong_charge) + protonated
    pairs = sorted(
        (float(value), float(total), family.key, step)
        for family, total, values in zip(mixture.families, mixture.totals, pK, strict=True)
        for step, value in enumerate(values)
        if total > 0.0
    )
    before = (float("nan"), "")
    for value, total, key, step in pairs:
        share = to_lose / total
        if share < -NEGLIGIBLE:
            break
        if share < NEGLIGIBLE and before[1] == key:
            middle = 0.5 * (before[0] + value)
            return Estimate(kind="ampholyte", pH=middle, family=key, step=step, ratio=float("nan"))
        if NEGLIGIBLE < share < 1.0 - NEGLIGIBLE:
            ratio = share / (1.0 - share)
            pH = value + float(np.log10(ratio))
            return Estimate(kind="pair", pH=pH, family=key, step=step, ratio=ratio)
        to_lose -= total
        before = (value, key)
    return NO_ESTIMATE
