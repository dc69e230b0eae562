/** What a mixture does at every pH that strong acid or base could bring it to.
 * The twin of buffering.py, for one mixture.
 *
 * All results are explicit in pH: the amount of strong base that belongs to a pH, the forms there,
 * and the buffer capacity as the derivative of that amount, never a difference of neighbouring
 * points.
 *
 * @typedef {{hydrogen: number[], hydroxide: number[], families: number[][][],
 *   fractions: number[][][]}} SweptForms  per family and form, a number for each pH
 * @typedef {{pH: number[], ionic_strength: number[], base: number[], capacity: number[],
 *   forms: SweptForms}} Sweep  a mixture brought to each pH with strong acid or base
 * @typedef {{kind: "pair" | "ampholyte" | "none", pH: number, family: string, step: number,
 *   ratio: number}} Estimate  from the recipe alone: one conjugate pair, ideal solution; pH is NaN
 *   for "none", the ratio of base to acid form NaN but for a pair
 */
(function (bf) {
  "use strict";

  const { LN10 } = bf.temperature;
  const { formsAt, interactionMatrix, stacked, strongCharge } = bf.speciation;
  const { prepare, slopes, sums, withOffsets } = bf.balance;

  const ROUNDS = 100;
  const SETTLED = 1e-13;
  const LOW_U = Math.log(1e-9); // of ionic strength, where a search begins
  const HIGH_U = Math.log(1e3);
  const NEGLIGIBLE = 1e-6; // a share of a pair too small to speak of a ratio

  /** What strong acid or base makes of a mixture at each pH. Mirrors `sweep` in buffering.py.
   *
   * The ion that comes with the acid or base counts in the ionic strength and has no pair terms.
   * With `ionicStrength` given, an inert salt is taken to hold it there.
   * Source: electroneutrality, the ionic strength solved at each pH.
   * @param {Mixture} mixture
   * @param {Constants} constants
   * @param {ActivityModel} model
   * @param {number[]} pH
   * @param {Interaction[]} [interactions]
   * @param {number | null} [ionicStrength] mol/kg
   * @returns {Sweep}
   */
  function sweep(mixture, constants, model, pH, interactions = [], ionicStrength = null) {
    const problem = prepare(mixture, constants, model);
    const matrix = model.uses_interactions ? interactionMatrix(mixture, interactions) : null;
    /** @returns {number[][][]} */
    const rooms = () => mixture.families.map((family) => family.species.map(() => []));
    /** @type {Sweep} */
    const result = {
      pH,
      ionic_strength: [],
      base: [],
      capacity: [],
      forms: { hydrogen: [], hydroxide: [], families: rooms(), fractions: rooms() },
    };
    for (const value of pH) {
      const point = swept(problem, mixture, constants, model, value, matrix, ionicStrength);
      result.ionic_strength.push(point.ionic_strength);
      result.base.push(point.base);
      result.capacity.push(point.capacity);
      append(result.forms, point.forms);
    }
    return result;
  }

  /** @param {SweptForms} all @param {Forms} forms those of the next pH */
  function append(all, forms) {
    all.hydrogen.push(forms.hydrogen);
    all.hydroxide.push(forms.hydroxide);
    for (let f = 0; f < forms.families.length; f += 1) {
      for (let j = 0; j < forms.families[f].length; j += 1) {
        all.families[f][j].push(forms.families[f][j]);
        all.fractions[f][j].push(forms.fractions[f][j]);
      }
    }
  }

  /** One point of a sweep.
   * @param {Problem} problem
   * @param {Mixture} mixture
   * @param {Constants} constants
   * @param {ActivityModel} model
   * @param {number} pH
   * @param {Float64Array | null} matrix of `interactionMatrix`
   * @param {number | null} ionicStrength mol/kg, where it is held
   * @returns {{ionic_strength: number, base: number, capacity: number, forms: Forms}}
   */
  function swept(problem, mixture, constants, model, pH, matrix, ionicStrength) {
    const x = -LN10 * pH;
    const held = ionicStrength !== null;
    let here = problem;
    let u = held ? Math.log(ionicStrength) : strengthAt(problem, x);
    let offsets = null;
    let settled = matrix === null;
    for (let round = 0; round < ROUNDS && matrix !== null && !settled; round += 1) {
      const forms = formsAt(mixture, constants, model, pH, Math.exp(u), offsets);
      const last = offsets;
      offsets = product(matrix, stacked(forms, mixture));
      here = withOffsets(problem, offsets);
      if (!held) u = strengthAt(here, x);
      settled = standStill(offsets, last);
    }
    if (!settled) u = NaN;
    sums(here, x, u);
    const base = here.state.minus - here.state.plus;
    const strength = Math.exp(u);
    return {
      ionic_strength: strength,
      base,
      capacity: capacityOf(slopes(here, x, u), strength, base < 0 ? -1 : 1, held),
      forms: formsAt(mixture, constants, model, pH, strength, offsets),
    };
  }

  /**
   * @param {Float64Array} offsets
   * @param {Float64Array | null} last of the round before
   * @returns {boolean}
   */
  function standStill(offsets, last) {
    return offsets.every((value, row) => Math.abs(value - (last ? last[row] : 0)) < SETTLED);
  }

  /**
   * @param {Float64Array} matrix square, row after row
   * @param {Float64Array} amounts
   * @returns {Float64Array}
   */
  function product(matrix, amounts) {
    const size = amounts.length;
    const result = new Float64Array(size);
    for (let row = 0; row < size; row += 1) {
      let sum = 0;
      for (let k = 0; k < size; k += 1) sum += matrix[row * size + k] * amounts[k];
      result[row] = sum;
    }
    return result;
  }

  /** The buffer capacity of a mixture at its own pH, towards strong base.
   * Mirrors `buffer_capacity`.
   *
   * The ionic strength moves along; pair terms of the specific-ion model are held.
   * Source: Van Slyke, J. Biol. Chem. 52 (1922) 525, extended by implicit differentiation of
   * charge balance and ionic strength.
   * @param {Mixture} mixture
   * @param {Constants} constants
   * @param {ActivityModel} model
   * @param {Equilibrium} state
   * @returns {number} mol/kg per pH
   */
  function bufferCapacity(mixture, constants, model, state) {
    let problem = prepare(mixture, constants, model);
    if (state.offsets !== null) problem = withOffsets(problem, state.offsets);
    const there = slopes(problem, -LN10 * state.pH, Math.log(state.ionic_strength));
    return capacityOf(there, state.ionic_strength, 1, false);
  }

  /** Differentiate the charge by pH.
   * @param {Slopes} there
   * @param {number} strength mol/kg
   * @param {number} sign +1 where base is added, −1 where acid is taken
   * @param {boolean} held whether a salt holds the ionic strength
   * @returns {number} mol/kg per pH
   */
  function capacityOf(there, strength, sign, held) {
    if (held) return LN10 * there.charge_x;
    // I = ½ (Σ z² m + |b|) with b = −charge, so both sides of it move with x.
    const uByX =
      (there.squares_x - sign * there.charge_x) /
      (2 * strength - there.squares_u + sign * there.charge_u);
    return LN10 * (there.charge_x + there.charge_u * uByX);
  }

  /** ln I at a given pH, strong acid or base balancing the charge. Mirrors `_strength`.
   * @param {Problem} problem
   * @param {number} x ln a(H+)
   * @returns {number} ln (I kg/mol)
   */
  function strengthAt(problem, x) {
    const there = problem.state;
    const total = problem.totals.reduce((sum, amount) => sum + amount, 0);
    let low = LOW_U;
    let high = HIGH_U;
    let last = high - low;
    let u = Math.log(0.5 * (problem.strength + Math.abs(problem.net)) + total + 1e-7);
    for (let round = 0; round < ROUNDS; round += 1) {
      sums(problem, x, u);
      const charge = there.plus - there.minus;
      const strength = Math.exp(u);
      const excess = strength - 0.5 * (there.squares + Math.abs(charge));
      const slope =
        strength - 0.5 * (there.squares_u + Math.sign(charge) * (there.plus_u - there.minus_u));
      if (excess < 0) low = u;
      if (excess > 0) high = u;
      const step = -excess / slope;
      const target = u + step;
      // As in `balanceCharge` of bracketing.js.
      const good =
        (target > low && target < high && Math.abs(step) < 0.5 * last) || Math.abs(step) < SETTLED;
      let following = good ? target : 0.5 * (low + high);
      if (excess === 0) following = u;
      last = Math.abs(following - u);
      u = following;
      if (last < SETTLED) break;
    }
    return u;
  }

  /** The Henderson–Hasselbalch estimate of a mixture. Mirrors `henderson_hasselbalch`.
   *
   * Strong ions are taken up by the families one pair after the other, strongest acid first. The
   * pair that is left partly neutralised gives the estimate; where a pair ends exactly, the form
   * between two steps of one family gives half the sum of their pK. Water's own ions do not count.
   * Source: Henderson (1908) and Hasselbalch (1917), as in any textbook.
   * @param {Mixture} mixture
   * @param {number[][]} pK a list of steps for each family
   * @returns {Estimate}
   */
  function hendersonHasselbalch(mixture, pK) {
    let protonated = 0;
    mixture.families.forEach((family, f) => (protonated += family.charge * mixture.totals[f]));
    let toLose = strongCharge(mixture) + protonated;
    let before = { value: NaN, key: "" };
    for (const { value, total, key, step } of sortedSteps(mixture, pK)) {
      const share = toLose / total;
      if (share < -NEGLIGIBLE) break;
      if (share < NEGLIGIBLE && before.key === key) {
        const pH = 0.5 * (before.value + value);
        return { kind: "ampholyte", pH, family: key, step, ratio: NaN };
      }
      if (NEGLIGIBLE < share && share < 1 - NEGLIGIBLE) {
        const ratio = share / (1 - share);
        return { kind: "pair", pH: value + Math.log10(ratio), family: key, step, ratio };
      }
      toLose -= total;
      before = { value, key };
    }
    return { kind: "none", pH: NaN, family: "", step: 0, ratio: NaN };
  }

  /** Every step of the families that are there, strongest acid first.
   * @param {Mixture} mixture
   * @param {number[][]} pK a list of steps for each family
   * @returns {{value: number, total: number, key: string, step: number}[]}
   */
  function sortedSteps(mixture, pK) {
    /** @type {{value: number, total: number, key: string, step: number}[]} */
    const steps = [];
    for (let f = 0; f < mixture.families.length; f += 1) {
      const total = mixture.totals[f];
      const key = mixture.families[f].key;
      if (total > 0) pK[f].forEach((value, step) => steps.push({ value, total, key, step }));
    }
    /** @param {{key: string}} a @param {{key: string}} b */
    const byKey = (a, b) => Number(a.key > b.key) - Number(a.key < b.key);
    return steps.sort(
      (a, b) => a.value - b.value || a.total - b.total || byKey(a, b) || a.step - b.step,
    );
  }

  bf.buffering = { sweep, bufferCapacity, hendersonHasselbalch, sortedSteps };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
