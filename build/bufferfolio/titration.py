"""Adding a titrant: the curve, the amount that reaches a pH, and where equivalence shows."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np

from bufferfolio.activity import ActivityModel
from bufferfolio.balance import prepare, sums, with_offsets
from bufferfolio.buffering import buffer_capacity
from bufferfolio.composition import Addition, mixed
from bufferfolio.definitions import Interaction
from bufferfolio.equilibrium import Equilibrium, solve
from bufferfolio.speciation import Mixture
from bufferfolio.temperature import LN10, Constants, constants_at
from bufferfolio.water import FloatArray

ROUNDS: Final = 200
REACHED: Final = 1e-10  # in pH
SETTLED: Final = 1e-13  # of an amount
MOST: Final = 1e3  # mol/kg; nothing beyond it is a solution in water


@dataclass(frozen=True, slots=True, kw_only=True)
class Curve:
    """A mixture after each amount of a titrant."""

    amount: FloatArray  # S, mol of titrant per kg of the mixture's own water
    state: Equilibrium  # S
    capacity: FloatArray  # S, mol/kg per pH of the diluted mixture


@dataclass(frozen=True, slots=True, kw_only=True)
class Equivalence:
    """An amount of titrant that meets a whole number of protons."""

    amount: float  # mol per kg of the mixture's water
    pH: float  # NaN where it does not show
    visible: bool  # whether the curve is steeper there than on either side
    family: str  # key of the family whose step ends there; "" for strong acid or base
    step: int


def titrate(
    mixture: Mixture,
    added: Addition,
    amount: FloatArray,
    temperature: FloatArray,
    model: ActivityModel,
    interactions: Sequence[Interaction] = (),
) -> Curve:
    """Return a mixture's state after each amount, at each temperature.

    Volume, ionic strength and the constants at the temperature are all taken into account.

    Shapes: mixture of one, S = (); amount and temperature broadcast to S; results S.
    Units: amount mol per kg of the mixture's water; temperature K.
    Raises: ValueError where the mixture does not list what the titrant brings.
    Source: conservation of mass, then `equilibrium.solve`.
    """
    amount, temperature = np.broadcast_arrays(amount, temperature)
    there = mixed(mixture, added, amount)
    constants = constants_at(there.families, temperature)
    state = solve(there, constants, model, interactions)
    return Curve(
        amount=amount, state=state, capacity=buffer_capacity(there, constants, model, state)
    )


def amount_to_reach(
    mixture: Mixture,
    added: Addition,
    pH: float,
    temperature: float,
    model: ActivityModel,
    interactions: Sequence[Interaction] = (),
) -> float:
    """Return how much of a titrant brings a mixture to a pH; NaN where none does.

    Shapes: mixture of one, S = (); result scalar.
    Units: temperature K; result mol per kg of the mixture's water.
    Raises: ValueError where the mixture does not list what the titrant brings.
    Source: at a given pH and ionic strength the amount is explicit, the charge of the mixture over
        that of one mole of titrant; the ionic strength follows by repetition, in a bracket.
    """
    constants = constants_at(mixture.families, np.array([temperature]))
    here = solve(mixed(mixture, added, np.zeros(1)), constants, model, interactions)
    if abs(float(here.pH[0]) - pH) < REACHED:
        return 0.0
    upward = pH > float(here.pH[0])
    amount, low, high, last = 0.0, 0.0, math.inf, math.inf
    for _ in range(ROUNDS):
        explicit = _explicit_amount(mixture, added, constants, model, pH, here)
        if amount == 0.0 and not explicit > 0.0:
            break  # it leads the other way
        following = _next_amount(explicit, amount, low, high, last)
        last, amount = abs(following - amount), following
        if last <= SETTLED * amount:
            return amount
        if amount > MOST:
            break
        here = solve(mixed(mixture, added, np.array([amount])), constants, model, interactions)
        low, high = (amount, high) if (float(here.pH[0]) < pH) == upward else (low, amount)
    return math.nan


def _next_amount(explicit: float, amount: float, low: float, high: float, last: float) -> float:
    """As in `bracketing.balance_charge`, steps have to halve, or the bracket is halved instead."""
    step = abs(explicit - amount)
    if step <= SETTLED * explicit or (low < explicit < high and step < 0.5 * last):
        return explicit
    return 0.5 * (low + high) if high < math.inf else 2.0 * amount


def _explicit_amount(
    mixture: Mixture,
    added: Addition,
    constants: Constants,
    model: ActivityModel,
    pH: float,
    here: Equilibrium,
) -> float:
    """Return the amount that leads to a pH while ionic strength and pair terms stay."""
    x, u = np.array([-LN10 * pH]), np.log(here.ionic_strength)
    before = _charge(mixed(mixture, added, np.zeros(1)), constants, model, x, u, here.offsets)
    after = _charge(mixed(mixture, added, np.ones(1)), constants, model, x, u, here.offsets)
    # Per kg of the mixture's own water the charge is linear in the amount.
    return -before / (after * (1.0 + added.water) - before)


def _charge(
    mixture: Mixture,
    constants: Constants,
    model: ActivityModel,
    x: FloatArray,
    u: FloatArray,
    offsets: FloatArray | None,
) -> float:
    problem, _ = prepare(mixture, constants, model)
    if offsets is not None:
        problem = with_offsets(problem, offsets)
    there = sums(problem, x, u)
    return float((there.plus - there.minus)[0])


def equivalences(
    mixture: Mixture,
    added: Addition,
    temperature: float,
    model: ActivityModel,
    interactions: Sequence[Interaction] = (),
) -> tuple[Equivalence, ...]:
    """Return the amounts of a strong titrant that meet a whole number of protons.

    Each is visible where the mixture buffers less than half as well as a quarter of a step before
    and after it; otherwise the curve passes it without a sign. A titrant that is itself a family
    (phosphoric acid, sodium carbonate) has no single equivalence, and none is returned.

    Shapes: mixture of one, S = (); result a tuple in the order of addition.
    Units: temperature K; amounts mol per kg of the mixture's water.
    Raises: nothing.
    Source: stoichiometry; the criterion is the project's own.
    """
    kelvin = np.array([temperature])
    found = _candidates(mixture, added, constants_at(mixture.families, kelvin))
    if not found:
        return ()
    amounts = np.array([(a - 0.25 * s, a, a + 0.25 * s) for a, s, _, _ in found])
    around = np.maximum(amounts, 0.0)
    curve = titrate(mixture, added, around, kelvin.reshape(1, 1), model, interactions)
    result = [
        Equivalence(
            amount=amount,
            pH=float(pH),
            visible=bool(at < 0.5 * min(before, after)),
            family=family,
            step=order,
        )
        for (amount, _, family, order), pH, (before, at, after) in zip(
            found, curve.state.pH[:, 1], curve.capacity, strict=True
        )
    ]
    return tuple(sorted(result, key=lambda item: item.amount))


def _candidates(
    mixture: Mixture, added: Addition, constants: Constants
) -> list[tuple[float, float, str, int]]:
    """List (amount, size of the step, family, step) of each equivalence still ahead."""
    charge = sum(ion.charge * share for ion, share in zip(added.ions, added.per_ion, strict=True))
    if added.families or charge == 0.0:
        return []
    net = float(mixture.strong_charge)
    return [
        (amount, size, family, order)
        for required, size, family, order in proton_ladder(mixture, constants)
        if (amount := (required - net) / charge) > 1e-3 * size
    ]


def proton_ladder(mixture: Mixture, constants: Constants) -> list[tuple[float, float, str, int]]:
    """Return (strong charge that is met, size of the step, family, step), strongest acid first.

    Mixture and constants are of one solution: totals (families,), pK (steps, 1).
    """
    protonated = sum(
        family.charge * float(total)
        for family, total in zip(mixture.families, mixture.totals, strict=True)
    )
    steps = sorted(
        (float(pK[0]), float(total), family.key, order)
        for family, total, values in zip(
            mixture.families, mixture.totals, constants.pK, strict=True
        )
        for order, pK in enumerate(values)
        if total > 0.0
    )
    largest = max([total for _, total, _, _ in steps], default=abs(float(mixture.strong_charge)))
    required = -protonated
    ladder = [(required, largest, "", 0)]
    for _, total, family, order in steps:
        required += total
        ladder.append((required, total, family, order + 1))
    return ladder
