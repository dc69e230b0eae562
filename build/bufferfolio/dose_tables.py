"""Doses for many readings at once: the table that a printed card carries."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np

from bufferfolio.balance import prepare, sums, with_offsets
from bufferfolio.buffering import sweep
from bufferfolio.composition import Addition, mixed, scaled
from bufferfolio.dosing import NOTHING_TO_DO, Batch, corrected, dangers_of, titrant_for
from bufferfolio.equilibrium import Equilibrium, solve
from bufferfolio.measurements import STRONG_ACID, STRONG_BASE, target_at
from bufferfolio.reserves import MOST_GROWTH
from bufferfolio.speciation import Mixture
from bufferfolio.subjects import Subject
from bufferfolio.temperature import LN10, Constants, constants_at
from bufferfolio.water import FloatArray, density


@dataclass(frozen=True, slots=True, kw_only=True)
class DoseRow:
    """What a reading calls for, for each cubic metre of the batch."""

    pH: float  # read
    titrant: int  # position in the formulation's list; −1: none
    refusal: str  # key of `dosing.REFUSALS`; "": not refused, and what follows is no NaN
    moles: float  # per m3 of the batch
    volume: float  # m3 of titrant per m3 of the batch; NaN for a solid
    mass: float  # kg of titrant per m3 of the batch


def dose_rows(
    subject: Subject, temperature: float, readings: Sequence[float]
) -> tuple[DoseRow, ...]:
    """Return what each reading (pH) calls for at a temperature (K), as `dosing.corrected` says."""
    aim = target_at(subject, temperature)
    use = subject.formulation.use_pH
    rows: dict[float, DoseRow] = {}
    for titrant in range(len(subject.formulation.titrants)):
        own = [
            pH
            for pH in readings
            if use.holds(pH)
            and abs(aim - pH) >= NOTHING_TO_DO
            and titrant_for(subject, pH, aim) == titrant
        ]
        amounts = _amounts(subject, subject.additions[titrant], temperature, own, aim)
        for pH, amount in zip(own, amounts, strict=True):
            rows[pH] = _row(subject, temperature, pH, titrant, float(amount))
    return tuple(rows.get(pH) or _asked(subject, temperature, pH) for pH in readings)


def _row(subject: Subject, temperature: float, pH: float, titrant: int, amount: float) -> DoseRow:
    # What may be refused, and where plain repetition does not settle, is asked singly.
    added = subject.additions[titrant]
    refused = not amount > LEAST or amount * added.water > MOST_GROWTH
    if refused or _unwise(subject, titrant):
        return _asked(subject, temperature, pH)
    moles = amount * float(density(np.array(temperature)))
    volume = math.nan if added.volume is None else moles * added.volume
    return DoseRow(
        pH=pH, titrant=titrant, refusal="", moles=moles, volume=volume, mass=moles * added.mass
    )


def _unwise(subject: Subject, titrant: int) -> bool:
    """Say whether a correction may be refused for a reason other than its amount."""
    accepted = subject.formulation.accepted_dangers
    dangers = set(dangers_of(subject, titrant)) - set(accepted)
    return bool(dangers) or float(subject.mixture.totals.sum()) < THIN


def _asked(subject: Subject, temperature: float, pH: float) -> DoseRow:
    found = corrected(subject, Batch(temperature=temperature, pH=pH, volume=1.0))
    volume = found.whole.volume
    return DoseRow(
        pH=pH,
        titrant=found.titrant,
        refusal=found.refusal,
        moles=found.whole.moles,
        volume=math.nan if volume is None else volume,
        mass=found.whole.mass,
    )


def _amounts(
    subject: Subject, added: Addition, temperature: float, readings: Sequence[float], aim: float
) -> FloatArray:
    """Return mol of titrant per kg of water for each reading; NaN where it does not settle."""
    pH = np.array(readings)
    if not pH.size:
        return pH
    mixture = scaled(subject.mixture, np.ones(pH.size))
    constants = constants_at(mixture.families, np.full(pH.size, temperature))
    base = sweep(mixture, constants, subject.model, pH, subject.interactions).base
    strange = np.array([np.maximum(base, 0.0), np.maximum(-base, 0.0)])
    batch = Mixture(
        families=mixture.families,
        totals=mixture.totals,
        ions=(*mixture.ions, STRONG_BASE, STRONG_ACID),
        molalities=np.concatenate([mixture.molalities, strange]),
    )
    amount = np.zeros(pH.size)
    for _ in range(ROUNDS):
        there = mixed(batch, added, amount)
        here = solve(there, constants, subject.model, subject.interactions)
        before = _charge(mixed(batch, added, np.zeros(pH.size)), constants, subject, aim, here)
        after = _charge(mixed(batch, added, np.ones(pH.size)), constants, subject, aim, here)
        following = -before / (after * (1.0 + added.water) - before)
        if not (following > 0.0).all():
            break
        change, amount = np.abs(following - amount), following
        if (change <= SETTLED * amount).all():
            return amount
    return np.full(pH.size, math.nan)


def _charge(
    mixture: Mixture, constants: Constants, subject: Subject, pH: float, here: Equilibrium
) -> FloatArray:
    problem, shape = prepare(mixture, constants, subject.model)
    if here.offsets is not None:
        problem = with_offsets(problem, here.offsets.reshape(len(here.offsets), -1))
    there = sums(
        problem, np.full(problem.size, -LN10 * pH), np.log(here.ionic_strength.reshape(-1))
    )
    charge: FloatArray = (there.plus - there.minus).reshape(shape)
    return charge


ROUNDS: Final = 60
SETTLED: Final = 1e-12  # of an amount
LEAST: Final = 1e-9  # mol/kg
THIN: Final = 0.001  # mol/kg of all families, below which `dosing` may find a batch too dilute
