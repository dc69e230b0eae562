"""Doses for many readings at once: the table that a printed card carries."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np

from bufferfolio.balance import prepare, sums, with_offsets
from bufferfolio.buffering import sweep
from bufferfolio.composition import Addition, mixed, scaled
from bufferfolio.dosing import (
    LEAST_CAPACITY,
    MOST_EXCESS,
    NOTHING_TO_DO,
    REFUSALS,
    Batch,
    corrected,
    dangers_of,
    titrant_for,
)
from bufferfolio.equilibrium import Equilibrium, solve
from bufferfolio.measurements import STRONG_ACID, STRONG_BASE, target_at
from bufferfolio.reserves import MOST_GROWTH
from bufferfolio.speciation import Mixture
from bufferfolio.subjects import Subject
from bufferfolio.temperature import LN10, Constants, constants_at
from bufferfolio.water import FloatArray, density


@dataclass(frozen=True, slots=True, kw_only=True)
class Case:
    """A reading, and where it should be."""

    temperature: float  # K
    pH: float  # read
    target: float  # pH


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
    return doses(subject, [Case(temperature=temperature, pH=pH, target=aim) for pH in readings])


def doses(subject: Subject, cases: Sequence[Case]) -> tuple[DoseRow, ...]:
    """Return what each of many readings calls for, whatever their temperatures and targets.

    Shapes: one row for each case.
    Units: as the records say.
    Raises: nothing.
    Source: `dosing.corrected`, whose answers these are.
    """
    use = subject.formulation.use_pH
    rows: dict[Case, DoseRow] = {}
    for titrant in range(len(subject.formulation.titrants)):
        own = [
            case
            for case in cases
            if use.holds(case.pH)
            and use.holds(case.target)
            and abs(case.target - case.pH) >= NOTHING_TO_DO
            and titrant_for(subject, case.pH, case.target) == titrant
        ]
        if own:
            found = _rows(subject, titrant, own)
            rows.update(zip(own, found, strict=True))
    return tuple(rows.get(case) or _asked(subject, case) for case in cases)


def _rows(subject: Subject, titrant: int, cases: Sequence[Case]) -> list[DoseRow]:
    formulation = subject.formulation
    accepted = set(formulation.accepted_dangers)
    if formulation.never_corrected or set(dangers_of(subject, titrant)) - accepted:
        return [_asked(subject, case) for case in cases]
    amounts = _amounts(subject, subject.additions[titrant], cases)
    return [
        _refused(case, titrant, verdict)
        if verdict in REFUSALS
        else _row(subject, titrant, case, amount if verdict == "may" else math.nan)
        for case, verdict, amount in zip(cases, _verdicts(subject, cases), amounts, strict=True)
    ]


def _row(subject: Subject, titrant: int, case: Case, amount: float) -> DoseRow:
    # What may be refused, and where plain repetition does not settle, is asked singly.
    added = subject.additions[titrant]
    if not amount > LEAST:
        return _asked(subject, case)
    if amount * added.water > MOST_GROWTH:
        return _refused(case, titrant, "doubles")
    moles = float(amount) * float(density(np.array(case.temperature)))
    volume = math.nan if added.volume is None else moles * added.volume
    return DoseRow(
        pH=case.pH, titrant=titrant, refusal="", moles=moles, volume=volume, mass=moles * added.mass
    )


def _refused(case: Case, titrant: int, refusal: str) -> DoseRow:
    return DoseRow(
        pH=case.pH,
        titrant=titrant,
        refusal=refusal,
        moles=math.nan,
        volume=math.nan,
        mass=math.nan,
    )


def _verdicts(subject: Subject, cases: Sequence[Case]) -> list[str]:
    """Return a key of `REFUSALS`, "may" or, where a bound is near, "ask" for each case."""
    temperature = np.array([case.temperature for case in cases])
    pH = np.array([[case.pH for case in cases], [case.target for case in cases]])
    mixture = scaled(subject.mixture, np.ones(pH.shape))
    constants = constants_at(mixture.families, np.broadcast_to(temperature, pH.shape))
    found = sweep(mixture, constants, subject.model, pH, subject.interactions)
    excess, capacity = np.abs(found.base[0]), found.capacity.max(axis=0)
    verdicts = np.select(
        [
            ~(excess <= MOST_EXCESS),
            capacity < LEAST_CAPACITY / SURE,
            capacity > LEAST_CAPACITY * SURE,
        ],
        ["impossible", "dilute", "may"],
        "ask",
    )
    return [str(verdict) for verdict in verdicts]


def _asked(subject: Subject, case: Case) -> DoseRow:
    batch = Batch(temperature=case.temperature, pH=case.pH, volume=1.0)
    found = corrected(subject, batch, case.target)
    volume = found.whole.volume
    return DoseRow(
        pH=case.pH,
        titrant=found.titrant,
        refusal=found.refusal,
        moles=found.whole.moles,
        volume=math.nan if volume is None else volume,
        mass=found.whole.mass,
    )


def _amounts(subject: Subject, added: Addition, cases: Sequence[Case]) -> FloatArray:
    """Return mol of titrant per kg of water for each case; NaN where it does not settle."""
    pH = np.array([case.pH for case in cases])
    aim = np.array([case.target for case in cases])
    mixture = scaled(subject.mixture, np.ones(pH.size))
    constants = constants_at(mixture.families, np.array([case.temperature for case in cases]))
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
    mixture: Mixture, constants: Constants, subject: Subject, pH: FloatArray, here: Equilibrium
) -> FloatArray:
    problem, shape = prepare(mixture, constants, subject.model)
    if here.offsets is not None:
        problem = with_offsets(problem, here.offsets.reshape(len(here.offsets), -1))
    there = sums(problem, -LN10 * pH, np.log(here.ionic_strength.reshape(-1)))
    charge: FloatArray = (there.plus - there.minus).reshape(shape)
    return charge


ROUNDS: Final = 60
SETTLED: Final = 1e-12  # of an amount
LEAST: Final = 1e-9  # mol/kg
SURE: Final = 1.2  # how far from a bound a quick answer settles it, whatever ions are counted
