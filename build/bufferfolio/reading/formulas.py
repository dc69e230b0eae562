"""Chemical formulas in plain text: atoms, charge, molar mass, and how a page prints them.

A charge stands last, sign first: HPO4-2, NH4+. Water of crystallisation follows a raised dot:
Na2HPO4·7H2O. molmass knows the elements and the IUPAC standard atomic weights.
"""

import functools
import re
from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import Final

from bufferfolio.reading.quantities import Unfit, suggestion


@dataclass(frozen=True, slots=True)
class Formula:
    """What a formula says."""

    text: str
    atoms: Mapping[str, float]
    charge: int
    molar_mass: float  # kg/mol
    hydrate_water: float  # mol of water after the raised dot, per mol


@functools.cache
def parse_formula(text: str) -> Formula:
    """Return atoms, charge and molar mass of a formula; raises Unfit where it is none."""
    body, charge = _split_charge(text)
    head, *hydrates = body.split("·")
    atoms: dict[str, float] = {}
    mass = _add(atoms, head, 1.0, text)
    water = 0.0
    for part in hydrates:
        found = HYDRATE.fullmatch(part)
        if found is None:
            raise Unfit(f"has {part!r} after the raised dot", "water, as in Na2HPO4·7H2O")
        water += float(found.group(1) or 1)
    mass += _add(atoms, "H2O", water, text) if water else 0.0
    return Formula(text, MappingProxyType(atoms), charge, mass / 1000.0, water)


def _split_charge(text: str) -> tuple[str, int]:
    found = CHARGED.fullmatch(text)
    if found is None or not found.group(1):
        raise Unfit(f"is not a chemical formula: {text!r}", FORMS)
    body, sign, size = found.groups()
    if sign is None:
        return body, 0
    return body, int(size or 1) * (1 if sign == "+" else -1)


def _add(atoms: dict[str, float], part: str, times: float, text: str) -> float:
    # molmass alone would also take "2H2O" as deuterium, abbreviations such as "Me", and arithmetic.
    import molmass

    if not PLAIN_FORMULA.fullmatch(part):
        raise Unfit(f"is not a chemical formula: {text!r}", FORMS)
    for symbol in ELEMENT.findall(part):
        if symbol not in molmass.ELEMENTS:
            known = [element.symbol for element in molmass.ELEMENTS]
            close = suggestion(symbol, known)
            raise Unfit(f"has the unknown element {symbol!r} in {text!r}{close}", FORMS)
    try:
        formula = molmass.Formula(part, parse_groups=False, parse_oligos=False)
        counts = {symbol: item.count for symbol, item in formula.composition().items()}
        mass = float(formula.mass)
    except (ValueError, KeyError, ArithmeticError):
        raise Unfit(f"is not a chemical formula: {text!r}", FORMS) from None
    for symbol, count in counts.items():
        atoms[symbol] = atoms.get(symbol, 0.0) + times * count
    return times * mass


def parse_ion(text: str) -> Formula:
    """Return the formula of an ion; raises Unfit where it carries no charge."""
    if MONATOMIC_SLIP.fullmatch(text):
        meant = f"{text[:-2]}{text[-1]}{text[-2]}"
        raise Unfit(f"has the digit of the charge before its sign: {text!r}", meant)
    formula = parse_formula(text)
    if formula.charge == 0:
        raise Unfit(f"carries no charge: {text!r}", "an ion such as Na+ or SO4-2")
    return formula


def is_ion_name(text: str) -> bool:
    """Say whether a name is that of an ion: families have lower-case keys."""
    return text[:1].isupper() and ION_ENDING.search(text) is not None


def printed(text: str) -> str:
    """Return a plain-text formula with lowered numbers and a raised charge: HPO₄²⁻."""
    found = CHARGED.fullmatch(text)
    if found is None:
        return text
    body, sign, size = found.groups()
    head, *hydrates = body.split("·")
    lowered = [head.translate(LOWERED), *(_printed_hydrate(part) for part in hydrates)]
    raised = f"{size if size not in (None, '1') else ''}{sign or ''}".translate(RAISED)
    return "·".join(lowered) + raised


def _printed_hydrate(part: str) -> str:
    found = HYDRATE.fullmatch(part)
    return f"{found.group(1) or ''}H₂O" if found else part


FORMS: Final = "a formula such as Na2HPO4·7H2O, or with a charge NH4+, HPO4-2"
CHARGED: Final = re.compile(r"([^+\-\s]*)(?:([+-])([1-9]?))?")
ION_ENDING: Final = re.compile(r"[+-][0-9]*$")
MONATOMIC_SLIP: Final = re.compile(r"[A-Z][a-z]?[2-9][+-]")
HYDRATE: Final = re.compile(r"([1-9][0-9]?(?:\.[0-9]+)?|0\.[0-9]+)?H2O")
PLAIN_FORMULA: Final = re.compile(r"[A-Z(\[][A-Za-z0-9()\[\]]{0,79}")
ELEMENT: Final = re.compile(r"[A-Z][a-z]?")
LOWERED: Final = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")
RAISED: Final = str.maketrans("0123456789+-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻")
