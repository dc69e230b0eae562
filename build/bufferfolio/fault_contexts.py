"""What a sheet says of faults before anything is read: what each would make of the reading."""

from collections.abc import Sequence
from dataclasses import dataclass

from bufferfolio.definitions import Library
from bufferfolio.fault_words import ranged
from bufferfolio.faults import forecasts
from bufferfolio.formatting import fixed
from bufferfolio.subjects import Subject, reference_temperature
from bufferfolio.substitutes import setting_of
from bufferfolio.suspects import suspects_of


@dataclass(frozen=True, slots=True, kw_only=True)
class ForecastRow:
    """One reading, and all faults that would lead to it."""

    reading: str  # pH, or a range of it
    faults: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class FaultContext:
    """All that may have gone wrong, sorted by the reading it would lead to."""

    count: int  # of suspects, "nothing is wrong" left out
    sized: tuple[ForecastRow, ...]  # those of a fixed extent; among them the right batch
    ranging: tuple[ForecastRow, ...]  # those of an unknown extent


def fault_context(subject: Subject, library: Library) -> FaultContext:
    """Return what every suspect would make of a reading at the sheet's own temperature."""
    setting = setting_of(subject, library)
    kelvin = reference_temperature(subject.formulation)
    suspects = suspects_of(setting, kelvin)
    sized: list[tuple[float, str]] = []
    ranging: list[tuple[float, str, str]] = []
    for suspect, forecast in zip(suspects, forecasts(setting, kelvin), strict=True):
        low, high = sorted(forecast.pH)
        if suspect.fixed:
            sized.append((low, forecast.words))
        else:
            reading = f"{fixed(forecast.pH[0], 2)} to {fixed(forecast.pH[1], 2)}"
            ranging.append((low + high, reading, ranged(suspect)))
    return FaultContext(
        count=len(suspects) - 1,
        sized=_together(sized),
        ranging=tuple(
            ForecastRow(reading=reading, faults=(words,)) for _, reading, words in sorted(ranging)
        ),
    )


def _together(told: Sequence[tuple[float, str]]) -> tuple[ForecastRow, ...]:
    """Gather the faults that read the same, to the digits that are shown."""
    rows: dict[str, list[str]] = {}
    for pH, words in sorted(told, key=lambda each: each[0]):
        rows.setdefault(fixed(pH, 2), []).append(words)
    return tuple(
        ForecastRow(reading=reading, faults=tuple(faults)) for reading, faults in rows.items()
    )
