"""The same equations written a second time, with 40 digits, and solved by brackets.

Nothing of the package takes part in the second solution but the numbers that go in: pK, pKw, the
Debye–Hückel coefficient, pair coefficients and amounts. mpmath carries the digits.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
import pytest
from mpmath import mp, mpf

from bufferfolio.activity import MODELS
from bufferfolio.definitions import Interaction
from bufferfolio.equilibrium import solve
from bufferfolio.speciation import Mixture
from solutions import (
    CALCIUM,
    CHLORIDE,
    MADE_UP,
    MAGNESIUM,
    POTASSIUM,
    SODIUM,
    SULFATE,
    constants_of,
    made_up_family,
    mixture_of,
)

AGREEMENT = 1e-9  # in pH, and in ionic strength relative
CLOSE = mpf(
    "1e-13"
)  # in pH or ln I: two places this near, false position is far nearer to the root
Composition = list[tuple[str, int, mpf]]
Pairs = Mapping[tuple[str, str], float]  # kg/mol by the names of both ions


@dataclass(frozen=True, slots=True)
class Raw:
    """A mixture as numbers alone."""

    families: tuple[
        tuple[tuple[str, ...], int, tuple[float, ...], float], ...
    ]  # names, z, pK, total
    ions: tuple[tuple[str, int, float], ...]
    pKw: float
    debye_huckel: float
    model: str
    pairs: Pairs


def long_range(raw: Raw, strength: mpf) -> mpf:
    """D of log10 γ = −z² D."""
    root = mp.sqrt(strength)
    if raw.model == "davies":
        return raw.debye_huckel * (root / (1 + root) - mpf("0.3") * strength)
    if raw.model == "specific-ion":
        return raw.debye_huckel * root / (1 + mpf("1.5") * root)
    return mpf(0)


def composition(raw: Raw, pH: mpf, strength: mpf, extra: Mapping[str, mpf]) -> Composition:
    """Name, charge and molality of everything; `extra` is Σ ε m of each."""
    inverse = mpf(10) ** long_range(raw, strength)  # 1 / γ of a singly charged ion

    def over_gamma(name: str, charge: int) -> mpf:
        return inverse ** (charge**2) * (mpf(10) ** -extra[name] if name in extra else 1)

    activity = mpf(10) ** -pH
    there = [
        ("H+", 1, activity * over_gamma("H+", 1)),
        ("OH-", -1, power_of_ten(-raw.pKw) / activity * over_gamma("OH-", -1)),
    ]
    for names, charge, pK, total in raw.families:
        share = [over_gamma(names[0], charge)]
        product = mpf(1)
        for lost, value in enumerate(pK, start=1):
            product = product * power_of_ten(-value) / activity
            share.append(product * over_gamma(names[lost], charge - lost))
        scale = total / mp.fsum(share)
        there += [
            (name, charge - lost, part * scale)
            for lost, (name, part) in enumerate(zip(names, share, strict=True))
        ]
    return there + [(name, charge, mpf(molality)) for name, charge, molality in raw.ions]


@lru_cache(maxsize=10_000)
def power_of_ten(exponent: float) -> mpf:
    """10 to a power, worked out once."""
    return mpf(10) ** mpf(exponent)


def root(residual: Callable[[mpf], mpf], low: mpf, high: mpf) -> mpf:
    """A root between two places of opposite sign: false position, halving where that drags."""
    f_low, f_high = residual(low), residual(high)
    assert f_low <= 0 <= f_high, "no sign change to begin with"
    last = low
    for turn in range(400):
        halve = turn % 4 == 3
        middle = (low + high) / 2 if halve else (low * f_high - high * f_low) / (f_high - f_low)
        value = residual(middle)
        if value == 0 or (not halve and abs(middle - last) < CLOSE):
            return middle
        # An end that stays put would hold false position back: its weight is halved.
        if value < 0:
            low, f_low, f_high = middle, value, f_high / 2 if last < middle else f_high
        else:
            high, f_high, f_low = middle, value, f_low / 2 if last > middle else f_low
        last = middle
    raise AssertionError("no end to the search")


def balanced_pH(raw: Raw, strength: mpf, extra: Mapping[str, mpf], near: mpf) -> mpf:
    """The pH at which charge balances for a given ionic strength; the charge falls with pH."""

    def residual(pH: mpf) -> mpf:
        there = composition(raw, pH, strength, extra)
        plus = mp.fsum(charge * amount for _, charge, amount in there if charge > 0)
        minus = mp.fsum(-charge * amount for _, charge, amount in there if charge < 0)
        return mp.log(minus / plus)

    wide = mpf("0.5")
    low, high = near - wide, near + wide
    while residual(low) > 0:
        low, wide = low - wide, 2 * wide
    while residual(high) < 0:
        high, wide = high + wide, 2 * wide
    return root(residual, low, high)


def solution(raw: Raw, extra: Mapping[str, mpf]) -> tuple[mpf, mpf]:
    """pH and ionic strength at the lowest ionic strength that is consistent with itself."""
    pH = mpf(7)

    def actual(strength: mpf) -> mpf:
        nonlocal pH
        pH = balanced_pH(raw, strength, extra, pH)
        there = composition(raw, pH, strength, extra)
        return mp.fsum(charge**2 * amount for _, charge, amount in there) / 2

    if raw.model == "ideal":
        strength = actual(mpf(0))
        return pH, strength

    def residual(ln_strength: mpf) -> mpf:
        return ln_strength - mp.log(actual(mp.exp(ln_strength)))

    # The strong ions alone make this much, so that nothing can be missed below it.
    strong = mp.fsum(charge**2 * mpf(amount) for _, charge, amount in raw.ions) / 2
    low, step = mp.log(strong + mpf(10) ** -9) - mpf(10) ** -6, mpf("0.5")
    while residual(low + step) < 0:
        low += step
    strength = mp.exp(root(residual, low, low + step))
    return balanced_pH(raw, strength, extra, pH), strength


def independent(raw: Raw) -> tuple[mpf, mpf]:
    """The solution with pair terms repeated until they stand still."""
    extra: dict[str, mpf] = {}
    for _ in range(200):
        pH, strength = solution(raw, extra)
        if not raw.pairs:
            return pH, strength
        there = {name: amount for name, _, amount in composition(raw, pH, strength, extra)}
        new = dict.fromkeys(there, mpf(0))
        for (cation, anion), epsilon in raw.pairs.items():
            if cation in there and anion in there:
                new[cation] += mpf(epsilon) * there[anion]
                new[anion] += mpf(epsilon) * there[cation]
        change = max(abs(new[name] - extra.get(name, mpf(0))) for name in new)
        extra = new
        if change < mpf(10) ** -16:
            return solution(raw, extra)
    raise AssertionError("pair terms do not stand still")


def raw_of(mixture: Mixture, temperature: float, model: str, pairs: Pairs) -> Raw:
    """One mixture, S = (), as numbers."""
    constants = constants_of(mixture, temperature)
    return Raw(
        families=tuple(
            (
                tuple(form.name for form in family.species),
                family.charge,
                tuple(float(value) for value in pK),
                float(total),
            )
            for family, pK, total in zip(
                mixture.families, constants.pK, mixture.totals, strict=True
            )
        ),
        ions=tuple(
            (ion.name, ion.charge, float(amount))
            for ion, amount in zip(mixture.ions, mixture.molalities, strict=True)
        ),
        pKw=float(constants.pKw),
        debye_huckel=float(constants.debye_huckel),
        model=model,
        pairs=pairs,
    )


@pytest.fixture(autouse=True)
def forty_digits():
    with mp.workdps(40):
        yield


def assert_same(
    mixture: Mixture, temperature: float, model: str, interactions: tuple[Interaction, ...] = ()
) -> None:
    """Compare the package's solution of one mixture with the independent one."""
    pairs = {(pair.cation, pair.anion): pair.epsilon for pair in interactions}
    ours = solve(mixture, constants_of(mixture, temperature), MODELS[model], interactions)
    pH, strength = independent(raw_of(mixture, temperature, model, pairs))
    # The largest miss today is 4e-14 in pH, just past the equivalence of acetic acid.
    assert abs(float(ours.pH) - float(pH)) < AGREEMENT
    assert abs(float(ours.ionic_strength) / float(strength) - 1.0) < AGREEMENT


