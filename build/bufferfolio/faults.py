"""Which fault explains a reading best: every suspect's own reading, and how well it fits.

How likely the readings are where a suspect is true follows from the band; where its extent is not
known, that likelihood is averaged over the range of the extent, so that a suspect who could explain
everything is not preferred to one who explains this. Before the reading all are equally likely.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Final

import numpy as np

from bufferfolio.equilibrium import solve
from bufferfolio.measurements import refusal_of
from bufferfolio.speciation import Mixture
from bufferfolio.subjects import Subject
from bufferfolio.substitutes import Setting
from bufferfolio.suspects import (
    Scene,
    Suspect,
    altered,
    extent_at,
    read_as,
    scene_of,
    suspects_of,
    words_of,
)
from bufferfolio.temperature import constants_at
from bufferfolio.uncertainty import band_of
from bufferfolio.water import FloatArray


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """One reading of a batch, or of a sample of it."""

    temperature: float  # K
    pH: float
    dilution: float = 1.0  # volume of the diluted sample over volume of the batch in it


@dataclass(frozen=True, slots=True, kw_only=True)
class Explanation:
    """One suspect, held against the readings."""

    suspect: Suspect
    words: str
    extent: float  # that fits best
    predicted: tuple[float, ...]  # a pH for each reading
    misfit: float  # 1: at the edge of the band; for several readings, of their common band
    fits: bool
    weight: float  # share of all that may explain the readings


@dataclass(frozen=True, slots=True, kw_only=True)
class Diagnosis:
    """All suspects, the best explanation first."""

    refusal: str  # key of `measurements.REFUSALS`; "": not refused
    nothing_wrong: bool  # the readings are where a careful reading of a right batch is expected
    none_fits: bool  # none of the suspects explains the readings
    explanations: tuple[Explanation, ...]
    unexplained: float  # weight of something that is not in the list


def diagnosed(setting: Setting, readings: Sequence[Reading]) -> Diagnosis:
    """Return what would explain one reading, or two.

    The batch is as it was at the first reading's temperature; the second may be of a sample diluted
    with water, or of the batch at another temperature.

    Shapes: scalar.
    Units: see `Reading`.
    Raises: nothing; readings that cannot be judged are refused.
    Source: Bayes' theorem with equal weights before; normal errors as the band has them.
    """
    for reading in readings:
        refusal = refusal_of(setting.subject, reading.temperature, reading.pH)
        if refusal:
            return Diagnosis(
                refusal=refusal,
                nothing_wrong=False,
                none_fits=False,
                explanations=(),
                unexplained=math.nan,
            )
    scene = scene_of(setting, readings[0].temperature)
    suspects = suspects_of(setting, readings[0].temperature)
    evidence = _evidence(setting.subject, readings)
    asked = [(at, share) for at, each in enumerate(suspects) for share in _shares(each)]
    curves: list[Curve] = [[] for _ in suspects]
    for _ in range(ROUNDS):
        _extend(curves, scene, suspects, readings, asked)
        asked = [
            (at, _fit(curves[at], evidence).share)
            for at, each in enumerate(suspects)
            if not each.fixed
        ]
    return _ranked(suspects, curves, evidence)


@dataclass(frozen=True, slots=True, kw_only=True)
class Forecast:
    """What would be read where a suspect is true; from one end of its range to the other."""

    words: str
    kind: str
    pH: tuple[float, float]  # at both ends; twice the same where the extent is fixed


def forecasts(setting: Setting, temperature: float) -> tuple[Forecast, ...]:
    """Return what every suspect would make of a reading at one temperature (K)."""
    scene, suspects = scene_of(setting, temperature), suspects_of(setting, temperature)
    curves: list[Curve] = [[] for _ in suspects]
    asked = [(at, end) for at in range(len(suspects)) for end in (0.0, 1.0)]
    _extend(curves, scene, suspects, (Reading(temperature=temperature, pH=math.nan),), asked)
    return tuple(
        Forecast(words=words_of(suspect), kind=suspect.kind, pH=(curve[0][1][0], curve[1][1][0]))
        for suspect, curve in zip(suspects, curves, strict=True)
    )


# Where readings go along the extents of one suspect: (share of the range, a pH for each reading).
Curve = list[tuple[float, tuple[float, ...]]]


@dataclass(frozen=True, slots=True, kw_only=True)
class Evidence:
    """The readings, and how far their errors reach and go together."""

    read: FloatArray  # n, pH
    inverse: FloatArray  # (n, n), of their covariance
    chance: float  # likelihood of these readings if any reading were as likely as any other


@dataclass(frozen=True, slots=True, kw_only=True)
class Fit:
    """How well one suspect explains the readings."""

    share: float  # of its range, where it explains them best
    misfit: float  # χ² there
    likelihood: float  # averaged over its range


def _evidence(subject: Subject, readings: Sequence[Reading]) -> Evidence:
    bands = [band_of(subject, each.temperature, dilution=each.dilution) for each in readings]
    covariance = np.zeros((len(bands), len(bands)))
    for parts in zip(*(band.contributions for band in bands), strict=True):
        effect = np.array([part.effect for part in parts]) / 2.0
        # Meter and thermometer err anew with each reading; the rest errs the same way in all.
        apart = parts[0].kind in {"meter", "temperature"}
        covariance += np.diag(effect * effect) if apart else np.outer(effect, effect)
    spread = math.sqrt(2.0 * math.pi) ** len(bands) * math.sqrt(float(np.linalg.det(covariance)))
    return Evidence(
        read=np.array([each.pH for each in readings]),
        inverse=np.asarray(np.linalg.inv(covariance), dtype=float),
        chance=spread / PH_RANGE ** len(bands),
    )


def _shares(suspect: Suspect) -> list[float]:
    return [0.0] if suspect.fixed else [step / STEPS for step in range(STEPS + 1)]


def _extend(
    curves: list[Curve],
    scene: Scene,
    suspects: Sequence[Suspect],
    readings: Sequence[Reading],
    asked: Sequence[tuple[int, float]],
) -> None:
    """Add to the curves what is read at some shares, all solved together."""
    extents = [extent_at(suspects[at], share) for at, share in asked]
    made = [
        altered(scene, suspects[at], extent) for (at, _), extent in zip(asked, extents, strict=True)
    ]
    columns = [_pH_of(scene, made, reading) for reading in readings]
    for number, ((at, share), extent) in enumerate(zip(asked, extents, strict=True)):
        seen = tuple(
            read_as(suspects[at], extent, float(column[number]), reading.temperature)
            for column, reading in zip(columns, readings, strict=True)
        )
        curves[at] = sorted([*curves[at], (share, seen)])


def _pH_of(scene: Scene, made: Sequence[Mixture], reading: Reading) -> FloatArray:
    together = Mixture(
        families=scene.base.families,
        totals=np.column_stack([each.totals for each in made]) / reading.dilution,
        ions=scene.base.ions,
        molalities=np.column_stack([each.molalities for each in made]) / reading.dilution,
    )
    subject = scene.setting.subject
    constants = constants_at(together.families, np.full(len(made), reading.temperature))
    return solve(together, constants, subject.model, subject.interactions).pH


def _fit(curve: Curve, evidence: Evidence) -> Fit:
    """Fit the extent, readings being straight between the points of a curve."""
    if len(curve) == 1:
        misfit = _chi(np.array(curve[0][1]), evidence)
        return Fit(share=0.0, misfit=misfit, likelihood=math.exp(-0.5 * misfit))
    best, at, likelihood = math.inf, 0.0, 0.0
    for (start, low), (stop, high) in pairwise(curve):
        from_low = evidence.read - np.array(low)
        along = np.array(high) - np.array(low)
        square = float(along @ evidence.inverse @ along)
        if math.isnan(square):
            continue
        flat = square < FLAT
        nearest = 0.5 if flat else float(along @ evidence.inverse @ from_low) / square
        through = min(max(nearest, 0.0), 1.0)
        least = _chi(np.array(low) + nearest * along, evidence)
        misfit = _chi(np.array(low) + through * along, evidence)
        if misfit < best - SAME:
            best, at = misfit, start + through * (stop - start)
        # Along the piece χ² is least + square (t − nearest)²; its likelihood has a closed mean.
        root = 1.0 if flat else math.sqrt(0.5 * square)
        reach = math.erf(root * (1.0 - nearest)) + math.erf(root * nearest)
        mean = 1.0 if flat else math.sqrt(math.pi) / (2.0 * root) * reach
        likelihood += (stop - start) * math.exp(-0.5 * least) * mean
    return Fit(share=at, misfit=best, likelihood=likelihood)


def _chi(predicted: FloatArray, evidence: Evidence) -> float:
    away = evidence.read - predicted
    return float(away @ evidence.inverse @ away)


def _ranked(suspects: Sequence[Suspect], curves: Sequence[Curve], evidence: Evidence) -> Diagnosis:
    """Weigh the suspects; each is shown at the point of its curve that fits best."""
    fits = [_fit(curve, evidence) for curve in curves]
    total = sum(fit.likelihood for fit in fits) + evidence.chance
    limit = FITTING[len(evidence.read) - 1]
    explanations = []
    for suspect, curve, fit in zip(suspects, curves, fits, strict=True):
        misfits = [_chi(np.array(seen), evidence) for _, seen in curve]
        nearest = int(np.argmin([math.inf if math.isnan(each) else each for each in misfits]))
        share, seen = curve[nearest]
        explanations.append(
            Explanation(
                suspect=suspect,
                words=words_of(suspect),
                extent=extent_at(suspect, share),
                predicted=seen,
                misfit=math.sqrt(misfits[nearest] / limit),
                fits=misfits[nearest] <= limit,
                weight=fit.likelihood / total,
            )
        )
    others = [each for each in explanations if each.suspect.kind != "nothing"]
    return Diagnosis(
        refusal="",
        nothing_wrong=explanations[0].fits,
        none_fits=not any(each.fits for each in others),
        explanations=tuple(sorted(explanations, key=lambda each: -each.weight)),
        unexplained=evidence.chance / total,
    )


STEPS: Final = 8  # of a range at first
ROUNDS: Final = 5  # the first, and so many less one of coming closer to the best extent
FLAT: Final = 1e-3  # of a piece of a curve, in χ²: its middle stands for it
SAME: Final = 1e-9  # of χ²
PH_RANGE: Final = 14.0
FITTING: Final = (4.0, 6.18)  # χ² that 95.45 % stay below, for one reading and for two
