"""The pH and the ionic strength that balance charge, for many mixtures at once.

Two equations are solved together for ln a(H+) and ln I: that the charges of both signs are equal,
and that I is the ionic strength of what is there. `newton` takes the steps; the few points where it
does not settle are bracketed (`bracketing`); nothing unconverged is returned.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from enum import IntEnum
from typing import Final

import numpy as np
from numpy.typing import NDArray

from bufferfolio.activity import ActivityModel
from bufferfolio.balance import Problem, part, prepare, with_offsets
from bufferfolio.bracketing import bracket
from bufferfolio.definitions import Interaction
from bufferfolio.newton import newton
from bufferfolio.speciation import Mixture, forms_at, interaction_matrix, stacked
from bufferfolio.temperature import LN10, Constants
from bufferfolio.water import FloatArray

# Smaller blocks waste time on call overhead, larger ones fall out of the processor's cache.
BLOCK: Final = 8192
OFFSET_TOLERANCE: Final = 1e-13  # in log10 of an activity coefficient
OFFSET_ROUNDS: Final = 200


class Status(IntEnum):
    """What became of one point."""

    SOLVED = 0
    OUT_OF_RANGE = 1  # solved, but a constant is used outside its source's temperatures
    BEYOND_MODEL = 2  # solved, but the ionic strength is above what the model is trusted to
    NO_SOLUTION = 3  # the equations could not be met; pH is NaN


@dataclass(frozen=True, slots=True, kw_only=True)
class Equilibrium:
    """The state of each mixture."""

    pH: FloatArray  # S, −log10 a(H+)
    ionic_strength: FloatArray  # S, mol/kg
    status: NDArray[np.int8]  # S, see `Status`
    offsets: FloatArray | None  # (species, *S), Σ ε m of each species; None: no interactions


def solve(
    mixture: Mixture,
    constants: Constants,
    model: ActivityModel,
    interactions: Sequence[Interaction] = (),
) -> Equilibrium:
    """Return pH and ionic strength of every mixture.

    Shapes: totals and molalities (…, *S) against constants S, broadcast; results S.
    Units: mol/kg; pH dimensionless.
    Raises: nothing; a point without solution is NaN and says so in its status.
    Source: electroneutrality and mass action; Newton's method, safeguarded by bisection.
    """
    problem, shape = prepare(mixture, constants, model)
    matrix = interaction_matrix(mixture, interactions) if model.uses_interactions else None
    if matrix is None:
        ln_h, ln_i = _solve_blocks(problem)
        offsets = None
    else:
        ln_h, ln_i, flat = _with_interactions(problem, mixture, constants, model, matrix)
        offsets = flat.reshape(-1, *shape)
    pH = (-ln_h / LN10).reshape(shape)
    strength = np.exp(ln_i).reshape(shape)
    status = np.full(shape, Status.SOLVED, dtype=np.int8)
    status[~np.broadcast_to(constants.in_range, shape)] = Status.OUT_OF_RANGE
    status[strength > model.trusted_to] = Status.BEYOND_MODEL
    status[np.isnan(pH)] = Status.NO_SOLUTION
    return Equilibrium(pH=pH, ionic_strength=strength, status=status, offsets=offsets)


def _solve_blocks(
    problem: Problem, guess: tuple[FloatArray, FloatArray] | None = None
) -> tuple[FloatArray, FloatArray]:
    """Solve block by block; threads gain nothing, so short are the steps between two locks."""
    n = problem.size
    ln_h, ln_i = np.empty(n), np.empty(n)
    unsettled: list[NDArray[np.intp]] = []
    for start in range(0, n, BLOCK):
        span = slice(start, min(start + BLOCK, n))
        begin = None if guess is None else (guess[0][span], guess[1][span])
        ln_h[span], ln_i[span], left = newton(part(problem, span), begin)
        unsettled.append(start + left)
    left_over = np.concatenate(unsettled) if unsettled else np.empty(0, dtype=np.intp)
    if left_over.size:
        ln_h[left_over], ln_i[left_over] = bracket(part(problem, left_over))
    return ln_h, ln_i


def _with_interactions(
    problem: Problem,
    mixture: Mixture,
    constants: Constants,
    model: ActivityModel,
    matrix: FloatArray,
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Repeat the solution with the pair terms of the last round until these stand still."""
    shape = np.broadcast_shapes(
        mixture.totals.shape[1:], mixture.molalities.shape[1:], constants.pKw.shape
    )
    offsets = np.zeros((matrix.shape[0], problem.size))
    ln_h, ln_i = _solve_blocks(problem)
    step, last = 1.0, np.inf
    for _ in range(OFFSET_ROUNDS):
        pH, strength = (-ln_h / LN10).reshape(shape), np.exp(ln_i).reshape(shape)
        forms = forms_at(mixture, constants, model, pH, strength, offsets.reshape(-1, *shape))
        there = stacked(forms, mixture).reshape(matrix.shape[0], -1)
        change = matrix @ there - offsets
        moving = np.max(np.abs(change), axis=0, initial=0.0)
        largest = float(np.nanmax(moving, initial=0.0))
        if largest < OFFSET_TOLERANCE:
            break
        # A round that did not come closer calls for caution.
        step = max(0.25, 0.5 * step) if largest > 0.9 * last else step
        last = largest
        offsets = offsets + step * change
        ln_h, ln_i = _solve_blocks(with_offsets(problem, offsets), (ln_h, ln_i))
    settled = moving < OFFSET_TOLERANCE
    return np.where(settled, ln_h, np.nan), np.where(settled, ln_i, np.nan), offsets
