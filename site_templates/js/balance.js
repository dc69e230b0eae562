/** The two equations that decide a mixture's state, their residuals and their derivatives.
 * The twin of balance.py, for one mixture.
 *
 * Unknowns are x = ln a(H+) and u = ln I. The residuals are
 *
 *     charge    ln(positive charge / negative charge), nearly straight in x
 *     strength  u − ln(ionic strength of what is there)
 *
 * A problem owns the places that every evaluation writes into, so that a solve makes nothing new
 * in its inner loop.
 *
 * @typedef {object} Problem
 * @property {number} families how many
 * @property {Int32Array} charges of the form with most protons, a family each
 * @property {Int32Array} starts where a family's steps begin in `K`, and at last where all end
 * @property {Float64Array} K of every step, family after family
 * @property {Float64Array} totals mol/kg, a family each
 * @property {number} net charge of the strong ions, mol/kg
 * @property {number} net_rest what rounding left out of `net`
 * @property {number} strength Σ z² m of the strong ions, mol/kg
 * @property {number} hydrogen m(H+) / a(H+) of an uncharged world: 1 but for interactions
 * @property {number} hydroxide m(OH-) a(H+) likewise: Kw but for interactions
 * @property {number} coefficient Debye–Hückel A
 * @property {LongRangeLaw} long_range
 * @property {Float64Array} forms room for one family's forms: weights, then mol/kg
 * @property {Evaluation} state room for what an evaluation gives
 *
 * What `sums` and `residuals` fill in; `_x` and `_u` are derivatives by the unknowns.
 * @typedef {object} Evaluation
 * @property {number} term D of the activity model, and `slope`, its derivative by ln I
 * @property {number} slope
 * @property {number} lost_mean protons lost, mean over the forms of the family at hand
 * @property {number} square_mean z², likewise
 * @property {number} plus mol/kg, positive charge, opposite strong ions cancelled
 * @property {number} minus mol/kg, negative charge likewise
 * @property {number} squares mol/kg, Σ z² m
 * @property {number} plus_x @property {number} minus_x @property {number} squares_x
 * @property {number} plus_u @property {number} minus_u @property {number} squares_u
 * @property {number} charge residual
 * @property {number} strength residual
 * @property {number} charge_x @property {number} strength_x
 * @property {number} charge_u @property {number} strength_u
 *
 * @typedef {{charge_x: number, charge_u: number, squares_x: number, squares_u: number}} Slopes
 *   derivatives of the charge and of Σ z² m, mol/kg
 * @typedef {{total: number, rest: number}} ExactSum
 */
