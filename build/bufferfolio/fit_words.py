"""What a fit says, in words and rounded numbers. `js/fit_words.js` writes the same characters."""

import math
from collections.abc import Mapping, Sequence
from typing import Final

from bufferfolio.experiments import Experiment
from bufferfolio.figure_ticks import power_of_ten
from bufferfolio.fit_parameters import Free
from bufferfolio.fit_quality import FEWEST, MISFIT, Kind
from bufferfolio.fitting import Fit
from bufferfolio.formatting import NOTHING, fixed, plain, significant, volume
from bufferfolio.gran import GranLine

MOST_DECIMALS: Final = 5


def quantity_name(free: Free, experiment: Experiment) -> str:
    """Return what a quantity is called: pK 2 of phosphoric acid."""
    if free.family:
        labels = {each.key: each.label for each in experiment.mixture.families}
        first = "total" if free.kind == "total" else f"pK {free.step + 1}"
        return f"{first} of {labels[free.family]}"
    return NAMES[free.kind]


def quantity_unit(free: Free) -> str:
    """Return the unit of a quantity, "" where it has none."""
    return UNITS.get(free.kind, "")


def with_error(value: float, error: float) -> tuple[str, str]:
    """Return a value and its standard error, two figures of the error deciding the decimals."""
    if not 0.0 < error < float("inf"):
        return significant(value, 4), NOTHING
    decimals = 0
    while error * power_of_ten(decimals) < 9.95:
        decimals += 1
        if decimals > MOST_DECIMALS:
            return significant(value, 6), significant(error, 2)
    return fixed(value, decimals), fixed(error, decimals)


def verdict_words(result: Fit) -> str:
    """Return the verdict on a fit, and what to do about it."""
    verdict = result.verdict
    names = {
        each.free.key: quantity_name(each.free, result.experiment) for each in result.estimates
    }
    free = len(result.estimates)
    points = result.freedom + free
    times = significant(result.reduced_chi_squared**0.5, 2)
    return VERDICTS[verdict.kind].format(
        names=listed([names[key] for key in verdict.about]),
        points=points,
        free="1 free quantity" if free == 1 else f"{free} free quantities",
        least=free + FEWEST,
        times=times,
    )


def scatter_words(result: Fit) -> str:
    """Return what the reduced chi-squared says: how far the points lie off, and why they may."""
    precision = result.precision
    spread = math.sqrt(float((result.residuals**2).mean()))
    chi_squared = result.reduced_chi_squared
    wide = "as far off as" if 1.0 / MISFIT <= chi_squared <= MISFIT else "nearer than"
    if not chi_squared <= MISFIT:
        wide = "farther off than"
    return (
        f"the points lie {wide} reading and burette explain ({fixed(spread, 3)} pH about the "
        f"curve; a reading is taken to be good to {plain(precision.pH)}, a volume to "
        f"{volume(precision.volume, 2)})"
    )


def gran_words(line: GranLine, experiment: Experiment) -> str:
    """Return what a Gran line belongs to."""
    if line.kind == "weak":
        return quantity_name(Free(kind="pK", family=line.family, step=line.step), experiment)
    return "strong acid or base" if line.side == "before" else "titrant in excess"


def listed(names: Sequence[str]) -> str:
    """Return names as a list in a sentence."""
    if len(names) < 2:
        return "".join(names)
    return f"{', '.join(names[:-1])} and {names[-1]}"


NAMES: Final[Mapping[str, str]] = {
    "strength": "strength of the titrant",
    "offset": "offset of the electrode",
    "slope": "slope of the electrode",
}
UNITS: Final[Mapping[str, str]] = {"strength": "mol/L", "total": "mol/kg"}
VERDICTS: Final[Mapping[Kind, str]] = {
    "well determined": "Well determined: every standard error is small enough to be of use.",
    "poorly determined": (
        "Poorly determined: these points leave the {names} uncertain. Take more points where the "
        "curve answers to it, or free less."
    ),
    "not separable": (
        "Not separable: these points do not tell the {names} from what else is free. Hold one of "
        "them at a value that is known otherwise."
    ),
    "at a bound": (
        "At a bound: the {names} went as far as a fit may go. Sample, titrant or volumes may not "
        "be what they are said to be."
    ),
    "does not fit": (
        "Does not fit: the points lie {times} times as far from the best curve as reading and "
        "burette explain. Something is at work that is not free here."
    ),
    "too few points": (
        "Too few points: {points} for {free}. At least {least} are needed to judge the result."
    ),
    "no solution": "No solution: the equations cannot be met at some of the points.",
}
