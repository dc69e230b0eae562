"""Carbon dioxide of the air over water."""

from typing import Final

import numpy as np

from bufferfolio.water import FloatArray

IN_DRY_AIR: Final = 420e-6  # mole fraction; the mean of the globe about 2023, recalled
ATMOSPHERE: Final = 1.0  # atm; at 1000 m above the sea it is 0.89, which matters little here


def carbon_dioxide_solubility(temperature: FloatArray) -> FloatArray:
    """Return Henry's constant of carbon dioxide in water, as a solubility.

    Shapes: temperature S; result S.
    Units: temperature K; result mol/(kg atm).
    Raises: nothing; made for 0 to 250 °C.
    Source: Plummer & Busenberg, Geochim. Cosmochim. Acta 46 (1982) 1011.
    """
    kelvin = np.asarray(temperature, dtype=float)
    decadic = (
        108.3865
        + 0.01985076 * kelvin
        - 6919.53 / kelvin
        - 40.45154 * np.log10(kelvin)
        + 669365.0 / kelvin**2
    )
    result: FloatArray = 10.0**decadic
    return result


def water_vapour(temperature: FloatArray) -> FloatArray:
    """Return the pressure of water vapour over fresh water.

    Shapes: temperature S; result S.
    Units: temperature K; result atm.
    Raises: nothing; made for 0 to 40 °C and within 0.3 % there.
    Source: Weiss & Price, Mar. Chem. 8 (1980) 347, at no salinity.
    """
    kelvin = np.asarray(temperature, dtype=float)
    result: FloatArray = np.exp(24.4543 - 6745.09 / kelvin - 4.8489 * np.log(kelvin / 100.0))
    return result


def carbon_dioxide_in_water(temperature: FloatArray) -> FloatArray:
    """Return the molality of dissolved carbon dioxide in water that air has passed through.

    Shapes: temperature S; result S.
    Units: temperature K; result mol/kg.
    Raises: nothing; as far as the two above reach.
    Source: Henry's law, for damp air at one atmosphere.
    """
    pressure = IN_DRY_AIR * (ATMOSPHERE - water_vapour(temperature))
    result: FloatArray = carbon_dioxide_solubility(temperature) * pressure
    return result
