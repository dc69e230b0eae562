"""Numbers with units: what each kind of field accepts, and its value in the project's own units.

pint does the conversion; it is imported on first use because that takes a good part of a second.
"""

import functools
import math
import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from difflib import get_close_matches
from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    import pint


class Unfit(Exception):
    """A value that its field cannot take: `problem` reads on from the field's name."""

    def __init__(self, problem: str, accepted: str) -> None:
        """Take what is wrong and what would do."""
        super().__init__(problem)
        self.problem = problem
        self.accepted = accepted


@dataclass(frozen=True, slots=True)
class Dimension:
    """The units that one kind of quantity may be written in."""

    name: str
    target: str  # the unit used inside, as pint names it
    units: Mapping[str, str]  # as files write them, to pint's names; the first is the usual one
    example: str
    low: float = -math.inf  # smallest value, in the unit used inside
    high: float = math.inf
    limits: str = ""  # the two in words


@dataclass(frozen=True, slots=True)
class Measured:
    """A quantity in the units used inside."""

    value: float
    dimension: str  # the name of its Dimension
    stated: str  # as the file wrote it


def parse_number(text: str) -> float:
    """Return a bare number; raises Unfit where the text is none, or not finite."""
    if not NUMBER.fullmatch(text):
        raise Unfit(_number_problem(text), "a number such as 4.756")
    return _finite(text, "a number such as 4.756")


def parse_quantity(text: str, *dimensions: Dimension) -> Measured:
    """Return the value of a number with a unit of one of `dimensions`; raises Unfit otherwise."""
    known = [unit for dimension in dimensions for unit in dimension.units]
    accepted = ", ".join(unit for unit in known if unit not in LOOK_ALIKES)
    found = QUANTITY.fullmatch(text)
    if found is None:
        raise Unfit(_number_problem(text), f"a number and a unit, such as {dimensions[0].example}")
    number, unit = found.group(1), " ".join(found.group(2).split())
    if not unit:
        raise Unfit(f"has no unit: {text!r}", accepted)
    for dimension in dimensions:
        if unit in dimension.units:
            magnitude = _finite(number, f"a quantity such as {dimension.example}")
            value = _converted(magnitude, dimension.units[unit], dimension.target)
            return Measured(_within(value, dimension, text), dimension.name, text)
    raise Unfit(f"has the unknown unit {unit!r}{suggestion(unit, known)}", accepted)


def pattern(*dimensions: Dimension) -> str:
    """Return a regular expression for editors: a number and one of the accepted units."""
    units = "|".join(re.escape(unit) for dimension in dimensions for unit in dimension.units)
    return rf"^\s*{NUMBER.pattern}\s*({units})\s*$".replace("\\ ", " ")


def suggestion(name: str, known: Sequence[str]) -> str:
    """Return "; did you mean 'x'?" where a known name comes close, else nothing."""
    close = closest(name, known)
    return "" if close is None else f"; did you mean {close!r}?"


def closest(name: str, known: Sequence[str]) -> str | None:
    """Return the known name that comes close to `name`, if any does."""
    lowered = {entry.lower(): entry for entry in reversed(known)}
    close = get_close_matches(name.lower()[:LONGEST_NAME], lowered, n=1, cutoff=0.6)
    return lowered[close[0]] if close else None


def _number_problem(text: str) -> str:
    if DECIMAL_COMMA.match(text):
        return f"has a decimal comma, where a point is needed: {text!r}"
    if WORD_NUMBER.match(text):
        return f"is not a finite number: {text!r}"
    return f"is not a number: {text!r}"


def _finite(text: str, accepted: str) -> float:
    value = float(text)
    if not math.isfinite(value):
        raise Unfit(f"is not a finite number: {text!r}", accepted)
    return value


def _within(value: float, dimension: Dimension, text: str) -> float:
    if not dimension.low <= value <= dimension.high:
        raise Unfit(f"is out of bounds: {text!r}", dimension.limits)
    return value


def _converted(magnitude: float, unit: str, target: str) -> float:
    if unit == target:
        return magnitude
    value = float(_registry().Quantity(magnitude, unit).to(target).magnitude)
    # Conversion factors leave a last digit behind (1049 becomes 1048.9999999999998).
    return float(f"{value:.14g}")


@functools.cache
def _registry() -> "pint.UnitRegistry[float]":
    import pint

    return pint.UnitRegistry()


