"""What the library computes for the rows of one published table, in one way of taking activity."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import NDArray

from bufferfolio.activity import MODELS
from bufferfolio.buffering import buffer_capacity
from bufferfolio.definitions import Library
from bufferfolio.equilibrium import Equilibrium
from bufferfolio.evidence_batches import (
    WAYS,
    Batch,
    Way,
    batches,
    family_of,
    kilograms_a_litre,
)
from bufferfolio.published import PublishedTable, Quantity
from bufferfolio.speciation import Mixture, forms_at
from bufferfolio.temperature import constants_at
from bufferfolio.water import FloatArray, debye_huckel, density, permittivity, pKw_at

IntArray = NDArray[np.intp]


@dataclass(frozen=True, slots=True, kw_only=True)
class Predicted:
    """What was computed for each row."""

    value: FloatArray  # (rows,), in the unit of the published number
    pH: FloatArray  # (rows,); NaN where the row has none
    ionic_strength: FloatArray  # (rows,), mol/kg; NaN where it plays no part


def predicted(table: PublishedTable, library: Library, way: Way) -> Predicted:
    """Return what the library computes for every row of a table."""
    nothing = np.full(len(table.rows), np.nan)
    if table.quantity in OF_WATER:
        kelvin = np.array([row.temperature for row in table.rows])
        return Predicted(value=OF_WATER[table.quantity](kelvin), pH=nothing, ionic_strength=nothing)
    if table.quantity in OF_SHARE:
        pH = np.array([np.nan if row.pH is None else row.pH for row in table.rows])
        return Predicted(value=_shares(table, library, pH), pH=pH, ionic_strength=nothing)
    if table.quantity == "ion activity coefficient":
        return _of_ions(table, way)
    value, pH, strength = nothing.copy(), nothing.copy(), nothing.copy()
    for batch in batches(table, library, way):
        rows = list(batch.rows)
        state = batch.solved()
        value[rows] = OF_MIXTURE[table.quantity](batch, state)
        pH[rows], strength[rows] = state.pH, state.ionic_strength
    if table.quantity == "buffer value" and table.amounts == "mol/L":
        value = value * kilograms_a_litre(np.array([row.temperature for row in table.rows]))
    if table.quantity in ("pH", "pH after titrant"):
        pH = np.array([row.value for row in table.rows])
    elif table.quantity == "mean activity coefficient":
        pH = nothing
    return Predicted(value=value, pH=pH, ionic_strength=strength)


def _shares(table: PublishedTable, library: Library, pH: FloatArray) -> FloatArray:
    """Return each row's share, or what the table makes of it."""
    grouped: dict[tuple[str, tuple[float, ...]], list[int]] = {}
    for number, row in enumerate(table.rows):
        key = CARBONATE if row.form is None else row.form[0]
        grouped.setdefault((key, row.pK), []).append(number)
    value = np.full(len(table.rows), np.nan)
    for (key, _), numbers in grouped.items():
        family = family_of(key, table.rows[numbers[0]], library)
        kelvin = np.array([table.rows[number].temperature for number in numbers])
        mixture = Mixture(
            families=(family,),
            totals=np.ones((1, len(numbers))),
            ions=(),
            molalities=np.empty((0, len(numbers))),
        )
        forms = forms_at(
            mixture,
            constants_at((family,), kelvin),
            MODELS["ideal"],
            pH[numbers],
            np.zeros(len(numbers)),
        ).fractions[0]
        lost = [0 if (form := table.rows[number].form) is None else form[1] for number in numbers]
        value[numbers] = OF_SHARE[table.quantity](forms, np.array(lost))
    return value


def _of_ions(table: PublishedTable, way: Way) -> Predicted:
    charge = np.array([float(row.charge or 0) for row in table.rows])
    strength = np.array([row.ionic_strength or 0.0 for row in table.rows])
    kelvin = np.array([row.temperature for row in table.rows])
    term, _ = MODELS[WAYS[way].model].long_range(debye_huckel(kelvin), strength)
    return Predicted(
        value=10.0 ** (-(charge**2) * term),
        pH=np.full(len(table.rows), np.nan),
        ionic_strength=strength,
    )


