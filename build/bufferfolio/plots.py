"""From results to figures: what each picture of a sheet shows.

The page's own engine draws the same pictures from its own results (`plots.js`), so that words and
ranges are made here from numbers only, never from anything the page does not have.
"""

from collections.abc import Callable, Mapping, Sequence
from typing import Final, Literal

import numpy as np

from bufferfolio.definitions import Interval
from bufferfolio.figures import Axis, Cells, Figure, Mark, Series
from bufferfolio.formatting import fixed, plain, signed, significant
from bufferfolio.sheets import Sheet, Side
from bufferfolio.water import ZERO_CELSIUS, FloatArray

PH: Final = Axis(label="pH", unit="", low=0.0, high=14.0)
SHOWN: Final = 1e-3  # of the largest total: below it a form is not drawn
MOST_LINES: Final = 10
MILLI: Final = 1e3


def fractions_figure(sheet: Sheet) -> Figure:
    """Share of each form of each family against pH, the formulation's own pH marked."""
    mixture, sweep = sheet.subject.mixture, sheet.sweep
    shown = [i for i, total in enumerate(mixture.totals) if total > SHOWN * mixture.totals.max()]
    series = [
        Series(name=form.name, label=form.label, style=0, x=sweep.pH, y=shares[row])
        for i in shown
        for shares in [sweep.forms.fractions[i]]
        for row, form in enumerate(mixture.families[i].species)
    ]
    pH = sheet.reference.pH
    return Figure(
        key="fractions",
        kind="lines",
        title="Forms of each family",
        x=PH,
        y=Axis(label="share of the family", unit="", low=0.0, high=1.0),
        series=styled(series),
        marks=(Mark(axis="x", value=pH, label=f"pH {fixed(pH, 2)}"),),
        cells=None,
        summary=_species_words(sheet),
    )


def _species_words(sheet: Sheet) -> str:
    parts = []
    for family, total, shares in zip(
        sheet.subject.mixture.families,
        sheet.subject.mixture.totals,
        sheet.reference.forms.fractions,
        strict=True,
    ):
        if total > 0.0:
            top = int(np.argmax(shares))
            parts.append(
                f"{fixed(shares[top] * 100, 0)} % of {family.label} as {family.species[top].label}"
            )
    named = "; ".join(parts) if parts else "no family is present"
    return f"At pH {fixed(sheet.reference.pH, 2)}: {named}."


def capacity_figure(sheet: Sheet) -> Figure:
    """Buffer capacity against pH, within and around the limits of use."""
    sweep, limits = sheet.sweep, sheet.subject.formulation.use_pH
    inside = (sweep.pH >= limits.low - 1.5) & (sweep.pH <= limits.high + 1.5)
    top = float(np.max(sweep.capacity[inside])) * MILLI
    at = sheet.reference
    return Figure(
        key="capacity",
        kind="lines",
        title="Buffer capacity",
        x=PH,
        y=Axis(label="buffer capacity", unit="mmol/kg per pH", low=0.0, high=1.1 * top),
        series=styled(
            [
                Series(
                    name="capacity", label="capacity", style=0, x=sweep.pH, y=sweep.capacity * MILLI
                )
            ]
        ),
        marks=(
            Mark(axis="x", value=at.pH, label=f"pH {fixed(at.pH, 2)}"),
            *_limit_marks(limits, "x"),
        ),
        cells=None,
        summary=(
            f"At its own pH of {fixed(at.pH, 2)} the formulation takes up "
            f"{significant(at.capacity * MILLI)} mmol of strong base per kg of water and pH unit."
        ),
    )


def _limit_marks(limits: Interval, axis: Literal["x", "y"]) -> tuple[Mark, ...]:
    return (
        Mark(axis=axis, value=limits.low, label=f"limit {plain(limits.low)}"),
        Mark(axis=axis, value=limits.high, label=f"limit {plain(limits.high)}"),
    )


def titration_figure(sheet: Sheet) -> Figure | None:
    """PH after each amount of acid (left) and base (right), plain water for contrast."""
    if not sheet.sides:
        return None
    own, contrast = _joined(sheet.sides)
    marks = [
        Mark(
            axis="x",
            value=_signed(side, point.amount) * MILLI,
            label=f"equivalence, pH {fixed(point.pH, 1)}",
        )
        for side in sheet.sides
        for point in side.equivalences
        if point.visible
    ]
    limits = sheet.subject.formulation.use_pH
    low = min(0.0, float(own[0][0]))
    high = max(0.0, float(own[0][-1]))
    return Figure(
        key="titration",
        kind="lines",
        title="Titration both ways",
        x=Axis(label=_amount_label(sheet.sides), unit="mmol/kg", low=low, high=high),
        y=PH,
        series=styled(
            [
                Series(name="formulation", label="this formulation", style=0, x=own[0], y=own[1]),
                Series(name="water", label="plain water", style=1, x=contrast[0], y=contrast[1]),
            ]
        ),
        marks=(*marks, *_limit_marks(limits, "y")),
        cells=None,
        summary=_titration_words(sheet.sides),
    )


def _signed(side: Side, amount: float) -> float:
    return -amount if side.titrant.direction == "downward" else amount


