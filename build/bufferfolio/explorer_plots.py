"""From results to figures: what each picture of an explorer shows."""

from collections.abc import Callable, Mapping
from typing import Final

import numpy as np

from bufferfolio.explorations import Exploration
from bufferfolio.figures import Axis, Figure, Series
from bufferfolio.formatting import fixed, plain, significant
from bufferfolio.plots import MILLI, PH, styled
from bufferfolio.temperature import LN10
from bufferfolio.water import ZERO_CELSIUS


def explorer_fractions(exploration: Exploration) -> Figure:
    """Share of each form against pH."""
    sweep, family = exploration.sweep, exploration.family
    series = [
        Series(name=form.name, label=form.label, style=0, x=sweep.pH, y=shares)
        for form, shares in zip(family.species, sweep.forms.fractions[0], strict=True)
    ]
    return Figure(
        key="fractions",
        kind="lines",
        title="Forms against pH",
        x=PH,
        y=Axis(label="share", unit="", low=0.0, high=1.0),
        series=styled(series),
        marks=(),
        cells=None,
        summary=_crossing_words(exploration),
    )


def _crossing_words(exploration: Exploration) -> str:
    """Name the pH at which neighbouring forms are equal."""
    sweep, family = exploration.sweep, exploration.family
    shares = sweep.forms.fractions[0]
    parts = []
    for step in range(len(family.steps)):
        difference = shares[step] - shares[step + 1]
        after = int(np.argmax(difference < 0.0))
        if after == 0:
            continue
        before = after - 1
        share = difference[before] / (difference[before] - difference[after])
        crossing = sweep.pH[before] + share * (sweep.pH[after] - sweep.pH[before])
        acid, base = family.species[step].label, family.species[step + 1].label
        parts.append(f"{acid} and {base} are equal at pH {fixed(crossing, 2)}")
    return ("; ".join(parts) if parts else "One form prevails from pH 0 to 14") + "."


def explorer_logs(exploration: Exploration) -> Figure:
    """Logarithm of molality against pH, water's own ions included."""
    sweep, family = exploration.sweep, exploration.family
    tiny = 1e-300
    series = [
        Series(name=form.name, label=form.label, style=0, x=sweep.pH, y=np.log10(molality + tiny))
        for form, molality in zip(family.species, sweep.forms.families[0], strict=True)
    ]
    series += [
        Series(name="H+", label="H⁺", style=0, x=sweep.pH, y=np.log10(sweep.forms.hydrogen)),
        Series(name="OH-", label="OH⁻", style=0, x=sweep.pH, y=np.log10(sweep.forms.hydroxide)),
    ]
    return Figure(
        key="logs",
        kind="lines",
        title="Log molality against pH",
        x=PH,
        y=Axis(label="log₁₀ of molality", unit="mol/kg", low=-10.0, high=0.0),
        series=styled(series),
        marks=(),
        cells=None,
        summary=(
            f"Forms of {family.label} at {plain(exploration.total)} mol/kg in all, with H⁺ and OH⁻."
        ),
    )


def explorer_capacity(exploration: Exploration) -> Figure:
    """Buffer capacity against pH."""
    sweep = exploration.sweep
    water = LN10 * (sweep.forms.hydrogen + sweep.forms.hydroxide)
    best = int(np.argmax(sweep.capacity - water))
    return Figure(
        key="capacity",
        kind="lines",
        title="Buffer capacity against pH",
        x=PH,
        y=Axis(
            label="buffer capacity",
            unit="mmol/kg per pH",
            low=0.0,
            high=1.3 * float(sweep.capacity[best]) * MILLI,
        ),
        series=styled(
            [
                Series(
                    name="capacity", label="capacity", style=0, x=sweep.pH, y=sweep.capacity * MILLI
                )
            ]
        ),
        marks=(),
        cells=None,
        summary=(
            f"Water's own ions apart, it buffers best at pH {fixed(sweep.pH[best], 1)}; with them "
            f"it takes up {significant(sweep.capacity[best] * MILLI)} mmol/kg per pH unit there."
        ),
    )


def explorer_pK(exploration: Exploration) -> Figure:
    """Each pK along temperature, within its source's range."""
    celsius = exploration.pK_temperature - ZERO_CELSIUS
    pairs = zip(exploration.family.species, exploration.family.species[1:], strict=False)
    series = [
        Series(
            name=f"pK{row + 1}",
            label=f"{acid.label} → {base.label}",
            style=0,
            x=celsius,
            y=exploration.pK[row],
        )
        for row, (acid, base) in enumerate(pairs)
    ]
    low, high = float(np.nanmin(exploration.pK)), float(np.nanmax(exploration.pK))
    margin = max(0.2, 0.08 * (high - low))
    return Figure(
        key="pK",
        kind="lines",
        title="pK against temperature",
        x=Axis(label="temperature", unit="°C", low=float(celsius[0]), high=float(celsius[-1])),
        y=Axis(label="pK at zero ionic strength", unit="", low=low - margin, high=high + margin),
        series=styled(series),
        marks=(),
        cells=None,
        summary="Each line ends where the source of its constant no longer vouches for it.",
    )


EXPLORER_FIGURES: Final[Mapping[str, Callable[[Exploration], Figure]]] = {
    "fractions": explorer_fractions,
    "logs": explorer_logs,
    "capacity": explorer_capacity,
    "pK": explorer_pK,
}
