"""What a reading says: about the meter that showed it, and about the batch it was taken of."""

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Final

import numpy as np

from bufferfolio.buffering import sweep
from bufferfolio.composition import scaled
from bufferfolio.definitions import Ion
from bufferfolio.recipes import Recipe, mixture_of
from bufferfolio.speciation import Mixture
from bufferfolio.subjects import Subject, reference_temperature, solved_at
from bufferfolio.temperature import constants_at


@dataclass(frozen=True, slots=True, kw_only=True)
class Measured:
    """A batch as a reading tells it: the recipe, with strong acid or base of unknown origin."""

    mixture: Mixture  # of one kg of its water, the unknown acid or base as two more ions
    excess: float  # mol/kg of strong base; negative: of strong acid


def shown(pH: float, temperature: float, compensation: float | None) -> float:
    """Return what a meter shows for a pH, its slope being set for the temperature `compensation`.

    Shapes: scalar.
    Units: temperature and compensation K; None: the meter follows the temperature of the sample.
    Raises: nothing.
    Source: Nernst slope R T ln 10 / F; common electrodes are zero at pH 7.
    """
    if compensation is None:
        return pH
    return ISOPOTENTIAL + (pH - ISOPOTENTIAL) * temperature / compensation


def meant(reading: float, temperature: float, compensation: float | None) -> float:
    """Return the pH that a reading stands for, undoing `shown`.

    Shapes: scalar.
    Units: temperature and compensation K; None: the meter follows the temperature of the sample.
    Raises: nothing.
    Source: as `shown`.
    """
    if compensation is None:
        return reading
    return ISOPOTENTIAL + (reading - ISOPOTENTIAL) * compensation / temperature


def expected_pH(subject: Subject, temperature: float) -> float:
    """Return the computed pH of a formulation at one temperature.

    Shapes: scalar.
    Units: temperature K.
    Raises: nothing; NaN where there is no solution.
    Source: `equilibrium.solve`.
    """
    return float(solved_at(subject, temperature).pH)


def target_at(subject: Subject, temperature: float) -> float:
    """Return the pH that a batch should have at one temperature.

    It is what the chemist stated, carried from the temperature stated by the computed drift; and
    the computed pH where nothing is stated.

    Shapes: scalar.
    Units: temperature K.
    Raises: nothing; NaN where there is no solution.
    Source: own choice.
    """
    computed = expected_pH(subject, temperature)
    expected = subject.formulation.expected
    if expected is None:
        return computed
    return computed + expected.pH - expected_pH(subject, reference_temperature(subject.formulation))


def refusal_of(subject: Subject, temperature: float, reading: float) -> str:
    """Return why a reading cannot be judged, a key of `REFUSALS`; "" where it can."""
    if not LOWEST <= reading <= HIGHEST:
        return "reading"
    use = subject.formulation.use_temperature
    # A thousandth of a kelvin: a limit typed in other units must not fall outside.
    if not use.low - 1e-3 <= temperature <= use.high + 1e-3:
        return "temperature"
    return ""


def measured(
    subject: Subject,
    temperature: float,
    pH: float,
    dilution: float = 1.0,
    recipe: Recipe | None = None,
) -> Measured:
    """Return the batch that a pH belongs to: the recipe, and strong acid or base that explains it.

    Shapes: scalar.
    Units: temperature K; dilution is volume now over volume by the recipe.
    Raises: nothing; the excess is NaN where the equations have no solution.
    Source: electroneutrality; at a given pH the excess is explicit.
    """
    made = subject.recipe if recipe is None else recipe
    thinned = scaled(mixture_of(made, subject.mixture), np.array(1.0 / dilution))
    constants = constants_at(thinned.families, np.array(temperature))
    found = sweep(thinned, constants, subject.model, np.array(pH), subject.interactions)
    excess = float(found.base)
    return Measured(mixture=with_excess(thinned, excess), excess=excess)


def with_excess(mixture: Mixture, excess: float) -> Mixture:
    """Return a mixture with strong base (negative: strong acid), mol/kg, whose ion is nameless."""
    present = 0.0 if math.isnan(excess) else excess
    return Mixture(
        families=mixture.families,
        totals=mixture.totals,
        ions=(*mixture.ions, STRONG_BASE, STRONG_ACID),
        molalities=np.array([*mixture.molalities, max(present, 0.0), max(-present, 0.0)]),
    )


ISOPOTENTIAL: Final = 7.0  # pH at which an electrode's signal does not depend on temperature
LOWEST: Final = 0.0  # readings that a meter can show
HIGHEST: Final = 14.0
STRONG_BASE: Final = Ion(name="strong base", charge=1)  # without pair terms, as in `sweep`
STRONG_ACID: Final = Ion(name="strong acid", charge=-1)
REFUSALS: Final[Mapping[str, str]] = {
    "reading": "A pH outside 0 to 14 is no reading of this solution. "
    "Check the electrode and its cable, and calibrate the meter.",
    "temperature": "This temperature lies outside the range of use of the formulation. "
    "Bring the sample into the range and read it again.",
}
