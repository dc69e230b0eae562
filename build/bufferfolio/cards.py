"""What a printed card tells: readings along temperature, and doses along distance from target."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np

from bufferfolio.definitions import Formulation, Interval, MakeUp
from bufferfolio.dose_tables import Case, DoseRow, doses
from bufferfolio.measurements import expected_pH
from bufferfolio.subjects import Subject, reference_temperature
from bufferfolio.uncertainty import band_of
from bufferfolio.water import ZERO_CELSIUS, density


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """What to read at one temperature."""

    temperature: float  # K
    pH: float  # computed
    low: float  # end of the band, k = 2
    high: float
    target: float  # pH; the computed one where the chemist states none


@dataclass(frozen=True, slots=True, kw_only=True)
class Correction:
    """What a reading this far from its target calls for, at the reference temperature."""

    distance: float  # reading minus target, in pH
    dose: DoseRow  # the whole of it, for each m3 of the batch
    first: float  # m3 or, of a solid, kg: the first portion for the recipe's own batch


@dataclass(frozen=True, slots=True, kw_only=True)
class Card:
    """Both tables of a card."""

    readings: tuple[Reading, ...]
    temperature: float  # K, of the corrections
    target: float  # pH, at that temperature
    corrections: tuple[Correction, ...]  # by rising distance
    spread: float  # most that the dose for a distance differs over the readings' temperatures
    fall: float  # most that it falls short of the one at `temperature`; both relative, NaN: none


def card_of(subject: Subject, most_readings: int, most_corrections: int) -> Card:
    """Return the tables of a formulation's card, each as fine as so many rows allow.

    Shapes: `most_readings` in all; `most_corrections` on each side of the target.
    Units: as the records say.
    Raises: nothing.
    Source: `uncertainty.band_of`; `dosing.corrected` by way of `dose_tables.doses`.
    """
    formulation = subject.formulation
    kelvin = reference_temperature(formulation)
    computed = expected_pH(subject, kelvin)
    shift = 0.0 if formulation.expected is None else formulation.expected.pH - computed
    grid = temperature_grid(formulation.use_temperature, kelvin, most_readings)
    readings = tuple(_reading(subject, temperature, shift) for temperature in grid)
    target = computed + shift
    batch = batch_volume(formulation.make_up, kelvin)
    distances = distance_grid(formulation, target, most_corrections)
    rows = doses(subject, [_case(kelvin, target, distance) for distance in distances])
    changes = _changes(subject, distances, rows, _compared(readings))
    return Card(
        readings=readings,
        temperature=kelvin,
        target=target,
        corrections=tuple(
            Correction(distance=distance, dose=dose, first=FIRST * batch * _amount(dose))
            for distance, dose in zip(distances, rows, strict=True)
        ),
        spread=max(map(abs, changes), default=math.nan),
        fall=-min([0.0, *changes]) if changes else math.nan,
    )


def _reading(subject: Subject, temperature: float, shift: float) -> Reading:
    band = band_of(subject, temperature)
    return Reading(
        temperature=temperature,
        pH=band.pH,
        low=band.low,
        high=band.high,
        target=band.pH + shift,
    )


def batch_volume(make_up: MakeUp, temperature: float) -> float:
    """Return the volume of the recipe's own batch; of one by mass, that of its water.

    Shapes: scalar.
    Units: temperature K; result m3.
    Raises: nothing.
    Source: definition.
    """
    if make_up.mass is None:
        return make_up.volume or math.nan
    return make_up.mass / float(density(np.array(temperature)))


def _amount(dose: DoseRow) -> float:
    return dose.mass if math.isnan(dose.volume) else dose.volume


def _case(temperature: float, target: float, distance: float) -> Case:
    return Case(temperature=temperature, pH=target + distance, target=target)


def _changes(
    subject: Subject,
    distances: Sequence[float],
    rows: Sequence[DoseRow],
    places: Sequence[tuple[float, float]],
) -> list[float]:
    """Return how the doses differ at other temperatures and targets, relative to `rows`."""
    use = subject.formulation.use_pH
    pairs = [
        (row, _case(*place, distance))
        for place in places
        for distance, row in zip(distances, rows, strict=True)
        if not row.refusal and use.holds(place[1]) and use.holds(place[1] + distance)
    ]
    others = doses(subject, [case for _, case in pairs])
    return [
        other.moles / row.moles - 1.0
        for (row, _), other in zip(pairs, others, strict=True)
        if not other.refusal
    ]


def _compared(readings: Sequence[Reading]) -> list[tuple[float, float]]:
    """Return a few temperatures and targets along the readings, both ends among them."""
    last = len(readings) - 1
    places = {round(part * last / (COMPARED - 1)) for part in range(COMPARED)}
    return [(readings[at].temperature, readings[at].target) for at in sorted(places)]


def temperature_grid(use: Interval, through: float, most: int) -> tuple[float, ...]:
    """Return temperatures over a range, both ends among them, in whole steps from `through`.

    Shapes: at most `most` of them, unless the coarsest step needs more.
    Units: K; steps of 1, 2, 5 or 10 K.
    Raises: nothing.
    Source: own choice; so the temperature at which a pH is stated is always a line of the table.
    """
    found: tuple[float, ...] = ()
    for step in STEPS:
        first = math.ceil((use.low - through) / step - 1e-6)
        last = math.floor((use.high - through) / step + 1e-6)
        inner = [through + step * count for count in range(first, last + 1)]
        # A thousandth of a kelvin: an end that is a step already must not come twice.
        inner = [each for each in inner if use.low + 1e-3 < each < use.high - 1e-3]
        found = (use.low, *inner, use.high)
        if len(found) <= most:
            break
    # Sums of kelvins leave a tail in the last digits.
    return tuple(round(each - ZERO_CELSIUS, 6) + ZERO_CELSIUS for each in found)


def distance_grid(formulation: Formulation, target: float, most: int) -> tuple[float, ...]:
    """Return distances from the target, rising, at which a card tells a dose.

    They begin at the tolerance, within which nothing is to be done, and end at the limits of use.

    Shapes: at most `most` on either side.
    Units: pH.
    Raises: nothing.
    Source: own choice: steps that grow with the distance, because a dose is repeated anyway.
    """
    expected, use = formulation.expected, formulation.use_pH
    start = UNSTATED if expected is None else max(expected.tolerance, LEAST_DISTANCE)
    below = [-each for each in reversed(_ladder(start, target - use.low, most))]
    return (*below, *_ladder(start, use.high - target, most))


def _ladder(start: float, end: float, most: int) -> list[float]:
    found: list[float] = []
    for rungs in LADDERS:
        every = [round(rung * 10.0**power, 6) for power in (-2, -1, 0, 1) for rung in rungs]
        found = [each for each in every if start - 1e-9 <= each <= end + 1e-9]
        if len(found) <= most:
            break
    return found[-most:]


STEPS: Final = (1.0, 2.0, 5.0, 10.0)  # K
LADDERS: Final = ((1.0, 1.5, 2.0, 3.0, 5.0, 7.0), (1.0, 2.0, 5.0), (1.0, 3.0), (1.0,))
UNSTATED: Final = 0.05  # pH; where the chemist states no tolerance
LEAST_DISTANCE: Final = 0.01  # pH; what a display shows
FIRST: Final = 0.8  # of a dose, before the batch is read again
COMPARED: Final = 5  # temperatures at which the doses are reckoned again
