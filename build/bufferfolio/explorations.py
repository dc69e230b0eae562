"""Every analysis of a family on its own, as a record that an explorer shows."""

from dataclasses import dataclass
from typing import Final

import numpy as np

from bufferfolio.activity import MODELS, ActivityModel
from bufferfolio.buffering import Sweep, sweep
from bufferfolio.definitions import Family
from bufferfolio.speciation import Mixture
from bufferfolio.temperature import constants_at
from bufferfolio.water import ZERO_CELSIUS, FloatArray

STANDARD_TEMPERATURE: Final = 298.15  # K
SWEEP_POINTS: Final = 141  # pH 0 to 14 in tenths
EXPLORER_TOTAL: Final = 0.05  # mol/kg
EXPLORER_STRENGTH: Final = 0.1  # mol/kg


@dataclass(frozen=True, slots=True, kw_only=True)
class Exploration:
    """Everything that the page of a family shows."""

    family: Family
    temperature: float  # K
    total: float  # mol/kg
    ionic_strength: float  # mol/kg, held by an inert salt
    model: ActivityModel
    sweep: Sweep
    pK_temperature: FloatArray  # n, K
    pK: FloatArray  # (steps, n), NaN outside a step's range


def exploration_of(
    family: Family,
    temperature: float = STANDARD_TEMPERATURE,
    total: float = EXPLORER_TOTAL,
    ionic_strength: float = EXPLORER_STRENGTH,
) -> Exploration:
    """Return every analysis of a family on its own, an inert salt holding the ionic strength."""
    pH = np.linspace(0.0, 14.0, SWEEP_POINTS)
    ones = np.ones(SWEEP_POINTS)
    alone = Mixture(
        families=(family,),
        totals=np.array([total * ones]),
        ions=(),
        molalities=np.empty((0, SWEEP_POINTS)),
    )
    constants = constants_at(alone.families, temperature * ones)
    model = MODELS["davies"]
    axis = np.linspace(ZERO_CELSIUS, ZERO_CELSIUS + 60.0, 61)
    pK = np.array([constants_at((family,), axis).pK[0]]).reshape(-1, axis.size)
    for row, step in enumerate(family.steps):
        valid = step.valid_temperature
        pK[row, (axis < valid.low - 1e-3) | (axis > valid.high + 1e-3)] = np.nan
    return Exploration(
        family=family,
        temperature=temperature,
        total=total,
        ionic_strength=ionic_strength,
        model=model,
        sweep=sweep(alone, constants, model, pH, ionic_strength=ionic_strength * ones),
        pK_temperature=axis,
        pK=pK,
    )
