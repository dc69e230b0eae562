/** Fitting a titration: which strength, total, pK or electrode explains the measured readings best.
 * The twin of fitting.py, by the method of Levenberg and Marquardt in place of scipy's.
 *
 * The squares of (measured − predicted) are summed, each over the variance that reading and burette
 * lead one to expect where the curve is as steep as there. These weights follow the curve, so that
 * the least squares are found again with the weights of the last curve until nothing moves.
 *
 * A fit of thousands of points takes seconds: it works in slices and lets the page breathe between.
 *
 * @typedef {{free: Free, value: number, standard_error: number, recipe: number, low: number,
 *   high: number}} Estimate  in mol/L (strength), mol/kg (total) or without a unit
 * @typedef {object} Fit  as in fitting.py
 * @property {Experiment} experiment
 * @property {Precision} precision
 * @property {Estimate[]} estimates
 * @property {number[]} parameters
 * @property {number[][]} correlation
 * @property {number[]} predicted
 * @property {number[]} residuals
 * @property {number[]} expected_scatter
 * @property {number} reduced_chi_squared
 * @property {number} freedom
 * @property {Verdict} verdict
 *
 * @typedef {{cost: number, normal: number[][], gradient: number[], points: ModelledPoint[]}} Sums
 * @typedef {(volumes: number[], readings: number[], parameters: number[],
 *   scatter: ((point: ModelledPoint, at: number) => number)) => Promise<Sums>} Evaluate
 */
