"""What open air makes of a solution: how much carbonate it holds once nothing moves any more."""

import math
from typing import Final

import numpy as np

from bufferfolio.equilibrium import Equilibrium
from bufferfolio.gases import carbon_dioxide_in_water
from bufferfolio.speciation import Mixture, forms_at
from bufferfolio.subjects import Subject, solved_at
from bufferfolio.temperature import constants_at

CARBONATE: Final = "carbonate"  # key of the family whose first form is dissolved carbon dioxide
MOST: Final = 20.0  # mol/kg; nothing takes up more
SETTLED: Final = 1e-13  # in ln of the total
ROUNDS: Final = 100


def carbonate_in_air(subject: Subject, mixture: Mixture, temperature: float) -> float:
    """Return the total of carbonate that a mixture holds in equilibrium with air.

    Shapes: mixture of one that lists the carbonate family; result scalar.
    Units: temperature K; result mol/kg.
    Raises: ValueError where the family is not listed.
    Source: Henry's law and electroneutrality; secant steps inside a bracket.
    """
    wanted = math.log(float(carbon_dioxide_in_water(np.array(temperature))))
    # Of a total, never more than all of it is carbon dioxide.
    low, high = wanted, math.log(MOST)
    below = _dissolved(subject, mixture, temperature, low) - wanted
    above = _dissolved(subject, mixture, temperature, high) - wanted
    at, last = low, high - low
    for _ in range(ROUNDS):
        target = low - below * (high - low) / (above - below)
        good = low < target < high and abs(target - at) < 0.5 * last
        following = target if good else 0.5 * (low + high)
        last, at = abs(following - at), following
        if last < SETTLED or high - low < SETTLED:
            break
        off = _dissolved(subject, mixture, temperature, at) - wanted
        if off < 0.0:
            low, below = at, off
        else:
            high, above = at, off
    return math.exp(at)


def with_carbonate(mixture: Mixture, total: float) -> Mixture:
    """Return a mixture of one with another total of carbonate (mol/kg)."""
    row = [family.key for family in mixture.families].index(CARBONATE)
    totals = mixture.totals.copy()
    totals[row] = total
    return Mixture(
        families=mixture.families,
        totals=totals,
        ions=mixture.ions,
        molalities=mixture.molalities,
    )


def _dissolved(subject: Subject, mixture: Mixture, temperature: float, ln_total: float) -> float:
    """Return ln of the molality of carbon dioxide where carbonate has a given total."""
    there = with_carbonate(mixture, math.exp(ln_total))
    row = [family.key for family in there.families].index(CARBONATE)
    state: Equilibrium = solved_at(subject, temperature, there)
    constants = constants_at(there.families, np.array(temperature))
    forms = forms_at(there, constants, subject.model, state.pH, state.ionic_strength, state.offsets)
    return math.log(float(forms.families[row][0]))
