"""What a sheet asks before a titration of one's own: the titrants, and what a fit may change."""

from dataclasses import dataclass
from typing import Final

from bufferfolio.speciation import Mixture
from bufferfolio.subjects import Subject


@dataclass(frozen=True, slots=True, kw_only=True)
class Choice:
    """One line of a list to choose from."""

    value: str  # as it stands in the page's address
    label: str


@dataclass(frozen=True, slots=True, kw_only=True)
class TitrationForm:
    """The choices of a formulation, or why it has none."""

    missing: str  # what keeps it from being titrated; "" where nothing does
    titrants: tuple[Choice, ...]  # liquids; valued by their place among all titrants
    totals: tuple[Choice, ...]  # families that the recipe brings, by key
    steps: tuple[Choice, ...]  # of these, "phosphate:2", counted from one


def titration_form(subject: Subject) -> TitrationForm:
    """Return what a reader may choose for a titration of this formulation."""
    pairs = zip(subject.formulation.titrants, subject.additions, strict=True)
    titrants = tuple(
        Choice(value=str(at), label=f"{titrant.label} ({WAYS[titrant.direction]})")
        for at, (titrant, added) in enumerate(pairs)
        if added.volume is not None
    )
    present = [
        family
        for family, total in zip(subject.mixture.families, subject.mixture.totals, strict=True)
        if total > 0.0
    ]
    return TitrationForm(
        missing=_missing(subject.mixture, titrants),
        titrants=titrants,
        totals=tuple(Choice(value=family.key, label=family.label) for family in present),
        steps=tuple(
            Choice(
                value=f"{family.key}:{step + 1}",
                label=f"{family.species[step].label} → {family.species[step + 1].label}",
            )
            for family in present
            for step in range(len(family.steps))
        ),
    )


def _missing(mixture: Mixture, titrants: tuple[Choice, ...]) -> str:
    if not (mixture.totals > 0.0).any() and not (mixture.molalities > 0.0).any():
        return NOTHING_THERE
    return "" if titrants else NO_LIQUID


WAYS: Final = {"upward": "raises the pH", "downward": "lowers the pH"}
NOTHING_THERE: Final = (
    "The recipe brings no acid, base or salt into the water, so that a titration has nothing to "
    "tell of it."
)
NO_LIQUID: Final = (
    "The formulation names no liquid titrant. Name one under correct_with in its file, and the "
    "sheet takes measured points here."
)
