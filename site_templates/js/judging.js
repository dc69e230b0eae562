/** Whether a reading is what it should be, in words that do not need a colour.
 * The twin of judging.py.
 *
 * @typedef {{mark: string, words: string, action: string}} Verdict
 * @typedef {{temperature: number, pH: number, expected: number, target: number,
 *   within_use: boolean}} BatchState  where the batch stands at its own temperature
 * @typedef {{refusal: string, verdict: string, temperature: number, reading: number, pH: number,
 *   expected: number, shown: number, band: Band | null, target: number, tolerance: number | null,
 *   difference: number, inside_tolerance: boolean | null, within_band: boolean,
 *   batch: BatchState | null}} Judgement  as in judging.py
 */
(function (bf) {
  "use strict";

  const { solvedAt } = bf.subjects;
  const { bandOf } = bf.uncertainty;
  const { mixtureOf } = bf.recipes;
  const { meant, measured, refusalOf, shown, targetAt } = bf.measurements;

  const ROUNDING = 1e-9; // in pH: 8.11 is inside 8.16 ± 0.05 whatever binary fractions say

  /** The judgement of one reading. Mirrors `judged` in judging.py.
   * @param {Subject} subject
   * @param {number} temperature K, of the sample
   * @param {number} reading
   * @param {number | null} [compensation] K, for which the meter's slope is set; null: the sample's
   * @param {number | null} [batchTemperature] K
   * @param {Recipe | null} [recipe] as it was weighed; null: as the formulation says
   * @returns {Judgement}
   */
  function judged(
    subject, temperature, reading, compensation = null, batchTemperature = null, recipe = null,
  ) {
    const pH = meant(reading, temperature, compensation);
    let refusal = refusalOf(subject, temperature, reading) || refusalOf(subject, temperature, pH);
    if (!refusal && batchTemperature !== null) refusal = refusalOf(subject, batchTemperature, pH);
    if (refusal) return refused(refusal, temperature, reading, pH);
    const band = bandOf(subject, temperature, recipe);
    const target = targetAt(subject, temperature);
    const tolerance = subject.expected === null ? null : subject.expected.tolerance;
    const inside = tolerance === null ? null : Math.abs(pH - target) <= tolerance + ROUNDING;
    const within = Math.abs(pH - band.pH) <= band.half_width + ROUNDING;
    return {
      refusal: "",
      verdict: verdictOf(inside, within),
      temperature,
      reading,
      pH,
      expected: band.pH,
      shown: shown(band.pH, temperature, compensation),
      band,
      target,
      tolerance,
      difference: pH - band.pH,
      inside_tolerance: inside,
      within_band: within,
      batch: batchOf(subject, temperature, pH, batchTemperature, recipe),
    };
  }

  /** @param {boolean | null} inside tolerance @param {boolean} within the band
   * @returns {string} key of VERDICTS */
  function verdictOf(inside, within) {
    if (inside === null) return within ? "expected" : "unexpected";
    if (inside) return within ? "right" : "accepted";
    return within ? "doubtful" : "off";
  }

  /** Mirrors `_batch`.
   * @param {Subject} subject
   * @param {number} temperature K
   * @param {number} pH
   * @param {number | null} batchTemperature K
   * @param {Recipe | null} recipe
   * @returns {BatchState | null}
   */
  function batchOf(subject, temperature, pH, batchTemperature, recipe) {
    if (batchTemperature === null || batchTemperature === temperature) return null;
    const { mixture } = measured(subject, temperature, pH, 1, recipe);
    const made = recipe === null ? subject.mixture : mixtureOf(recipe, subject.mixture);
    const state = solvedAt(subject, batchTemperature, mixture);
    const { low, high } = subject.use_pH;
    return {
      temperature: batchTemperature,
      pH: state.pH,
      expected: solvedAt(subject, batchTemperature, made).pH,
      target: targetAt(subject, batchTemperature),
      within_use: low <= state.pH && state.pH <= high,
    };
  }

  /** @param {string} refusal @param {number} temperature @param {number} reading
   * @param {number} pH @returns {Judgement} */
  function refused(refusal, temperature, reading, pH) {
    return {
      refusal,
      verdict: "",
      temperature,
      reading,
      pH,
      expected: NaN,
      shown: NaN,
      band: null,
      target: NaN,
      tolerance: null,
      difference: NaN,
      inside_tolerance: null,
      within_band: false,
      batch: null,
    };
  }

  /** @type {Record<string, Verdict>} */
  const VERDICTS = {
    right: {
      mark: "✓",
      words: "Inside tolerance, and where a careful reading is expected.",
      action: "Use the batch.",
    },
    accepted: {
      mark: "✓",
      words: "Inside tolerance, but farther from the expected reading than careful work explains.",
      action: "Use the batch, and look for the cause.",
    },
    doubtful: {
      mark: "?",
      words:
        "Outside tolerance, but no farther from the expected reading than meter, weighing and " +
        "constants may be.",
      action: "Calibrate the meter and read again before anything is corrected.",
    },
    off: {
      mark: "✗",
      words: "Outside tolerance, and farther from the expected reading than careful work explains.",
      action: "Read again; then find the fault, or correct the batch.",
    },
    expected: {
      mark: "✓",
      words: "Where a careful reading is expected. No tolerance is stated.",
      action: "Use the batch.",
    },
    unexpected: {
      mark: "✗",
      words:
        "Farther from the expected reading than careful work explains. No tolerance is stated.",
      action: "Read again; then find the fault.",
    },
  };

  bf.judging = { VERDICTS, judged };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
