/** What a fit is worth: standard errors, correlations, and a verdict from them.
 * The twin of fit_quality.py.
 *
 * @typedef {{kind: string, about: string[]}} Verdict  about: keys of the quantities it concerns
 */
(function (bf) {
  "use strict";

  const { inverse } = bf.linear;
  const { keyOf } = bf.fit_parameters;

  const RIDGE = 1e-14; // keeps a matrix invertible where points do not tell two quantities apart
  const HIDDEN = 1e9; // a variance so much enlarged by the other quantities is none
  const TIED = 0.95; // a correlation beyond which two quantities are one
  const FEWEST = 3; // points that have to be left over
  const MISFIT = 4; // reduced chi-squared of a scatter twice as wide as expected
  // Standard errors up to which a result is of use: shares of strength and total, else pH.
  const USEFUL = { strength: 0.02, total: 0.02, pK: 0.05, offset: 0.05, slope: 0.02 };

  /** Variances for a scatter of one, correlations, and which quantities stay hidden.
   * Mirrors `covariance` in fit_quality.py.
   * Source: linear theory of least squares; a ridge of 1e-14 on the scaled normal matrix.
   * @param {number[][]} normal Σ of products of slopes, in standard deviations of a reading
   * @returns {{variances: number[], correlation: number[][], hidden: boolean[]}}
   */
  function covariance(normal) {
    const scale = normal.map((row, at) => (row[at] > 0 ? Math.sqrt(row[at]) : 1));
    const scaled = normal.map((row, i) =>
      row.map((value, j) => value / (scale[i] * scale[j]) + (i === j ? RIDGE : 0)));
    const full = inverse(scaled);
    const enlarged = full.map((row, at) => row[at]);
    const most = Math.max(...enlarged);
    return {
      variances: enlarged.map((value, at) => value / (scale[at] * scale[at])),
      correlation: full.map((row, i) =>
        row.map((value, j) => value / Math.sqrt(enlarged[i] * enlarged[j]))),
      hidden: enlarged.map((value) => value > HIDDEN && value > 1e-3 * most),
    };
  }

  /** What a fit is worth, the gravest objection first. Mirrors `verdict`.
   * @param {Free[]} free @param {number[]} errors in the parameters' own units
   * @param {number[][]} correlation @param {boolean[]} hidden @param {boolean[]} atBound
   * @param {number} chiSquared @param {number} freedom
   * @returns {Verdict}
   */
  function verdict(free, errors, correlation, hidden, atBound, chiSquared, freedom) {
    const keys = free.map(keyOf);
    const where = (/** @type {boolean[]} */ flags) => keys.filter((_, at) => flags[at]);
    if (freedom < FEWEST) return { kind: "too few points", about: [] };
    if (!Number.isFinite(chiSquared)) return { kind: "no solution", about: [] };
    if (hidden.includes(true)) return { kind: "not separable", about: where(hidden) };
    const poor = free.map((each, at) => errors[at] > USEFUL[each.kind]);
    const tied = tiedPair(correlation, poor);
    if (atBound.includes(true) && !tied.some((at) => atBound[at])) {
      return { kind: "at a bound", about: where(atBound) };
    }
    if (chiSquared > MISFIT && !atBound.includes(true)) return { kind: "does not fit", about: [] };
    if (tied.length > 0) return { kind: "not separable", about: tied.map((at) => keys[at]) };
    if (poor.includes(true)) return { kind: "poorly determined", about: where(poor) };
    return { kind: "well determined", about: [] };
  }

  /** The two quantities, one of them poor, that are nearly one; none where none are.
   * Mirrors `_tied`.
   * @param {number[][]} correlation @param {boolean[]} poor @returns {number[]} */
  function tiedPair(correlation, poor) {
    let best = { tie: TIED, pair: [] };
    correlation.forEach((row, i) => row.forEach((value, j) => {
      const tie = i === j || !poor[j] ? 0 : Math.abs(value);
      if (tie > best.tie) best = { tie, pair: [Math.min(i, j), Math.max(i, j)] };
    }));
    return best.pair;
  }

  bf.fit_quality = { covariance, verdict };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
