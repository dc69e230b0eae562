/** Adding a titrant: the curve, the amount that reaches a pH, and where equivalence shows.
 * The twin of titration.py, for one mixture.
 *
 * @typedef {{pH: number[], ionic_strength: number[], status: number[]}} States
 * @typedef {{amount: number[], state: States, capacity: number[]}} Curve  a mixture after each
 *   amount of a titrant: mol per kg of the mixture's own water; capacity of the diluted mixture
 * @typedef {{amount: number, pH: number, visible: boolean, family: string,
 *   step: number}} Equivalence  an amount of titrant that meets a whole number of protons
 */
(function (bf) {
  "use strict";

  const { LN10, constantsAt } = bf.temperature;
  const { strongCharge } = bf.speciation;
  const { prepare, sums, withOffsets } = bf.balance;
  const { solve } = bf.equilibrium;
  const { mixed } = bf.composition;
  const { bufferCapacity, sortedSteps } = bf.buffering;

  const ROUNDS = 200;
  const REACHED = 1e-10; // in pH
  const SETTLED = 1e-13; // of an amount
  const MOST = 1e3; // mol/kg; nothing beyond it is a solution in water

  /** A mixture's state after each amount, at one temperature. Mirrors `titrate` in titration.py.
   *
   * Volume, ionic strength and the constants at the temperature are all taken into account.
   * Source: conservation of mass, then `solve`.
   * @param {Mixture} mixture
   * @param {Addition} added
   * @param {number[]} amount mol per kg of the mixture's water
   * @param {number} temperature K
   * @param {ActivityModel} model
   * @param {Interaction[]} [interactions]
   * @returns {Curve}
   */
  function titrate(mixture, added, amount, temperature, model, interactions = []) {
    const constants = constantsAt(mixture.families, temperature);
    /** @type {States} */
    const state = { pH: [], ionic_strength: [], status: [] };
    const capacity = [];
    let here = null;
    for (const portion of amount) {
      const there = mixed(mixture, added, portion);
      here = solve(there, constants, model, interactions, here);
      state.pH.push(here.pH);
      state.ionic_strength.push(here.ionic_strength);
      state.status.push(here.status);
      capacity.push(bufferCapacity(there, constants, model, here));
    }
    return { amount, state, capacity };
  }

  /** How much of a titrant brings a mixture to a pH. Mirrors `amount_to_reach`.
   * Source: at a given pH and ionic strength the amount is explicit, the charge of the mixture over
   * that of one mole of titrant; the ionic strength follows by repetition, inside a bracket.
   * @param {Mixture} mixture
   * @param {Addition} added
   * @param {number} pH
   * @param {number} temperature K
   * @param {ActivityModel} model
   * @param {Interaction[]} [interactions]
   * @returns {number} mol per kg of the mixture's water; NaN where none does
   */
  function amountToReach(mixture, added, pH, temperature, model, interactions = []) {
    const constants = constantsAt(mixture.families, temperature);
    let here = solve(mixed(mixture, added, 0), constants, model, interactions);
    if (Math.abs(here.pH - pH) < REACHED) return 0;
    const upward = pH > here.pH;
    let amount = 0;
    let low = 0;
    let high = Infinity;
    let last = Infinity;
    for (let round = 0; round < ROUNDS && amount <= MOST; round += 1) {
      const explicit = explicitAmount(mixture, added, constants, model, pH, here);
      if (amount === 0 && !(explicit > 0)) return NaN; // it leads the other way
      const following = nextAmount(explicit, amount, low, high, last);
      last = Math.abs(following - amount);
      amount = following;
      if (last <= SETTLED * amount) return amount;
      here = solve(mixed(mixture, added, amount), constants, model, interactions, here);
      if (here.pH < pH === upward) low = amount;
      else high = amount;
    }
    return NaN;
  }

  /** As in `balanceCharge`, steps have to halve, or the bracket is halved instead.
   * Mirrors `_next_amount`.
   * @param {number} explicit
   * @param {number} amount
   * @param {number} low
   * @param {number} high
   * @param {number} last step
   * @returns {number}
   */
  function nextAmount(explicit, amount, low, high, last) {
    const step = Math.abs(explicit - amount);
    if (step <= SETTLED * explicit) return explicit;
    if (explicit > low && explicit < high && step < 0.5 * last) return explicit;
    return high < Infinity ? 0.5 * (low + high) : 2 * amount;
  }

  /** The amount of titrant that brings a mixture to a pH while ionic strength and pair terms stay.
   * Mirrors `_explicit_amount`.
   * @param {Mixture} mixture
   * @param {Addition} added
   * @param {Constants} constants
   * @param {ActivityModel} model
   * @param {number} pH
   * @param {Equilibrium} here whose ionic strength and pair terms hold
   * @returns {number} mol per kg of the mixture's water
   */
  function explicitAmount(mixture, added, constants, model, pH, here) {
    const before = chargeAt(mixed(mixture, added, 0), constants, model, pH, here);
    const after = chargeAt(mixed(mixture, added, 1), constants, model, pH, here);
    // Per kg of the mixture's own water the charge is linear in the amount.
    return -before / (after * (1 + added.water) - before);
  }

  /** The charge of a mixture at a pH that is not its own.
   * @param {Mixture} mixture
   * @param {Constants} constants
   * @param {ActivityModel} model
   * @param {number} pH
   * @param {Equilibrium} here whose ionic strength and pair terms hold
   * @returns {number} mol/kg
   */
  function chargeAt(mixture, constants, model, pH, here) {
    let problem = prepare(mixture, constants, model);
    if (here.offsets !== null) problem = withOffsets(problem, here.offsets);
    sums(problem, -LN10 * pH, Math.log(here.ionic_strength));
    return problem.state.plus - problem.state.minus;
  }

  /** The amounts of a strong titrant that meet a whole number of protons. Mirrors `equivalences`.
   *
   * Each is visible where the mixture buffers less than half as well as a quarter of a step before
   * and after it; otherwise the curve passes it without a sign. A titrant that is itself a family
   * (phosphoric acid, sodium carbonate) has no single equivalence, and none is returned.
   * Source: stoichiometry; the criterion is the project's own.
   * @param {Mixture} mixture
   * @param {Addition} added
   * @param {number} temperature K
   * @param {ActivityModel} model
   * @param {Interaction[]} [interactions]
   * @returns {Equivalence[]} in the order of addition
   */
  function equivalences(mixture, added, temperature, model, interactions = []) {
    const result = [];
    for (const found of candidates(mixture, added, constantsAt(mixture.families, temperature))) {
      const { amount, size, family, step } = found;
      const around = [amount - 0.25 * size, amount, amount + 0.25 * size];
      const amounts = around.map((value) => Math.max(value, 0));
      const curve = titrate(mixture, added, amounts, temperature, model, interactions);
      const [before, at, after] = curve.capacity;
      const visible = at < 0.5 * Math.min(before, after);
      result.push({ amount, pH: curve.state.pH[1], visible, family, step });
    }
    return result.sort((a, b) => a.amount - b.amount);
  }

  /** Every equivalence still ahead. Mirrors `_candidates`.
   * @param {Mixture} mixture
   * @param {Addition} added
   * @param {Constants} constants
   * @returns {{amount: number, size: number, family: string, step: number}[]} mol/kg
   */
  function candidates(mixture, added, constants) {
    let charge = 0;
    added.ions.forEach((ion, k) => (charge += ion.charge * added.per_ion[k]));
    if (added.families.length > 0 || charge === 0) return [];
    const net = strongCharge(mixture);
    return protonLadder(mixture, constants)
      .map(({ required, size, family, step }) => {
        return { amount: (required - net) / charge, size, family, step };
      })
      .filter(({ amount, size }) => amount > 1e-3 * size);
  }

  /** What strong charge each step has to meet, strongest acid first. Mirrors `proton_ladder`.
   * @param {Mixture} mixture
   * @param {Constants} constants
   * @returns {{required: number, size: number, family: string, step: number}[]} mol/kg
   */
  function protonLadder(mixture, constants) {
    let protonated = 0;
    mixture.families.forEach((family, f) => (protonated += family.charge * mixture.totals[f]));
    const steps = sortedSteps(mixture, constants.pK);
    let size = Math.abs(strongCharge(mixture));
    if (steps.length > 0) size = Math.max(...steps.map((/** @type {{total: number}} */ each) => each.total));
    let required = -protonated;
    const ladder = [{ required, size, family: "", step: 0 }];
    for (const { total, key, step } of steps) {
      required += total;
      ladder.push({ required, size: total, family: key, step: step + 1 });
    }
    return ladder;
  }

  bf.titration = { titrate, amountToReach, equivalences, protonLadder };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
