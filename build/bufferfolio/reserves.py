"""How much acid or base a batch takes until the limit of its use."""

import math
from dataclasses import dataclass
from typing import Final, Literal

from bufferfolio.speciation import Mixture
from bufferfolio.subjects import Subject, solved_at
from bufferfolio.titration import amount_to_reach

Direction = Literal["downward", "upward"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Reserve:
    """How much of a titrant a batch takes until the limit of use, mol per kg of its water."""

    direction: Direction
    titrant: int  # position in the formulation's list
    right: float  # of a batch made by the recipe and at its target
    before: float  # from the reading
    after: float  # once the correction is done; NaN where it was refused


def reserves_of(
    subject: Subject, temperature: float, now: Mixture, after: Mixture | None = None
) -> tuple[Reserve, ...]:
    """Return the reserve on both sides: made rightly, as a batch is now, and after a correction."""
    found = []
    for direction in DIRECTIONS:
        positions = [
            position
            for position, titrant in enumerate(subject.formulation.titrants)
            if titrant.direction == direction
        ]
        if positions:
            there = (subject, temperature, positions[0])
            found.append(
                Reserve(
                    direction=direction,
                    titrant=positions[0],
                    right=to_limit(*there, subject.mixture),
                    before=to_limit(*there, now),
                    after=math.nan if after is None else to_limit(*there, after),
                )
            )
    return tuple(found)


def to_limit(subject: Subject, temperature: float, titrant: int, mixture: Mixture) -> float:
    """Return the amount until the limit of use: 0 beyond it, NaN if the batch doubles before."""
    upward = subject.formulation.titrants[titrant].direction == "upward"
    use = subject.formulation.use_pH
    pH = float(solved_at(subject, temperature, mixture).pH)
    if (pH >= use.high) if upward else (pH <= use.low):
        return 0.0
    added = subject.additions[titrant]
    limit = use.high if upward else use.low
    reached = amount_to_reach(
        mixture, added, limit, temperature, subject.model, subject.interactions
    )
    return reached if reached * added.water <= MOST_GROWTH else math.nan


MOST_GROWTH: Final = 1.0  # kg of the titrant's water per kg of the batch's
DIRECTIONS: Final[tuple[Direction, Direction]] = ("downward", "upward")
