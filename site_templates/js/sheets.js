/** Every analysis of one formulation, as records that a page shows. The twin of sheets.py, but for
 * the warnings, which belong to the definition and not to what a reader tries.
 *
 * @typedef {{temperature: number[], state: States}} Drift  pH along temperature, K
 * @typedef {{titrant: Addition, added: Addition, curve: Curve, contrast: Curve,
 *   equivalences: Equivalence[], reserve: number}} Side  what one titrant does to a formulation,
 *   and the same amounts to water that holds nothing; reserve: mol per kg of water until the limit
 *   of use, NaN where it is never reached
 * @typedef {{temperature: number[], amount: number[], pH: number[][]}} Surface  pH over temperature
 *   (K) and amount of titrant (mol per kg of water, the downward one negative)
 * @typedef {{subject: Subject, reference: SolutionState, deviation: number | null,
 *   estimate: Estimate, drift: Drift, sweep: Sweep, sides: Side[], surface: Surface | null}} Sheet
 */
(function (bf) {
  "use strict";

  const { constantsAt } = bf.temperature;
  const { solve } = bf.equilibrium;
  const { mixed, pureWater } = bf.composition;
  const { sweep, hendersonHasselbalch } = bf.buffering;
  const { amountToReach, equivalences, titrate } = bf.titration;
  const { stateAt } = bf.subjects;

  const SWEEP_POINTS = 141; // pH 0 to 14 in tenths
  const DRIFT_POINTS = 41;
  const TITRATION_POINTS = 81; // a side
  const MAP_SHAPE = [21, 41]; // temperatures, amounts
  const MOST_DILUTION = 1; // kg of titrant's water per kg of the batch's
  const SMALLEST_RANGE = 2e-5; // mol/kg; what shows the response of plain water

  /** Evenly spaced numbers, both ends included, with the rounding of numpy's `linspace`.
   * @param {number} low
   * @param {number} high
   * @param {number} count
   * @returns {number[]}
   */
  function linspace(low, high, count) {
    const step = (high - low) / (count - 1);
    const values = [];
    for (let i = 0; i < count - 1; i += 1) values.push(i * step + low);
    values.push(high);
    return values;
  }

  /** The pH of a formulation over its temperatures of use. Mirrors `drift_of` in sheets.py.
   * @param {Subject} subject
   * @returns {Drift}
   */
  function driftOf(subject) {
    const { mixture, model, interactions, use_temperature: use } = subject;
    const temperature = linspace(use.low, use.high, DRIFT_POINTS);
    /** @type {States} */
    const state = { pH: [], ionic_strength: [], status: [] };
    let here = null;
    for (const kelvin of temperature) {
      const constants = constantsAt(mixture.families, kelvin);
      here = solve(mixture, constants, model, interactions, here);
      state.pH.push(here.pH);
      state.ionic_strength.push(here.ionic_strength);
      state.status.push(here.status);
    }
    return { temperature, state };
  }

  /** A formulation brought to every pH from 0 to 14 by strong acid or base. Mirrors `sweep_of`.
   * @param {Subject} subject
   * @param {number} temperature K
   * @returns {Sweep}
   */
  function sweepOf(subject, temperature) {
    const { mixture, model, interactions } = subject;
    const constants = constantsAt(mixture.families, temperature);
    return sweep(mixture, constants, model, linspace(0, 14, SWEEP_POINTS), interactions);
  }

  /** Both titrations of a formulation, downward first, with the first titrant of each.
   * Mirrors `sides_of`.
   * @param {Subject} subject
   * @param {number} temperature K
   * @returns {Side[]}
   */
  function sidesOf(subject, temperature) {
    const sides = [];
    for (const direction of ["downward", "upward"]) {
      const chosen = subject.additions.find((added) => added.direction === direction);
      if (chosen !== undefined) sides.push(sideOf(subject, chosen, temperature));
    }
    return sides;
  }

  /**
   * @param {Subject} subject
   * @param {Addition} added
   * @param {number} temperature K
   * @returns {Side}
   */
  function sideOf(subject, added, temperature) {
    const { mixture, model, interactions, use_pH: limits } = subject;
    const limit = added.direction === "upward" ? limits.high : limits.low;
    const reached = amountToReach(mixture, added, limit, temperature, model, interactions);
    const points = equivalences(mixture, added, temperature, model, interactions);
    const range = titrationRange(reached, points, added.water);
    const amount = linspace(0, range, TITRATION_POINTS);
    return {
      titrant: added,
      added,
      curve: titrate(mixture, added, amount, temperature, model, interactions),
      contrast: titrate(pureWater(mixture), added, amount, temperature, model, interactions),
      equivalences: points.filter((/** @type {Equivalence} */ point) => point.amount <= range),
      reserve: practical(reached, added.water),
    };
  }

  /** An amount of titrant, or NaN where its water more than doubles the batch.
   * @param {number} amount mol per kg of water
   * @param {number} water kg brought by one mole of titrant
   * @returns {number}
   */
  function practical(amount, water) {
    return amount * water <= MOST_DILUTION ? amount : NaN;
  }

  /** How far a titration is drawn: beyond the reserve and the last visible equivalence.
   * Mirrors `titration_range`.
   *
   * It ends at the latest where the titrant's own water has doubled the batch.
   * @param {number} reserve mol per kg of water
   * @param {Equivalence[]} points
   * @param {number} water kg brought by one mole of titrant
   * @returns {number} mol per kg of water
   */
  function titrationRange(reserve, points, water) {
    let wanted = SMALLEST_RANGE;
    for (const point of points) if (point.visible) wanted = Math.max(wanted, 1.25 * point.amount);
    if (reserve > 0) wanted = Math.max(wanted, 1.5 * reserve);
    return water > 0 ? Math.min(wanted, MOST_DILUTION / water) : wanted;
  }

  /** pH over the temperatures of use and the reserve on both sides. Mirrors `surface_of`.
   * @param {Subject} subject
   * @param {Side[]} sides
   * @returns {Surface | null}
   */
  function surfaceOf(subject, sides) {
    if (sides.length === 0) return null;
    const [rows, columns] = MAP_SHAPE;
    const use = subject.use_temperature;
    const temperature = linspace(use.low, use.high, rows);
    const amount = [];
    const pH = temperature.map(() => []);
    for (const side of sides) {
      const downward = side.added.direction === "downward";
      let portions = linspace(0, surfaceRange(side), Math.floor(columns / 2) + 1);
      if (downward) portions.reverse();
      else if (amount.length > 0) portions = portions.slice(1); // the middle is on both sides
      for (const portion of portions) amount.push(downward ? -portion : portion);
      appendColumns(pH, subject, side.added, portions, temperature);
    }
    return { temperature, amount, pH };
  }

  /**
   * @param {number[][]} pH a row for each temperature, to which columns are added
   * @param {Subject} subject
   * @param {Addition} added
   * @param {number[]} portions mol per kg of water
   * @param {number[]} temperature K
   */
  function appendColumns(pH, subject, added, portions, temperature) {
    const { mixture, model, interactions } = subject;
    const mixtures = portions.map((portion) => mixed(mixture, added, portion));
    temperature.forEach((kelvin, row) => {
      const constants = constantsAt(mixture.families, kelvin);
      let here = null;
      for (const there of mixtures) {
        here = solve(there, constants, model, interactions, here);
        pH[row].push(here.pH);
      }
    });
  }

  /** How far the surface reaches on one side: a little beyond the reserve.
   * Mirrors `surface_range`.
   * @param {Side} side
   * @returns {number} mol per kg of water
   */
  function surfaceRange(side) {
    const drawn = side.curve.amount[side.curve.amount.length - 1];
    return side.reserve > 0 ? Math.min(1.2 * side.reserve, drawn) : drawn;
  }

  /** Every analysis of a formulation at one temperature. Mirrors `sheet_of`.
   * @param {Subject} subject
   * @param {number} temperature K
   * @returns {Sheet}
   */
  function sheetOf(subject, temperature) {
    const reference = stateAt(subject, temperature);
    const sides = sidesOf(subject, temperature);
    const constants = constantsAt(subject.mixture.families, temperature);
    return {
      subject,
      reference,
      deviation: subject.expected === null ? null : reference.pH - subject.expected.pH,
      estimate: hendersonHasselbalch(subject.mixture, constants.pK),
      drift: driftOf(subject),
      sweep: sweepOf(subject, temperature),
      sides,
      surface: surfaceOf(subject, sides),
    };
  }

  bf.sheets = { linspace, driftOf, sweepOf, sidesOf, practical, surfaceOf, surfaceRange, sheetOf };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
