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
    return density_and_slope(temperature)[0]


def density_and_slope(temperature: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the density of pure water at one atmosphere, and how it changes with temperature.

    Shapes: temperature S; results S.
    Units: temperature K; results kg/m3 and kg/(m3 K).
    Raises: nothing; made for 0 to 150 °C and smooth a few kelvin below.
    Source: Kell, J. Chem. Eng. Data 20 (1975) 97, equation 16.
    """
    t = np.asarray(temperature, dtype=float) - ZERO_CELSIUS
    a, b, c = 999.83952, 16.945176, -7.9870401e-3
    d, e, f = -46.170461e-6, 105.56302e-9, -280.54253e-12
    numerator = a + t * (b + t * (c + t * (d + t * (e + f * t))))
    rising = b + t * (2.0 * c + t * (3.0 * d + t * (4.0 * e + 5.0 * f * t)))
    denominator = 1.0 + 16.879850e-3 * t
    value: FloatArray = numerator / denominator
    slope: FloatArray = (rising - value * 16.879850e-3) / denominator
    return value, slope


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
    return permittivity_and_slope(temperature)[0]


def permittivity_and_slope(temperature: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the relative permittivity of water, and how it changes with temperature.

    Shapes: temperature S; results S.
    Units: temperature K; results dimensionless and 1/K.
    Raises: nothing; made for 238 to 873 K.
    Source: IAPWS R8-97; Fernández et al., J. Phys. Chem. Ref. Data 26 (1997) 1125.
    """
    kelvin = np.asarray(temperature, dtype=float)
    rho, rho_slope = density_and_slope(kelvin)
    growth = rho_slope / rho  # of the density, 1/K
    delta = rho / 322.0
    tau = 647.096 / kelvin
    amount = rho / MOLAR_MASS
    g = 1.0 + 0.00196096504426 * delta * (kelvin / 228.0 - 1.0) ** -1.2
    g_slope = (g - 1.0) * (growth - 1.2 / (kelvin - 228.0))
    for factor, i, j in _DIPOLE_TERMS:
        term = factor * delta**i * tau**j
        g = g + term
        g_slope = g_slope + term * (i * growth - j / kelvin)
    # The release fixes its own (older) constants; newer ones would shift the result.
    a = 6.0221367e23 * 6.138e-30**2 * amount * g / (8.854187817e-12 * 1.380658e-23 * kelvin)
    b = 6.0221367e23 * 1.636e-40 * amount / (3.0 * 8.854187817e-12)
    a_slope, b_slope = a * (growth + g_slope / g - 1.0 / kelvin), b * growth
    root = np.sqrt(9.0 + 2.0 * a + 18.0 * b + a * a + 10.0 * a * b + 9.0 * b * b)
    root_slope = ((1.0 + a + 5.0 * b) * a_slope + (9.0 + 5.0 * a + 9.0 * b) * b_slope) / root
    value: FloatArray = (1.0 + a + 5.0 * b + root) / (4.0 - 4.0 * b)
    rising = a_slope + 5.0 * b_slope + root_slope + 4.0 * b_slope * value
    slope: FloatArray = rising / (4.0 - 4.0 * b)
    return value, slope


def debye_huckel(temperature: FloatArray) -> FloatArray:
    """Return the Debye–Hückel coefficient A for decadic logarithms and molalities.

    Shapes: temperature S; result S.
    Units: temperature K; result (kg/mol)^0.5.
    Raises: nothing; as far as density and permittivity reach.
    Source: limiting law from the constants above, SI form (Robinson & Stokes, ch. 9).
    """
    return debye_huckel_and_slope(temperature)[0]


def debye_huckel_and_slope(temperature: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the Debye–Hückel coefficient A, and how it changes with temperature.

    Shapes: temperature S; results S.
    Units: temperature K; results (kg/mol)^0.5 and (kg/mol)^0.5/K.
    Raises: nothing; as far as density and permittivity reach.
    Source: limiting law from the constants above, SI form (Robinson & Stokes, ch. 9).
    """
    kelvin = np.asarray(temperature, dtype=float)
    rho, rho_slope = density_and_slope(kelvin)
    epsilon, epsilon_slope = permittivity_and_slope(kelvin)
    bjerrum = ELEMENTARY_CHARGE**2 / (
        4.0 * np.pi * VACUUM_PERMITTIVITY * epsilon * BOLTZMANN * kelvin
    )
    value: FloatArray = bjerrum**1.5 * np.sqrt(2.0 * np.pi * AVOGADRO * rho) / np.log(10.0)
    growth = 0.5 * rho_slope / rho - 1.5 * (epsilon_slope / epsilon + 1.0 / kelvin)
    slope: FloatArray = value * growth
    return value, slope


def pKw_at(temperature: FloatArray) -> FloatArray:
    """Return −log10 of the ionisation constant of water at one atmosphere.

    Shapes: temperature S; result S.
    Units: temperature K; result dimensionless, molal standard state.
    Raises: nothing; made for 0 to 800 °C.
    Source: IAPWS R11-07(2019); Bandura & Lvov, J. Phys. Chem. Ref. Data 35 (2006) 15.
    """
    return pKw_and_slope(temperature)[0]


def pKw_and_slope(temperature: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return pKw at one atmosphere, and how it changes with temperature.

    Shapes: temperature S; results S.
    Units: temperature K; results dimensionless and 1/K.
    Raises: nothing; made for 0 to 800 °C.
    Source: IAPWS R11-07(2019); Bandura & Lvov, J. Phys. Chem. Ref. Data 35 (2006) 15.
    """
    kelvin = np.asarray(temperature, dtype=float)
    return _pKw(kelvin, *density_and_slope(kelvin))


def pKw_at_density(temperature: FloatArray, water_density: FloatArray) -> FloatArray:
    """Return −log10 of the ionisation constant of water of a given density.

    Shapes: temperature S; water_density S; result S.
    Units: temperature K; water_density kg/m3; result dimensionless, molal standard state.
    Raises: nothing; made for 0 to 800 °C and up to 1250 kg/m3.
    Source: IAPWS R11-07(2019); Bandura & Lvov, J. Phys. Chem. Ref. Data 35 (2006) 15.
    """
    return _pKw(temperature, water_density, np.zeros_like(water_density))[0]


def _pKw(
    temperature: FloatArray, water_density: FloatArray, density_slope: FloatArray
) -> tuple[FloatArray, FloatArray]:
    rho, rho_slope = water_density / 1000.0, density_slope / 1000.0
    crowding = 22786.2 * rho ** (2.0 / 3.0) / temperature**2
    q = rho * np.exp(-0.864671 + 8659.19 / temperature - crowding)
    growth = rho_slope / rho
    q_slope = q * (
        growth - 8659.19 / temperature**2 - crowding * (growth / 1.5 - 2.0 / temperature)
    )
    gas = 0.61415 + (48251.33 + (-67707.93 + 10102100.0 / temperature) / temperature) / temperature
    gas_slope = (
        -48251.33 + (2.0 * 67707.93 - 3.0 * 10102100.0 / temperature) / temperature
    ) / temperature**2
    pull = 0.642044 - 56.8534 / temperature - 0.375754 * rho
    pull_slope = 56.8534 / temperature**2 - 0.375754 * rho_slope
    share = q / (q + 1.0)
    bracket = np.log10(1.0 + q) - share * rho * pull
    bracket_slope = q_slope / (q + 1.0) * (1.0 / np.log(10.0) - rho * pull / (q + 1.0)) - share * (
        rho_slope * pull + rho * pull_slope
    )
    value: FloatArray = -12.0 * bracket + gas + 2.0 * np.log10(MOLAR_MASS)
    slope: FloatArray = -12.0 * bracket_slope + gas_slope
    return value, slope
