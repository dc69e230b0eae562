"""From a recipe to what the balance shows, and back: as weighed, in which order, set at what pH."""

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Final

from bufferfolio.measurements import measured, target_at
from bufferfolio.recipes import Part, Recipe, measure_of
from bufferfolio.sensitivities import sensitivities
from bufferfolio.subjects import Subject, reference_temperature, solved_at


@dataclass(frozen=True, slots=True, kw_only=True)
class Weighing:
    """One part of a recipe on the balance, or in the cylinder."""

    part: Part
    wanted: float  # kg, or m3 of a liquid
    rounded: float  # to what can be read off
    error: float  # of rounding, relative


@dataclass(frozen=True, slots=True, kw_only=True)
class Adjustment:
    """What the drift with temperature means for setting the pH of a batch."""

    temperature: float  # K, at which it is made up
    slope: float  # 1/K, of the pH at the reference temperature
    pH: float  # to set at the temperature of making up
    reference_temperature: float  # K
    reference_pH: float  # that this leads to at the reference temperature
    mistaken: float  # pH there if the reference pH is set at the temperature of making up
    matters: bool  # whether that would be outside tolerance


def times(recipe: Recipe, factor: float) -> Recipe:
    """Return so many times as much of everything."""
    parts = tuple(replace(part, amount=factor * part.amount) for part in recipe.parts)
    return replace(recipe, parts=parts, water=factor * recipe.water)


def weighings(recipe: Recipe, mass_step: float, volume_step: float) -> tuple[Weighing, ...]:
    """Return what to weigh and measure, rounded to the steps of balance (kg) and cylinder (m3)."""
    found = []
    for part in recipe.parts:
        wanted = part.amount * measure_of(part)
        step = mass_step if part.added.volume is None else volume_step
        rounded = step * math.floor(wanted / step + 0.5)
        found.append(
            Weighing(part=part, wanted=wanted, rounded=rounded, error=rounded / wanted - 1.0)
        )
    return tuple(found)


def as_weighed(recipe: Recipe, measures: Mapping[int, float], water: float | None = None) -> Recipe:
    """Return the recipe that was really made.

    `measures` holds kg (m3 of a liquid) by the position of the part; what is not in it is as the
    recipe says. `water` is kg of water, or of what the volume counts as.
    """
    parts = [
        replace(part, amount=measures[at] / measure_of(part)) if at in measures else part
        for at, part in enumerate(recipe.parts)
    ]
    made = recipe.water if water is None else water
    return replace(recipe, parts=tuple(parts), water=made)


def order_of(recipe: Recipe) -> tuple[tuple[int, str], ...]:
    """Return the positions of a recipe's parts in the order of addition, each with its action.

    Position −1 stands for water; actions are keys of `ACTIONS`.
    """
    steps = [(-1, "all the water" if recipe.counted else "most of the water")]
    ranked = sorted(range(len(recipe.parts)), key=lambda at: (_rank(recipe.parts[at]), at))
    steps += [(at, ACTION_OF[_rank(recipe.parts[at])]) for at in ranked]
    if not recipe.counted:
        steps.append((-1, "fill up"))
    return (*steps, (-1, "set"))


def _rank(part: Part) -> int:
    if part.releases:
        return 2
    # Strong acids and bases, and whatever acid or base comes as a liquid: both heat the water.
    hot = not part.added.families or part.added.volume is not None
    return 1 if part.nature != "neutral" and hot else 0


def adjustment_of(subject: Subject) -> Adjustment:
    """Return at what pH to set a batch where it is made up, and what a mistake would cost.

    Shapes: scalar.
    Units: see `Adjustment`.
    Raises: nothing; NaN where there is no solution.
    Source: `measurements.target_at`, `measurements.measured`.
    """
    made_at = subject.formulation.make_up.temperature
    reference = reference_temperature(subject.formulation)
    aim = target_at(subject, reference)
    wrong = measured(subject, made_at, aim)
    mistaken = float(solved_at(subject, reference, wrong.mixture).pH)
    expected = subject.formulation.expected
    tolerance = USUAL_TOLERANCE if expected is None else expected.tolerance
    by = sensitivities(
        subject.mixture,
        reference,
        subject.model,
        solved_at(subject, reference),
        subject.interactions,
    )
    return Adjustment(
        temperature=made_at,
        slope=by.temperature,
        pH=target_at(subject, made_at),
        reference_temperature=reference,
        reference_pH=aim,
        mistaken=mistaken,
        matters=abs(mistaken - aim) > tolerance,
    )


USUAL_TOLERANCE: Final = 0.05  # in pH, where no tolerance is stated
ACTION_OF: Final[Sequence[str]] = ("dissolve", "slowly", "last")  # by rank
ACTIONS: Final[Mapping[str, str]] = {
    "all the water": "Measure out the water.",
    "most of the water": "Begin with about four fifths of the water.",
    "dissolve": "Add it with stirring, and wait until it is dissolved.",
    "slowly": "Add it slowly, with stirring; the solution may become warm.",
    "last": "Add it last, under ventilation: it may give off a toxic gas.",
    "fill up": "Let it come to the temperature of making up; fill up with water to the volume.",
    "set": "Let it come to the temperature of use; mix, read, and correct where it is needed.",
}
