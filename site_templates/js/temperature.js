/** How constants move with temperature. The twin of temperature.py, for one temperature.
 *
 * The records of a page's data block:
 * @typedef {{low: number, high: number}} Interval
 * @typedef {{kind: "reference", pK: number, temperature: number, enthalpy: number | null,
 *   heat_capacity: number | null}} ReferenceConstants  K, J/mol, J/(mol K)
 * @typedef {{kind: "equation", name: string, constant: number, inverse: number, linear: number,
 *   logarithm: number, inverse_square: number}} PublishedEquation
 * @typedef {{pK: number, enthalpy: number, stated: boolean}} Doubt  k = 2; J/mol
 * @typedef {{law: ReferenceConstants | PublishedEquation, valid_temperature: Interval,
 *   doubt: Doubt}} Step
 * @typedef {{name: string, label: string, charge: number}} Species
 * @typedef {{key: string, label: string, charge: number, species: Species[],
 *   steps: Step[]}} Family
 * @typedef {{pK: number[][], pKw: number, debye_huckel: number, in_range: boolean}} Constants
 * @typedef {{pK: number[][], pKw: number, debye_huckel: number}} ConstantSlopes  each by K
 */
(function (bf) {
  "use strict";

  const { debyeHuckel, debyeHuckelAndSlope, pKwAndSlope, pKwAt } = bf.water;

  const GAS_CONSTANT = 8.314462618; // J/(mol K), CODATA 2018, exact
  const LN10 = Math.LN10;

  /** The pK of one ionisation step. Mirrors `pK_at` in temperature.py.
   * Source: the step's own; with constant heat capacity, Clarke & Glew, Trans. Faraday Soc. 62
   * (1966) 539.
   * @param {Step} step from the page's data block
   * @param {number} temperature K; `constantsAt` says where it lies outside the source's range
   * @returns {number} dimensionless, molal standard state
   */
  function pKAt(step, temperature) {
    if (step.law.kind === "equation") return fromEquation(step.law, temperature);
    return fromReference(step.law, temperature);
  }

  /**
   * @param {PublishedEquation} law
   * @param {number} temperature K
   * @returns {number}
   */
  function fromEquation(law, temperature) {
    return (
      law.constant +
      law.inverse / temperature +
      law.linear * temperature +
      law.logarithm * Math.log(temperature) +
      law.inverse_square / (temperature * temperature)
    );
  }

  /**
   * @param {ReferenceConstants} law
   * @param {number} temperature K
   * @returns {number}
   */
  function fromReference(law, temperature) {
    const tau = law.temperature / temperature;
    const enthalpyTerm = ((law.enthalpy || 0) / law.temperature) * (1 - tau);
    const heatCapacityTerm = (law.heat_capacity || 0) * (tau - 1 - Math.log(tau));
    return law.pK - (enthalpyTerm + heatCapacityTerm) / (GAS_CONSTANT * LN10);
  }

  /** Every constant that a mixture of these families needs. Mirrors `constants_at`.
   * @param {Family[]} families
   * @param {number} temperature K
   * @returns {Constants} `debye_huckel` in (kg/mol)^0.5, the rest dimensionless
   */
  function constantsAt(families, temperature) {
    let inRange = true;
    for (const family of families) {
      for (const step of family.steps) {
        const { low, high } = step.valid_temperature;
        // A thousandth of a kelvin: 0 °C typed in other units must not fall outside.
        if (!(temperature > low - 1e-3 && temperature < high + 1e-3)) inRange = false;
      }
    }
    return {
      pK: families.map((family) => family.steps.map((step) => pKAt(step, temperature))),
      pKw: pKwAt(temperature),
      debye_huckel: debyeHuckel(temperature),
      in_range: inRange,
    };
  }

  /** How the pK of one ionisation step changes with temperature. Mirrors `pK_slope`.
   * Source: derivative of `pKAt`; with an enthalpy, van 't Hoff's equation.
   * @param {Step} step
   * @param {number} temperature K
   * @returns {number} 1/K
   */
  function pKSlope(step, temperature) {
    const law = step.law;
    if (law.kind === "equation") {
      const inverse = (law.inverse + (2 * law.inverse_square) / temperature) / temperature;
      return law.linear + (law.logarithm - inverse) / temperature;
    }
    const away = temperature - law.temperature;
    const enthalpy = (law.enthalpy || 0) + (law.heat_capacity || 0) * away;
    return -enthalpy / (GAS_CONSTANT * LN10 * temperature * temperature);
  }

  /** How every constant that a mixture of these families needs changes with temperature.
   * Mirrors `constant_slopes_at`.
   * @param {Family[]} families
   * @param {number} temperature K
   * @returns {ConstantSlopes}
   */
  function constantSlopesAt(families, temperature) {
    return {
      pK: families.map((family) => family.steps.map((step) => pKSlope(step, temperature))),
      pKw: pKwAndSlope(temperature).slope,
      debye_huckel: debyeHuckelAndSlope(temperature).slope,
    };
  }

  bf.temperature = { GAS_CONSTANT, LN10, pKAt, pKSlope, constantsAt, constantSlopesAt };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
