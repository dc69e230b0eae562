"""Whether a reading is what it should be, in words that do not need a colour."""

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Final

from bufferfolio.measurements import (
    meant,
    measured,
    refusal_of,
    shown,
    target_at,
)
from bufferfolio.recipes import Recipe, mixture_of
from bufferfolio.subjects import Subject, solved_at
from bufferfolio.uncertainty import Band, band_of


@dataclass(frozen=True, slots=True, kw_only=True)
class Verdict:
    """What a judgement says."""

    mark: str  # a sign that is not only a colour
    words: str
    action: str


@dataclass(frozen=True, slots=True, kw_only=True)
class BatchState:
    """Where the batch stands at its own temperature, its sample having been read at another."""

    temperature: float  # K
    pH: float  # of the batch that the sample was taken of
    expected: float  # of a batch made by the recipe
    target: float
    within_use: bool  # whether it may be used so


@dataclass(frozen=True, slots=True, kw_only=True)
class Judgement:
    """A reading held against what is expected and against what the chemist accepts."""

    refusal: str  # key of `measurements.REFUSALS`; "": judged
    verdict: str  # key of `VERDICTS`; "" where refused
    temperature: float  # K, of the sample
    reading: float  # as the meter showed it
    pH: float  # what it stands for; the reading, but for a meter without compensation
    expected: float  # pH
    shown: float  # what this meter should show
    band: Band | None  # None where refused
    target: float  # pH: what the chemist stated, carried to this temperature
    tolerance: float | None  # about the target; None: not stated
    difference: float  # pH minus expected
    inside_tolerance: bool | None
    within_band: bool
    batch: BatchState | None  # None where sample and batch have the same temperature


def judged(
    subject: Subject,
    temperature: float,
    reading: float,
    compensation: float | None = None,
    batch_temperature: float | None = None,
    recipe: Recipe | None = None,
) -> Judgement:
    """Return the judgement of one reading.

    Shapes: scalar.
    Units: temperatures K; `compensation` is the temperature that the meter's slope is set for,
        None where the meter follows the sample; `recipe` as it was weighed, None: as the
        formulation says.
    Raises: nothing; what cannot be judged is refused with a reason.
    Source: band and tolerance as `uncertainty.band_of` and the formulation's file have them.
    """
    pH = meant(reading, temperature, compensation)
    refusal = refusal_of(subject, temperature, reading) or refusal_of(subject, temperature, pH)
    if not refusal and batch_temperature is not None:
        refusal = refusal_of(subject, batch_temperature, pH)
    if refusal:
        return _refused(refusal, temperature, reading, pH)
    band, target = band_of(subject, temperature, recipe), target_at(subject, temperature)
    stated = subject.formulation.expected
    tolerance = None if stated is None else stated.tolerance
    inside = None if tolerance is None else abs(pH - target) <= tolerance + ROUNDING
    within = abs(pH - band.pH) <= band.half_width + ROUNDING
    return Judgement(
        refusal="",
        verdict=VERDICT_OF[inside, within],
        temperature=temperature,
        reading=reading,
        pH=pH,
        expected=band.pH,
        shown=shown(band.pH, temperature, compensation),
        band=band,
        target=target,
        tolerance=tolerance,
        difference=pH - band.pH,
        inside_tolerance=inside,
        within_band=within,
        batch=_batch(subject, temperature, pH, batch_temperature, recipe),
    )


def _batch(
    subject: Subject,
    temperature: float,
    pH: float,
    batch_temperature: float | None,
    recipe: Recipe | None,
) -> BatchState | None:
    if batch_temperature is None or batch_temperature == temperature:
        return None
    there = measured(subject, temperature, pH, recipe=recipe)
    made = None if recipe is None else mixture_of(recipe, subject.mixture)
    state = solved_at(subject, batch_temperature, there.mixture)
    return BatchState(
        temperature=batch_temperature,
        pH=float(state.pH),
        expected=float(solved_at(subject, batch_temperature, made).pH),
        target=target_at(subject, batch_temperature),
        within_use=subject.formulation.use_pH.holds(float(state.pH)),
    )


def _refused(refusal: str, temperature: float, reading: float, pH: float) -> Judgement:
    return Judgement(
        refusal=refusal,
        verdict="",
        temperature=temperature,
        reading=reading,
        pH=pH,
        expected=math.nan,
        shown=math.nan,
        band=None,
        target=math.nan,
        tolerance=None,
        difference=math.nan,
        inside_tolerance=None,
        within_band=False,
        batch=None,
    )


ROUNDING: Final = 1e-9  # in pH: 8.11 is inside 8.16 ± 0.05 whatever binary fractions say

# (inside tolerance, within band) to a key of VERDICTS; None: no tolerance is stated.
VERDICT_OF: Final[Mapping[tuple[bool | None, bool], str]] = {
    (True, True): "right",
    (True, False): "accepted",
    (False, True): "doubtful",
    (False, False): "off",
    (None, True): "expected",
    (None, False): "unexpected",
}
VERDICTS: Final[Mapping[str, Verdict]] = {
    "right": Verdict(
        mark="✓",
        words="Inside tolerance, and where a careful reading is expected.",
        action="Use the batch.",
    ),
    "accepted": Verdict(
        mark="✓",
        words="Inside tolerance, but farther from the expected reading than careful work explains.",
        action="Use the batch, and look for the cause.",
    ),
    "doubtful": Verdict(
        mark="?",
        words="Outside tolerance, but no farther from the expected reading than meter, weighing "
        "and constants may be.",
        action="Calibrate the meter and read again before anything is corrected.",
    ),
    "off": Verdict(
        mark="✗",
        words="Outside tolerance, and farther from the expected reading than careful work "
        "explains.",
        action="Read again; then find the fault, or correct the batch.",
    ),
    "expected": Verdict(
        mark="✓",
        words="Where a careful reading is expected. No tolerance is stated.",
        action="Use the batch.",
    ),
    "unexpected": Verdict(
        mark="✗",
        words="Farther from the expected reading than careful work explains. "
        "No tolerance is stated.",
        action="Read again; then find the fault.",
    ),
}
