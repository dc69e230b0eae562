/** Whether the page's engine judges, corrects and finds faults as the build did: the cases of
 * field_data.py are worked out again. Pure.
 */
(function (bf) {
  "use strict";

  const SAME = 1e-9; // in pH, and relative in everything else
  const SAME_WEIGHT = 1e-6; // of an explanation, whose extent is fitted

  /** Work out every case again.
   * @param {Subject} subject
   * @param {any} field the page's data under `field`
   * @returns {{count: number, failed: number}}
   */
  function runFieldChecks(subject, field) {
    const { bands, correction, fault } = field.checks;
    const cases = [
      ...bands.map((/** @type {any} */ band) => () => bandAgrees(subject, band)),
      () => correctionAgrees(subject, correction),
      () => faultAgrees(subject, field.setting, fault),
    ];
    return { count: cases.length, failed: cases.filter((agrees) => !passes(agrees)).length };
  }

  /** A case that cannot even be worked out has failed. @param {() => boolean} agrees */
  function passes(agrees) {
    try {
      return agrees();
    } catch {
      return false;
    }
  }

  /** @param {number} found @param {number} expected @param {number} [limit] @returns {boolean} */
  function near(found, expected, limit = SAME) {
    return Math.abs(found - expected) <= limit * Math.max(1, Math.abs(expected));
  }

  /** @param {Subject} subject @param {any} expected @returns {boolean} */
  function bandAgrees(subject, expected) {
    const band = bf.uncertainty.bandOf(subject, expected.temperature);
    return near(band.pH, expected.pH) && near(band.half_width, expected.half_width);
  }

  /** @param {Subject} subject @param {any} expected @returns {boolean} */
  function correctionAgrees(subject, expected) {
    const { temperature, pH } = expected;
    const batch = { temperature, pH, volume: 1, dilution: 1, recipe: null };
    const found = bf.dosing.corrected(subject, batch);
    if (found.refusal !== expected.refusal || found.titrant !== expected.titrant) return false;
    if (expected.refusal) return true;
    return near(found.whole.moles, expected.amount) && near(found.pH_first, expected.pH_first);
  }

  /** @param {Subject} subject @param {any} data @param {any} expected @returns {boolean} */
  function faultAgrees(subject, data, expected) {
    const { temperature, pH } = expected;
    const setting = bf.suspects.settingOf(subject, data);
    const { explanations } = bf.faults.diagnosed(setting, [{ temperature, pH, dilution: 1 }]);
    return near(explanations[0].weight, expected.weight, SAME_WEIGHT);
  }

  bf.field_checks = { runFieldChecks };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
