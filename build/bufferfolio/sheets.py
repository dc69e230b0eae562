"""Every analysis of one formulation, as records that a page or a command shows."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np

from bufferfolio.buffering import Estimate, Sweep, henderson_hasselbalch, sweep
from bufferfolio.composition import Addition, pure_water, scaled
from bufferfolio.definitions import Formulation, Library, Titrant
from bufferfolio.equilibrium import Equilibrium, Status, solve
from bufferfolio.subjects import State, Subject, reference_temperature, state_at, subject_of
from bufferfolio.temperature import constants_at
from bufferfolio.titration import Curve, Equivalence, amount_to_reach, equivalences, titrate
from bufferfolio.water import ZERO_CELSIUS, FloatArray

SWEEP_POINTS: Final = 141  # pH 0 to 14 in tenths
DRIFT_POINTS: Final = 41
TITRATION_POINTS: Final = 81  # a side
MAP_SHAPE: Final = (21, 41)  # temperatures, amounts
MOST_DILUTION: Final = 1.0  # kg of titrant's water per kg of the batch's
SMALLEST_RANGE: Final = 2e-5  # mol/kg; what shows the response of plain water


@dataclass(frozen=True, slots=True, kw_only=True)
class Drift:
    """pH along temperature."""

    temperature: FloatArray  # n, K
    state: Equilibrium  # n


@dataclass(frozen=True, slots=True, kw_only=True)
class Side:
    """What one titrant does to a formulation, and to plain water."""

    titrant: Titrant
    added: Addition
    curve: Curve
    contrast: Curve  # the same amounts into water that holds nothing
    equivalences: tuple[Equivalence, ...]
    reserve: float  # mol per kg of water until the limit of use; NaN: not before it has doubled


@dataclass(frozen=True, slots=True, kw_only=True)
class Surface:
    """pH over temperature and amount of acid (negative) or base (positive)."""

    temperature: FloatArray  # m, K
    amount: FloatArray  # n, mol of titrant per kg of water; negative: the downward titrant
    pH: FloatArray  # (m, n)


@dataclass(frozen=True, slots=True, kw_only=True)
class Sheet:
    """Everything that the page of a formulation shows."""

    subject: Subject
    reference: State  # at the temperature of the expected pH, or else of the make-up
    deviation: float | None  # computed minus expected pH
    estimate: Estimate
    drift: Drift
    sweep: Sweep  # at the reference temperature
    sides: tuple[Side, ...]  # at the reference temperature, at most one a direction
    surface: Surface | None  # None where the formulation has no titrant
    warnings: tuple[str, ...]


def drift_of(subject: Subject) -> Drift:
    """Return the pH of a formulation over its temperatures of use."""
    use = subject.formulation.use_temperature
    temperature = np.linspace(use.low, use.high, DRIFT_POINTS)
    mixture = scaled(subject.mixture, np.ones(DRIFT_POINTS))
    constants = constants_at(mixture.families, temperature)
    state = solve(mixture, constants, subject.model, subject.interactions)
    return Drift(temperature=temperature, state=state)


def sweep_of(subject: Subject, temperature: float) -> Sweep:
    """Return a formulation brought to every pH from 0 to 14 by strong acid or base."""
    pH = np.linspace(0.0, 14.0, SWEEP_POINTS)
    mixture = scaled(subject.mixture, np.ones(SWEEP_POINTS))
    constants = constants_at(mixture.families, np.full(SWEEP_POINTS, temperature))
    return sweep(mixture, constants, subject.model, pH, subject.interactions)


def sides_of(subject: Subject, temperature: float) -> tuple[Side, ...]:
    """Return both titrations of a formulation, downward first, with the first titrant of each."""
    sides = []
    for direction in ("downward", "upward"):
        pairs = zip(subject.formulation.titrants, subject.additions, strict=True)
        chosen = [(t, a) for t, a in pairs if t.direction == direction]
        if chosen:
            sides.append(_side(subject, *chosen[0], temperature))
    return tuple(sides)


def _side(subject: Subject, titrant: Titrant, added: Addition, temperature: float) -> Side:
    limits = subject.formulation.use_pH
    limit = limits.high if titrant.direction == "upward" else limits.low
    common = (temperature, subject.model, subject.interactions)
    reached = amount_to_reach(subject.mixture, added, limit, *common)
    points = equivalences(subject.mixture, added, *common)
    amount = np.linspace(0.0, titration_range(reached, points, added.water), TITRATION_POINTS)
    kelvin = np.array(temperature)
    rest = (kelvin, subject.model, subject.interactions)
    return Side(
        titrant=titrant,
        added=added,
        curve=titrate(subject.mixture, added, amount, *rest),
        contrast=titrate(pure_water(subject.mixture), added, amount, *rest),
        equivalences=tuple(point for point in points if point.amount <= amount[-1]),
        reserve=practical(reached, added.water),
    )


def practical(amount: float, water: float) -> float:
    """Return an amount of titrant, or NaN where its water more than doubles the batch.

    Shapes: scalars.
    Units: amount mol per kg of water; water kg brought by one mole of titrant.
    Raises: nothing.
    Source: own choice; beyond it dilution moves the pH and not the titrant.
    """
    return amount if amount * water <= MOST_DILUTION else float("nan")


def titration_range(reserve: float, points: Sequence[Equivalence], water: float) -> float:
    """Return how far a titration is drawn: beyond the reserve and the last visible equivalence.

    It ends at the latest where the titrant's own water has doubled the batch.

    Shapes: result scalar.
    Units: reserve and result mol per kg of water; water kg brought by one mole of titrant.
    Raises: nothing.
    Source: own choice.
    """
    seen = [1.25 * point.amount for point in points if point.visible]
    known = [1.5 * reserve] if reserve > 0.0 else []
    wanted = max([SMALLEST_RANGE, *seen, *known])
    return min(wanted, MOST_DILUTION / water) if water > 0.0 else wanted


def surface_of(subject: Subject, sides: Sequence[Side]) -> Surface | None:
    """Return pH over the temperatures of use and the reserve on both sides."""
    if not sides:
        return None
    rows, columns = MAP_SHAPE
    use = subject.formulation.use_temperature
    temperature = np.linspace(use.low, use.high, rows)
    half = columns // 2 + 1
    amounts: list[FloatArray] = []
    blocks: list[FloatArray] = []
    for side in sides:
        amount = np.linspace(0.0, surface_range(side), half)
        curve = titrate(
            subject.mixture,
            side.added,
            amount[np.newaxis, :],
            temperature[:, np.newaxis],
            subject.model,
            subject.interactions,
        )
        downward = side.titrant.direction == "downward"
        skip = 1 if amounts else 0  # the middle column is the same on both sides
        amounts.append(-amount[::-1] if downward else amount[skip:])
        blocks.append(curve.state.pH[:, ::-1] if downward else curve.state.pH[:, skip:])
    return Surface(
        temperature=temperature,
        amount=np.concatenate(amounts),
        pH=np.concatenate(blocks, axis=1),
    )


def surface_range(side: Side) -> float:
    """Return how far the surface reaches on one side: a little beyond the reserve.

    Shapes: result scalar.
    Units: mol per kg of water.
    Raises: nothing.
    Source: own choice.
    """
    drawn = float(side.curve.amount[-1])
    return min(1.2 * side.reserve, drawn) if side.reserve > 0.0 else drawn


def sheet_of(formulation: Formulation, library: Library) -> Sheet:
    """Return every analysis of a formulation."""
    subject = subject_of(formulation, library)
    temperature = reference_temperature(formulation)
    reference = state_at(subject, temperature)
    expected = formulation.expected
    sides = sides_of(subject, temperature)
    drift = drift_of(subject)
    constants = constants_at(subject.mixture.families, np.array(temperature))
    deviation = None if expected is None else reference.pH - expected.pH
    return Sheet(
        subject=subject,
        reference=reference,
        deviation=deviation,
        estimate=henderson_hasselbalch(subject.mixture, constants.pK),
        drift=drift,
        sweep=sweep_of(subject, temperature),
        sides=sides,
        surface=surface_of(subject, sides),
        warnings=_warnings(subject, reference, deviation, drift),
    )


def _warnings(
    subject: Subject,
    reference: State,
    deviation: float | None,
    drift: Drift,
) -> tuple[str, ...]:
    formulation = subject.formulation
    found = []
    expected = formulation.expected
    if expected and deviation is not None and abs(deviation) > expected.tolerance:
        found.append(
            f"computed pH {reference.pH:.3f} is {deviation:+.3f} from the expected "
            f"{expected.pH:g}, tolerance {expected.tolerance:g}"
        )
    outside = drift.state.status == Status.OUT_OF_RANGE
    if outside.any():
        worst = drift.temperature[outside] - ZERO_CELSIUS
        found.append(
            "a constant is used outside its source's temperatures "
            f"between {worst.min():.0f} and {worst.max():.0f} °C"
        )
    if reference.ionic_strength > subject.model.trusted_to:
        found.append(
            f"ionic strength {reference.ionic_strength:.2g} mol/kg is above what the model "
            f"({subject.model.label}) is trusted to, {subject.model.trusted_to:g} mol/kg"
        )
    if not formulation.use_pH.holds(reference.pH):
        found.append(f"computed pH {reference.pH:.2f} lies outside the limits of use")
    return tuple(found)


def sheets_of(library: Library) -> Mapping[str, Sheet]:
    """Return the sheet of every formulation, by key."""
    return {key: sheet_of(item, library) for key, item in sorted(library.formulations.items())}
