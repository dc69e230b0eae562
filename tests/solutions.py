"""Families, mixtures and constants that tests make up for themselves, each number in sight."""

from collections.abc import Iterable, Sequence
from dataclasses import replace

import numpy as np

from bufferfolio.activity import ActivityModel
from bufferfolio.composition import Addition
from bufferfolio.definitions import (
    Citation,
    Family,
    Interval,
    Ion,
    ReferenceConstants,
    Source,
    Species,
    Step,
)
from bufferfolio.equilibrium import Equilibrium, solve
from bufferfolio.errors import Place
from bufferfolio.speciation import Mixture
from bufferfolio.temperature import Constants, constants_at

STANDARD = 298.15  # K
NOWHERE = Place("a test", 1, 1)
MADE_UP = Citation(
    source=Source(key="made-up", cite="made up for a test", doi=None, note=None),
    where="",
    how_known="computed",
)
SODIUM, CHLORIDE = Ion(name="Na+", charge=1), Ion(name="Cl-", charge=-1)
MAGNESIUM, SULFATE = Ion(name="Mg+2", charge=2), Ion(name="SO4-2", charge=-2)
POTASSIUM, CALCIUM = Ion(name="K+", charge=1), Ion(name="Ca+2", charge=2)


def made_up_step(
    pK: float, enthalpy: float = 0.0, heat_capacity: float = 0.0, valid: Interval | None = None
) -> Step:
    """Return a step with these constants at 25 °C."""
    return Step(
        law=ReferenceConstants(
            pK=pK, temperature=STANDARD, enthalpy=enthalpy, heat_capacity=heat_capacity
        ),
        valid_temperature=valid or Interval(low=250.0, high=400.0),
        uncertainty=None,
        citation=MADE_UP,
        enthalpy_citation=None,
        alternative=None,
        place=NOWHERE,
    )


def made_up_family(
    key: str, charge: int, pK: Sequence[float], valid: Interval | None = None
) -> Family:
    """Return a family whose first form has this charge, the same at every temperature."""
    return Family(
        key=key,
        label=key,
        synonyms=(),
        species=tuple(
            Species(name=f"{key} {lost}", label=f"{key} {lost}", charge=charge - lost)
            for lost in range(len(pK) + 1)
        ),
        steps=tuple(made_up_step(value, valid=valid) for value in pK),
        note=None,
        place=NOWHERE,
    )


def mixture_of(
    families: Iterable[tuple[Family, object]] = (), ions: Iterable[tuple[Ion, object]] = ()
) -> Mixture:
    """Return a mixture from pairs of what is in it and how much: numbers, or arrays S."""
    families, ions = list(families), list(ions)
    shape = np.broadcast_shapes(*(np.shape(amount) for _, amount in [*families, *ions]))

    def rows(pairs: Sequence[tuple[object, object]]) -> np.ndarray:
        values = [np.broadcast_to(np.asarray(amount, dtype=float), shape) for _, amount in pairs]
        return np.array(values).reshape(len(pairs), *shape)

    return Mixture(
        families=tuple(family for family, _ in families),
        totals=rows(families),
        ions=tuple(ion for ion, _ in ions),
        molalities=rows(ions),
    )


def constants_of(
    mixture: Mixture, temperature: object = STANDARD, pKw: float | None = None
) -> Constants:
    """Return a mixture's constants at one temperature or at one a point, with a pKw of choice."""
    shape = mixture.totals.shape[1:] if mixture.families else mixture.molalities.shape[1:]
    kelvin = np.broadcast_to(np.asarray(temperature, dtype=float), shape)
    constants = constants_at(mixture.families, kelvin)
    return constants if pKw is None else replace(constants, pKw=np.full(shape, pKw))


def pH_of(
    mixture: Mixture, model: ActivityModel, temperature: object = STANDARD, pKw: float | None = None
) -> np.ndarray:
    """Return the pH of a mixture."""
    return state_of(mixture, model, temperature, pKw).pH


def state_of(
    mixture: Mixture, model: ActivityModel, temperature: object = STANDARD, pKw: float | None = None
) -> Equilibrium:
    """Return the solved state of a mixture."""
    return solve(mixture, constants_of(mixture, temperature, pKw), model)


def strong_titrant(ion: Ion, molality: float | None = None) -> Addition:
    """Return a strong acid or base by its ion, without water or at a molality of its own."""
    water = 0.0 if molality is None else 1.0 / molality
    return Addition(
        families=(),
        per_family=(),
        ions=(ion,),
        per_ion=(1.0,),
        water=water,
        volume=None,
        mass=water + 0.04,
    )
