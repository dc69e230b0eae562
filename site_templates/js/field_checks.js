/** Whether the page's engine judges, corrects and finds faults as the build did: the cases of
 * field_data.py are worked out again. Pure.
 */
(function (bf) {
  "use strict";

  const SAME = 1e-9; // in pH, and relative in everything else

  /** Work out every case again.
   * @param {Subject} subject
   * @param {any} field the page's data under `field`
   * @returns {{count: number, failed: number}}
   */
  function runFieldChecks(subject, field) {
    const { bands, dose, air } = field.checks;
    const cases = [
      ...bands.map((/** @type {any} */ band) => () => bandAgrees(subject, band)),
      () => doseAgrees(subject, dose),
      () => airAgrees(subject, field.setting, air),
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

  /** @param {number} found @param {number} expected @returns {boolean} */
  function near(found, expected) {
    return Math.abs(found - expected) <= SAME * Math.max(1, Math.abs(expected));
  }

  /** @param {Subject} subject @param {any} expected @returns {boolean} */
  function bandAgrees(subject, expected) {
    const band = bf.uncertainty.bandOf(subject, expected.temperature);
    return near(band.pH, expected.pH) && near(band.half_width, expected.half_width);
  }

  /** @param {Subject} subject @param {any} expected @returns {boolean} */
  function doseAgrees(subject, expected) {
    const { temperature, pH } = expected;
    const batch = { temperature, pH, volume: 1, dilution: 1, recipe: null };
    const found = bf.dosing.corrected(subject, batch);
    if (found.refusal !== expected.refusal || found.titrant !== expected.titrant) return false;
    return expected.refusal !== "" || near(found.whole.moles / expected.moles, 1);
  }

  /** @param {Subject} subject @param {any} data @param {any} expected @returns {boolean} */
  function airAgrees(subject, data, expected) {
    const setting = bf.suspects.settingOf(subject, data);
    const found = bf.suspects.sceneOf(setting, expected.temperature).in_air;
    return expected.total === null ? Number.isNaN(found) : near(found / expected.total, 1);
  }

  bf.field_checks = { runFieldChecks };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
