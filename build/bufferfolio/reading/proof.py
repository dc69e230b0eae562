"""Proof of a reagent's formula against what the reagent says it brings, atom by atom.

formula = sum of what is brought + a H2O + b H+, where b = -(net charge of what is brought).
Every atom but H and O has to match; O fixes a; H then has to match as well, or the charges cannot
be balanced.
"""

import math
from collections.abc import Sequence
from typing import Final

from bufferfolio.reading.formulas import Formula
from bufferfolio.reading.quantities import Unfit


def prove(formula: Formula, brought: Sequence[tuple[Formula, float]]) -> None:
    """Raise Unfit where the formula is not what is brought, give or take water and protons."""
    left = dict(formula.atoms)
    for part, times in brought:
        for symbol, count in part.atoms.items():
            left[symbol] = left.get(symbol, 0.0) - times * count
    odd = {s: n for s, n in left.items() if s not in ("H", "O") and not _is_zero(n)}
    if odd:
        extra = _list({symbol: count for symbol, count in odd.items() if count > 0})
        lacking = _list({symbol: -count for symbol, count in odd.items() if count < 0})
        said = [f"{extra} left over" if extra else "", f"{lacking} missing" if lacking else ""]
        problem = f"formula {formula.text} is not what `brings` says: "
        raise Unfit(problem + ", ".join(part for part in said if part), ATOMS)
    charge = sum(times * part.charge for part, times in brought)
    excess = left.get("H", 0.0) - 2.0 * left.get("O", 0.0) + charge
    if not _is_zero(excess):
        amount = f"{abs(excess):g} H too {'many' if excess > 0 else 'few'}"
        problem = f"the charges of {formula.text} cannot be balanced: {amount} beside water"
        raise Unfit(problem, CHARGES)


def _is_zero(count: float) -> bool:
    return math.isclose(count, 0.0, abs_tol=1e-6)


def _list(atoms: dict[str, float]) -> str:
    return ", ".join(f"{count:g} {symbol}" for symbol, count in sorted(atoms.items()))


ATOMS: Final = "a formula that is the sum of what it brings, give or take H2O and H+"
CHARGES: Final = "families and ions whose charges, with H+ and H2O, add up to the formula"
