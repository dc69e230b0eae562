"""Gran functions: straight lines whose zero is the equivalence volume.

Before an end point they show what is left of the sample, after it what is in excess of the titrant:

    strong   G = (m(H+) − m(OH−)) W, the kilograms of water times what is left in each
    weak     G = (V − Vp + d) / r, with r the ratio of product to what is left, and d what the
             water's own ions add to the volume: G falls along V + d as what is left does

m and r come from the measured pH and the engine's activity coefficients at the ionic strength that
recipe and label lead one to expect. Points are left out where anything else takes up titrant.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final, Literal

import numpy as np

from bufferfolio.composition import mixed
from bufferfolio.end_points import EndPoint
from bufferfolio.experiments import Experiment, amounts, predicted_curve
from bufferfolio.measured import Points, Precision
from bufferfolio.speciation import forms_at
from bufferfolio.temperature import LN10, constants_at
from bufferfolio.titration import proton_ladder
from bufferfolio.water import FloatArray

BEFORE: Final = (0.2, 0.97)  # of the way from the last end point to this one: points that are used
AFTER: Final = (1.03, 2.0)  # likewise, beyond it
PURE: Final = 0.01  # of the titrant: the share that something else may take up
FEWEST: Final = 4
ROUNDS: Final = 8


@dataclass(frozen=True, slots=True, kw_only=True)
class GranLine:
    """A line through a Gran function, and the equivalence volume where it meets zero."""

    side: Literal["before", "after"]
    kind: Literal["strong", "weak"]
    family: str  # key, of a weak one; else ""
    step: int  # counted from zero
    volume: float  # m3, of equivalence
    standard_error: float  # m3
    x: FloatArray  # n, m3, volumes used
    y: FloatArray  # n, the function, in kg mol/kg (strong) or m3 (weak)


@dataclass(frozen=True, slots=True)
class _Measured:
    """What the readings say is in the water."""

    volume: FloatArray  # n, m3
    water: FloatArray  # n, kg
    free: FloatArray  # n, m(H+) − m(OH−), mol/kg; turned where the titrant is an acid
    both: FloatArray  # n, their sum
    totals: FloatArray  # (families, n), mol/kg
    shares: tuple[FloatArray, ...]  # (forms, n) a family
    sign: float  # 1 where the titrant is a base, −1 where it is an acid
    charge: float  # mol of charge per m3 of titrant

    def pair(self, family: int, step: int) -> FloatArray:
        """Return what one step takes up, mol/kg for each unit of ln a(H+)."""
        result: FloatArray = (
            self.totals[family] * self.shares[family][step] * self.shares[family][step + 1]
        )
        return result

    @property
    def bound(self) -> FloatArray:
        """What all families take up, likewise."""
        total = np.zeros_like(self.volume)
        for own, shares in zip(self.totals, self.shares, strict=True):
            lost = np.arange(len(shares))[:, np.newaxis]
            mean = np.sum(lost * shares, axis=0)
            total = total + own * np.sum((lost - mean) ** 2 * shares, axis=0)
        return total


def gran_lines(
    experiment: Experiment,
    points: Points,
    found: Sequence[EndPoint],
    precision: Precision,
) -> tuple[GranLine, ...]:
    """Return the Gran lines before each end point and after the last, where enough points serve.

    Shapes: points n; result a tuple.
    Units: see `GranLine`.
    Raises: nothing; a titrant that is not strong has no Gran lines.
    Source: Gran, Analyst 77 (1952) 661; with water's ions as in Rossotti & Rossotti, J. Chem. Educ.
        42 (1965) 375.
    """
    there = _measured(experiment, points)
    if there is None:
        return ()
    starts = [0.0, *(each.volume for each in found)]
    lines = [
        _before(experiment, there, precision, starts[at], each.volume)
        for at, each in enumerate(found)
    ]
    if found:
        lines.append(_after(there, precision, starts[-2], starts[-1]))
    return tuple(line for line in lines if line is not None)


def _measured(experiment: Experiment, points: Points) -> _Measured | None:
    added = experiment.added
    charge = sum(ion.charge * share for ion, share in zip(added.ions, added.per_ion, strict=True))
    if added.families or charge == 0.0 or added.volume is None:
        return None
    amount = amounts(experiment, points.volume)
    mixture = mixed(experiment.mixture, added, amount)
    state = predicted_curve(experiment, points.volume).state
    constants = constants_at(mixture.families, np.full(amount.shape, experiment.temperature))
    strength, offsets = state.ionic_strength, state.offsets
    forms = forms_at(mixture, constants, experiment.model, points.pH, strength, offsets)
    sign = math.copysign(1.0, charge)
    return _Measured(
        volume=points.volume,
        water=experiment.water * (1.0 + amount * added.water),
        free=sign * (forms.hydrogen - forms.hydroxide),
        both=forms.hydrogen + forms.hydroxide,
        totals=mixture.totals,
        shares=forms.fractions,
        sign=sign,
        charge=abs(charge) / added.volume,
    )


def _before(
    experiment: Experiment, there: _Measured, precision: Precision, start: float, end: float
) -> GranLine | None:
    """Return the line of what takes up the titrant half-way to an end point."""
    middle = int(np.argmin(np.abs(there.volume - 0.5 * (start + end))))
    pairs = [
        (float(there.pair(row, step)[middle]), row, step)
        for row, family in enumerate(experiment.mixture.families)
        for step in range(len(family.steps))
    ]
    most, row, step = max(pairs, default=(0.0, 0, 0), key=lambda pair: pair[0])
    low, high = (start + part * (end - start) for part in BEFORE)
    inside = (there.volume > low) & (there.volume < high)
    if most < there.both[middle]:
        used = inside & (there.bound < PURE * there.both)
        line = _zero(there.volume[used], (there.free * there.water)[used], precision)
        return _named(line, "before", "strong")
    pair = there.pair(row, step)
    used = inside & (there.bound - pair < PURE * pair)
    acid, base = there.shares[row][step], there.shares[row][step + 1]
    with np.errstate(divide="ignore"):
        left_to_made = acid / base if there.sign > 0.0 else base / acid
    previous = start if start > 0.0 else _rung_before(experiment, there, row, step)
    more = there.free * there.water / there.charge
    function = (there.volume - previous + more) * left_to_made
    line = _zero((there.volume + more)[used], function[used], precision)
    return _named(line, "before", "weak", experiment.mixture.families[row].key, step)


def _rung_before(experiment: Experiment, there: _Measured, row: int, step: int) -> float:
    """Return the volume, before the start perhaps, at which a step began to take up titrant."""
    mixture = experiment.mixture
    ladder = proton_ladder(
        mixture, constants_at(mixture.families, np.array([experiment.temperature]))
    )
    names = [(family, order) for _, _, family, order in ladder]
    at = names.index((mixture.families[row].key, step + 1))
    required = ladder[at - 1 if there.sign > 0.0 else at][0]
    net = float(mixture.strong_charge)
    return there.sign * (required - net) * experiment.water / there.charge


def _after(there: _Measured, precision: Precision, start: float, end: float) -> GranLine | None:
    """Return the line of the titrant in excess."""
    low, high = (start + part * (end - start) for part in AFTER)
    used = (there.volume > low) & (there.volume < high) & (there.bound < PURE * there.both)
    line = _zero(there.volume[used], (-there.free * there.water)[used], precision)
    return _named(line, "after", "strong")


@dataclass(frozen=True, slots=True)
class _Zero:
    volume: float
    standard_error: float
    x: FloatArray
    y: FloatArray


def _zero(x: FloatArray, y: FloatArray, precision: Precision) -> _Zero | None:
    """Return where a line meets zero; a value counts by the error that its reading gives it."""
    if x.size < FEWEST:
        return None
    fitted, slope = y, 0.0
    for _ in range(ROUNDS):
        variance = (LN10 * precision.pH * fitted) ** 2 + (slope * precision.volume) ** 2
        weights = 1.0 / np.maximum(variance, 1e-300)
        total = float(np.sum(weights))
        x_mean, y_mean = float(np.sum(weights * x)) / total, float(np.sum(weights * y)) / total
        squares = float(np.sum(weights * (x - x_mean) ** 2))
        slope = float(np.sum(weights * (x - x_mean) * (y - y_mean))) / squares
        fitted = y_mean + slope * (x - x_mean)
    scatter = float(np.sum(weights * (y - fitted) ** 2)) / (x.size - 2)
    volume = x_mean - y_mean / slope
    variance_of_zero = scatter * (1.0 / total + (volume - x_mean) ** 2 / squares) / slope**2
    return _Zero(volume, math.sqrt(variance_of_zero), x, y)


def _named(
    line: _Zero | None,
    side: Literal["before", "after"],
    kind: Literal["strong", "weak"],
    family: str = "",
    step: int = 0,
) -> GranLine | None:
    if line is None:
        return None
    return GranLine(
        side=side,
        kind=kind,
        family=family,
        step=step,
        volume=line.volume,
        standard_error=line.standard_error,
        x=line.x,
        y=line.y,
    )
