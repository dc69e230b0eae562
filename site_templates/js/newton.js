/** Newton's method on both balances together. The twin of newton.py, for one mixture.
 *
 * @typedef {{ln_h: number, ln_i: number}} State  ln a(H+) and ln (I kg/mol)
 */
(function (bf) {
  "use strict";

  const { LN10 } = bf.temperature;
  const { residuals, twoSum, weights } = bf.balance;

  const ROUNDS = 40;
  const LONGEST_STEP = 6; // in ln a(H+); farther than that a tangent says little
  // Convergence is quadratic: a step this small leaves an error of its square.
  const SETTLED = 1e-8;
  // Below this share of charge that answers to pH, rounding of the rest would show in a pH.
  const LOOSE = 1e-3;

  /** Where to begin: neutral pH and the ionic strength of the strong ions.
   * Mirrors `first_guess` in newton.py.
   * @param {Problem} problem
   * @returns {State}
   */
  function firstGuess(problem) {
    const total = problem.totals.reduce((sum, amount) => sum + amount, 0);
    const strength = 0.5 * (problem.strength + Math.abs(problem.net)) + 0.01 * total + 1e-7;
    return { ln_h: -7 * LN10, ln_i: Math.log(strength) };
  }

  /** `value`, but no farther from zero than `farthest`.
   * @param {number} value
   * @param {number} farthest
   * @returns {number}
   */
  function clipped(value, farthest) {
    if (value > farthest) return farthest;
    return value < -farthest ? -farthest : value;
  }

  /** The solved state of a mixture, or null where Newton's method does not settle.
   * Mirrors `newton`.
   * @param {Problem} problem
   * @param {State | null} guess
   * @returns {State | null}
   */
  function newton(problem, guess) {
    const begin = guess === null ? firstGuess(problem) : guess;
    const state = problem.state;
    let x = begin.ln_h;
    let u = begin.ln_i;
    let last = 0;
    for (let round = 0; round < ROUNDS; round += 1) {
      residuals(problem, x, u);
      const slope = state.charge_x * state.strength_u - state.charge_u * state.strength_x;
      const stepX = (state.charge_u * state.strength - state.charge * state.strength_u) / slope;
      const stepU = (state.charge * state.strength_x - state.charge_x * state.strength) / slope;
      // Hopping to and fro across a steep part: halve the last hop instead.
      // A last, tiny step may well turn round.
      const far = Math.max(0.5 * Math.abs(last), SETTLED);
      const hopping = stepX * last < 0 && Math.abs(stepX) > far;
      last = hopping ? -0.5 * last : clipped(stepX, LONGEST_STEP);
      x += last;
      u += clipped(stepU, 2);
      // A negative slope is a root that dilution does not lead to: left to the bracket.
      if (Math.abs(stepX) < SETTLED && Math.abs(stepU) < SETTLED && slope > 0) {
        if (state.charge_x < LOOSE) x = sharpened(problem, x, u);
        return { ln_h: x, ln_i: u };
      }
    }
    return null;
  }

  /** ln a(H+) free of the rounding of large charges that cancel. Mirrors `sharpened`.
   *
   * Where little buffers, moles of sodium and chloride hide the last 1e-9 mol/kg of acid. Each
   * family's charge is therefore reckoned from the integer nearest to its mean, so that only small
   * differences are left to add.
   * Source: Newton's method at constant ionic strength.
   * @param {Problem} problem
   * @param {number} x ln a(H+)
   * @param {number} u ln (I kg/mol)
   * @returns {number} ln a(H+)
   */
  function sharpened(problem, x, u) {
    problem.long_range(problem.coefficient, Math.exp(u), problem.state);
    const g = Math.exp(LN10 * problem.state.term);
    for (let round = 0; round < 2; round += 1) {
      const h = Math.exp(x);
      const hydrogen = problem.hydrogen * h * g;
      const hydroxide = (problem.hydroxide / h) * g;
      const sum = { total: problem.net, rest: problem.net_rest };
      let small = 0;
      let buffering = hydrogen + hydroxide;
      for (let f = 0; f < problem.families; f += 1) {
        const amount = problem.totals[f];
        const { nearest, away, variance } = protonsLost(problem, f, h, g);
        buffering += amount * variance;
        small -= amount * away;
        const charge = problem.charges[f];
        for (let proton = 1; proton <= nearest; proton += 1) twoSum(sum, -amount);
        const ofFirst = charge < 0 ? -amount : amount;
        for (let unit = Math.abs(charge); unit > 0; unit -= 1) twoSum(sum, ofFirst);
      }
      const excess = sum.total + (sum.rest + small + (hydrogen - hydroxide));
      x -= excess / buffering;
    }
    return x;
  }

  /** How many protons a family has lost: the integer nearest to the mean, how far the mean is
   * away from it, and the variance.
   * @param {Problem} problem
   * @param {number} family its position
   * @param {number} h activity of H+
   * @param {number} g 10^D
   * @returns {{nearest: number, away: number, variance: number}}
   */
  function protonsLost(problem, family, h, g) {
    const scale = 1 / weights(problem, family, h, g);
    const forms = problem.forms;
    const count = problem.starts[family + 1] - problem.starts[family] + 1;
    let lost = 0;
    for (let j = 0; j < count; j += 1) lost += j * forms[j];
    lost *= scale;
    const nearest = Math.round(lost);
    let away = 0;
    let variance = 0;
    for (let j = 0; j < count; j += 1) {
      away += (j - nearest) * forms[j] * scale;
      variance += (j - lost) ** 2 * forms[j] * scale;
    }
    return { nearest, away, variance };
  }

  bf.newton = { firstGuess, newton, sharpened };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
