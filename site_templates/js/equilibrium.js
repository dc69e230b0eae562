/** The pH and the ionic strength that balance charge. The twin of equilibrium.py, for one mixture.
 *
 * Two equations are solved together for ln a(H+) and ln I: that the charges of both signs are
 * equal, and that I is the ionic strength of what is there. `newton` takes the steps; the few
 * mixtures on which it does not settle are bracketed (`bracketing`); nothing unconverged is
 * returned.
 *
 * @typedef {{pH: number, ionic_strength: number, status: number,
 *   offsets: Float64Array | null}} Equilibrium  as in equilibrium.py
 */
(function (bf) {
  "use strict";

  const { LN10 } = bf.temperature;
  const { formsAt, interactionMatrix, stacked } = bf.speciation;
  const { prepare, withOffsets } = bf.balance;
  const { newton } = bf.newton;
  const { bracket } = bf.bracketing;

  const OFFSET_TOLERANCE = 1e-13; // in log10 of an activity coefficient
  const OFFSET_ROUNDS = 200;

  /** What became of a mixture. Mirrors `Status` in equilibrium.py. */
  const STATUS = Object.freeze({
    SOLVED: 0,
    OUT_OF_RANGE: 1, // solved, but a constant is used outside its source's temperatures
    BEYOND_MODEL: 2, // solved, but the ionic strength is above what the model is trusted to
    NO_SOLUTION: 3, // the equations could not be met; pH is NaN
  });

  /** pH and ionic strength of a mixture. Mirrors `solve` in equilibrium.py.
   * Source: electroneutrality and mass action; Newton's method, safeguarded by bisection.
   * @param {Mixture} mixture
   * @param {Constants} constants
   * @param {ActivityModel} model
   * @param {Interaction[]} [interactions]
   * @param {{pH: number, ionic_strength: number} | null} [guess] where to begin, say at a
   *   neighbour's equilibrium; it saves rounds and does not change the result
   * @returns {Equilibrium}
   */
  function solve(mixture, constants, model, interactions = [], guess = null) {
    const problem = prepare(mixture, constants, model);
    const matrix = model.uses_interactions ? interactionMatrix(mixture, interactions) : null;
    const begin = usable(guess);
    let found;
    let offsets = null;
    if (matrix === null) {
      found = solveProblem(problem, begin);
    } else {
      ({ found, offsets } = withInteractions(problem, mixture, constants, model, matrix, begin));
    }
    const pH = found === null ? NaN : -found.ln_h / LN10;
    const strength = found === null ? NaN : Math.exp(found.ln_i);
    /** @type {number} */
    let status = STATUS.SOLVED;
    if (!constants.in_range) status = STATUS.OUT_OF_RANGE;
    if (strength > model.trusted_to) status = STATUS.BEYOND_MODEL;
    if (Number.isNaN(pH)) status = STATUS.NO_SOLUTION;
    return { pH, ionic_strength: strength, status, offsets };
  }

  /**
   * @param {{pH: number, ionic_strength: number} | null} guess
   * @returns {State | null} the same in the solver's variables; null where it cannot be used
   */
  function usable(guess) {
    if (guess === null) return null;
    const state = { ln_h: -guess.pH * LN10, ln_i: Math.log(guess.ionic_strength) };
    return Number.isFinite(state.ln_h) && Number.isFinite(state.ln_i) ? state : null;
  }

  /**
   * @param {Problem} problem
   * @param {State | null} guess
   * @returns {State | null} null where the equations cannot be met
   */
  function solveProblem(problem, guess) {
    return newton(problem, guess) || bracket(problem);
  }

  /** Repeat the solution with the pair terms of the last round until these stand still.
   * Mirrors `_with_interactions`.
   * @param {Problem} problem
   * @param {Mixture} mixture
   * @param {Constants} constants
   * @param {ActivityModel} model
   * @param {Float64Array} matrix of `interactionMatrix`
   * @param {State | null} begin
   * @returns {{found: State | null, offsets: Float64Array}}
   */
  function withInteractions(problem, mixture, constants, model, matrix, begin) {
    const size = Math.sqrt(matrix.length);
    const offsets = new Float64Array(size);
    const change = new Float64Array(size);
    let found = solveProblem(problem, begin);
    let step = 1;
    let last = Infinity;
    for (let round = 0; round < OFFSET_ROUNDS && found !== null; round += 1) {
      const pH = -found.ln_h / LN10;
      const forms = formsAt(mixture, constants, model, pH, Math.exp(found.ln_i), offsets);
      const there = stacked(forms, mixture);
      let largest = 0;
      for (let row = 0; row < size; row += 1) {
        let wanted = 0;
        for (let k = 0; k < size; k += 1) wanted += matrix[row * size + k] * there[k];
        change[row] = wanted - offsets[row];
        largest = Math.max(largest, Math.abs(change[row]));
      }
      if (largest < OFFSET_TOLERANCE) return { found, offsets };
      // A round that did not come closer calls for caution.
      if (largest > 0.9 * last) step = Math.max(0.25, 0.5 * step);
      last = largest;
      for (let row = 0; row < size; row += 1) offsets[row] += step * change[row];
      found = solveProblem(withOffsets(problem, offsets), found);
    }
    return { found: null, offsets };
  }

  bf.equilibrium = { STATUS, solve };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
