"""Water against a general property library, point by point."""

import numpy as np
import pytest
from iapws import IAPWS95
from iapws._iapws import _Dielectric, _Kw

from bufferfolio.water import debye_huckel, density, permittivity, pKw_at, pKw_at_density

CELSIUS = np.array([0.0, 4.0, 10.0, 20.0, 25.0, 37.0, 50.0, 75.0, 99.0])
ATMOSPHERE = 0.101325  # MPa


@pytest.fixture(scope="module")
def reference_density() -> np.ndarray:
    """IAPWS-95 at one atmosphere."""
    return np.array([IAPWS95(T=273.15 + t, P=ATMOSPHERE).rho for t in CELSIUS])


def test_density_follows_iapws_95(reference_density: np.ndarray) -> None:
    """Kell's equation is older: 0.0036 kg/m3 off to 30 °C and 0.015 at 100 °C."""
    miss = np.abs(density(273.15 + CELSIUS) - reference_density)
    assert (miss[CELSIUS <= 40.0] < 0.004).all()
    assert (miss < 0.016).all()


def test_water_is_densest_at_four_degrees() -> None:
    celsius = np.linspace(2.0, 6.0, 401)
    assert celsius[np.argmax(density(273.15 + celsius))] == pytest.approx(3.98, abs=0.02)


def test_permittivity_is_that_of_the_release(reference_density: np.ndarray) -> None:
    """The same equation, at Kell's density: 0.015 kg/m3 in 1000 is worth 0.001."""
    expected = [
        _Dielectric(rho, 273.15 + t) for rho, t in zip(reference_density, CELSIUS, strict=True)
    ]
    np.testing.assert_allclose(permittivity(273.15 + CELSIUS), expected, rtol=0.0, atol=0.0015)


def test_pKw_follows_the_later_parameters_within_their_difference() -> None:
    """The library carries a revision of 2020: 0.009 off at 0 °C, 0.015 at 75 °C, 0.000 at 25."""

    expected = [_Kw(float(density(np.array(273.15 + t))), 273.15 + t) for t in CELSIUS]
    np.testing.assert_allclose(pKw_at(273.15 + CELSIUS), expected, rtol=0.0, atol=0.016)


def test_pKw_is_that_of_its_own_density() -> None:
    kelvin = 273.15 + CELSIUS
    np.testing.assert_array_equal(pKw_at(kelvin), pKw_at_density(kelvin, density(kelvin)))


def test_debye_huckel_from_its_definition() -> None:
    """A = (2 π N ρ)^½ (e² / 4 π ε₀ ε k T)^1.5 / ln 10; by hand with IAPWS-95: 0.5098 at 25 °C."""
    a = (
        (2 * np.pi * 6.02214076e23 * 997.0476) ** 0.5
        * (1.602176634e-19**2 / (4 * np.pi * 8.8541878128e-12 * 78.408 * 1.380649e-23 * 298.15))
        ** 1.5
        / np.log(10)
    )
    assert a == pytest.approx(0.5098, abs=5e-5)
    assert float(debye_huckel(np.array(298.15))) == pytest.approx(a, rel=2e-5)


def test_everything_is_smooth_a_few_kelvin_below_freezing() -> None:
    """A freezer's salt solution is liquid: no jump and no NaN down to −5 °C."""
    kelvin = np.linspace(268.15, 283.15, 301)
    for function in (density, permittivity, pKw_at, debye_huckel):
        values = function(kelvin)
        assert np.isfinite(values).all()
        step = np.diff(values)
        assert np.abs(np.diff(step)).max() < 0.02 * np.abs(step).max() + 1e-9
