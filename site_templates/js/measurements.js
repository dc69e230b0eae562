/** What a reading says: about the meter that showed it, and about the batch it was taken of.
 * The twin of measurements.py.
 *
 * @typedef {{mixture: Mixture, excess: number}} Measured  a batch as a reading tells it: the recipe
 *   with strong base (negative: acid), mol/kg, of unknown origin
 */
(function (bf) {
  "use strict";

  const { constantsAt } = bf.temperature;
  const { sweep } = bf.buffering;
  const { scaled } = bf.composition;
  const { mixtureOf } = bf.recipes;
  const { solvedAt } = bf.subjects;

  const ISOPOTENTIAL = 7; // pH at which an electrode's signal does not depend on temperature
  const LOWEST = 0; // readings that a meter can show
  const HIGHEST = 14;
  const STRONG_BASE = { name: "strong base", charge: 1 }; // without pair terms, as in `sweep`
  const STRONG_ACID = { name: "strong acid", charge: -1 };
  const REFUSALS = {
    reading:
      "A pH outside 0 to 14 is no reading of this solution. " +
      "Check the electrode and its cable, and calibrate the meter.",
    temperature:
      "This temperature lies outside the range of use of the formulation. " +
      "Bring the sample into the range and read it again.",
  };

  /** What a meter shows for a pH. Mirrors `shown` in measurements.py.
   * Source: Nernst slope R T ln 10 / F; common electrodes are zero at pH 7.
   * @param {number} pH
   * @param {number} temperature K
   * @param {number | null} compensation K, for which the slope is set; null: the sample's
   * @returns {number}
   */
  function shown(pH, temperature, compensation) {
    if (compensation === null) return pH;
    return ISOPOTENTIAL + ((pH - ISOPOTENTIAL) * temperature) / compensation;
  }

  /** The pH that a reading stands for, undoing `shown`. Mirrors `meant`.
   * @param {number} reading
   * @param {number} temperature K
   * @param {number | null} compensation K
   * @returns {number}
   */
  function meant(reading, temperature, compensation) {
    if (compensation === null) return reading;
    return ISOPOTENTIAL + ((reading - ISOPOTENTIAL) * compensation) / temperature;
  }

  /** The computed pH of a formulation at one temperature. Mirrors `expected_pH`.
   * @param {Subject} subject
   * @param {number} temperature K
   * @returns {number}
   */
  function expectedPH(subject, temperature) {
    return solvedAt(subject, temperature).pH;
  }

  /** The pH that a batch should have at one temperature: what the chemist stated, carried by the
   * computed drift; the computed pH where nothing is stated. Mirrors `target_at`.
   * @param {Subject} subject
   * @param {number} temperature K
   * @returns {number}
   */
  function targetAt(subject, temperature) {
    const computed = expectedPH(subject, temperature);
    const { expected } = subject;
    if (expected === null) return computed;
    return computed + expected.pH - expectedPH(subject, expected.temperature);
  }

  /** Why a reading cannot be judged, a key of REFUSALS; "" where it can. Mirrors `refusal_of`.
   * @param {Subject} subject
   * @param {number} temperature K
   * @param {number} reading
   * @returns {string}
   */
  function refusalOf(subject, temperature, reading) {
    if (!(reading >= LOWEST && reading <= HIGHEST)) return "reading";
    const { low, high } = subject.use_temperature;
    // A thousandth of a kelvin: a limit typed in other units must not fall outside.
    if (!(temperature >= low - 1e-3 && temperature <= high + 1e-3)) return "temperature";
    return "";
  }

  /** The batch that a pH belongs to. Mirrors `measured`.
   * Source: electroneutrality; at a given pH the excess is explicit.
   * @param {Subject} subject
   * @param {number} temperature K
   * @param {number} pH
   * @param {number} [dilution] volume now over volume by the recipe
   * @param {Recipe | null} [recipe]
   * @returns {Measured}
   */
  function measured(subject, temperature, pH, dilution = 1, recipe = null) {
    const made = recipe === null ? subject.recipe : recipe;
    const thinned = scaled(mixtureOf(made, subject.mixture), 1 / dilution);
    const constants = constantsAt(thinned.families, temperature);
    const found = sweep(thinned, constants, subject.model, [pH], subject.interactions);
    const excess = found.base[0];
    return { mixture: withExcess(thinned, excess), excess };
  }

  /** A mixture with strong base (negative: acid) whose ion is nameless. Mirrors `with_excess`.
   * @param {Mixture} mixture
   * @param {number} excess mol/kg
   * @returns {Mixture}
   */
  function withExcess(mixture, excess) {
    const present = Number.isNaN(excess) ? 0 : excess;
    return {
      families: mixture.families,
      totals: mixture.totals,
      ions: [...mixture.ions, STRONG_BASE, STRONG_ACID],
      molalities: [...mixture.molalities, Math.max(present, 0), Math.max(-present, 0)],
    };
  }

  bf.measurements = {
    ISOPOTENTIAL,
    REFUSALS,
    shown,
    meant,
    expectedPH,
    targetAt,
    refusalOf,
    measured,
    withExcess,
  };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
