"""Numbers as pages print them: rounded once, with a true minus sign and never with an exponent `e`.

`js/formatting.js` writes the same characters, so halves are rounded up from the exact binary value.
"""

import math
import re
from collections.abc import Callable, Mapping
from decimal import ROUND_HALF_UP, Decimal
from typing import Final

from bufferfolio.figure_ticks import fixed as fixed_number
from bufferfolio.figure_ticks import power_text
from bufferfolio.water import ZERO_CELSIUS

NOTHING: Final = "—"
SMALLEST_PLAIN: Final = -4  # power of ten of the first digit below which powers are written out


def fixed(value: float, decimals: int) -> str:
    """Write a number with so many decimals."""
    return fixed_number(value, decimals) if math.isfinite(value) else NOTHING


def signed(value: float, decimals: int) -> str:
    """Write a difference with its sign; one that rounds to zero has none."""
    text = fixed(value, decimals)
    zero = not any(letter in "123456789" for letter in text)
    return text if zero or value < 0.0 else f"+{text}"


def significant(value: float, figures: int = 3) -> str:
    """Write a number with so many significant figures, trailing zeros included."""
    digits, exponent = _rounded(value, figures)
    return _written(value, digits, exponent, figures)


def plain(value: float, figures: int = 4) -> str:
    """Write a number with so many significant figures at most, without trailing zeros."""
    digits, exponent = _rounded(value, figures)
    return _written(value, digits.rstrip("0") or "0", exponent, figures)


def percent(fraction: float) -> str:
    """Write a share in per cent, three significant figures."""
    return f"{significant(100.0 * fraction, 3)} %" if math.isfinite(fraction) else NOTHING


def milli(value: float) -> str:
    """Write an amount in mol as mmol, three significant figures."""
    return significant(1000.0 * value, 3)


def sentence(words: str) -> str:
    """Write words as the start of a sentence."""
    return words[:1].upper() + words[1:]


def celsius(temperature: float) -> str:
    """Write a temperature (K) as a number of degrees Celsius, to a hundredth at most."""
    text = fixed(temperature - ZERO_CELSIUS, 2)
    return text.rstrip("0").rstrip(".") if "." in text else text


def mass(kilograms: float, figures: int = 4) -> str:
    """Write a mass in kg, g or mg, with its unit."""
    if kilograms >= 1.0:
        return f"{plain(kilograms, figures)} kg"
    if kilograms >= 1e-3:
        return f"{plain(kilograms * 1e3, figures)} g"
    return f"{plain(kilograms * 1e6, figures)} mg"


def volume(cubic_metres: float, figures: int = 4) -> str:
    """Write a volume in m³, L, mL or µL, with its unit."""
    if cubic_metres >= 1.0:
        return f"{plain(cubic_metres, figures)} m³"
    if cubic_metres >= 1e-3:
        return f"{plain(cubic_metres * 1e3, figures)} L"
    if cubic_metres >= 1e-6:
        return f"{plain(cubic_metres * 1e6, figures)} mL"
    return f"{plain(cubic_metres * 1e9, figures)} µL"


def chemical(name: str) -> str:
    """Write a plain formula or ion as chemists print it: Na2HPO4·7H2O, SO4-2, NH4+."""
    found = CHARGED.fullmatch(name)
    if found is None:
        return name
    body, sign, size = found.groups()
    lowered = LOWERED.sub(lambda digits: digits.group().translate(SUBSCRIPTS), body)
    return lowered + f"{size if size and size != '1' else ''}{sign or ''}".translate(SUPERSCRIPTS)


def _rounded(value: float, figures: int) -> tuple[str, int]:
    """Return the significant digits and the power of ten of the first."""
    if not math.isfinite(value) or value == 0.0:
        return "0", 0
    exact = Decimal(abs(value))
    exponent = exact.adjusted()
    whole = int(exact.scaleb(figures - 1 - exponent).to_integral_value(ROUND_HALF_UP))
    digits = str(whole)
    if len(digits) > figures:  # 9.996 became 10.00
        return digits[:figures], exponent + 1
    return digits, exponent


def _written(value: float, digits: str, exponent: int, figures: int) -> str:
    if not math.isfinite(value):
        return NOTHING
    sign = "−" if value < 0.0 else ""
    if value == 0.0:
        return "0"
    if not SMALLEST_PLAIN <= exponent <= figures:
        mantissa = digits[0] + ("." + digits[1:] if digits[1:] else "")
        return f"{sign}{mantissa}×{power_text(exponent)}"
    if exponent < 0:
        return f"{sign}0.{'0' * (-exponent - 1)}{digits}"
    before = digits[: exponent + 1].ljust(exponent + 1, "0")
    after = digits[exponent + 1 :]
    return f"{sign}{before}.{after}" if after else f"{sign}{before}"


CHARGED: Final = re.compile(r"([^+\-]+)(?:([+-])([1-9]?))?")
LOWERED: Final = re.compile(r"(?<=[A-Za-z)\]])[0-9]+")  # a number after an atom or a group
SUBSCRIPTS: Final = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")
SUPERSCRIPTS: Final = str.maketrans("0123456789+-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻")

FILTERS: Final[Mapping[str, Callable[..., str]]] = {
    "fixed": fixed,
    "signed": signed,
    "significant": significant,
    "plain": plain,
    "percent": percent,
    "milli": milli,
    "sentence": sentence,
    "celsius": celsius,
    "mass": mass,
    "volume": volume,
    "chemical": chemical,
}
