/** Carbon dioxide of the air over water. The twin of gases.py, for one temperature. */
(function (bf) {
  "use strict";

  const IN_DRY_AIR = 420e-6; // mole fraction; the mean of the globe about 2023, recalled
  const ATMOSPHERE = 1; // atm

  /** Henry's constant of carbon dioxide in water, as a solubility.
   * Mirrors `carbon_dioxide_solubility` in gases.py.
   * Source: Plummer & Busenberg, Geochim. Cosmochim. Acta 46 (1982) 1011.
   * @param {number} temperature K, made for 0 to 250 °C
   * @returns {number} mol/(kg atm)
   */
  function carbonDioxideSolubility(temperature) {
    const decadic =
      108.3865 +
      0.01985076 * temperature -
      6919.53 / temperature -
      40.45154 * Math.log10(temperature) +
      669365 / temperature ** 2;
    return 10 ** decadic;
  }

  /** The pressure of water vapour over fresh water. Mirrors `water_vapour`.
   * Source: Weiss & Price, Mar. Chem. 8 (1980) 347, at no salinity.
   * @param {number} temperature K, made for 0 to 40 °C
   * @returns {number} atm
   */
  function waterVapour(temperature) {
    return Math.exp(24.4543 - 6745.09 / temperature - 4.8489 * Math.log(temperature / 100));
  }

  /** The molality of dissolved carbon dioxide in water that air has passed through.
   * Mirrors `carbon_dioxide_in_water`.
   * Source: Henry's law, for damp air at one atmosphere.
   * @param {number} temperature K
   * @returns {number} mol/kg
   */
  function carbonDioxideInWater(temperature) {
    const pressure = IN_DRY_AIR * (ATMOSPHERE - waterVapour(temperature));
    return carbonDioxideSolubility(temperature) * pressure;
  }

  bf.gases = { carbonDioxideSolubility, waterVapour, carbonDioxideInWater };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
