"""How to bring a batch back: from a reading and a volume to portions of a titrant, or a refusal."""

import math
from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Final

import numpy as np

from bufferfolio.buffering import sweep
from bufferfolio.composition import Addition, mixed, scaled
from bufferfolio.measurements import Measured, measured, refusal_of, target_at
from bufferfolio.recipes import Recipe, nature_of
from bufferfolio.reserves import MOST_GROWTH, Reserve, reserves_of
from bufferfolio.subjects import Subject, solved_at
from bufferfolio.temperature import constants_at
from bufferfolio.titration import amount_to_reach
from bufferfolio.water import density


@dataclass(frozen=True, slots=True, kw_only=True)
class Batch:
    """What stands in the tank, and what was read of it."""

    temperature: float  # K
    pH: float  # read, compensation seen to
    volume: float  # m3
    dilution: float = 1.0  # volume now over volume by the recipe, where a change is known
    recipe: Recipe | None = None  # as it was weighed; None: as the formulation says


@dataclass(frozen=True, slots=True, kw_only=True)
class Amount:
    """How much of a titrant to add."""

    moles: float
    volume: float | None  # m3; None for a solid
    mass: float  # kg


@dataclass(frozen=True, slots=True, kw_only=True)
class Correction:
    """What to add, in two steps, and what it leads to. NaN where it was refused."""

    refusal: str  # key of `REFUSALS` or of `measurements.REFUSALS`; "": not refused
    dangers: tuple[str, ...]  # gases that may come off, with what sets them free
    titrant: int  # position in the formulation's list; −1: none fits
    target: float  # pH
    excess: float  # mol/kg of strong base that the reading tells of; negative: of strong acid
    whole: Amount
    first: Amount
    rest: Amount
    pH_first: float  # to expect after the first portion
    pH_after: float
    ionic_strength: tuple[float, float]  # mol/kg, before and after
    growth: float  # of the volume, relative
    reserves: tuple[Reserve, ...]  # downward, upward


def corrected(
    subject: Subject,
    batch: Batch,
    target: float | None = None,
    titrant: int | None = None,
    share: float = 0.8,
) -> Correction:
    """Return what brings a batch to its target, or a refusal with a reason.

    The batch is taken to be what the recipe says, with the strong acid or base that explains the
    reading. `share` of the amount goes in first; what it should lead to is told.

    Shapes: scalar.
    Units: target pH, None: `target_at`; titrant a position in the formulation's list, None: the
        first that leads there.
    Raises: nothing.
    Source: `measurements.measured`, then `titration.amount_to_reach`.
    """
    aim = target_at(subject, batch.temperature) if target is None else target
    chosen = titrant_for(subject, batch.pH, aim) if titrant is None else titrant
    refusal = refusal_of(subject, batch.temperature, batch.pH)
    if refusal:
        return _refused(refusal, chosen, aim)
    found = measured(subject, batch.temperature, batch.pH, batch.dilution, batch.recipe)
    dangers = dangers_of(subject, chosen)
    refusal = _refusal(subject, batch, aim, chosen, found, dangers)
    if refusal:
        reserves = reserves_of(subject, batch.temperature, found.mixture)
        return replace(
            _refused(refusal, chosen, aim), dangers=dangers, excess=found.excess, reserves=reserves
        )
    return _planned(subject, batch, found, aim, chosen, dangers, share)


def _planned(
    subject: Subject,
    batch: Batch,
    found: Measured,
    aim: float,
    chosen: int,
    dangers: tuple[str, ...],
    share: float,
) -> Correction:
    added, kelvin = subject.additions[chosen], batch.temperature
    rest = (subject.model, subject.interactions)
    amount = amount_to_reach(found.mixture, added, aim, kelvin, *rest)
    water = batch.volume * float(density(np.array(kelvin)))
    whole = _amount(added, amount * water)
    refusal = _refusal_of_amount(added, amount, whole)
    end = mixed(found.mixture, added, np.array(0.0 if refusal else amount))
    reserves = reserves_of(subject, kelvin, found.mixture, None if refusal else end)
    told = replace(
        _refused(refusal, chosen, aim), dangers=dangers, excess=found.excess, reserves=reserves
    )
    if refusal:
        return told
    before = solved_at(subject, kelvin, found.mixture)
    halfway = solved_at(subject, kelvin, mixed(found.mixture, added, np.array(share * amount)))
    after = solved_at(subject, kelvin, end)
    return replace(
        told,
        whole=whole,
        first=_amount(added, share * amount * water),
        rest=_amount(added, (1.0 - share) * amount * water),
        pH_first=float(halfway.pH),
        pH_after=float(after.pH),
        ionic_strength=(float(before.ionic_strength), float(after.ionic_strength)),
        growth=(whole.volume or 0.0) / batch.volume,
    )


def titrant_for(subject: Subject, pH: float, target: float) -> int:
    """Return the position of the first titrant that leads from a pH to a target; −1: none does."""
    wanted = "upward" if target > pH else "downward"
    for position, titrant in enumerate(subject.formulation.titrants):
        if titrant.direction == wanted:
            return position
    return -1