def random_mixture(random: np.random.Generator) -> Mixture:
    """Up to ten families of charge +3 to −4 and four strong ions, over the whole range."""
    families = []
    for position in range(random.integers(0, 11)):
        charge = int(random.integers(0, 4))
        steps = int(random.integers(1, 5))
        pK = np.cumsum([random.uniform(-1.0, 6.0), *random.uniform(0.3, 4.0, steps - 1)])
        family = made_up_family(f"family {position}", charge, [float(value) for value in pK])
        families.append((family, 10.0 ** random.uniform(-9.0, np.log10(2.0))))
    ions = (SODIUM, CHLORIDE, MAGNESIUM, SULFATE)
    return mixture_of(
        families, [(ion, 10.0 ** random.uniform(-9.0, np.log10(3.0))) for ion in ions]
    )


@pytest.mark.parametrize("model", MODELS)
@pytest.mark.parametrize("seed", range(7))
def test_random_mixtures_agree_with_the_independent_solution(seed: int, model: str) -> None:
    """Ten a case, 210 in all."""
    random = np.random.default_rng([seed, list(MODELS).index(model)])
    for _ in range(10):
        assert_same(random_mixture(random), random.uniform(268.15, 373.15), model)


PHOSPHORIC = made_up_family("phosphoric", 0, [2.148, 7.198, 12.35])
GLYCINE = made_up_family("glycine", 1, [2.350, 9.778])
ACETIC = made_up_family("acetic", 0, [4.756])
EDTA = made_up_family("EDTA", 2, [0.0, 1.5, 2.0, 2.69, 6.13, 10.37])
TEN = [
    made_up_family(f"family {i}", i % 4, [1.0 + i, 3.5 + i, 6.0 + i, 8.0 + i]) for i in range(10)
]

