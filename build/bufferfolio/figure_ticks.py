"""Round numbers along an axis, and how they are written.

The page draws the same figures in JavaScript and must come to the same characters, so nothing here
leans on how one language rounds or raises to a power: ticks are whole numbers times a power of
ten, and powers of ten are products.
"""

import math
from dataclasses import dataclass
from typing import Literal

Scale = Literal["linear", "log"]


@dataclass(frozen=True, slots=True)
class Tick:
    """A round number on an axis, and its text."""

    value: float
    text: str


def power_of_ten(exponent: int) -> float:
    """Return ten to a whole power: exact up to 22, correctly rounded below zero."""
    power = 1.0
    for _ in range(abs(exponent)):
        power *= 10.0
    return power if exponent >= 0 else 1.0 / power


def shifted(whole: int, exponent: int) -> float:
    """Return a whole number times a power of ten."""
    if exponent >= 0:
        return whole * power_of_ten(exponent)
    return whole / power_of_ten(-exponent)


def number_text(whole: int, exponent: int) -> str:
    """Write a whole number times a power of ten, with a true minus sign."""
    sign = "−" if whole < 0 else ""
    digits = str(abs(whole))
    if whole == 0:
        return "0" if exponent >= 0 else "0." + "0" * -exponent
    if exponent < -5 or exponent > 5:
        while digits.endswith("0"):
            digits = digits[:-1]
            exponent += 1
        return sign + ("" if digits == "1" else digits + "×") + power_text(exponent)
    if exponent >= 0:
        return sign + digits + "0" * exponent
    digits = digits.rjust(1 - exponent, "0")
    return f"{sign}{digits[:exponent]}.{digits[exponent:]}"


def power_text(exponent: int) -> str:
    """Write a power of ten: 10⁻³."""
    return "10" + "".join(SUPERSCRIPTS[each] for each in str(exponent))


def step_of(span: float, about: int) -> tuple[int, int]:
    """Return the smallest round step (1, 2 or 5, and exponent) that a span holds `about` times."""
    for exponent in range(-18, 19):
        for mantissa in (1, 2, 5):
            if span <= about * shifted(mantissa, exponent) * (1.0 + 1e-9):
                return mantissa, exponent
    return 1, 19


def ticks(low: float, high: float, scale: Scale, about: int) -> tuple[Tick, ...]:
    """Return the round numbers from `low` to `high`, `about` of them and one more at most.

    A logarithmic axis too short for decades gets them too: they are not evenly spaced there.
    """
    if scale == "log" and high >= 5.0 * low:
        return log_ticks(low, high, about)
    mantissa, exponent = step_of(high - low, about)
    step = shifted(mantissa, exponent)
    first = math.ceil(low / step - 1e-6)
    last = math.floor(high / step + 1e-6)
    # Zero is written without decimals; a whole axis of zeros after the point says nothing.
    return tuple(
        Tick(
            shifted(count * mantissa, exponent),
            number_text(count * mantissa, exponent) if count else "0",
        )
        for count in range(first, last + 1)
    )


def log_ticks(low: float, high: float, about: int) -> tuple[Tick, ...]:
    """Return the decades from `low` to `high`; 1, 2 and 5 in each where decades are few."""
    fits = [k for k in range(-18, 19) if low <= power_of_ten(k) * (1.0 + 1e-9)]
    decades = [k for k in fits if power_of_ten(k) <= high * (1.0 + 1e-9)]
    if len(decades) >= 3:
        every = math.ceil(len(decades) / about)
        return tuple(Tick(power_of_ten(k), power_text(k)) for k in decades[::every])
    candidates = [(mantissa, k) for k in range(-18, 19) for mantissa in (1, 2, 5)]
    return tuple(
        Tick(shifted(mantissa, k), number_text(mantissa, k))
        for mantissa, k in candidates
        if low <= shifted(mantissa, k) * (1.0 + 1e-9)
        and shifted(mantissa, k) <= high * (1.0 + 1e-9)
    )


def fixed(value: float, decimals: int) -> str:
    """Write a number with so many decimals, halves away from zero, never as minus zero."""
    whole = math.floor(abs(value) * power_of_ten(decimals) + 0.5)
    return number_text(-whole if value < 0 else whole, -decimals)


SUPERSCRIPTS = dict(zip("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹", strict=True))
