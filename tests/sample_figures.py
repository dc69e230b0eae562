"""Figures for tests: a real one of each kind, and any number of awkward random ones."""

import numpy as np

from bufferfolio.figures import Axis, Cells, Figure, Mark, Series
from bufferfolio.water import FloatArray

PH = Axis(label="pH", unit="", low=0.0, high=14.0)
CHARACTERS = tuple('abcHPO₄²⁻ ⁺.,&<>"il₃pH7')


def fractions_sample() -> Figure:
    """Return the forms of an acid of three steps against pH."""
    pH = np.linspace(0.0, 14.0, 281)
    ionised = np.cumsum([np.zeros_like(pH), pH - 2.1, pH - 7.2, pH - 12.3], axis=0)
    weights = 10.0**ionised
    series = tuple(
        Series(name=name, label=name, style=at, x=pH, y=weights[at] / weights.sum(axis=0))
        for at, name in enumerate(("H₃A", "H₂A⁻", "HA²⁻", "A³⁻"))
    )
    return lines(series, Axis(label="share", unit="", low=0.0, high=1.0), (mark("x", 7.4),))


def map_sample() -> Figure:
    """Return a map that rises from left to right and falls upwards, with a gap in one corner."""
    x, y = np.linspace(-20.0, 20.0, 41), np.linspace(0.0, 40.0, 31)
    along, up = (x[1:] + x[:-1]) / 2, (y[1:] + y[:-1]) / 2
    values = 8.1 - 0.03 * (up[:, None] - 25.0) + 0.9 * np.arcsinh(along / 2.5)
    values[:4, :6] = np.nan
    return Figure(
        key="map",
        kind="map",
        title="pH over temperature and addition",
        x=Axis(label="acid or base added", unit="mmol/kg", low=-20.0, high=20.0),
        y=Axis(label="temperature", unit="°C", low=0.0, high=40.0),
        series=(),
        marks=(Mark(axis="value", value=7.0, label="pH 7.0"), mark("x", 0.0)),
        cells=Cells(x=x, y=y, values=values, label="pH", unit=""),
        summary="It rises with base.",
    )


def lines(series: tuple[Series, ...], y: Axis, marks: tuple[Mark, ...] = ()) -> Figure:
    """Return a figure of lines against pH."""
    return Figure(
        key="lines",
        kind="lines",
        title="Lines",
        x=PH,
        y=y,
        series=series,
        marks=marks,
        cells=None,
        summary="Some lines.",
    )


def line(x: FloatArray | list[float], y: FloatArray | list[float], label: str = "line") -> Series:
    """Return one line."""
    return Series(name=label, label=label, style=0, x=np.array(x), y=np.array(y))


def mark(axis: str, value: float) -> Mark:
    """Return a mark that says its value."""
    return Mark(axis="x" if axis == "x" else "y", value=value, label=f"at {value}")


def random_figures(count: int, seed: int) -> list[Figure]:
    """Return figures of both kinds with gaps, steep lines, odd axes and words to escape."""
    random = np.random.default_rng(seed)
    return [_random_map(random) if at % 3 == 0 else _random_lines(random) for at in range(count)]


def _word(random: np.random.Generator) -> str:
    return "".join(random.choice(CHARACTERS, random.integers(1, 14)))


def _axis(random: np.random.Generator, *, log: bool = False) -> Axis:
    label, unit = _word(random), str(random.choice(["", "mol/kg"]))
    if log:
        low = 10.0 ** random.uniform(-10, 3)
        high = low * 10.0 ** random.uniform(0.1, 12)
        return Axis(label=label, unit=unit, low=low, high=high, scale="log")
    low = random.normal() * 10.0 ** random.integers(-4, 4)
    if random.random() < 0.4:
        low = float(round(low))
    span = max(10.0 ** random.uniform(-6, 5), abs(low) * 1e-3)
    return Axis(label=label, unit=unit, low=low, high=low + span)


def _at(axis: Axis, part: FloatArray | float) -> FloatArray:
    if axis.scale == "log":
        return np.asarray(axis.low * (axis.high / axis.low) ** np.asarray(part))
    return np.asarray(axis.low + (axis.high - axis.low) * np.asarray(part))


def _random_lines(random: np.random.Generator) -> Figure:
    x, y = _axis(random), _axis(random, log=random.random() < 0.3)
    series = []
    for at in range(random.integers(0, 11)):
        along = np.linspace(-0.1, 1.1, random.integers(0, 120))
        up = (
            random.normal() * along + random.random(),
            1.0 / (1.0 + np.exp((along - random.random()) * random.uniform(-60, 60))),
            0.5 + 0.4 * np.sin(along * random.uniform(1, 30)),
            random.random(along.size),
        )[random.integers(0, 4)]
        values = _at(y, up)
        if random.random() < 0.4 and values.size > 0:
            gaps = random.integers(0, values.size, random.integers(1, 9))
            values[gaps] = random.choice([np.nan, np.inf, -np.inf, 0.0])
        series.append(
            Series(
                name=f"n{at}",
                label=_word(random),
                style=int(random.integers(0, 12)),
                x=_at(x, np.cos(along * 8) if random.random() < 0.1 else along),
                y=np.round(values, 1) if random.random() < 0.2 else values,
                visible=bool(random.random() < 0.9),
                points=at % 4 == 3,
            )
        )
    return Figure(
        key="lines",
        kind="lines",
        title=_word(random),
        x=x,
        y=y,
        series=tuple(series),
        marks=_marks(random, x, y),
        cells=None,
        summary=_word(random),
    )


def _random_map(random: np.random.Generator) -> Figure:
    x, y = _axis(random), _axis(random)
    across, up = random.integers(1, 30, 2)
    values = np.linspace(0, random.normal() * 5, across) + np.zeros((up, 1))
    values += np.linspace(0, random.normal() * 5, up)[:, None]
    if random.random() < 0.5:
        values += random.normal(size=values.shape) * random.random()
    if random.random() < 0.5:
        values = np.round(values * 2) / 2
    if random.random() < 0.4:
        values[random.random(values.shape) < random.choice([0.1, 0.1, 1.0])] = np.nan
    values *= 10.0 ** random.integers(-3, 3)
    limits = random.choice(values[np.isfinite(values)], 2) if np.isfinite(values).any() else ()
    return Figure(
        key="map",
        kind="map",
        title=_word(random),
        x=x,
        y=y,
        series=(),
        marks=(
            *_marks(random, x, y),
            *(Mark(axis="value", value=float(each), label=_word(random)) for each in limits),
        ),
        cells=Cells(
            x=_at(x, np.linspace(0, 1, across + 1)),
            y=_at(y, np.linspace(0, 1, up + 1)),
            values=values,
            label=_word(random),
            unit="",
        ),
        summary=_word(random),
    )


def _marks(random: np.random.Generator, x: Axis, y: Axis) -> tuple[Mark, ...]:
    found = []
    for _ in range(random.integers(0, 4)):
        part = random.uniform(-0.2, 1.2)
        found.append(
            Mark(axis="x", value=float(_at(x, part)), label=_word(random))
            if random.random() < 0.5
            else Mark(axis="y", value=float(_at(y, part)), label=_word(random))
        )
    return tuple(found)