(function (bf) {
  "use strict";

  const { modelOf } = bf.fit_model;
  const { bounds, freeProblem, nominal, units } = bf.fit_parameters;
  const { covariance, verdict } = bf.fit_quality;
  const { solveInPlace } = bf.linear;
  const { defaultPrecision } = bf.measured;

  const ROUNDS = 50;
  const STEPS = 100;
  const STANDS = 1e-6; // of a standard error: a round that moves no farther is the last
  const SETTLED = 1e-10; // of a parameter
  const SPENT = 1e-13; // of the sum of squares: whether a step gains less is decided by rounding
  const FREE = 1e-8; // of damping: below it a step goes all the way
  const SCANNED_FACTORS = [0.25, 0.35, 0.5, 0.7, 1, 1.4, 2, 2.8, 4];
  const SCANNED_POINTS = 40;
  const SLICE = 12; // ms of work before the page has its turn

  /** The least-squares fit of the model curve to measured points. Mirrors `fit` in fitting.py.
   * Source: nonlinear least squares, weights by the effective variance: Orear, Am. J. Phys. 50
   * (1982) 912. Standard errors are scaled with the scatter that is there.
   * @param {Experiment} experiment
   * @param {Points} points
   * @param {Free[]} free
   * @param {Precision} [precision]
   * @param {((curves: number) => boolean | void) | null} [progress] is told between slices how many
   *   curves have been reckoned; false ends the fit
   * @returns {Promise<Fit | null>} null where it was ended
   */
  async function fit(experiment, points, free, precision, progress = null) {
    const problem = freeProblem(experiment, free);
    if (problem !== null) throw new RangeError(problem);
    const known = precision === undefined ? defaultPrecision(points) : precision;
    const evaluate = evaluator(experiment, free, progress);
    try {
      return await search(experiment, points, free, known, evaluate);
    } catch (ended) {
      if (ended instanceof Ended) return null;
      throw ended;
    }
  }

  class Ended extends Error {}

  /** @param {Experiment} experiment @param {Points} points @param {Free[]} free
   * @param {Precision} precision @param {Evaluate} evaluate @returns {Promise<Fit>} */
  async function search(experiment, points, free, precision, evaluate) {
    const { volume, pH } = points;
    const start = nominal(experiment, free);
    const expected = (/** @type {ModelledPoint} */ point) => expectedScatter(point, precision);
    const finish = async (/** @type {number[]} */ parameters) => {
      const sums = await evaluate(volume, pH, parameters, expected);
      return resultOf(experiment, points, free, precision, parameters, sums);
    };
    if (pH.length <= free.length) return finish(start);
    const [low, high] = bounds(start, free);
    let parameters = await startOf(points, free, start, expected, evaluate);
    let scatter = pH.map(() => precision.pH);
    for (let round = 0; round < ROUNDS; round += 1) {
      const fixed = scatter;
      const sumsAt = (/** @type {number[]} */ trial) =>
        evaluate(volume, pH, trial, (_, at) => fixed[at]);
      const last = parameters;
      const found = await least(sumsAt, parameters, low, high, round === 0 ? 1e-3 : 1e-9);
      parameters = found.parameters;
      const following = found.sums.points.map(expected);
      const moved = farness(found.sums.normal, parameters.map((value, at) => value - last[at]));
      if (moved < STANDS || following.every((value, at) => value === fixed[at])) break;
      scatter = following;
    }
    return finish(parameters);
  }

  /** How far a step goes, in standard errors.
   * @param {number[][]} normal @param {number[]} step @returns {number} */
  function farness(normal, step) {
    let squares = 0;
    normal.forEach((row, i) => row.forEach((value, j) => (squares += value * step[i] * step[j])));
    return Math.sqrt(Math.max(squares, 0));
  }

  /** What sums up the misses of a curve, in slices. A point without a solution counts for nothing;
   * the verdict speaks of it.
   * @param {Experiment} experiment @param {Free[]} free
   * @param {((curves: number) => boolean | void) | null} progress @returns {Evaluate} */
  function evaluator(experiment, free, progress) {
    let curves = 0;
    let begun = performance.now();
    return async (volumes, readings, parameters, scatter) => {
      const model = modelOf(experiment, free, parameters);
      const sums = {
        cost: 0,
        normal: free.map(() => free.map(() => 0)),
        gradient: free.map(() => 0),
        points: [],
      };
      let guess = null;
      for (let at = 0; at < volumes.length; at += 1) {
        const [point, state] = model(volumes[at], guess);
        guess = state;
        sums.points.push(point);
        add(sums, point, readings[at], scatter(point, at));
        if (performance.now() - begun > SLICE) {
          if (progress !== null && progress(curves) === false) throw new Ended();
          await new Promise((resolve) => setTimeout(resolve));
          begun = performance.now();
        }
      }
      curves += 1;
      return sums;
    };
  }

  /** @param {Sums} sums @param {ModelledPoint} point @param {number} reading
   * @param {number} scatter */
  function add(sums, point, reading, scatter) {
    const miss = (reading - point.reading) / scatter;
    if (!Number.isFinite(miss)) return;
    sums.cost += miss * miss;
    const { by_parameter: slopes } = point;
    for (let i = 0; i < slopes.length; i += 1) {
      const slope = slopes[i] / scatter;
      sums.gradient[i] += slope * miss;
      for (let j = 0; j < slopes.length; j += 1) {
        sums.normal[i][j] += (slope * slopes[j]) / scatter;
      }
    }
  }

  /** The standard deviation of a reading that precision and steepness lead to.
   * Mirrors `expected_scatter`.
   * @param {ModelledPoint} point @param {Precision} precision @returns {number} pH */
  function expectedScatter(point, precision) {
    return Math.hypot(precision.pH, point.by_volume * precision.volume);
  }

  /** Where to begin: the best of some strengths (or totals), the rest as in the recipe.
   * Mirrors `_start`.
   * @param {Points} points @param {Free[]} free @param {number[]} start
   * @param {(point: ModelledPoint) => number} expected @param {Evaluate} evaluate
   * @returns {Promise<number[]>} */
  async function startOf(points, free, start, expected, evaluate) {
    const kinds = free.map((each) => each.kind);
    const scanned = kinds.includes("strength") ? kinds.indexOf("strength") : kinds.indexOf("total");
    if (scanned < 0) return start;
    const count = Math.min(points.pH.length, SCANNED_POINTS);
    const chosen = Array.from({ length: count }, (_, k) =>
      Math.floor((k * (points.pH.length - 1)) / Math.max(count - 1, 1)));
    const volumes = chosen.map((at) => points.volume[at]);
    const readings = chosen.map((at) => points.pH[at]);
    let best = start;
    let least = Infinity;
    for (const factor of SCANNED_FACTORS) {
      const trial = start.map((value, at) => (at === scanned ? factor : value));
      const { cost } = await evaluate(volumes, readings, trial, expected);
      if (cost < least) [best, least] = [trial, cost];
    }
    return best;
  }

  /** The parameters with the least sum of squares at given weights, within bounds.
   * Source: Levenberg, Q. Appl. Math. 2 (1944) 164; Marquardt, J. SIAM 11 (1963) 431.
   * @param {(parameters: number[]) => Promise<Sums>} sumsAt
   * @param {number[]} start @param {number[]} low @param {number[]} high
   * @param {number} damping of the first step
   * @returns {Promise<{parameters: number[], sums: Sums}>} */
  async function least(sumsAt, start, low, high, damping) {
    let parameters = start.map((value, at) => Math.min(Math.max(value, low[at]), high[at]));
    let sums = await sumsAt(parameters);
    for (let step = 0; step < STEPS && damping < 1e10; step += 1) {
      const trial = stepFrom(parameters, sums, damping, low, high);
      const moves = trial.map((value, at) => value - parameters[at]);
      const moved = Math.max(...moves.map(Math.abs));
      const promised = farness(sums.normal, moves) ** 2;
      const there = await sumsAt(trial);
      const spent = moved < SETTLED || promised < SPENT * sums.cost;
      const better = there.cost <= sums.cost || spent;
      if (better) [parameters, sums] = [trial, there];
      // Undamped, a step so small leaves an error of its square.
      if (spent && damping < FREE) break;
      damping = better ? Math.max(damping / 10, 1e-12) : damping * 10;
    }
    return { parameters, sums };
  }

  /** One damped step; what stands at a bound and is pushed outwards stays.
   * @param {number[]} parameters @param {Sums} sums @param {number} damping
   * @param {number[]} low @param {number[]} high @returns {number[]} */
  function stepFrom(parameters, sums, damping, low, high) {
    const size = parameters.length;
    const held = parameters.map((value, at) =>
      (value <= low[at] && sums.gradient[at] < 0) || (value >= high[at] && sums.gradient[at] > 0));
    const matrix = new Float64Array(size * size);
    const right = new Float64Array(size);
    for (let i = 0; i < size; i += 1) {
      const own = sums.normal[i][i];
      if (held[i] || !(own > 0)) {
        matrix[i * size + i] = 1;
        continue;
      }
      right[i] = sums.gradient[i];
      for (let j = 0; j < size; j += 1) if (!held[j]) matrix[i * size + j] = sums.normal[i][j];
      matrix[i * size + i] = own * (1 + damping);
    }
    const step = solveInPlace(matrix, right, size);
    return parameters.map((value, at) => Math.min(Math.max(value + step[at], low[at]), high[at]));
  }

  /** @param {Experiment} experiment @param {Points} points @param {Free[]} free
   * @param {Precision} precision @param {number[]} parameters @param {Sums} sums
   * @returns {Fit} */
  function resultOf(experiment, points, free, precision, parameters, sums) {
    const predicted = sums.points.map((point) => point.reading);
    const scatter = sums.points.map((point) => expectedScatter(point, precision));
    const residuals = predicted.map((reading, at) => points.pH[at] - reading);
    const freedom = points.pH.length - free.length;
    let squares = 0;
    residuals.forEach((miss, at) => (squares += (miss / scatter[at]) ** 2));
    const chiSquared = freedom > 0 ? squares / freedom : NaN;
    const { variances, correlation, hidden } = covariance(sums.normal);
    const errors = variances.map((value, at) =>
      (hidden[at] ? Infinity : Math.sqrt(value * chiSquared)));
    const start = nominal(experiment, free);
    const [low, high] = bounds(start, free);
    const atBound = parameters.map((value, at) => {
      const near = 1e-6 * (high[at] - low[at]);
      return value - low[at] < near || high[at] - value < near;
    });
    const factor = units(experiment, free);
    return {
      experiment,
      precision,
      estimates: free.map((each, at) => ({
        free: each,
        value: parameters[at] * factor[at],
        standard_error: errors[at] * factor[at],
        recipe: start[at] * factor[at],
        low: low[at] * factor[at],
        high: high[at] * factor[at],
      })),
      parameters,
      correlation,
      predicted,
      residuals,
      expected_scatter: scatter,
      reduced_chi_squared: chiSquared,
      freedom,
      verdict: verdict(free, errors, correlation, hidden, atBound, chiSquared, freedom),
    };
  }

  bf.fitting = { fit };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
