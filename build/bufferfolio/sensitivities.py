"""How the pH of a mixture answers to everything that decides it, by implicit differentiation.

At equilibrium the molalities m of all species follow from x = ln a(H+), u = ln I, the inputs, and,
with pair interactions, from themselves. Small changes obey

    dm + ln 10 · S E dm = m_x dx + m_u du + Σ m_p dp,    Σ z dm = 0,    Σ z² dm = 2 I du

where S = ∂m/∂ln(weight) is how a family shares itself out and E holds the pair coefficients. The
system is linear: solved once, it gives the pH by every input, pair terms included.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from bufferfolio.activity import ActivityModel
from bufferfolio.definitions import Interaction
from bufferfolio.equilibrium import Equilibrium
from bufferfolio.speciation import Forms, Mixture, forms_at, interaction_matrix, stacked
from bufferfolio.temperature import LN10, constant_slopes_at, constants_at
from bufferfolio.water import FloatArray


@dataclass(frozen=True, slots=True, kw_only=True)
class Sensitivities:
    """Derivatives of the pH of one mixture at its equilibrium."""

    pK: tuple[FloatArray, ...]  # by each pK, an array (steps,) a family
    pKw: float  # by pKw
    totals: FloatArray  # (families,), by each total, kg/mol
    ions: FloatArray  # (ions,), by the molality of each strong ion, kg/mol
    long_range: float  # by D, where log10 γ = −z² D + …
    temperature: float  # by temperature, every constant moving along, 1/K


def sensitivities(
    mixture: Mixture,
    temperature: float,
    model: ActivityModel,
    state: Equilibrium,
    interactions: Sequence[Interaction] = (),
) -> Sensitivities:
    """Return how the pH of a mixture answers to its constants, its contents and temperature.

    Shapes: mixture and state of one, S = (); results see `Sensitivities`.
    Units: temperature K; results see `Sensitivities`.
    Raises: nothing; all NaN where the state is no solution.
    Source: implicit differentiation of mass action, electroneutrality and ionic strength.
    """
    kelvin = np.array(temperature)
    constants = constants_at(mixture.families, kelvin)
    term, slope = model.long_range(constants.debye_huckel, state.ionic_strength)
    forms = forms_at(mixture, constants, model, state.pH, state.ionic_strength, state.offsets)
    matrix = interaction_matrix(mixture, interactions) if model.uses_interactions else None
    by = _pH_by(mixture, forms, float(state.ionic_strength), float(slope), matrix)
    steps = [len(family.steps) for family in mixture.families]
    ends = np.cumsum([*steps, 2, len(mixture.families), len(mixture.ions)])
    *pK, of_water, totals, ions = np.split(by, ends[:-1])
    moving = constant_slopes_at(mixture.families, kelvin)
    term_slope = term * moving.debye_huckel / constants.debye_huckel
    drift = of_water[0] * moving.pKw + of_water[1] * term_slope
    for own, rising in zip(pK, moving.pK, strict=True):
        drift = drift + (own * rising).sum()
    return Sensitivities(
        pK=tuple(pK),
        pKw=float(of_water[0]),
        totals=totals,
        ions=ions,
        long_range=float(of_water[1]),
        temperature=float(drift),
    )


def _pH_by(
    mixture: Mixture, forms: Forms, strength: float, slope: float, matrix: FloatArray | None
) -> FloatArray:
    """Return the derivatives of pH, by each pK, pKw, D, each total and each ion in turn."""
    charge, lost = _charges(mixture)
    sharing = _sharing(mixture, forms)
    spread = LN10 * sharing @ charge**2  # of the molalities, by D
    columns = np.column_stack(
        [-sharing @ lost, slope * spread, _inputs(mixture, forms, sharing, spread)]
    )
    if matrix is not None:
        coupled = np.eye(len(charge)) + LN10 * sharing @ matrix
        columns = np.asarray(np.linalg.solve(coupled, columns), dtype=float)
    net, squares = charge @ columns, charge**2 @ columns
    squares[1] -= 2.0 * strength
    determinant = net[0] * squares[1] - net[1] * squares[0]
    by_x = (net[2:] * squares[1] - squares[2:] * net[1]) / determinant
    result: FloatArray = by_x / LN10
    return result


def _charges(mixture: Mixture) -> tuple[FloatArray, FloatArray]:
    """Return each species' charge, and how many protons its weight says it has lost."""
    charge, lost = [1.0, -1.0], [-1.0, 1.0]
    for family in mixture.families:
        charge += [float(form.charge) for form in family.species]
        lost += [float(number) for number in range(len(family.species))]
    charge += [float(ion.charge) for ion in mixture.ions]
    lost += [0.0] * len(mixture.ions)
    return np.array(charge), np.array(lost)


def _sharing(mixture: Mixture, forms: Forms) -> FloatArray:
    """Return the derivatives of every molality by the logarithm of every weight."""
    there = stacked(forms, mixture)
    sharing = np.zeros((len(there), len(there)))
    sharing[0, 0], sharing[1, 1] = there[0], there[1]
    start = 2
    for total, own in zip(mixture.totals, forms.fractions, strict=True):
        # Off the diagonal −t α α', and each row adds up to nothing: no small difference is taken.
        block = -total * np.outer(own, own)
        np.fill_diagonal(block, 0.0)
        np.fill_diagonal(block, -block.sum(axis=1))
        stop = start + len(own)
        sharing[start:stop, start:stop] = block
        start = stop
    return sharing


def _inputs(mixture: Mixture, forms: Forms, sharing: FloatArray, spread: FloatArray) -> FloatArray:
    """Return the derivatives of every molality by each input at constant x and u."""
    size = len(sharing)
    columns: list[FloatArray] = []
    start = 2
    for family in mixture.families:
        stop = start + len(family.species)
        columns += [-LN10 * sharing[:, first:stop].sum(axis=1) for first in range(start + 1, stop)]
        start = stop
    columns += [-LN10 * sharing[:, 1], spread]
    start = 2
    for own in forms.fractions:
        column = np.zeros(size)
        column[start : start + len(own)] = own
        columns.append(column)
        start += len(own)
    columns += list(np.eye(size)[size - len(mixture.ions) :])
    return np.column_stack(columns)
