"""Sums that keep what rounding leaves out."""

from collections.abc import Sequence

import numpy as np

from bufferfolio.water import FloatArray


def two_sum(a: FloatArray, b: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return a + b and what rounding left out of it.

    Shapes: a and b S; results S.
    Units: those of the arguments.
    Raises: nothing.
    Source: Knuth, The Art of Computer Programming, vol. 2, 4.2.2, theorem B.
    """
    total = a + b
    of_b = total - a
    return total, (a - (total - of_b)) + (b - of_b)


def exact_charge(charges: Sequence[int], amounts: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return Σ z m so exactly that opposite ions cancel and leave what is really left.

    Shapes: charges n; amounts (n, *S); results S, the sum and what rounding left out of it.
    Units: amounts mol/kg; results mol/kg.
    Raises: nothing.
    Source: `two_sum`, a charge of z added z times.
    """
    total = np.zeros(amounts.shape[1:])
    rest = np.zeros(amounts.shape[1:])
    for charge, amount in zip(charges, amounts, strict=True):
        for _ in range(abs(charge)):
            total, lost = two_sum(total, np.copysign(1.0, charge) * amount)
            rest = rest + lost
    return two_sum(total, rest)
