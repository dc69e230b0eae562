"""How well things are known: what a file states, and what is assumed where it states nothing.

Every number here is a k = 2 interval: about nineteen careful results in twenty lie within it.
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Final

from bufferfolio.definitions import Formulation, Reagent, ReferenceConstants, Step, Tolerances


@dataclass(frozen=True, slots=True, kw_only=True)
class Assumption:
    """What is assumed where nothing is stated, and why."""

    value: float
    unit: str  # as a page prints it; "" for a pH or a pK
    of: str
    why: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Doubt:
    """How well one step is known."""

    pK: float  # at the temperature where its law is anchored
    enthalpy: float  # J/mol; 0 for an equation, which carries its own temperatures
    stated: bool  # whether the source states the first


@dataclass(frozen=True, slots=True, kw_only=True)
class Care:
    """How well a batch is weighed, measured and read: a file's tolerances, none of them missing."""

    weighing: float  # relative
    volume: float  # relative
    temperature: float  # K
    meter: float  # in pH
    model: float  # in pH; 0 where the file knows of nothing that is left out
    stated: tuple[str, ...]  # names of those that the file states


def care_of(formulation: Formulation) -> Care:
    """Return a formulation's tolerances, the usual ones where its file states none."""
    stated = formulation.tolerances
    return Care(
        weighing=_or_assumed(stated.weighing, "weighing"),
        volume=_or_assumed(stated.volume, "volume"),
        temperature=_or_assumed(stated.temperature, "temperature"),
        meter=_or_assumed(stated.meter, "meter"),
        model=0.0 if stated.model is None else stated.model,
        stated=_stated(stated),
    )


def _or_assumed(value: float | None, key: str) -> float:
    return ASSUMED[key].value if value is None else value


def _stated(tolerances: Tolerances) -> tuple[str, ...]:
    names = ("weighing", "volume", "temperature", "meter", "model")
    return tuple(name for name in names if getattr(tolerances, name) is not None)


def content_doubt(reagent: Reagent) -> float:
    """Return how far the content of a bottle may be from its label, relative.

    A label states the least a solid holds: the doubt is what it leaves open. A standard solution is
    made to be right, a concentrated liquid is not.
    """
    if reagent.stock is None:
        return max(ASSUMED["pure solid"].value, 1.0 - reagent.purity)
    kind = "solution" if reagent.stock.mass_fraction < DILUTE else "liquid"
    return ASSUMED[kind].value


def step_doubt(step: Step) -> Doubt:
    """Return how well one step is known."""
    assumed = ASSUMED["pK"].value
    pK = assumed if step.uncertainty is None else max(2.0 * step.uncertainty, LEAST_PK)
    enthalpy = 0.0
    if isinstance(step.law, ReferenceConstants):
        key = "enthalpy" if step.law.enthalpy is not None else "unstated enthalpy"
        enthalpy = ASSUMED[key].value
    return Doubt(pK=pK, enthalpy=enthalpy, stated=step.uncertainty is not None)


def pK_doubt(step: Step, temperature: float) -> float:
    """Return how well a pK is known at one temperature: less well, the farther it is carried."""
    doubt = step_doubt(step)
    if not isinstance(step.law, ReferenceConstants):
        return doubt.pK
    carried = doubt.enthalpy * (1.0 / temperature - 1.0 / step.law.temperature) / R_LN10
    return math.hypot(doubt.pK, carried)


DILUTE: Final = 0.05  # kg of solute per kg: a liquid below it is taken for a standard solution
LEAST_PK: Final = 0.002  # no pK is taken to be better known than this, whatever its source says
R_LN10: Final = 8.314462618 * math.log(10.0)  # J/(mol K)

ASSUMED: Final[Mapping[str, Assumption]] = {
    "weighing": Assumption(
        value=0.005,
        unit="",
        of="each mass, relative",
        why="a field balance that reads to 0.01 g, with a few grams on it",
    ),
    "volume": Assumption(
        value=0.01,
        unit="",
        of="each volume, relative",
        why="measuring cylinders, and marks of cans and tanks",
    ),
    "temperature": Assumption(
        value=0.5, unit="K", of="the temperature", why="a thermometer that is not calibrated"
    ),
    "meter": Assumption(
        value=0.02,
        unit="",
        of="the meter's reading",
        why="calibration at two points with fresh buffers, and a display of hundredths",
    ),
    "pure solid": Assumption(
        value=0.002,
        unit="",
        of="the content of a solid, relative, at the least",
        why="moisture; otherwise what the purity on its label leaves open",
    ),
    "solution": Assumption(
        value=0.005,
        unit="",
        of="the content of a standard solution, relative",
        why="the usual statement on ready-made standard solutions",
    ),
    "liquid": Assumption(
        value=0.02,
        unit="",
        of="the content of a concentrated liquid, relative",
        why="labels give a range of one or two per cent, and bottles lose strength",
    ),
    "pK": Assumption(
        value=0.02,
        unit="",
        of="a pK whose source states no uncertainty",
        why="compilations of the same measurements commonly differ by one or two hundredths",
    ),
    "enthalpy": Assumption(
        value=1000.0,
        unit="J/mol",
        of="the enthalpy that carries a pK to another temperature",
        why="compilations commonly differ by this much",
    ),
    "unstated enthalpy": Assumption(
        value=30_000.0,
        unit="J/mol",
        of="an enthalpy that is not stated, and taken as zero",
        why="most acids lie between −10 and 50 kJ/mol",
    ),
    "pKw": Assumption(
        value=0.01, unit="", of="pKw", why="about what the release on it estimates for itself"
    ),
    "activity": Assumption(
        value=0.2,
        unit="",
        of="the linear term of log10 γ, times A z² I",
        why="twice the difference of 0.2 and 0.3, the two factors published for one equation; "
        "in the ideal model, the whole of what it leaves out",
    ),
}
