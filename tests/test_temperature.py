"""pK over temperature: the two laws against thermodynamics, and what lies outside a range."""

import numpy as np
import pytest
from scipy.integrate import quad

from bufferfolio.definitions import Interval, PublishedEquation, Step
from bufferfolio.temperature import GAS_CONSTANT, LN10, constants_at, pK_at
from bufferfolio.water import pKw_at
from solutions import MADE_UP, NOWHERE, made_up_family, made_up_step

CELSIUS = np.array([-5.0, 0.0, 10.0, 25.0, 37.0, 60.0, 100.0])


def test_pK_is_the_integral_of_van_t_hoff() -> None:
    """d ln K / dT = ΔH(T) / R T², with ΔH(T) = ΔH + ΔCp (T − 298.15), integrated numerically."""
    enthalpy, heat_capacity = 47450.0, -59.0
    step = made_up_step(8.072, enthalpy, heat_capacity)

    def slope(t: float) -> float:
        return (enthalpy + heat_capacity * (t - 298.15)) / (GAS_CONSTANT * t * t)

    for kelvin in 273.15 + CELSIUS:
        expected = 8.072 - quad(slope, 298.15, kelvin, epsabs=1e-13)[0] / LN10
        assert float(pK_at(step, np.array(kelvin))) == pytest.approx(expected, abs=1e-11)


def test_without_enthalpy_pK_stays() -> None:
    np.testing.assert_array_equal(pK_at(made_up_step(4.0), 273.15 + CELSIUS), 4.0)


def test_an_equation_is_evaluated_as_printed() -> None:
    """Every kind of term at once, against numbers worked out by hand for 300 K."""
    step = Step(
        law=PublishedEquation(
            name="made up",
            constant=1.0,
            inverse=600.0,
            linear=0.01,
            logarithm=0.5,
            inverse_square=90000.0,
        ),
        valid_temperature=Interval(low=273.15, high=323.15),
        uncertainty=None,
        citation=MADE_UP,
        enthalpy_citation=None,
        alternative=None,
        place=NOWHERE,
    )
    # 1 + 600/300 + 0.01 · 300 + 0.5 ln 300 + 90000/300², ln 300 = 5.703782474656201
    assert float(pK_at(step, np.array(300.0))) == pytest.approx(9.8518912373281, abs=1e-12)


def test_constants_say_where_a_source_does_not_reach() -> None:
    narrow = made_up_family("narrow", 0, [4.0], valid=Interval(low=283.15, high=303.15))
    wide = made_up_family("wide", 0, [7.0], valid=Interval(low=273.15, high=373.15))
    kelvin = np.array([273.0, 273.15, 283.15, 303.15, 303.2, 373.15])
    assert constants_at((wide,), kelvin).in_range.tolist() == [False, True, True, True, True, True]
    both = constants_at((wide, narrow), kelvin)
    assert both.in_range.tolist() == [False, False, True, True, False, False]
    assert np.isfinite(np.concatenate(both.pK)).all()


def test_constants_keep_the_shape_of_temperature() -> None:
    family = made_up_family("diprotic", 0, [4.0, 8.0])
    for shape in ((), (3,), (2, 3)):
        kelvin = np.full(shape, 310.15)
        constants = constants_at((family,), kelvin)
        assert constants.pK[0].shape == (2, *shape)
        assert constants.pKw.shape == constants.debye_huckel.shape == shape
        np.testing.assert_array_equal(constants.pKw, pKw_at(kelvin))