HARD = {
    "plain water": mixture_of([], [(SODIUM, 0.0)]),
    "1e-9 of acid in 3 mol/kg of salt": mixture_of([], [(SODIUM, 3.0 - 1e-9), (CHLORIDE, 3.0)]),
    "1e-9 of base in 3 mol/kg of salt": mixture_of([], [(SODIUM, 3.0 + 1e-9), (CHLORIDE, 3.0)]),
    "1e-7 of acid in 3 mol/kg of salt": mixture_of([], [(SODIUM, 3.0 - 1e-7), (CHLORIDE, 3.0)]),
    "salt of three ions that cancel": mixture_of(
        [], [(SODIUM, 0.1), (POTASSIUM, 0.2), (CHLORIDE, 0.1 + 0.2)]
    ),
    "salts of two charges": mixture_of([], [(MAGNESIUM, 1.5), (SULFATE, 1.5 + 5e-10)]),
    "strong acid": mixture_of([], [(CHLORIDE, 3.0)]),
    "strong base": mixture_of([], [(SODIUM, 3.0)]),
    "traces of strong acid": mixture_of([], [(CHLORIDE, 1e-9)]),
    "a weak acid's trace in salt": mixture_of([(ACETIC, 1e-9)], [(SODIUM, 3.0), (CHLORIDE, 3.0)]),
    "an ampholyte in salt": mixture_of([(GLYCINE, 2.0)], [(SODIUM, 3.0), (CHLORIDE, 3.0)]),
    "phosphoric acid, 2 mol/kg": mixture_of([(PHOSPHORIC, 2.0)]),
    "phosphate, exactly NaH2PO4": mixture_of([(PHOSPHORIC, 0.1)], [(SODIUM, 0.1)]),
    "phosphate, exactly Na3PO4": mixture_of([(PHOSPHORIC, 1.0)], [(SODIUM, 3.0)]),
    "acetate just past equivalence": mixture_of([(ACETIC, 0.1)], [(SODIUM, 0.1 + 1e-9)]),
    "seven forms": mixture_of([(EDTA, 0.5)], [(SODIUM, 2.0)]),
    "seven forms without salt": mixture_of([(EDTA, 2.0)]),
    "a trace of seven forms in salt": mixture_of([(EDTA, 1e-9)], [(SODIUM, 3.0), (CHLORIDE, 3.0)]),
    "ten families, all concentrated": mixture_of([(family, 2.0) for family in TEN]),
    "ten families with base": mixture_of([(family, 0.2) for family in TEN], [(SODIUM, 3.0)]),
    "ten traces": mixture_of([(family, 1e-9) for family in TEN], [(SODIUM, 1e-9)]),
}


