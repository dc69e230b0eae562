"""How constants move with temperature."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import NDArray

from bufferfolio.definitions import Family, PublishedEquation, ReferenceConstants, Step
from bufferfolio.water import (
    FloatArray,
    debye_huckel,
    debye_huckel_and_slope,
    pKw_and_slope,
    pKw_at,
)

GAS_CONSTANT: Final = 8.314462618  # J/(mol K), CODATA 2018, exact
LN10: Final = float(np.log(10.0))

BoolArray = NDArray[np.bool_]


@dataclass(frozen=True, slots=True, kw_only=True)
class Constants:
    """The constants of water and of some families at given temperatures."""

    pK: tuple[FloatArray, ...]  # one array (steps, *S) a family
    pKw: FloatArray  # S
    debye_huckel: FloatArray  # S, (kg/mol)^0.5
    in_range: BoolArray  # S, whether every source vouches for its constant there


@dataclass(frozen=True, slots=True, kw_only=True)
class ConstantSlopes:
    """How the constants of water and of some families change with temperature."""

    pK: tuple[FloatArray, ...]  # one array (steps, *S) a family, 1/K
    pKw: FloatArray  # S, 1/K
    debye_huckel: FloatArray  # S, (kg/mol)^0.5/K


def pK_at(step: Step, temperature: FloatArray) -> FloatArray:
    """Return the pK of one ionisation step along a temperature axis.

    Shapes: temperature S; result S.
    Units: temperature K; result dimensionless, molal standard state.
    Raises: nothing; `constants_at` says where a temperature lies outside the source's range.
    Source: the step's own; with constant heat capacity, Clarke & Glew, Trans. Faraday Soc. 62
        (1966) 539.
    """
    if isinstance(step.law, PublishedEquation):
        return _from_equation(step.law, temperature)
    return _from_reference(step.law, temperature)


def _from_equation(law: PublishedEquation, temperature: FloatArray) -> FloatArray:
    result: FloatArray = (
        law.constant
        + law.inverse / temperature
        + law.linear * temperature
        + law.logarithm * np.log(temperature)
        + law.inverse_square / (temperature * temperature)
    )
    return result


def _from_reference(law: ReferenceConstants, temperature: FloatArray) -> FloatArray:
    tau = law.temperature / temperature
    enthalpy_term = (law.enthalpy or 0.0) / law.temperature * (1.0 - tau)
    heat_capacity_term = (law.heat_capacity or 0.0) * (tau - 1.0 - np.log(tau))
    result: FloatArray = law.pK - (enthalpy_term + heat_capacity_term) / (GAS_CONSTANT * LN10)
    return result


def constants_at(families: Sequence[Family], temperature: FloatArray) -> Constants:
    """Return every constant that a mixture of these families needs.

    Shapes: temperature S; result see `Constants`.
    Units: temperature K; results dimensionless but for A in (kg/mol)^0.5.
    Raises: nothing; temperatures outside a source's range are marked in `in_range`.
    Source: the steps' own, `water.pKw_at`, `water.debye_huckel`.
    """
    kelvin = np.asarray(temperature, dtype=float)
    in_range = np.ones(kelvin.shape, dtype=bool)
    for family in families:
        for step in family.steps:
            low, high = step.valid_temperature.low, step.valid_temperature.high
            # A thousandth of a kelvin: 0 °C typed in other units must not fall outside.
            in_range &= (kelvin > low - 1e-3) & (kelvin < high + 1e-3)
    pK = tuple(np.stack([pK_at(step, kelvin) for step in family.steps]) for family in families)
    return Constants(
        pK=pK, pKw=pKw_at(kelvin), debye_huckel=debye_huckel(kelvin), in_range=in_range
    )


def pK_slope(step: Step, temperature: FloatArray) -> FloatArray:
    """Return how the pK of one ionisation step changes with temperature.

    Shapes: temperature S; result S.
    Units: temperature K; result 1/K.
    Raises: nothing.
    Source: derivative of `pK_at`; with an enthalpy, van 't Hoff's equation.
    """
    law = step.law
    if isinstance(law, PublishedEquation):
        of_equation: FloatArray = (
            law.linear
            + (law.logarithm - (law.inverse + 2.0 * law.inverse_square / temperature) / temperature)
            / temperature
        )
        return of_equation
    away = temperature - law.temperature
    enthalpy = (law.enthalpy or 0.0) + (law.heat_capacity or 0.0) * away
    result: FloatArray = -enthalpy / (GAS_CONSTANT * LN10 * temperature * temperature)
    return result


def constant_slopes_at(families: Sequence[Family], temperature: FloatArray) -> ConstantSlopes:
    """Return how every constant that a mixture of these families needs changes with temperature.

    Shapes: temperature S; result see `ConstantSlopes`.
    Units: temperature K; results see `ConstantSlopes`.
    Raises: nothing.
    Source: derivatives of what `constants_at` returns.
    """
    kelvin = np.asarray(temperature, dtype=float)
    pK = tuple(
        np.array(
            [pK_slope(step, kelvin) + np.zeros(kelvin.shape) for step in family.steps]
        ).reshape(len(family.steps), *kelvin.shape)
        for family in families
    )
    return ConstantSlopes(
        pK=pK, pKw=pKw_and_slope(kelvin)[1], debye_huckel=debye_huckel_and_slope(kelvin)[1]
    )
