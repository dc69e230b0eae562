/* The sure way for mixtures on which Newton's method does not settle.
 * The twin of bracketing.py, for one mixture.
 *
 * At a fixed ionic strength the charge residual rises strictly with ln a(H+): its root is unique
 * and can be bracketed. Along these roots the strength residual is negative in a thin solution and
 * positive beyond the largest strength the solutes can make, so that it too has a root; the lowest
 * one is taken, because dilution leads to it. */
(function (bf) {
  "use strict";

  const { LN10 } = bf.temperature;
  const { residuals } = bf.balance;
  const { sharpened } = bf.newton;

  const LOW_X = -25 * LN10;
  const HIGH_X = 8 * LN10;
  const LOW_U = Math.log(1e-9);
  const SCAN = 40; // ionic strengths tried on the way up
  const HALVINGS = 60;
  const SATISFIED = 1e-9; // residuals above this are no solution

  /** The state of a mixture at its lowest possible ionic strength, or null where the equations
   * cannot be met. Mirrors `bracket` in bracketing.py.
   * Source: bisection in two dimensions, one inside the other.
   * @param {Problem} problem
   * @returns {State | null}
   */
  function bracket(problem) {
    let { low, high } = scan(problem);
    let x = -7 * LN10;
    for (let halving = 0; halving < HALVINGS; halving += 1) {
      const middle = 0.5 * (low + high);
      x = balanceCharge(problem, middle, x);
      residuals(problem, x, middle);
      if (problem.state.strength > 0) high = middle;
      else low = middle;
    }
    const u = 0.5 * (low + high);
    x = sharpened(problem, balanceCharge(problem, u, x), u);
    residuals(problem, x, u);
    const { charge, strength } = problem.state;
    const good = Math.max(Math.abs(charge), Math.abs(strength)) < SATISFIED;
    return good ? { ln_h: x, ln_i: u } : null;
  }

  /** Two neighbouring ionic strengths between which the residual first turns positive.
   * @param {Problem} problem
   * @returns {{low: number, high: number}} ln (I kg/mol)
   */
  function scan(problem) {
    let largest = problem.strength + Math.abs(problem.net);
    for (let f = 0; f < problem.families; f += 1) {
      const steps = problem.starts[f + 1] - problem.starts[f];
      const charge = problem.charges[f];
      const most = Math.max(Math.abs(charge), Math.abs(charge - steps));
      largest += problem.totals[f] * (most * most + most);
    }
    const top = Math.log(largest + 1e-5);
    let low = LOW_U;
    let x = -7 * LN10;
    for (let share = 0; share <= SCAN; share += 1) {
      const u = LOW_U + (share / SCAN) * (top - LOW_U);
      x = balanceCharge(problem, u, x);
      residuals(problem, x, u);
      if (problem.state.strength > 0) return { low, high: u };
      low = u;
    }
    return { low, high: top };
  }

  /** ln a(H+) that balances charge at a given ionic strength. Mirrors `balance_charge`.
   * Source: Newton's method inside a bracket that every evaluation narrows.
   * @param {Problem} problem
   * @param {number} u ln (I kg/mol)
   * @param {number} x where to begin
   * @returns {number} ln a(H+)
   */
  function balanceCharge(problem, u, x) {
    const state = problem.state;
    let low = LOW_X;
    let high = HIGH_X;
    let last = high - low;
    for (let round = 0; round < 80; round += 1) {
      residuals(problem, x, u);
      if (state.charge < 0) low = Math.max(low, x);
      if (state.charge > 0) high = Math.min(high, x);
      const step = -state.charge / state.charge_x;
      const target = x + step;
      // Steps have to halve, or two points could take turns for ever. At the root a step may be
      // too small to leave the bracket's end.
      const good =
        (target > low && target < high && Math.abs(step) < 0.5 * last) ||
        Math.abs(step) < 1e-13 * (1 + Math.abs(x));
      let following = good ? target : 0.5 * (low + high);
      if (state.charge === 0) following = x;
      last = Math.abs(following - x);
      x = following;
      if (last < 1e-13 * (1 + Math.abs(x))) break;
    }
    return x;
  }

  bf.bracketing = { bracket, balanceCharge };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