@pytest.mark.parametrize("model", MODELS)
@pytest.mark.parametrize("name", HARD)
def test_hard_mixtures_agree_with_the_independent_solution(name: str, model: str) -> None:
    """The ends of the range of temperature take turns."""
    assert_same(HARD[name], 268.15 if model == "davies" else 373.15, model)


def pair(cation: str, anion: str, epsilon: float) -> Interaction:
    return Interaction(cation=cation, anion=anion, epsilon=epsilon, citation=MADE_UP)


# Values of the size that is published; what counts here is the arithmetic.
PAIRS = (
    pair("H+", "Cl-", 0.12),
    pair("Na+", "Cl-", 0.03),
    pair("Na+", "OH-", 0.04),
    pair("K+", "OH-", 0.09),
    pair("Mg+2", "Cl-", 0.19),
    pair("Ca+2", "Cl-", 0.14),
    pair("Na+", "SO4-2", -0.12),
    pair("Na+", "phosphoric 1", -0.08),
    pair("Na+", "phosphoric 2", -0.15),
    pair("Na+", "phosphoric 3", -0.25),
    pair("Na+", "acetic 1", 0.08),
    pair("glycine 0", "Cl-", -0.06),
)
WITH_PAIRS = {
    "strong acid": mixture_of([], [(CHLORIDE, 3.0)]),
    "strong base": mixture_of([], [(SODIUM, 2.0), (POTASSIUM, 1.0)]),
    "acid in salt": mixture_of([], [(SODIUM, 2.0), (CHLORIDE, 2.1)]),
    "1e-9 of acid in salt": mixture_of([], [(SODIUM, 3.0 - 1e-9), (CHLORIDE, 3.0)]),
    "mixed salts": mixture_of(
        [(ACETIC, 0.1)],
        [(SODIUM, 0.5), (MAGNESIUM, 0.5), (CALCIUM, 0.2), (SULFATE, 0.3), (CHLORIDE, 1.25)],
    ),
    "phosphate": mixture_of([(PHOSPHORIC, 1.0)], [(SODIUM, 1.5)]),
    "phosphate, basic": mixture_of([(PHOSPHORIC, 0.6)], [(SODIUM, 1.9)]),
    "acetate": mixture_of([(ACETIC, 2.0)], [(SODIUM, 1.0)]),
    "three families": mixture_of(
        [(PHOSPHORIC, 0.3), (ACETIC, 0.3), (GLYCINE, 0.3)], [(SODIUM, 1.0), (CHLORIDE, 0.3)]
    ),
}


@pytest.mark.parametrize("name", WITH_PAIRS)
def test_pair_terms_agree_with_the_independent_solution(name: str) -> None:
    assert_same(WITH_PAIRS[name], 298.15, "specific-ion", PAIRS)


def test_the_independent_solution_can_tell_a_difference() -> None:
    """A pK that is 1e-8 off must not pass for the same."""
    mixture = mixture_of([(ACETIC, 0.1)], [(SODIUM, 0.05)])
    other = mixture_of([(made_up_family("acetic", 0, [4.756 + 1e-8]), 0.1)], [(SODIUM, 0.05)])
    ours = solve(mixture, constants_of(mixture), MODELS["davies"])
    pH, _ = independent(raw_of(other, 298.15, "davies", {}))
    assert abs(float(ours.pH) - float(pH)) > AGREEMENT
