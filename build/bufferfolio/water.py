"""Water itself: density, permittivity, its ionisation and the Debye–Hückel coefficient."""

from typing import Final

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]

ZERO_CELSIUS: Final = 273.15  # K
MOLAR_MASS: Final = 0.018015268  # kg/mol, the value that R11-07 and R8-97 use

# CODATA 2018, exact since the SI of 2019 but for the electric constant.
ELEMENTARY_CHARGE: Final = 1.602176634e-19  # C
BOLTZMANN: Final = 1.380649e-23  # J/K
AVOGADRO: Final = 6.02214076e23  # 1/mol
VACUUM_PERMITTIVITY: Final = 8.8541878128e-12  # F/m


def density(temperature: FloatArray) -> FloatArray:
    """Return the density of pure water at one atmosphere.

    Shapes: temperature S; result S.
    Units: temperature K; result kg/m3.
    Raises: nothing; made for 0 to 150 °C and smooth a few kelvin below.
    Source: Kell, J. Chem. Eng. Data 20 (1975) 97, equation 16.
    """
    t = np.asarray(temperature, dtype=float) - ZERO_CELSIUS
    numerator = 999.83952 + t * (
        16.945176
        + t * (-7.9870401e-3 + t * (-46.170461e-6 + t * (105.56302e-9 - 280.54253e-12 * t)))
    )
    result: FloatArray = numerator / (1.0 + 16.879850e-3 * t)
    return result


# IAPWS R8-97, table of N, i and j for k = 1 ... 11.
_DIPOLE_TERMS: Final = (
    (0.978224486826, 1, 0.25),
    (-0.957771379375, 1, 1.0),
    (0.237511794148, 1, 2.5),
    (0.714692244396, 2, 1.5),
    (-0.298217036956, 3, 1.5),
    (-0.108863472196, 3, 2.5),
    (0.0949327488264, 4, 2.0),
    (-0.00980469816509, 5, 2.0),
    (1.65167634970e-5, 6, 5.0),
    (9.37359795772e-5, 7, 0.5),
    (-1.23179218720e-10, 10, 10.0),
)


def permittivity(temperature: FloatArray) -> FloatArray:
    """Return the static relative permittivity of water at one atmosphere.

    Shapes: temperature S; result S.
    Units: temperature K; result dimensionless.
    Raises: nothing; made for 238 to 873 K.
    Source: IAPWS R8-97; Fernández et al., J. Phys. Chem. Ref. Data 26 (1997) 1125.
    """
    kelvin = np.asarray(temperature, dtype=float)
    rho = density(kelvin)
    delta = rho / 322.0
    tau = 647.096 / kelvin
    amount = rho / MOLAR_MASS
    g = 1.0 + 0.00196096504426 * delta * (kelvin / 228.0 - 1.0) ** -1.2
    for factor, i, j in _DIPOLE_TERMS:
        g = g + factor * delta**i * tau**j
    # The release fixes its own (older) constants; newer ones would shift the result.
    a = 6.0221367e23 * 6.138e-30**2 * amount * g / (8.854187817e-12 * 1.380658e-23 * kelvin)
    b = 6.0221367e23 * 1.636e-40 * amount / (3.0 * 8.854187817e-12)
    root = np.sqrt(9.0 + 2.0 * a + 18.0 * b + a * a + 10.0 * a * b + 9.0 * b * b)
    result: FloatArray = (1.0 + a + 5.0 * b + root) / (4.0 - 4.0 * b)
    return result


def debye_huckel(temperature: FloatArray) -> FloatArray:
    """Return the Debye–Hückel coefficient A for decadic logarithms and molalities.

    Shapes: temperature S; result S.
    Units: temperature K; result (kg/mol)^0.5.
    Raises: nothing; as far as density and permittivity reach.
    Source: limiting law from the constants above, SI form (Robinson & Stokes, ch. 9).
    """
    kelvin = np.asarray(temperature, dtype=float)
    bjerrum = ELEMENTARY_CHARGE**2 / (
        4.0 * np.pi * VACUUM_PERMITTIVITY * permittivity(kelvin) * BOLTZMANN * kelvin
    )
    result: FloatArray = (
        bjerrum**1.5 * np.sqrt(2.0 * np.pi * AVOGADRO * density(kelvin)) / np.log(10.0)
    )
    return result


def pKw_at(temperature: FloatArray) -> FloatArray:
    """Return −log10 of the ionisation constant of water at one atmosphere.

    Shapes: temperature S; result S.
    Units: temperature K; result dimensionless, molal standard state.
    Raises: nothing; made for 0 to 800 °C.
    Source: IAPWS R11-07(2019); Bandura & Lvov, J. Phys. Chem. Ref. Data 35 (2006) 15.
    """
    kelvin = np.asarray(temperature, dtype=float)
    return pKw_at_density(kelvin, density(kelvin))


def pKw_at_density(temperature: FloatArray, water_density: FloatArray) -> FloatArray:
    """Return −log10 of the ionisation constant of water of a given density.

    Shapes: temperature S; water_density S; result S.
    Units: temperature K; water_density kg/m3; result dimensionless, molal standard state.
    Raises: nothing; made for 0 to 800 °C and up to 1250 kg/m3.
    Source: IAPWS R11-07(2019); Bandura & Lvov, J. Phys. Chem. Ref. Data 35 (2006) 15.
    """
    rho = water_density / 1000.0
    q = rho * np.exp(
        -0.864671 + 8659.19 / temperature - 22786.2 * rho ** (2.0 / 3.0) / temperature**2
    )
    gas = 0.61415 + (48251.33 + (-67707.93 + 10102100.0 / temperature) / temperature) / temperature
    bracket = np.log10(1.0 + q) - q / (q + 1.0) * rho * (
        0.642044 - 56.8534 / temperature - 0.375754 * rho
    )
    result: FloatArray = -12.0 * bracket + gas + 2.0 * np.log10(MOLAR_MASS)
    return result
