"""What a sheet says of a reading before anybody takes one: the band, and what makes it wide."""

from dataclasses import dataclass
from typing import Final

from bufferfolio.band_words import contribution_words
from bufferfolio.formatting import fixed, plain, signed
from bufferfolio.measurements import target_at
from bufferfolio.subjects import Subject
from bufferfolio.tolerances import ASSUMED, Care
from bufferfolio.uncertainty import band_of


@dataclass(frozen=True, slots=True, kw_only=True)
class ContributionRow:
    """One line of what a band is made of."""

    words: str
    effect: str  # in pH, with its sign
    known: str  # "stated" or "assumed"


@dataclass(frozen=True, slots=True, kw_only=True)
class ToleranceRow:
    """How well something is weighed, measured or read."""

    of: str
    value: str
    whence: str


@dataclass(frozen=True, slots=True, kw_only=True)
class ReadingContext:
    """The expected reading at one temperature."""

    half_width: str
    low: str
    high: str
    target: str
    contributions: tuple[ContributionRow, ...]  # largest first
    tolerances: tuple[ToleranceRow, ...]


def reading_context(subject: Subject, temperature: float) -> ReadingContext:
    """Return what a sheet says of the reading expected at a temperature (K)."""
    band = band_of(subject, temperature)
    return ReadingContext(
        half_width=fixed(band.half_width, 2),
        low=fixed(band.low, 2),
        high=fixed(band.high, 2),
        target=fixed(target_at(subject, temperature), 2),
        contributions=tuple(
            ContributionRow(
                words=contribution_words(item),
                effect=signed(item.effect, 4),
                known=KNOWN[item.stated],
            )
            for item in band.ranked
        ),
        tolerances=_tolerances(subject.care),
    )


def _tolerances(care: Care) -> tuple[ToleranceRow, ...]:
    values = {
        "weighing": f"± {plain(100.0 * care.weighing)} %",
        "volume": f"± {plain(100.0 * care.volume)} %",
        "temperature": f"± {plain(care.temperature)} K",
        "meter": f"± {plain(care.meter)} in pH",
    }
    rows = [
        ToleranceRow(
            of=ASSUMED[name].of.removesuffix(", relative"),
            value=value,
            whence="stated in its file" if name in care.stated else f"assumed: {ASSUMED[name].why}",
        )
        for name, value in values.items()
    ]
    if "model" in care.stated:
        value = f"± {plain(care.model)} in pH"
        rows.append(ToleranceRow(of=LEFT_OUT, value=value, whence="stated in its file"))
    return tuple(rows)


LEFT_OUT: Final = "the prediction, for what is not modelled here"
KNOWN: Final = {True: "stated", False: "assumed"}
