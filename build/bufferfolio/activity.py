"""Activity coefficients: how far an ion departs from its molality.

Every model has the form log10 γ = −z² D(I) + Σ ε m: a long-range term that depends on the ionic
strength alone, and, for the specific-ion model, pair interactions with the ions of other sign.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Final

import numpy as np

from bufferfolio.definitions import ModelName
from bufferfolio.water import FloatArray

# D and its derivative by the natural logarithm of ionic strength, from A and ionic strength.
LongRange = Callable[[FloatArray, FloatArray], tuple[FloatArray, FloatArray]]


@dataclass(frozen=True, slots=True, kw_only=True)
class ActivityModel:
    """One way to reckon activity coefficients, and how far it may be trusted."""

    label: str
    long_range: LongRange
    uses_interactions: bool
    trusted_to: float  # mol/kg, ionic strength
    source: str


def ideal(coefficient: FloatArray, ionic_strength: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the long-range term of an ideal solution, which is none.

    Shapes: coefficient S; ionic_strength S; results S.
    Units: coefficient (kg/mol)^0.5; ionic_strength mol/kg; results dimensionless.
    Raises: nothing.
    Source: definition.
    """
    nothing = np.zeros(np.broadcast_shapes(np.shape(coefficient), np.shape(ionic_strength)))
    return nothing, nothing


def davies(coefficient: FloatArray, ionic_strength: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the long-range term of the Davies equation and its slope by ln I.

    Shapes: coefficient S; ionic_strength S; results S.
    Units: coefficient (kg/mol)^0.5; ionic_strength mol/kg; results dimensionless.
    Raises: nothing.
    Source: Davies, Ion Association (1962) p. 41, with the later factor 0.3.
    """
    root = np.sqrt(ionic_strength)
    whole, rise = 1.0 + root, 0.3 * ionic_strength
    share = root / whole
    term = coefficient * (share - rise)
    slope = coefficient * (0.5 * share / whole - rise)
    return term, slope


def specific_ion(
    coefficient: FloatArray, ionic_strength: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return the long-range term of specific ion interaction theory and its slope by ln I.

    Shapes: coefficient S; ionic_strength S; results S.
    Units: coefficient (kg/mol)^0.5; ionic_strength mol/kg; results dimensionless.
    Raises: nothing.
    Source: Ciavatta, Ann. Chim. (Rome) 70 (1980) 551; with ε = 0 it is the Bates–Guggenheim
        convention of pH standards.
    """
    root = 1.5 * np.sqrt(ionic_strength)
    share = root / (1.0 + root)
    term = coefficient / 1.5 * share
    slope = 0.5 * term / (1.0 + root)
    return term, slope


def name_of(model: ActivityModel) -> ModelName:
    """Return the name by which files and pages call a model."""
    return next(name for name, known in MODELS.items() if known is model)


def for_ionic_strength(ionic_strength: float) -> ModelName:
    """Return the model for a solution whose file names none: the simplest that is trusted there.

    Shapes: scalar.
    Units: mol/kg; NaN where no ionic strength was found.
    Raises: nothing.
    Source: the project's own rule, see DEVELOPERS.md.
    """
    return "davies" if ionic_strength <= MODELS["davies"].trusted_to else "specific-ion"


MODELS: Final[Mapping[ModelName, ActivityModel]] = {
    "ideal": ActivityModel(
        label="ideal solution",
        long_range=ideal,
        uses_interactions=False,
        # Common practice, no source: below this, activity moves a pH by less than about 0.02.
        trusted_to=0.001,
        source="definition",
    ),
    "davies": ActivityModel(
        label="Davies equation",
        long_range=davies,
        uses_interactions=False,
        trusted_to=0.5,
        source="Davies, Ion Association (1962)",
    ),
    "specific-ion": ActivityModel(
        label="specific ion interaction",
        long_range=specific_ion,
        uses_interactions=True,
        trusted_to=3.5,
        source="Ciavatta, Ann. Chim. (Rome) 70 (1980) 551",
    ),
}
