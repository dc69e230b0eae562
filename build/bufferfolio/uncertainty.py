"""The band: the interval, k = 2, in which a careful reading is expected, and what makes it wide.

Each tolerance is carried to the pH by its analytic sensitivity; what comes of all of them is added
in squares. `tolerances` says where each number comes from.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final, Literal

import numpy as np

from bufferfolio.activity import ActivityModel, davies, ideal
from bufferfolio.composition import scaled
from bufferfolio.equilibrium import solve
from bufferfolio.recipes import Recipe, mixture_of, recipe_water, shares
from bufferfolio.sensitivities import Sensitivities, sensitivities
from bufferfolio.speciation import Mixture
from bufferfolio.subjects import Subject
from bufferfolio.temperature import constants_at
from bufferfolio.tolerances import ASSUMED, pK_doubt
from bufferfolio.water import FloatArray

Kind = Literal[
    "constant",
    "water",
    "activity",
    "weighing",
    "content",
    "make-up",
    "temperature",
    "meter",
    "model",
]


@dataclass(frozen=True, slots=True, kw_only=True)
class Contribution:
    """What one tolerance does to the expected reading."""

    kind: Kind
    name: str  # what it is a tolerance of, where the kind does not say
    step: int  # of a constant, counted from one; 0 elsewhere
    stated: bool  # by the file or the source; otherwise assumed
    effect: float  # in pH: what the whole tolerance, upwards, would do


@dataclass(frozen=True, slots=True, kw_only=True)
class Band:
    """The expected reading at one temperature, and how far a careful reading may be from it."""

    temperature: float  # K
    pH: float
    half_width: float  # k = 2
    contributions: tuple[Contribution, ...]  # in a fixed order; `ranked` sorts them

    @property
    def low(self) -> float:
        """The lower end."""
        return self.pH - self.half_width

    @property
    def high(self) -> float:
        """The upper end."""
        return self.pH + self.half_width

    @property
    def ranked(self) -> tuple[Contribution, ...]:
        """The contributions that can be seen in a pH, largest first."""
        seen = [item for item in self.contributions if abs(item.effect) >= VISIBLE]
        return tuple(sorted(seen, key=lambda item: -abs(item.effect)))


def band_of(
    subject: Subject, temperature: float, recipe: Recipe | None = None, dilution: float = 1.0
) -> Band:
    """Return the expected reading of a formulation, or of another recipe of it, with its band.

    Shapes: scalar.
    Units: temperature K; dilution is volume after over volume before.
    Raises: nothing; all NaN where there is no solution.
    Source: Guide to the expression of uncertainty in measurement (JCGM 100:2008), first order.
    """
    made = subject.recipe if recipe is None else recipe
    mixture = scaled(mixture_of(made, subject.mixture), np.array(1.0 / dilution))
    constants = constants_at(mixture.families, np.array(temperature))
    state = solve(mixture, constants, subject.model, subject.interactions)
    by = sensitivities(mixture, temperature, subject.model, state, subject.interactions)
    allowance = activity_doubt(
        subject.model, float(constants.debye_huckel), float(state.ionic_strength)
    )
    contributions = (
        *_of_constants(mixture, temperature, by),
        _plain("water", by.pKw * ASSUMED["pKw"].value),
        _plain("activity", by.long_range * allowance),
        *_of_recipe(subject, made, mixture, dilution, by),
        *_of_reading(subject, by),
        *_of_model(subject),
    )
    return Band(
        temperature=temperature,
        pH=float(state.pH),
        half_width=combined(contributions),
        contributions=contributions,
    )


def combined(contributions: Sequence[Contribution]) -> float:
    """Return the half width (k = 2, in pH) that independent contributions make together."""
    return math.sqrt(sum(item.effect * item.effect for item in contributions))


def activity_doubt(model: ActivityModel, coefficient: float, ionic_strength: float) -> float:
    """Return how far D of log10 γ = −z² D may be off, k = 2, growing with ionic strength.

    Shapes: scalar.
    Units: coefficient (kg/mol)^0.5; ionic_strength mol/kg; result dimensionless.
    Raises: nothing.
    Source: own choice, argued in `tolerances.ASSUMED`.
    """
    if model.long_range is ideal:
        left_out, _ = davies(np.array(coefficient), np.array(ionic_strength))
        return float(left_out)
    return ASSUMED["activity"].value * coefficient * ionic_strength


def _of_constants(mixture: Mixture, temperature: float, by: Sensitivities) -> list[Contribution]:
    return [
        Contribution(
            kind="constant",
            name=family.label,
            step=number + 1,
            stated=step.uncertainty is not None,
            effect=float(own[number]) * pK_doubt(step, temperature),
        )
        for family, total, own in zip(mixture.families, mixture.totals, by.pK, strict=True)
        if total > 0.0
        for number, step in enumerate(family.steps)
    ]


def _of_recipe(
    subject: Subject, recipe: Recipe, mixture: Mixture, dilution: float, by: Sensitivities
) -> list[Contribution]:
    """Return what weighing, contents and the measure of the water contribute."""
    care, water = subject.care, recipe_water(recipe)
    # By the logarithm of all the water; every molality falls as it rises.
    by_water = -_answer(by, mixture.totals, mixture.molalities)
    keys = [family.key for family in mixture.families]
    result = []
    for part in recipe.parts:
        per_family, per_ion = shares(part, keys, mixture.ions)
        in_water = part.amount / (water * dilution)
        by_amount = _answer(by, in_water * per_family, in_water * per_ion)
        if recipe.counted:
            by_amount += by_water * part.amount * part.added.water / water
        weighed = part.added.volume is None
        tolerance = care.weighing if weighed else care.volume
        stated = ("weighing" if weighed else "volume") in care.stated
        result += [
            _named("weighing", part.label, by_amount * tolerance, stated=stated),
            _named("content", part.label, by_amount * part.doubt, stated=False),
        ]
    measure = "weighing" if recipe.weighed else "volume"
    tolerance = care.weighing if recipe.weighed else care.volume
    share = recipe.water / water if recipe.counted else 1.0
    effect = by_water * share * tolerance
    result.append(_named("make-up", "", effect, stated=measure in care.stated))
    return result


def _answer(by: Sensitivities, totals: FloatArray, ions: FloatArray) -> float:
    return float((by.totals * totals).sum() + (by.ions * ions).sum())


def _of_reading(subject: Subject, by: Sensitivities) -> list[Contribution]:
    care = subject.care
    return [
        _named(
            "temperature",
            "",
            by.temperature * care.temperature,
            stated="temperature" in care.stated,
        ),
        _named("meter", "", care.meter, stated="meter" in care.stated),
    ]


def _of_model(subject: Subject) -> list[Contribution]:
    """Return what the author knows to be left out, which no sensitivity can carry."""
    off = subject.care.model
    return [_named("model", "", off, stated=True)] if off > 0.0 else []


def _named(kind: Kind, name: str, effect: float, *, stated: bool) -> Contribution:
    return Contribution(kind=kind, name=name, step=0, stated=stated, effect=effect)


def _plain(kind: Kind, effect: float) -> Contribution:
    return _named(kind, "", effect, stated=False)


VISIBLE: Final = 5e-5  # in pH; what is smaller is not worth a line