def _mean_activity(batch: Batch, state: Equilibrium) -> FloatArray:
    """Return γ± of the one salt that each mixture holds, its acid wholly ionised."""
    mixture = batch.mixture
    charges = np.array(
        [1, -1]
        + [form.charge for family in mixture.families for form in family.species]
        + [ion.charge for ion in mixture.ions]
    )
    amounts = np.zeros((len(charges), len(batch.rows)))
    end = 2
    for family, total in zip(mixture.families, mixture.totals, strict=True):
        end += len(family.species)
        amounts[end - 1] = total
    amounts[end:] = mixture.molalities
    # What the salt lacks in charge came as hydrogen or hydroxide ion.
    net = (charges[:, None] * amounts).sum(axis=0)
    amounts[0], amounts[1] = np.maximum(-net, 0.0), np.maximum(net, 0.0)
    term, _ = batch.model.long_range(batch.constants.debye_huckel, state.ionic_strength)
    log_gamma = -np.multiply.outer(charges**2, term)
    if state.offsets is not None:
        log_gamma = log_gamma + state.offsets
    whole = (amounts * log_gamma).sum(axis=0) / amounts.sum(axis=0)
    result: FloatArray = 10.0**whole
    return result


def _buffer_value(batch: Batch, state: Equilibrium) -> FloatArray:
    return buffer_capacity(batch.mixture, batch.constants, batch.model, state)


def _pH(batch: Batch, state: Equilibrium) -> FloatArray:  # noqa: ARG001
    return state.pH


def _dilution_value(batch: Batch, state: Equilibrium) -> FloatArray:
    """Return the change of pH on adding as much water again."""
    result: FloatArray = batch.solved(dilution=2.0).pH - state.pH
    return result


def _temperature_coefficient(batch: Batch, state: Equilibrium) -> FloatArray:  # noqa: ARG001
    """Return the change of pH per kelvin, over the ten kelvin about the row's temperature."""
    result: FloatArray = (batch.solved(warmer=5.0).pH - batch.solved(warmer=-5.0).pH) / 10.0
    return result


def _share(forms: FloatArray, lost: IntArray) -> FloatArray:
    result: FloatArray = forms[lost, np.arange(len(lost))]
    return result


def _log_share(forms: FloatArray, lost: IntArray) -> FloatArray:
    result: FloatArray = -np.log10(_share(forms, lost))
    return result


def _percent(forms: FloatArray, lost: IntArray) -> FloatArray:
    return 100.0 * _share(forms, lost)


def _over_alkalinity(forms: FloatArray, lost: IntArray) -> FloatArray:  # noqa: ARG001
    """Return mg of carbon dioxide to mg of alkalinity as CaCO3, all of it hydrogen carbonate."""
    result: FloatArray = CO2_TO_ALKALINITY * forms[0] / forms[1]
    return result


THREE: Final[tuple[Way, ...]] = ("library", "no pairs", "davies")
NONE: Final[tuple[Way, ...]] = ("no activity",)

# In which ways each quantity is computed, the one that counts first.
WAYS_OF: Final[Mapping[Quantity, tuple[Way, ...]]] = {
    "pH": THREE,
    "pH after titrant": NONE,
    "buffer value": THREE,
    "dilution value": THREE,
    "temperature coefficient": THREE,
    "mean activity coefficient": THREE,
    "ion activity coefficient": ("no pairs", "davies"),
    "share": NONE,
    "percent": NONE,
    "-log10 share": NONE,
    "CO2 over alkalinity": NONE,
    "density": NONE,
    "permittivity": NONE,
    "Debye-Hückel coefficient": NONE,
    "pKw": NONE,
}

OF_MIXTURE: Final[Mapping[Quantity, Callable[[Batch, Equilibrium], FloatArray]]] = {
    "pH": _pH,
    "pH after titrant": _pH,
    "buffer value": _buffer_value,
    "dilution value": _dilution_value,
    "temperature coefficient": _temperature_coefficient,
    "mean activity coefficient": _mean_activity,
}

OF_SHARE: Final[Mapping[Quantity, Callable[[FloatArray, IntArray], FloatArray]]] = {
    "share": _share,
    "percent": _percent,
    "-log10 share": _log_share,
    "CO2 over alkalinity": _over_alkalinity,
}

OF_WATER: Final[Mapping[Quantity, Callable[[FloatArray], FloatArray]]] = {
    "density": density,
    "permittivity": permittivity,
    "Debye-Hückel coefficient": debye_huckel,
    "pKw": pKw_at,
}

CARBONATE: Final = "carbonate"
# Molar mass of CO2 over half that of CaCO3: common practice in water analysis.
CO2_TO_ALKALINITY: Final = 44.0095 / 50.0436