def _amount_label(sides: Sequence[Side]) -> str:
    directions = {side.titrant.direction for side in sides}
    if directions == {"downward"}:
        return "acid added"
    if directions == {"upward"}:
        return "base added"
    return "acid ← added → base"


def _joined(
    sides: Sequence[Side],
) -> tuple[tuple[FloatArray, FloatArray], tuple[FloatArray, FloatArray]]:
    """Put both directions on one axis, acid to the left, the start counted once."""
    x, own, contrast = [], [], []
    for side in sides:
        amount, pH, water = side.curve.amount, side.curve.state.pH, side.contrast.state.pH
        if side.titrant.direction == "downward":
            x.append(-amount[::-1] * MILLI)
            own.append(pH[::-1])
            contrast.append(water[::-1])
        else:
            skip = 1 if x else 0
            x.append(amount[skip:] * MILLI)
            own.append(pH[skip:])
            contrast.append(water[skip:])
    axis = np.concatenate(x)
    return (axis, np.concatenate(own)), (axis, np.concatenate(contrast))


def _titration_words(sides: Sequence[Side]) -> str:
    parts = []
    for side in sides:
        name = side.titrant.reagent.label
        if side.reserve > 0.0:
            parts.append(
                f"{significant(side.reserve * MILLI)} mmol of {name} per kg of water lead to the "
                "limit of use"
            )
        else:
            parts.append(f"{name} does not lead to the limit of use before the batch has doubled")
        hidden = sum(not point.visible for point in side.equivalences)
        if hidden:
            parts.append(f"{hidden} equivalence point(s) with {name} do not show on the curve")
    return "; ".join(parts) + "."


def drift_figure(sheet: Sheet) -> Figure:
    """PH along temperature over the range of use."""
    celsius = sheet.drift.temperature - ZERO_CELSIUS
    pH = sheet.drift.state.pH
    low, high = float(np.min(pH)), float(np.max(pH))
    expected = sheet.subject.formulation.expected
    margin = max(0.1, 0.15 * (high - low))
    slope = (float(pH[-1]) - float(pH[0])) / (float(celsius[-1]) - float(celsius[0]))
    marks = [
        Mark(
            axis="x",
            value=sheet.reference.temperature - ZERO_CELSIUS,
            label=f"{plain(sheet.reference.temperature - ZERO_CELSIUS)} °C",
        )
    ]
    if expected is not None:
        marks.append(Mark(axis="y", value=expected.pH, label=f"expected {plain(expected.pH)}"))
        low, high = min(low, expected.pH), max(high, expected.pH)
    return Figure(
        key="drift",
        kind="lines",
        title="pH and temperature",
        x=Axis(label="temperature", unit="°C", low=float(celsius[0]), high=float(celsius[-1])),
        y=Axis(label="pH", unit="", low=low - margin, high=high + margin),
        series=styled([Series(name="pH", label="pH", style=0, x=celsius, y=pH)]),
        marks=tuple(marks),
        cells=None,
        summary=(
            f"From {plain(celsius[0])} to {plain(celsius[-1])} °C the pH goes from "
            f"{fixed(pH[0], 2)} to {fixed(pH[-1], 2)}, {signed(slope, 4)} per °C on average."
        ),
    )


def surface_figure(sheet: Sheet) -> Figure | None:
    """PH over temperature and added acid or base, as a map."""
    surface = sheet.surface
    if surface is None:
        return None
    amount = surface.amount * MILLI
    celsius = surface.temperature - ZERO_CELSIUS
    limits = sheet.subject.formulation.use_pH
    return Figure(
        key="surface",
        kind="map",
        title="pH over temperature and added acid or base",
        x=Axis(
            label=_amount_label(sheet.sides),
            unit="mmol/kg",
            low=float(amount[0]),
            high=float(amount[-1]),
        ),
        y=Axis(label="temperature", unit="°C", low=float(celsius[0]), high=float(celsius[-1])),
        series=(),
        marks=(
            Mark(axis="value", value=limits.low, label=f"limit {plain(limits.low)}"),
            Mark(axis="value", value=limits.high, label=f"limit {plain(limits.high)}"),
        ),
        cells=Cells(x=edges(amount), y=edges(celsius), values=surface.pH, label="pH", unit=""),
        summary=(
            f"Over the temperatures of use and these additions the pH runs from "
            f"{fixed(np.nanmin(surface.pH), 2)} to {fixed(np.nanmax(surface.pH), 2)}."
        ),
    )


def edges(centres: FloatArray) -> FloatArray:
    """Return the edges of cells around grid points, the outermost cells cut at their points.

    Shapes: centres n; result n + 1.
    Units: those of the centres.
    Raises: nothing.
    Source: definition.
    """
    middles = 0.5 * (centres[1:] + centres[:-1])
    return np.concatenate([centres[:1], middles, centres[-1:]])


def styled(series: Sequence[Series]) -> tuple[Series, ...]:
    """Give each line its style by its place, and leave out what could not be told apart."""
    return tuple(
        Series(name=line.name, label=line.label, style=place, x=line.x, y=line.y)
        for place, line in enumerate(series[:MOST_LINES])
    )


SHEET_FIGURES: Final[Mapping[str, Callable[[Sheet], Figure | None]]] = {
    "fractions": fractions_figure,
    "capacity": capacity_figure,
    "titration": titration_figure,
    "drift": drift_figure,
    "surface": surface_figure,
}
