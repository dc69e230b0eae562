"""The words of a make-up: in which order, set at what pH, by which way; the page has its twin."""

from collections.abc import Sequence
from typing import Final

from bufferfolio.formatting import celsius, fixed, plain
from bufferfolio.recipes import Recipe
from bufferfolio.weighing import ACTIONS, USUAL_TOLERANCE, Adjustment, order_of


def order_words(recipe: Recipe) -> tuple[tuple[str, str], ...]:
    """Return the steps of making a batch: a reagent's label ("" for water), and what to do."""
    steps = []
    for at, action in order_of(recipe):
        words = ACTIONS[action]
        if at < 0:
            steps.append(("", words))
        else:
            steps.append((recipe.parts[at].label, words[0].lower() + words[1:]))
    return tuple(steps)


def adjustment_words(
    advice: Adjustment, tolerance: float | None, *, can_be_set: bool
) -> tuple[str, ...]:
    """Return what the drift with temperature means for setting a batch, a sentence or two each.

    `tolerance` as the formulation's file states it; `can_be_set`: whether it names a titrant.
    """
    made, used = (
        f"{celsius(kelvin)}{FIRM}°C"
        for kelvin in (advice.temperature, advice.reference_temperature)
    )
    pH, aim = fixed(advice.pH, 2), fixed(advice.reference_pH, 2)
    verb = "set it to" if can_be_set else "it should read"
    if abs(advice.temperature - advice.reference_temperature) < SAME:
        return (f"At {used}, for which its pH is stated, {verb} pH {aim}.", _drift(advice.slope))
    wrong = fixed(advice.mistaken, 2)
    edge = (
        f"±{FIRM}{plain(USUAL_TOLERANCE)} (no tolerance is stated)"
        if tolerance is None
        else f"the tolerance of ±{FIRM}{plain(tolerance)}"
    )
    side = "outside" if advice.matters else "inside"
    lines = (
        f"At {made} {verb} pH {pH}: at {used} it then reads {aim}.",
        _drift(advice.slope),
        f"A batch that reads {aim} at {made} reads {wrong} at {used}, {side} {edge}.",
    )
    return (*lines, PATIENCE.format(used)) if advice.matters and can_be_set else lines


def _drift(slope: float) -> str:
    if abs(slope) < FLAT:
        return "Its pH hardly changes with temperature."
    way = "rises" if slope > 0.0 else "falls"
    return f"Its pH {way} by {fixed(abs(slope), 3)} for each °C that it is warmer."


def way_labels(recipes: Sequence[Recipe]) -> tuple[str, ...]:
    """Return what tells ways apart: the reagents that not all of them have."""
    shared = set.intersection(*({part.key for part in recipe.parts} for recipe in recipes))
    labels = []
    for recipe in recipes:
        own = [part.label for part in recipe.parts if part.key not in shared]
        labels.append(" + ".join(own or [part.label for part in recipe.parts]))
    return tuple(labels)


FIRM: Final = "\N{NO-BREAK SPACE}"
SAME: Final = 0.5  # K: closer temperatures are one
FLAT: Final = 5e-4  # 1/K: less is lost in rounding
PATIENCE: Final = "Let it come to {}, or set it to the value for the temperature that it has."
