/** Activity coefficients: how far an ion departs from its molality. The twin of activity.py.
 *
 * Every model has the form log10 γ = −z² D(I) + Σ ε m: a long-range term that depends on the
 * ionic strength alone, and, for the specific-ion model, pair interactions with the ions of other
 * sign. The results are written into an object of the caller's, because a solve asks for them
 * often and a new pair each time would cost more than the sums.
 *
 * @typedef {{term: number, slope: number}} LongRange  D and its derivative by ln I
 * @typedef {(coefficient: number, ionicStrength: number, result: LongRange) => void} LongRangeLaw
 * @typedef {{label: string, long_range: LongRangeLaw, uses_interactions: boolean,
 *   trusted_to: number, source: string}} ActivityModel  trusted_to: mol/kg, ionic strength
 */
(function (bf) {
  "use strict";

  /** The long-range term of an ideal solution, which is none. Mirrors `ideal` in activity.py.
   * @param {number} coefficient (kg/mol)^0.5
   * @param {number} ionicStrength mol/kg
   * @param {LongRange} result dimensionless
   */
  function ideal(coefficient, ionicStrength, result) {
    result.term = 0;
    result.slope = 0;
  }

  /** The long-range term of the Davies equation and its slope by ln I. Mirrors `davies`.
   * Source: Davies, Ion Association (1962) p. 41, with the later factor 0.3.
   * @param {number} coefficient (kg/mol)^0.5
   * @param {number} ionicStrength mol/kg
   * @param {LongRange} result dimensionless
   */
  function davies(coefficient, ionicStrength, result) {
    const root = Math.sqrt(ionicStrength);
    const share = root / (1 + root);
    result.term = coefficient * (share - 0.3 * ionicStrength);
    result.slope = coefficient * ((0.5 * share) / (1 + root) - 0.3 * ionicStrength);
  }

  /** The long-range term of specific ion interaction theory and its slope by ln I.
   * Mirrors `specific_ion`.
   * Source: Ciavatta, Ann. Chim. (Rome) 70 (1980) 551; with ε = 0 it is the Bates–Guggenheim
   * convention of pH standards.
   * @param {number} coefficient (kg/mol)^0.5
   * @param {number} ionicStrength mol/kg
   * @param {LongRange} result dimensionless
   */
  function specificIon(coefficient, ionicStrength, result) {
    const root = 1.5 * Math.sqrt(ionicStrength);
    const share = root / (1 + root);
    result.term = (coefficient / 1.5) * share;
    result.slope = (0.5 * result.term) / (1 + root);
  }

  /** @type {Record<string, ActivityModel>} */
  const MODELS = {
    ideal: {
      label: "ideal solution",
      long_range: ideal,
      uses_interactions: false,
      // Common practice, no source: below this, activity moves a pH by less than about 0.02.
      trusted_to: 0.001,
      source: "definition",
    },
    davies: {
      label: "Davies equation",
      long_range: davies,
      uses_interactions: false,
      trusted_to: 0.5,
      source: "Davies, Ion Association (1962)",
    },
    "specific-ion": {
      label: "specific ion interaction",
      long_range: specificIon,
      uses_interactions: true,
      trusted_to: 3.5,
      source: "Ciavatta, Ann. Chim. (Rome) 70 (1980) 551",
    },
  };

  bf.activity = { ideal, davies, specificIon, MODELS };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
