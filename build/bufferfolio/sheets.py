"""Every analysis of one formulation or one family, as records that a page or a command shows."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np

from bufferfolio.activity import MODELS, ActivityModel
from bufferfolio.buffering import (
    Estimate,
    Sweep,
    buffer_capacity,
    henderson_hasselbalch,
    sweep,
)
from bufferfolio.composition import (
    Addition,
    addition,
    contents,
    mixed,
    pure_water,
    scaled,
    water_mass,
)
from bufferfolio.definitions import Family, Formulation, Interaction, Library, Titrant
from bufferfolio.equilibrium import Equilibrium, Status, solve
from bufferfolio.speciation import Forms, Mixture, forms_at
from bufferfolio.temperature import constants_at
from bufferfolio.titration import Curve, Equivalence, amount_to_reach, equivalences, titrate
from bufferfolio.water import ZERO_CELSIUS, FloatArray

STANDARD_TEMPERATURE: Final = 298.15  # K
SWEEP_POINTS: Final = 141  # pH 0 to 14 in tenths
DRIFT_POINTS: Final = 41
TITRATION_POINTS: Final = 81  # a side
MAP_SHAPE: Final = (21, 41)  # temperatures, amounts
SMALLEST_RANGE: Final = 2e-5  # mol/kg; what shows the response of plain water
EXPLORER_TOTAL: Final = 0.05  # mol/kg
EXPLORER_STRENGTH: Final = 0.1  # mol/kg


@dataclass(frozen=True, slots=True, kw_only=True)
class Subject:
    """A formulation ready for questions: what it holds, and by which model it is reckoned."""

    formulation: Formulation
    mixture: Mixture  # of one kg of water; lists the titrants' families and ions too
    water: float  # kg in the make-up
    model: ActivityModel
    interactions: tuple[Interaction, ...]  # among the species present
    additions: tuple[Addition, ...]  # one a titrant, at the make-up temperature


@dataclass(frozen=True, slots=True, kw_only=True)
class State:
    """One solution at one temperature."""

    temperature: float  # K
    pH: float
    ionic_strength: float  # mol/kg
    capacity: float  # mol/kg per pH
    status: Status
    forms: Forms  # arrays of shape (forms,)


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
    reserve: float  # mol per kg of water until the limit of use; NaN where it is never reached


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


@dataclass(frozen=True, slots=True, kw_only=True)
class Exploration:
    """Everything that the page of a family shows."""

    family: Family
    temperature: float  # K
    total: float  # mol/kg
    ionic_strength: float  # mol/kg, held by an inert salt
    model: ActivityModel
    sweep: Sweep
    pK_temperature: FloatArray  # n, K
    pK: FloatArray  # (steps, n), NaN outside a step's range


def subject_of(formulation: Formulation, library: Library) -> Subject:
    """Return a formulation with its composition and what is needed to reckon with it."""
    reagents = tuple(titrant.reagent for titrant in formulation.titrants)
    mixture = contents(formulation, library.families, reagents)
    present = set(mixture.species)
    return Subject(
        formulation=formulation,
        mixture=mixture,
        water=water_mass(formulation.make_up),
        model=MODELS[formulation.model],
        interactions=tuple(
            pair
            for pair in library.interactions
            if pair.cation in present and pair.anion in present
        ),
        additions=tuple(
            addition(titrant, library.families, formulation.make_up.temperature)
            for titrant in formulation.titrants
        ),
    )


def reference_temperature(formulation: Formulation) -> float:
    """Return the temperature at which a sheet is drawn: of the expected pH, or of the make-up."""
    if formulation.expected is not None:
        return formulation.expected.temperature
    return formulation.make_up.temperature


def state_at(
    subject: Subject,
    temperature: float,
    strength: float = 1.0,
    additions: Sequence[tuple[Addition, float]] = (),
) -> State:
    """Return the state of a formulation at one temperature.

    `strength` multiplies everything in the water; `additions` are mol per kg of its water.
    """
    mixture = scaled(subject.mixture, np.array(strength))
    for added, amount in additions:
        mixture = mixed(mixture, added, np.array(amount))
    constants = constants_at(mixture.families, np.array(temperature))
    solved = solve(mixture, constants, subject.model, subject.interactions)
    capacity = buffer_capacity(mixture, constants, subject.model, solved)
    return State(
        temperature=temperature,
        pH=float(solved.pH),
        ionic_strength=float(solved.ionic_strength),
        capacity=float(capacity),
        status=Status(int(solved.status)),
        forms=forms_at(
            mixture, constants, subject.model, solved.pH, solved.ionic_strength, solved.offsets
        ),
    )


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
    reserve = amount_to_reach(subject.mixture, added, limit, *common)
    points = equivalences(subject.mixture, added, *common)
    amount = np.linspace(0.0, titration_range(reserve, points), TITRATION_POINTS)
    kelvin = np.array(temperature)
    rest = (kelvin, subject.model, subject.interactions)
    return Side(
        titrant=titrant,
        added=added,
        curve=titrate(subject.mixture, added, amount, *rest),
        contrast=titrate(pure_water(subject.mixture), added, amount, *rest),
        equivalences=tuple(point for point in points if point.amount <= amount[-1]),
        reserve=reserve,
    )


def titration_range(reserve: float, points: Sequence[Equivalence]) -> float:
    """Return how far a titration is drawn: beyond the reserve and the last visible equivalence.

    Shapes: result scalar.
    Units: mol per kg of water.
    Raises: nothing.
    Source: own choice.
    """
    seen = [1.25 * point.amount for point in points if point.visible]
    known = [1.5 * reserve] if reserve > 0.0 else []
    return max([SMALLEST_RANGE, *seen, *known])


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
    return 1.2 * side.reserve if side.reserve > 0.0 else float(side.curve.amount[-1])


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
        warnings=_warnings(subject, reference, deviation, drift, sides),
    )


def _warnings(
    subject: Subject,
    reference: State,
    deviation: float | None,
    drift: Drift,
    sides: Sequence[Side],
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
    found.extend(
        f"{side.titrant.label} never brings it to the limit of use"
        for side in sides
        if not side.reserve > 0.0
    )
    return tuple(found)


def exploration_of(
    family: Family,
    temperature: float = STANDARD_TEMPERATURE,
    total: float = EXPLORER_TOTAL,
    ionic_strength: float = EXPLORER_STRENGTH,
) -> Exploration:
    """Return every analysis of a family on its own, an inert salt holding the ionic strength."""
    pH = np.linspace(0.0, 14.0, SWEEP_POINTS)
    ones = np.ones(SWEEP_POINTS)
    alone = Mixture(
        families=(family,),
        totals=np.array([total * ones]),
        ions=(),
        molalities=np.empty((0, SWEEP_POINTS)),
    )
    constants = constants_at(alone.families, temperature * ones)
    model = MODELS["davies"]
    axis = np.linspace(ZERO_CELSIUS, ZERO_CELSIUS + 60.0, 61)
    pK = np.array([constants_at((family,), axis).pK[0]]).reshape(-1, axis.size)
    for row, step in enumerate(family.steps):
        valid = step.valid_temperature
        pK[row, (axis < valid.low - 1e-3) | (axis > valid.high + 1e-3)] = np.nan
    return Exploration(
        family=family,
        temperature=temperature,
        total=total,
        ionic_strength=ionic_strength,
        model=model,
        sweep=sweep(alone, constants, model, pH, ionic_strength=ionic_strength * ones),
        pK_temperature=axis,
        pK=pK,
    )


def sheets_of(library: Library) -> Mapping[str, Sheet]:
    """Return the sheet of every formulation, by key."""
    return {key: sheet_of(item, library) for key, item in sorted(library.formulations.items())}