def dangers_of(subject: Subject, titrant: int) -> tuple[str, ...]:
    """Return the gases that may come off when a titrant meets a batch, with what frees them."""
    if titrant < 0:
        return ()
    reagent = subject.formulation.titrants[titrant].reagent
    families = {family.key: family for family in subject.mixture.families}
    comes = {nature_of(reagent, families), *reagent.families}
    found = []
    for part in subject.recipe.parts:
        if part.key != reagent.key:
            meets = {part.nature, *(family.key for family in part.added.families)}
            found += [danger for danger in part.releases if _partner(danger) in comes]
            found += [danger for danger in reagent.releases if _partner(danger) in meets]
    return tuple(dict.fromkeys(found))


def _partner(danger: str) -> str:
    return danger.rsplit(" with ", 1)[1]


def _refusal(
    subject: Subject,
    batch: Batch,
    aim: float,
    chosen: int,
    found: Measured,
    dangers: tuple[str, ...],
) -> str:
    use = subject.formulation.use_pH
    if not abs(found.excess) <= MOST_EXCESS:
        return "impossible"
    if not use.holds(aim):
        return "target"
    if abs(aim - batch.pH) < NOTHING_TO_DO:
        return "reached"
    if subject.formulation.never_corrected:
        return "forbidden"
    if chosen < 0:
        return "no titrant"
    if (subject.formulation.titrants[chosen].direction == "upward") != (aim > batch.pH):
        return "direction"
    if any(danger not in subject.formulation.accepted_dangers for danger in dangers):
        return "dangers"
    if not use.holds(batch.pH):
        return "reserve"
    if _best_capacity(subject, batch.temperature, found, aim) < LEAST_CAPACITY:
        return "dilute"
    return ""


def _best_capacity(subject: Subject, temperature: float, found: Measured, aim: float) -> float:
    """Return the larger of the buffer capacities where a correction begins and where it ends."""
    constants = constants_at(found.mixture.families, np.full(2, temperature))
    pH = np.array([float(solved_at(subject, temperature, found.mixture).pH), aim])
    both = scaled(found.mixture, np.ones(2))
    return float(sweep(both, constants, subject.model, pH, subject.interactions).capacity.max())


def _refusal_of_amount(added: Addition, amount: float, whole: Amount) -> str:
    if math.isnan(amount):
        return "never"
    if amount * added.water > MOST_GROWTH:
        return "doubles"
    if whole.mass < LEAST_MASS or (whole.volume is not None and whole.volume < LEAST_VOLUME):
        return "little"
    return ""


def _amount(added: Addition, moles: float) -> Amount:
    volume = None if added.volume is None else moles * added.volume
    return Amount(moles=moles, volume=volume, mass=moles * added.mass)


def _refused(refusal: str, titrant: int, target: float) -> Correction:
    nothing = Amount(moles=math.nan, volume=None, mass=math.nan)
    return Correction(
        refusal=refusal,
        dangers=(),
        titrant=titrant,
        target=target,
        excess=math.nan,
        whole=nothing,
        first=nothing,
        rest=nothing,
        pH_first=math.nan,
        pH_after=math.nan,
        ionic_strength=(math.nan, math.nan),
        growth=math.nan,
        reserves=(),
    )


MOST_EXCESS: Final = 0.5  # mol/kg of strange acid or base; beyond it the batch is not this one
NOTHING_TO_DO: Final = 0.005  # in pH: a display of hundredths shows the target
LEAST_CAPACITY: Final = 5e-5  # mol/kg per pH; a few times what carbon dioxide of the air brings
LEAST_VOLUME: Final = 1e-9  # m3, a microlitre
LEAST_MASS: Final = 1e-6  # kg, a milligram

REFUSALS: Final[Mapping[str, str]] = {
    "impossible": "No reading of this solution: it would have to hold so much acid or base that it "
    "would be another one. Check the electrode, and that it stands in the right batch.",
    "target": "The target lies outside the limits of use.",
    "reached": "The batch is at its target. Nothing is to be added.",
    "forbidden": "Its author says that a batch is never corrected: one that is outside its "
    "tolerance is thrown away. Make it anew.",
    "no titrant": "The formulation names no reagent that moves the pH in this direction.",
    "direction": "This reagent moves the pH away from the target. Choose another one.",
    "dangers": "This reagent may set a toxic gas free from the batch. Do not add it.",
    "reserve": "The reading lies outside the limits of use. Check the meter first. If the reading "
    "stands, the batch has taken up more than its reserve, and a correction would not give back "
    "what it has lost: make it anew.",
    "dilute": "The batch buffers so little that air and glass move it more than a correction can "
    "hold. Do not correct it.",
    "never": "No amount of this reagent brings the batch to the target.",
    "doubles": "The correction would more than double the volume. Use a stronger reagent, or make "
    "the batch anew.",
    "little": "So little is needed that it cannot be measured out. Dilute the reagent first, or "
    "leave the batch as it is.",
}
