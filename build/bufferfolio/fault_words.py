"""What is said of a fault: how large it would be, and what to check or to do about it.

`js/fault_words.js` writes the same characters.
"""

from collections.abc import Mapping
from typing import Final

from bufferfolio.composition import Addition
from bufferfolio.formatting import celsius, fixed, mass, milli, signed, significant, volume
from bufferfolio.subjects import Subject
from bufferfolio.suspects import EVEN, Suspect, words_of
from bufferfolio.water import ZERO_CELSIUS


def said(subject: Subject, suspect: Suspect, extent: float) -> str:
    """Return a suspect in words, with the extent that explains the readings best.

    An extent that does no harm, or that rounds to none, is left out.
    """
    if suspect.kind not in EVEN and extent == suspect.low:
        return words_of(suspect)
    return _sized(subject, suspect, extent) or words_of(suspect)


def _sized(subject: Subject, suspect: Suspect, extent: float) -> str:
    """Return a suspect of an open extent in words; "" where that is fixed or comes to nothing."""
    match suspect.kind:
        case "evaporation":
            return f"about {_per_cent(1.0 - extent)} of the water evaporated"
        case "carbon dioxide" if extent < 1.0:
            return f"{words_of(suspect)}, about {_per_cent(extent)} of the way to equilibrium"
        case "carbon dioxide":
            return f"{words_of(suspect)}, until equilibrium"
        case "ammonia":
            return f"about {_per_cent(extent)} of the ammonia was lost to air"
        case "overshoot":
            return _overshot(subject.additions[suspect.position], suspect.name, extent)
        case "adjusted":
            return f"it was adjusted to the same pH, but at about {_degrees(extent)}"
        case "slope":
            share = fixed(100.0 * extent, 0)
            return "" if share == "100" else f"the electrode's slope is {share} % of the right one"
        case "offset":
            size = signed(extent, 2)
            return f"the meter is off by {size} everywhere" if size[0] in "+−" else ""
        case "compensation":
            return f"the meter compensates for about {_degrees(extent)}"
    return ""


def _overshot(added: Addition, name: str, extent: float) -> str:
    dose = (
        mass(extent * added.mass, 2) if added.volume is None else volume(extent * added.volume, 2)
    )
    much = f"about {significant(1000.0 * extent, 2)} mmol/kg too much of {name}"
    return f"{much} was added in adjusting it ({dose} for each kg of water)"


def _per_cent(share: float) -> str:
    return f"{significant(100.0 * share, 2)} %"


def _degrees(kelvin: float) -> str:
    return f"{fixed(kelvin - ZERO_CELSIUS, 0)} °C"


def ranged(suspect: Suspect) -> str:
    """Return a suspect in words, with the range of its extent."""
    words, low, high = words_of(suspect), suspect.low, suspect.high
    match suspect.kind:
        case "evaporation":
            return f"{words}: up to {_per_cent(1.0 - high)}"
        case "carbon dioxide":
            return f"{words}: until equilibrium"
        case "ammonia":
            return f"{words}: up to {_per_cent(high)}"
        case "overshoot":
            return f"{words}: up to {milli(high)} mmol/kg"
        case "adjusted" | "compensation":
            return f"{words}: {celsius(low)} to {celsius(high)} °C"
        case "slope":
            return (
                f"{words}: {fixed(100.0 * low, 0)} to {fixed(100.0 * high, 0)} % of the right one"
            )
        case "offset":
            return f"{words}: {signed(low, 1)} to {signed(high, 1)}"
    return words


_CALIBRATE: Final = "Calibrate with two fresh buffers, one on each side of the reading; rinse"
_RECORD: Final = "Check the record of weighing"
_LABEL: Final = "Read the label of the bottle that was used"
_MARK: Final = "Check the mark or the weight it was filled up to"
_FILL: Final = f"{_MARK}. Fill up, mix, and read again."
_ANEW: Final = f"{_MARK}. If there is too much, make it anew."
_COMPENSATE: Final = (
    "Set the compensation to the temperature of the sample, or connect its probe, and read again."
)

# What to check or to do, by kind.
CHECKS: Final[Mapping[str, str]] = {
    "nothing": "Read a second sample if in doubt.",
    "left out": f"{_RECORD}. If it is missing, add it, mix, and read again; in doubt make it anew.",
    "too little": f"{_RECORD} and the balance. Add what is missing, mix, and read again.",
    "too much": f"{_RECORD} and the balance. Correct the batch, or make it anew.",
    "doubled": f"{_RECORD}: was it added twice? If so, make it anew.",
    "other form": f"{_LABEL}: hydrate, strength, grade. If it was the other, make it anew.",
    "conjugate": f"{_LABEL}: acid, base or salt. If it was the other, make it anew.",
    "interchanged": f"{_RECORD} line by line. If they are interchanged, make it anew.",
    "half the water": _FILL,
    "too little water": _FILL,
    "too much water": _ANEW,
    "twice the water": _ANEW,
    "evaporation": "Was it open, warm or old? Fill up to the mark with water, mix, and read again.",
    "carbon dioxide": "Read a fresh sample at once and little stirred. Keep the batch closed.",
    "ammonia": "Was it open or warm? Keep it closed, under ventilation; make it anew.",
    "overshoot": "See “Correct the batch”: the other titrant, in portions, reading between them.",
    "adjusted": "Bring a sample to the temperature of use, read it there, and correct it there.",
    "slope": f"{_CALIBRATE}, and read again. Clean or change an electrode whose slope stays off.",
    "offset": f"{_CALIBRATE}, and read again.",
    "compensation off": _COMPENSATE,
    "compensation": _COMPENSATE,
}