(function (bf) {
  "use strict";

  const { LN10 } = bf.temperature;
  const { strongStrength } = bf.speciation;

  const TINY = 1e-300; // mol/kg; keeps a logarithm finite where a charge is absent

  /** Add `amount` to a sum and keep what rounding leaves out of it. Mirrors `two_sum`.
   * Source: Knuth, The Art of Computer Programming, vol. 2, 4.2.2, theorem B.
   * @param {ExactSum} sum
   * @param {number} amount
   */
  function twoSum(sum, amount) {
    const total = sum.total + amount;
    const ofAmount = total - sum.total;
    sum.rest += sum.total - (total - ofAmount) + (amount - ofAmount);
    sum.total = total;
  }

  /** Sum z m so exactly that opposite ions cancel and leave what is really left.
   * @param {Mixture} mixture
   * @returns {ExactSum} mol/kg
   */
  function exactCharge(mixture) {
    const sum = { total: 0, rest: 0 };
    for (let i = 0; i < mixture.ions.length; i += 1) {
      const charge = mixture.ions[i].charge;
      const amount = charge < 0 ? -mixture.molalities[i] : mixture.molalities[i];
      for (let unit = Math.abs(charge); unit > 0; unit -= 1) twoSum(sum, amount);
    }
    const { rest } = sum;
    sum.rest = 0;
    twoSum(sum, rest);
    return sum;
  }

  // NaN marks every place as a fraction from the start; with zeros a script engine would take them
  // for whole numbers and change its mind in the middle of a solve.
  /** @returns {Evaluation} room for an evaluation */
  function emptyEvaluation() {
    return {
      term: NaN, slope: NaN, lost_mean: NaN, square_mean: NaN,
      plus: NaN, minus: NaN, squares: NaN,
      plus_x: NaN, minus_x: NaN, squares_x: NaN,
      plus_u: NaN, minus_u: NaN, squares_u: NaN,
      charge: NaN, charge_x: NaN, charge_u: NaN,
      strength: NaN, strength_x: NaN, strength_u: NaN,
    };
  }

  /** The problem of one mixture. Mirrors `prepare` in balance.py.
   * @param {Mixture} mixture
   * @param {Constants} constants
   * @param {ActivityModel} model
   * @returns {Problem}
   */
  function prepare(mixture, constants, model) {
    const families = mixture.families.length;
    const charges = new Int32Array(families);
    const starts = new Int32Array(families + 1);
    let most = 0;
    for (let f = 0; f < families; f += 1) {
      const steps = constants.pK[f].length;
      charges[f] = mixture.families[f].charge;
      starts[f + 1] = starts[f] + steps;
      most = Math.max(most, steps);
    }
    const K = new Float64Array(starts[families]);
    for (let f = 0; f < families; f += 1) {
      const pK = constants.pK[f];
      for (let step = 0; step < pK.length; step += 1) {
        K[starts[f] + step] = Math.exp(-LN10 * pK[step]);
      }
    }
    const charge = exactCharge(mixture);
    return {
      families,
      charges,
      starts,
      K,
      totals: Float64Array.from(mixture.totals),
      net: charge.total,
      net_rest: charge.rest,
      strength: strongStrength(mixture),
      hydrogen: 1,
      hydroxide: Math.exp(-LN10 * constants.pKw),
      coefficient: constants.debye_huckel,
      long_range: model.long_range,
      forms: new Float64Array(most + 1),
      state: emptyEvaluation(),
    };
  }

  /** The problem with Σ ε m of each species folded into its constants. Mirrors `with_offsets`.
   * @param {Problem} problem
   * @param {Float64Array} offsets in log10 γ, in the order of `species`
   * @returns {Problem}
   */
  function withOffsets(problem, offsets) {
    const K = new Float64Array(problem.K.length);
    let form = 2;
    for (let f = 0; f < problem.families; f += 1) {
      for (let step = problem.starts[f]; step < problem.starts[f + 1]; step += 1) {
        K[step] = problem.K[step] * Math.exp(LN10 * (offsets[form] - offsets[form + 1]));
        form += 1;
      }
      form += 1;
    }
    return {
      ...problem,
      K,
      hydrogen: problem.hydrogen * Math.exp(-LN10 * offsets[0]),
      hydroxide: problem.hydroxide * Math.exp(-LN10 * offsets[1]),
    };
  }

  /** Fill `problem.forms` with each form's amount relative to the form with most protons.
   * Mirrors `weights`.
   * Source: m_j / m_(j−1) = K_j / a(H+) · γ_(j−1) / γ_j with γ = g^(−z²).
   * @param {Problem} problem
   * @param {number} family its position
   * @param {number} h activity of H+
   * @param {number} g 10^D
   * @returns {number} the sum of the weights
   */
  function weights(problem, family, h, g) {
    const { forms, K } = problem;
    const start = problem.starts[family];
    const steps = problem.starts[family + 1] - start;
    const square = g * g;
    // z² grows by 1 − 2 z on losing a proton; each further step adds 2 to that.
    let ratio = g ** (1 - 2 * problem.charges[family]) / h;
    let weight = 1;
    let sum = 1;
    forms[0] = 1;
    for (let step = 0; step < steps; step += 1) {
      weight *= K[start + step] * ratio;
      forms[step + 1] = weight;
      sum += weight;
      ratio *= square;
    }
    return sum;
  }

  /** Fill `problem.state` with charge of either sign and Σ z² m, with their derivatives.
   * Mirrors `sums` in balance.py.
   * Source: a derivative of a mean over a family's forms is a covariance: d⟨f⟩/dx = −cov(f, j),
   * d⟨f⟩/dln g = cov(f, z²), with j the number of protons lost and g = 10^D.
   * @param {Problem} problem
   * @param {number} x ln a(H+)
   * @param {number} u ln (I kg/mol)
   */
  function sums(problem, x, u) {
    const { state } = problem;
    problem.long_range(problem.coefficient, Math.exp(u), state);
    const g = Math.exp(LN10 * state.term);
    const h = Math.exp(x);
    const hydrogen = problem.hydrogen * h * g;
    const hydroxide = (problem.hydroxide / h) * g;
    const both = hydrogen + hydroxide;
    state.plus = Math.max(problem.net, 0) + hydrogen + TINY;
    state.minus = Math.max(-problem.net, 0) + hydroxide + TINY;
    state.squares = problem.strength + both;
    state.plus_x = hydrogen;
    state.minus_x = -hydroxide;
    state.squares_x = hydrogen - hydroxide;
    // By ln g at first: g follows u, and nothing else here does.
    state.plus_u = hydrogen;
    state.minus_u = hydroxide;
    state.squares_u = both;
    for (let f = 0; f < problem.families; f += 1) addFamily(problem, f, h, g);
    const gByU = LN10 * state.slope;
    state.plus_u *= gByU;
    state.minus_u *= gByU;
    state.squares_u *= gByU;
  }

  /** Fill `problem.forms` with the molality of each form of a family, and `problem.state` with
   * its mean number of protons lost and its mean z².
   * @param {Problem} problem
   * @param {number} family its position
   * @param {number} h activity of H+
   * @param {number} g 10^D
   * @returns {number} how many forms
   */
  function share(problem, family, h, g) {
    const { state, forms } = problem;
    const total = problem.totals[family];
    const count = problem.starts[family + 1] - problem.starts[family] + 1;
    const scale = total / weights(problem, family, h, g);
    let lost = 0;
    let squares = 0;
    for (let j = 0; j < count; j += 1) {
      const z = problem.charges[family] - j;
      const amount = forms[j] * scale;
      forms[j] = amount;
      lost += j * amount;
      squares += z * z * amount;
    }
    state.lost_mean = lost / (total + TINY);
    state.square_mean = squares / (total + TINY);
    return count;
  }

  /** Add one family to the sums in `problem.state`, with derivatives by ln g where these belong
   * to u.
   * @param {Problem} problem
   * @param {number} family its position
   * @param {number} h activity of H+
   * @param {number} g 10^D
   */
  function addFamily(problem, family, h, g) {
    const count = share(problem, family, h, g);
    const { state, forms } = problem;
    const { lost_mean: lostMean, square_mean: squareMean } = state;
    for (let j = 0; j < count; j += 1) {
      const z = problem.charges[family] - j;
      const charge = z * forms[j];
      const square = z * charge;
      const lostAway = j - lostMean;
      const squareAway = z * z - squareMean;
      if (z > 0) {
        state.plus += charge;
        state.plus_x -= charge * lostAway;
        state.plus_u += charge * squareAway;
      } else {
        state.minus -= charge;
        state.minus_x += charge * lostAway;
        state.minus_u -= charge * squareAway;
      }
      state.squares += square;
      state.squares_x -= square * lostAway;
      state.squares_u += square * squareAway;
    }
  }

  /** Fill `problem.state` with both residuals and their derivatives. Mirrors `residuals`.
   * Source: electroneutrality and the definition of ionic strength.
   * @param {Problem} problem
   * @param {number} x ln a(H+)
   * @param {number} u ln (I kg/mol)
   */
  function residuals(problem, x, u) {
    const { state } = problem;
    sums(problem, x, u);
    state.charge = Math.log(state.plus / state.minus);
    state.strength = u - Math.log(0.5 * state.squares);
    state.charge_x = state.plus_x / state.plus - state.minus_x / state.minus;
    state.charge_u = state.plus_u / state.plus - state.minus_u / state.minus;
    state.strength_x = -state.squares_x / state.squares;
    state.strength_u = 1 - state.squares_u / state.squares;
  }

  /** Derivatives that stay good where salt hides little buffering. Mirrors `slopes`.
   *
   * `sums` takes a mean of squares minus a square of means, which is enough to find a root; here
   * every form counts by its distance from the mean, so that nothing large cancels.
   * @param {Problem} problem
   * @param {number} x ln a(H+)
   * @param {number} u ln (I kg/mol)
   * @returns {Slopes}
   */
  function slopes(problem, x, u) {
    const { state } = problem;
    problem.long_range(problem.coefficient, Math.exp(u), state);
    const g = Math.exp(LN10 * state.term);
    const gByU = LN10 * state.slope;
    const h = Math.exp(x);
    const hydrogen = problem.hydrogen * h * g;
    const hydroxide = (problem.hydroxide / h) * g;
    let chargeX = hydrogen + hydroxide;
    let chargeG = hydrogen - hydroxide;
    let squaresX = chargeG;
    let squaresG = chargeX;
    for (let f = 0; f < problem.families; f += 1) {
      const count = share(problem, f, h, g);
      for (let lost = 0; lost < count; lost += 1) {
        const amount = problem.forms[lost];
        const lostAway = lost - state.lost_mean;
        const squareAway = (problem.charges[f] - lost) ** 2 - state.square_mean;
        chargeX += amount * lostAway * lostAway;
        chargeG -= amount * lostAway * squareAway;
        squaresX -= amount * lostAway * squareAway;
        squaresG += amount * squareAway * squareAway;
      }
    }
    const [chargeU, squaresU] = [gByU * chargeG, gByU * squaresG];
    return { charge_x: chargeX, charge_u: chargeU, squares_x: squaresX, squares_u: squaresU };
  }

  bf.balance = { twoSum, prepare, withOffsets, weights, sums, residuals, slopes };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
