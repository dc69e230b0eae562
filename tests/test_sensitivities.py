"""Analytic sensitivities against differences of solved states, and slopes of water's constants."""

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest

from bufferfolio import temperature, water
from bufferfolio.activity import MODELS, name_of
from bufferfolio.definitions import Interaction
from bufferfolio.equilibrium import Equilibrium, solve
from bufferfolio.sensitivities import Sensitivities, sensitivities
from bufferfolio.speciation import Mixture
from bufferfolio.subjects import subject_of
from bufferfolio.temperature import Constants, constants_at
from recipes import shipped
from solutions import CHLORIDE, MAGNESIUM, SODIUM, SULFATE, made_up_family, mixture_of

KELVIN = np.linspace(270.0, 370.0, 11)
# Differences are good to about the square of a step; the largest miss today is 9e-6.
CLOSE = 3e-5


def slope_of(function: Callable[[float], float], step: float) -> float:
    """Return a difference of fourth order."""
    near = function(step) - function(-step)
    far = function(2.0 * step) - function(-2.0 * step)
    return (8.0 * near - far) / (12.0 * step)


@pytest.mark.parametrize("name", ["density", "permittivity", "debye_huckel", "pKw"])
def test_slopes_of_water(name: str) -> None:
    both = getattr(water, f"{name}_and_slope")
    value, slope = both(KELVIN)
    plain = getattr(water, "pKw_at" if name == "pKw" else name)
    np.testing.assert_array_equal(value, plain(KELVIN))
    numeric = slope_of(lambda step: both(KELVIN + step)[0], 1e-2)
    np.testing.assert_allclose(slope, numeric, rtol=1e-8, atol=1e-9)


def test_slopes_of_every_shipped_pK() -> None:
    for family in shipped().families.values():
        for step in family.steps:
            numeric = slope_of(lambda by, step=step: temperature.pK_at(step, KELVIN + by), 0.05)
            found = temperature.pK_slope(step, KELVIN)
            np.testing.assert_allclose(found, numeric, rtol=1e-7, atol=1e-10)


class Case:
    """A mixture at one temperature, solved again with one thing changed at a time."""

    def __init__(self, mixture: Mixture, kelvin: float, model: str, pairs: tuple = ()) -> None:
        self.mixture, self.kelvin, self.pairs = mixture, kelvin, pairs
        self.model = MODELS[model]
        self.constants = constants_at(mixture.families, np.array(kelvin))

    def solved(self, **changed: object) -> Equilibrium:
        mixture: Mixture = changed.get("mixture", self.mixture)
        constants: Constants = changed.get("constants", self.constants)
        return solve(mixture, constants, changed.get("model", self.model), self.pairs)

    def pH(self, **changed: object) -> float:
        return float(self.solved(**changed).pH)

    def found(self) -> Sensitivities:
        return sensitivities(self.mixture, self.kelvin, self.model, self.solved(), self.pairs)

    def with_pK(self, family: int, step: int, by: float) -> float:
        pK = [values.copy() for values in self.constants.pK]
        pK[family][step] += by
        return self.pH(constants=replace(self.constants, pK=tuple(pK)))

    def with_amount(self, field: str, row: int, factor: float) -> float:
        amounts = getattr(self.mixture, field).copy()
        amounts[row] *= factor
        return self.pH(mixture=replace(self.mixture, **{field: amounts}))

    def with_long_range(self, by: float) -> float:
        law = self.model.long_range

        def shifted(coefficient, ionic_strength):
            term, slope = law(coefficient, ionic_strength)
            return term + by, slope

        return self.pH(model=replace(self.model, long_range=shifted))

    def check(self) -> None:
        found, small = self.found(), 1e-3
        for number, family in enumerate(self.mixture.families):
            total = self.mixture.totals[number]
            for step in range(len(family.steps)):
                numeric = slope_of(lambda by, n=number, s=step: self.with_pK(n, s, by), small)
                assert found.pK[number][step] == pytest.approx(numeric, rel=CLOSE, abs=1e-8)
            relative = slope_of(lambda by, n=number: self.with_amount("totals", n, 1.0 + by), small)
            assert found.totals[number] * total == pytest.approx(relative, rel=CLOSE, abs=1e-8)
        for number, molality in enumerate(self.mixture.molalities):
            relative = slope_of(
                lambda by, n=number: self.with_amount("molalities", n, 1.0 + by), 1e-5
            )
            assert found.ions[number] * molality == pytest.approx(relative, rel=CLOSE, abs=1e-6)
        numeric = slope_of(
            lambda by: self.pH(constants=replace(self.constants, pKw=self.constants.pKw + by)),
            small,
        )
        assert found.pKw == pytest.approx(numeric, rel=CLOSE, abs=1e-8)
        numeric = slope_of(self.with_long_range, small)
        assert found.long_range == pytest.approx(numeric, rel=CLOSE, abs=1e-8)
        numeric = slope_of(
            lambda by: self.pH(
                constants=constants_at(self.mixture.families, np.array(self.kelvin + by))
            ),
            0.05,
        )
        assert found.temperature == pytest.approx(numeric, rel=CLOSE, abs=1e-8)


@pytest.mark.parametrize("key", sorted(shipped().formulations))
def test_every_shipped_formulation(key: str) -> None:
    subject = subject_of(shipped().formulations[key], shipped())
    use = subject.formulation.use_temperature
    model = name_of(subject.model)
    Case(subject.mixture, 0.6 * use.low + 0.4 * use.high, model, subject.interactions).check()


@pytest.mark.parametrize("model", sorted(MODELS))
def test_a_made_up_mixture_with_strong_pairs(model: str) -> None:
    """Several families and charges of both signs; pair terms a few times larger than real ones."""
    acid, base = made_up_family("acid", 1, [3.1, 6.4, 9.9]), made_up_family("base", 2, [5.0, 8.1])
    mixture = mixture_of(
        [(acid, 0.07), (base, 0.03)],
        [(SODIUM, 0.11), (CHLORIDE, 0.13), (MAGNESIUM, 0.02), (SULFATE, 0.01)],
    )
    citation = shipped().interactions[0].citation
    pairs = tuple(
        Interaction(cation=cation, anion=anion, epsilon=epsilon, citation=citation)
        for cation, anion, epsilon in (
            ("Na+", "acid 3", -0.4),
            ("Mg+2", "Cl-", 0.5),
            ("base 0", "SO4-2", -0.6),
            ("H+", "Cl-", 0.3),
            ("Mg+2", "OH-", -0.2),
        )
    )
    Case(mixture, 291.0, model, pairs).check()


def test_a_pair_far_from_its_ends_follows_its_pK_alone() -> None:
    """Textbook: in the middle of a strong buffer pH = pK, whatever water does."""
    pair = made_up_family("pair", 0, [7.0])
    case = Case(mixture_of([(pair, 0.2)], [(SODIUM, 0.1)]), 298.15, "ideal")
    found = case.found()
    assert found.pK[0][0] == pytest.approx(1.0, abs=1e-5)
    assert found.pKw == pytest.approx(0.0, abs=1e-5)
    # d pH / d ln(base) of a 1:1 pair is 2 / ln 10: base up, acid down.
    assert found.ions[0] * 0.1 == pytest.approx(2.0 / np.log(10.0), rel=1e-4)
