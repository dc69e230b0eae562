"""How the pH of a mixture answers to a small change of anything in it, without trial and error.

The two balances hold before and after a change, so that their differentials give the answer:

    charge     Σ z dm = 0
    strength   2 dI = Σ z² dm

with dm of each species from its share of a changed total, from a changed constant, and from the
pH, the ionic strength and the pair terms that follow.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from bufferfolio.activity import ActivityModel
from bufferfolio.definitions import Interaction
from bufferfolio.equilibrium import Equilibrium
from bufferfolio.speciation import Mixture, forms_at, interaction_matrix, stacked
from bufferfolio.temperature import LN10, Constants
from bufferfolio.water import FloatArray


@dataclass(frozen=True, slots=True, kw_only=True)
class Change:
    """A direction in which a mixture is changed, per unit of whatever changes it."""

    totals: FloatArray  # (families, n), mol/kg
    molalities: FloatArray  # (ions, n), mol/kg
    pK: tuple[int, int] | None = None  # family and step whose pK moves by one; None: no constant


@dataclass(frozen=True, slots=True, kw_only=True)
class _Answer:
    """How molalities move with x = ln a(H+) and u = ln I."""

    charges: FloatArray  # species
    by_x: FloatArray  # (species, n)
    by_u: FloatArray  # (species, n)
    strength: FloatArray  # n, mol/kg


def pH_derivatives(
    mixture: Mixture,
    constants: Constants,
    model: ActivityModel,
    state: Equilibrium,
    changes: Sequence[Change],
    interactions: Sequence[Interaction] = (),
) -> list[FloatArray]:
    """Return the derivative of pH by each change.

    Shapes: mixture and constants n; state n; result one array n a change.
    Units: pH per unit of the change.
    Raises: nothing; NaN where the state is.
    Source: implicit differentiation of electroneutrality, ionic strength, mass action and the
        activity model, pair terms included.
    """
    forms = forms_at(mixture, constants, model, state.pH, state.ionic_strength, state.offsets)
    there = stacked(forms, mixture)
    answer = _answer(mixture, constants, model, state.ionic_strength, there)
    matrix = interaction_matrix(mixture, interactions) if model.uses_interactions else None
    moved = np.stack([_direct(mixture, forms.fractions, there, each) for each in changes], axis=1)
    if matrix is not None:
        moved = _with_pairs(answer, _by_offset(mixture, there), matrix, moved)
    return list(-_followed(answer, moved)[0] / LN10)


def _slices(mixture: Mixture) -> list[slice]:
    """Return where each family's forms stand on the species axis."""
    starts = np.cumsum([2, *(len(family.species) for family in mixture.families)])
    return [slice(a, b) for a, b in zip(starts[:-1].tolist(), starts[1:].tolist(), strict=True)]


def _answer(
    mixture: Mixture,
    constants: Constants,
    model: ActivityModel,
    strength: FloatArray,
    there: FloatArray,
) -> _Answer:
    count = len(there)
    charges = np.zeros(count)
    charges[:2] = 1.0, -1.0
    by_x, by_g = np.zeros_like(there), np.zeros_like(there)
    by_x[0], by_x[1] = there[0], -there[1]
    by_g[:2] = there[:2]
    for family, span in zip(mixture.families, _slices(mixture), strict=True):
        own = there[span]
        total = own.sum(axis=0) + 1e-300
        lost = np.arange(len(own), dtype=float)[:, np.newaxis]
        charges[span] = family.charge - lost[:, 0]
        squares = (family.charge - lost) ** 2
        by_x[span] = -(lost - (lost * own).sum(axis=0) / total) * own
        by_g[span] = (squares - (squares * own).sum(axis=0) / total) * own
    charges[count - len(mixture.ions) :] = [ion.charge for ion in mixture.ions]
    _, slope = model.long_range(constants.debye_huckel, strength)
    by_u = LN10 * slope * by_g
    return _Answer(charges=charges, by_x=by_x, by_u=by_u, strength=strength)


def _by_offset(mixture: Mixture, there: FloatArray) -> FloatArray:
    """Return how molalities (first axis) move with the log10 γ of each species (second axis)."""
    count, size = there.shape
    result = np.zeros((count, count, size))
    for span in _slices(mixture):
        own = there[span]
        result[span, span] = (
            LN10 * own[:, np.newaxis] * own[np.newaxis] / (own.sum(axis=0) + 1e-300)
        )
    for row in range(count - len(mixture.ions)):
        result[row, row] -= LN10 * there[row]
    return result


def _direct(
    mixture: Mixture, shares: Sequence[FloatArray], there: FloatArray, change: Change
) -> FloatArray:
    """Return how molalities move at the same pH, ionic strength and activity coefficients."""
    moved = np.zeros_like(there)
    for at, span in enumerate(_slices(mixture)):
        moved[span] = shares[at] * change.totals[at]
        if change.pK is not None and change.pK[0] == at:
            after = (np.arange(len(shares[at])) > change.pK[1]).astype(float)[:, np.newaxis]
            moved[span] -= LN10 * there[span] * (after - (after * shares[at]).sum(axis=0))
    moved[len(there) - len(mixture.ions) :] = change.molalities
    return moved


def _followed(answer: _Answer, moved: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return dx and du that balance charge and strength again; moved (species, …, n)."""
    z, z_squared = answer.charges, answer.charges**2

    def total(weights: FloatArray, values: FloatArray) -> FloatArray:
        result: FloatArray = np.tensordot(weights, values, axes=1)
        return result

    charge, squares = total(z, moved), total(z_squared, moved)
    own = 2.0 * answer.strength - total(z_squared, answer.by_u)
    along = total(z, answer.by_u) / own
    slope = total(z, answer.by_x) + along * total(z_squared, answer.by_x)
    dx = -(charge + along * squares) / slope
    du = (total(z_squared, answer.by_x) * dx + squares) / own
    return dx, du


def _with_pairs(
    answer: _Answer, by_offset: FloatArray, matrix: FloatArray, moved: FloatArray
) -> FloatArray:
    """Return the movements once the pair terms, which move with them, are counted too.

    Movements are (species, changes, n).
    """
    # Everything that follows a shift of log10 γ, one shift a column.
    total = by_offset + _following(answer, by_offset)
    feedback = np.moveaxis(np.tensordot(matrix, total, axes=1), -1, 0)
    first = np.tensordot(matrix, moved + _following(answer, moved), axes=1)
    shift = np.linalg.solve(np.eye(len(matrix)) - feedback, np.moveaxis(first, -1, 0))
    result: FloatArray = moved + np.einsum("abn,nbc->acn", by_offset, shift)
    return result


def _following(answer: _Answer, moved: FloatArray) -> FloatArray:
    """Return how molalities move with the pH and the ionic strength that follow a movement."""
    dx, du = _followed(answer, moved)
    result: FloatArray = answer.by_x[:, np.newaxis] * dx + answer.by_u[:, np.newaxis] * du
    return result
