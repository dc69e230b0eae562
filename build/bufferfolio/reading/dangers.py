"""Which reagents must not meet: what one gives off with acid, with base or with a family.

Acid and base are told by the charge that a reagent's strong ions and families carry at pH 7 and
25 °C: a surplus of negative charge is balanced by protons, so the reagent is an acid.
"""

import math
from collections.abc import Iterable, Mapping
from typing import Final, TypeAlias

from bufferfolio.definitions import Family, PublishedEquation, Reagent, Step

Dangers: TypeAlias = dict[str, tuple[str, str]]


def dangers(reagents: Iterable[Reagent], families: Mapping[str, Family]) -> Dangers:
    """Return each dangerous combination among reagents: which one gives it off, met by which."""
    shelf = {reagent.key: reagent for reagent in reagents}
    found: Dangers = {}
    for reagent in shelf.values():
        for danger in reagent.releases:
            partner = danger.rsplit(" with ", 1)[1]
            for other in shelf.values():
                if other.key != reagent.key and _is(partner, other, families):
                    found.setdefault(danger, (reagent.key, other.key))
    return found


def _is(partner: str, reagent: Reagent, families: Mapping[str, Family]) -> bool:
    if partner == "acid":
        return neutral_charge(reagent, families) < -THRESHOLD
    if partner == "base":
        return neutral_charge(reagent, families) > THRESHOLD
    return partner in reagent.families


def neutral_charge(reagent: Reagent, families: Mapping[str, Family]) -> float:
    """Return the charge that one mole of a reagent carries into neutral water at 25 °C."""
    charge = sum(amount * ion.charge for ion, amount in reagent.ions.items())
    for key, amount in reagent.families.items():
        charge += amount * _family_charge(families[key])
    return charge


def _family_charge(family: Family) -> float:
    # The weight of each form relative to the first, in powers of ten; steps lose one proton each.
    logs = [0.0]
    for step in family.steps:
        logs.append(logs[-1] + NEUTRAL - _pK(step))
    top = max(logs)
    weights = [10.0 ** (log - top) for log in logs]
    total = sum(weights)
    lost: float = sum(number * weight for number, weight in enumerate(weights)) / total
    return float(family.charge - lost)


def _pK(step: Step) -> float:
    law = step.law
    if isinstance(law, PublishedEquation):
        return (
            law.constant
            + law.inverse / ROOM
            + law.linear * ROOM
            + law.logarithm * math.log(ROOM)
            + law.inverse_square / ROOM**2
        )
    return law.pK


NEUTRAL: Final = 7.0
ROOM: Final = 298.15  # K
THRESHOLD: Final = 0.1  # mol of charge per mol of reagent, below which it counts as neutral
