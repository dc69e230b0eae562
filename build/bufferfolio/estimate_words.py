"""Where the textbook's estimate of a pH comes from, and what it leaves out."""

import math
from dataclasses import dataclass, replace
from typing import Final

import numpy as np

from bufferfolio.activity import MODELS
from bufferfolio.formatting import plain
from bufferfolio.sheets import Sheet
from bufferfolio.subjects import state_at
from bufferfolio.temperature import constants_at


@dataclass(frozen=True, slots=True, kw_only=True)
class EstimateWords:
    """Where the textbook's estimate comes from, and what it leaves out."""

    origin: str
    difference: float  # full answer minus estimate; NaN where there is none
    activity_part: float  # in pH; NaN where there is no estimate
    rest: float  # in pH; likewise


def estimate_words(sheet: Sheet) -> EstimateWords:
    """Return the origin, and the difference split: activity coefficients, and everything else."""
    subject, reference, estimate = sheet.subject, sheet.reference, sheet.estimate
    families = subject.mixture.families
    if estimate.kind == "none":
        return EstimateWords(
            origin=NO_PAIR, difference=math.nan, activity_part=math.nan, rest=math.nan
        )
    row = next(i for i, family in enumerate(families) if family.key == estimate.family)
    family = families[row]
    pK = constants_at(families, np.array(reference.temperature)).pK[row]
    acid, base = family.species[estimate.step].label, family.species[estimate.step + 1].label
    if estimate.kind == "pair":
        origin = (
            f"pK of {acid} → {base}, {float(pK[estimate.step]):.2f}, plus log₁₀ of the ratio "
            f"{base} : {acid} as the recipe has it, {plain(estimate.ratio, 3)}."
        )
    else:
        before = float(pK[estimate.step - 1])
        origin = (
            f"The recipe holds {acid} alone: half the sum of the pK before and after it, "
            f"{before:.2f} and {float(pK[estimate.step]):.2f}."
        )
    plainly = replace(subject, model=MODELS["ideal"], interactions=())
    ideal = state_at(plainly, reference.temperature).pH
    return EstimateWords(
        origin=origin,
        difference=reference.pH - estimate.pH,
        activity_part=reference.pH - ideal,
        rest=ideal - estimate.pH,
    )


NO_PAIR: Final = (
    "The recipe leaves no conjugate pair partly neutralised, so the textbook's formula says "
    "nothing about it."
)
