"""Derivatives of pH by anything, against differences of solved mixtures."""

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest

from bufferfolio.composition import mixed
from bufferfolio.curve_derivatives import Change, pH_derivatives
from bufferfolio.equilibrium import solve
from bufferfolio.experiments import amounts
from bufferfolio.speciation import Mixture
from bufferfolio.temperature import Constants, constants_at
from measured_titrations import titration_of

STEP = 1e-5
# A difference of two solved points is good to about 1e-7 where the curve bends most.
AGREEMENT = 2e-6

CURVES = [("citrate-phosphate", 0), ("tris-assay", 1), ("spent-cleaner", 0), ("holding-water", 0)]


@pytest.fixture(params=CURVES, ids=lambda pair: pair[0])
def solved(request: pytest.FixtureRequest):
    """Return forty points of a curve, and what solves and differentiates them."""
    experiment = titration_of(*request.param)
    amount = amounts(experiment, np.linspace(0.0, 3e-5, 40))
    mixture = mixed(experiment.mixture, experiment.added, amount)
    constants = constants_at(mixture.families, np.full(40, 298.15))
    rest = (experiment.model, experiment.interactions)
    state = solve(mixture, constants, *rest)

    def pH(there: Mixture, numbers: Constants) -> np.ndarray:
        return solve(there, numbers, *rest).pH

    def derivative(change: Change) -> np.ndarray:
        (found,) = pH_derivatives(mixture, constants, rest[0], state, [change], rest[1])
        return found

    return mixture, constants, pH, derivative


def assert_is_slope(found: np.ndarray, moved: Callable[[float], np.ndarray], about: str) -> None:
    expected = (moved(STEP) - moved(-STEP)) / (2.0 * STEP)
    miss = np.abs(found - expected) / (0.01 + np.abs(expected))
    assert miss.max() < AGREEMENT, about


def test_by_the_total_of_each_family(solved) -> None:
    mixture, constants, pH, derivative = solved
    for row, family in enumerate(mixture.families):
        totals = np.zeros_like(mixture.totals)
        totals[row] = mixture.totals[row]
        change = Change(totals=totals, molalities=np.zeros_like(mixture.molalities))

        def moved(step: float, totals: np.ndarray = totals) -> np.ndarray:
            return pH(replace(mixture, totals=mixture.totals + step * totals), constants)

        assert_is_slope(derivative(change), moved, family.key)


def test_by_each_ion(solved) -> None:
    mixture, constants, pH, derivative = solved
    for row, ion in enumerate(mixture.ions):
        molalities = np.zeros_like(mixture.molalities)
        molalities[row] = 1e-3
        change = Change(totals=np.zeros_like(mixture.totals), molalities=molalities)

        def moved(step: float, molalities: np.ndarray = molalities) -> np.ndarray:
            there = mixture.molalities + step * molalities
            return pH(replace(mixture, molalities=there), constants)

        assert_is_slope(derivative(change), moved, ion.name)


def test_by_each_constant(solved) -> None:
    mixture, constants, pH, derivative = solved
    nothing = np.zeros_like(mixture.totals), np.zeros_like(mixture.molalities)
    for row, family in enumerate(mixture.families):
        for step in range(len(family.steps)):
            change = Change(totals=nothing[0], molalities=nothing[1], pK=(row, step))

            def moved(by: float, row: int = row, step: int = step) -> np.ndarray:
                pK = [own.copy() for own in constants.pK]
                pK[row][step] += by
                return pH(mixture, replace(constants, pK=tuple(pK)))

            assert_is_slope(derivative(change), moved, f"{family.key}, step {step + 1}")


def test_several_changes_at_once_are_each_of_them(solved) -> None:
    mixture, _, _, derivative = solved
    nothing = np.zeros_like(mixture.totals), np.ones_like(mixture.molalities)
    first = Change(totals=mixture.totals, molalities=0.0 * nothing[1])
    second = Change(totals=nothing[0], molalities=mixture.molalities)
    both = Change(totals=mixture.totals, molalities=mixture.molalities)
    np.testing.assert_allclose(
        derivative(both), derivative(first) + derivative(second), rtol=1e-9, atol=1e-12
    )
