"""The readings that a titration should give, and how each answers to what a fit may change."""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Final

import numpy as np

from bufferfolio.composition import mixed
from bufferfolio.curve_derivatives import Change, pH_derivatives
from bufferfolio.equilibrium import solve
from bufferfolio.experiments import Experiment, amounts, with_strength
from bufferfolio.fit_parameters import Free, Kind, row_of
from bufferfolio.speciation import Mixture
from bufferfolio.temperature import Constants, constants_at
from bufferfolio.water import FloatArray

ISOPOTENTIAL: Final = 7.0  # the pH at which a glass electrode's slope does not show


@dataclass(frozen=True, slots=True, kw_only=True)
class Modelled:
    """What the meter should say at each point."""

    reading: FloatArray  # n
    by_parameter: FloatArray  # (parameters, n)
    by_volume: FloatArray  # n, 1/m3


def modelled(
    experiment: Experiment, volume: FloatArray, free: Sequence[Free], parameters: FloatArray
) -> Modelled:
    """Return the readings at given parameters, with their derivatives.

    Shapes: volume n; parameters (parameters,); results see `Modelled`.
    Units: volume m3.
    Raises: ValueError for a family that the sample does not list.
    Source: `titration.titrate`; implicit differentiation (`curve_derivatives`). The electrode reads
        7 + slope (pH − 7) + offset.
    """
    values: dict[Kind, float] = {"strength": 1.0, "offset": 0.0, "slope": 1.0}
    values.update({each.kind: float(value) for each, value in zip(free, parameters, strict=True)})
    added = with_strength(experiment.added, values["strength"])
    amount = amounts(experiment, volume)
    there = mixed(_sample(experiment, free, parameters), added, amount)
    constants = _constants(experiment, free, parameters, volume.size)
    state = solve(there, constants, experiment.model, experiment.interactions)
    changes = [_by_volume(experiment, there, values["strength"], amount)]
    bound = [each for each in free if each.kind in ("strength", "total", "pK")]
    changes += [_change(experiment, there, each, amount) for each in bound]
    found = pH_derivatives(
        there, constants, experiment.model, state, changes, experiment.interactions
    )
    slope = values["slope"]
    rows: dict[str, FloatArray] = {"offset": np.ones(volume.size), "slope": state.pH - ISOPOTENTIAL}
    rows.update({each.key: slope * row for each, row in zip(bound, found[1:], strict=True)})
    return Modelled(
        reading=ISOPOTENTIAL + slope * (state.pH - ISOPOTENTIAL) + values["offset"],
        by_parameter=np.array([rows[each.key] for each in free]).reshape(len(free), volume.size),
        by_volume=slope * found[0],
    )


def _sample(experiment: Experiment, free: Sequence[Free], parameters: FloatArray) -> Mixture:
    totals = experiment.mixture.totals.copy()
    for each, value in zip(free, parameters, strict=True):
        if each.kind == "total":
            totals[row_of(experiment, each.family)] *= value
    return replace(experiment.mixture, totals=totals)


def _constants(
    experiment: Experiment, free: Sequence[Free], parameters: FloatArray, size: int
) -> Constants:
    kelvin = np.full(size, experiment.temperature)
    constants = constants_at(experiment.mixture.families, kelvin)
    for each, value in zip(free, parameters, strict=True):
        if each.kind == "pK":
            constants.pK[row_of(experiment, each.family)][each.step] = value
    return constants


def _nothing(mixture: Mixture) -> tuple[FloatArray, FloatArray]:
    return np.zeros_like(mixture.totals), np.zeros_like(mixture.molalities)


def _brought(experiment: Experiment, there: Mixture) -> tuple[FloatArray, FloatArray]:
    """Return what one mole of titrant brings into undiluted water."""
    totals, molalities = _nothing(there)
    added = experiment.added
    for family, share in zip(added.families, added.per_family, strict=True):
        totals[row_of(experiment, family.key)] += share
    for ion, share in zip(added.ions, added.per_ion, strict=True):
        molalities[there.ions.index(ion)] += share
    return totals, molalities


def _by_volume(
    experiment: Experiment, there: Mixture, strength: float, amount: FloatArray
) -> Change:
    """Return what one more cubic metre of titrant does."""
    totals, molalities = _brought(experiment, there)
    water = experiment.added.water
    per_volume = float(amounts(experiment, np.array(1.0))) / (1.0 + amount * water)
    return Change(
        totals=(strength * totals - water * there.totals) * per_volume,
        molalities=(strength * molalities - water * there.molalities) * per_volume,
    )


def _change(experiment: Experiment, there: Mixture, free: Free, amount: FloatArray) -> Change:
    dilution = 1.0 + amount * experiment.added.water
    if free.kind == "strength":
        totals, molalities = _brought(experiment, there)
        return Change(totals=totals * amount / dilution, molalities=molalities * amount / dilution)
    totals, molalities = _nothing(there)
    row = row_of(experiment, free.family)
    if free.kind == "pK":
        return Change(totals=totals, molalities=molalities, pK=(row, free.step))
    totals[row] = experiment.mixture.totals[row] / dilution
    return Change(totals=totals, molalities=molalities)