NUMBER: Final = re.compile(r"[-+]?(?:(?:0|[1-9][0-9]*)(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][-+]?[0-9]+)?")
QUANTITY: Final = re.compile(rf"\s*({NUMBER.pattern})(?![0-9.,:])\s*(.*?)\s*", re.DOTALL)
DECIMAL_COMMA: Final = re.compile(r"\s*[-+]?[0-9]+,[0-9]")
LONGEST_NAME: Final = 100  # letters that are compared; difflib takes quadratic time
LOOK_ALIKES: Final = frozenset({"μL"})  # accepted, and no use to list beside its twin
WORD_NUMBER: Final = re.compile(r"\s*[-+]?\.?(?:nan|inf|infinity)\b", re.IGNORECASE)

# Every kind of quantity a definition may hold. What is not here is not accepted.
_THERMOMETERS: Final = {
    "°C": "degree_Celsius",
    "degC": "degree_Celsius",
    "K": "kelvin",
    "°F": "degree_Fahrenheit",
    "degF": "degree_Fahrenheit",
}
TEMPERATURE: Final = Dimension(
    "temperature", "kelvin", _THERMOMETERS, "25 °C", 0.0, 1e4, "a temperature above absolute zero"
)
WATER_TEMPERATURE: Final = Dimension(
    "temperature", "kelvin", _THERMOMETERS, "25 °C", 268.15, 373.15, "-5 °C to 100 °C: liquid water"
)
TEMPERATURE_DIFFERENCE: Final = Dimension(
    "difference of temperature",
    "kelvin",
    {
        "°C": "delta_degree_Celsius",
        "degC": "delta_degree_Celsius",
        "K": "kelvin",
        "°F": "delta_degree_Fahrenheit",
        "degF": "delta_degree_Fahrenheit",
    },
    "0.5 °C",
    0.001,
    20.0,
    "a difference from 0.001 to 20 °C",
)
ENTHALPY: Final = Dimension(
    "enthalpy", "J/mol", {"kJ/mol": "kJ/mol", "J/mol": "J/mol"}, "-0.41 kJ/mol"
)
HEAT_CAPACITY: Final = Dimension(
    "heat capacity",
    "J/(mol*K)",
    {
        "J/(mol K)": "J/(mol*K)",
        "J/mol/K": "J/(mol*K)",
        "kJ/(mol K)": "kJ/(mol*K)",
        "kJ/mol/K": "kJ/(mol*K)",
    },
    "-142 J/(mol K)",
)
DENSITY: Final = Dimension(
    "density",
    "kg/m**3",
    {
        "g/mL": "g/mL",
        "kg/L": "kg/L",
        "g/L": "g/L",
        "kg/m3": "kg/m**3",
        "g/cm3": "g/cm**3",
    },
    "1.184 g/mL",
    100.0,
    25_000.0,
    "a density from 0.1 to 25 g/mL",
)
VOLUME: Final = Dimension(
    "volume",
    "m**3",
    {
        "L": "liter",
        "mL": "milliliter",
        "µL": "microliter",
        "μL": "microliter",  # the Greek letter, which looks the same
        "uL": "microliter",
        "l": "liter",
        "ml": "milliliter",
        "m3": "m**3",
    },
    "1 L",
)
MASS: Final = Dimension(
    "mass", "kilogram", {"g": "gram", "mg": "milligram", "kg": "kilogram"}, "6.06 g"
)
SUBSTANCE: Final = Dimension(
    "amount", "mole", {"mol": "mole", "mmol": "millimole", "µmol": "micromole"}, "0.1 mol"
)
MOLARITY: Final = Dimension(
    "amount per volume", "mol/m**3", {"mol/L": "mol/L", "mmol/L": "mmol/L"}, "0.1 mol/L"
)
MASS_PER_VOLUME: Final = Dimension(
    "mass per volume", "kg/m**3", {"g/L": "g/L", "mg/L": "mg/L"}, "5 g/L"
)
MOLALITY: Final = Dimension(
    "amount per mass of water", "mol/kg", {"mol/kg": "mol/kg", "mmol/kg": "mmol/kg"}, "0.05 mol/kg"
)
PERCENT: Final = Dimension("percent", "dimensionless", {"%": "percent"}, "37 %")
INTERACTION: Final = Dimension("interaction", "kg/mol", {"kg/mol": "kg/mol"}, "0.03 kg/mol")
AMOUNTS: Final = (SUBSTANCE, MASS, VOLUME, MOLARITY, MOLALITY, MASS_PER_VOLUME, PERCENT)
