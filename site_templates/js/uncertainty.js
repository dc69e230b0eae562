/** The band: the interval, k = 2, in which a careful reading is expected, and what makes it wide.
 * The twin of uncertainty.py; tolerances and assumptions come with the page's data.
 *
 * @typedef {{kind: string, name: string, step: number, stated: boolean,
 *   effect: number}} Contribution  in pH: what the whole tolerance, upwards, would do; step of a
 *   constant counted from one, 0 elsewhere
 * @typedef {{temperature: number, pH: number, half_width: number, low: number, high: number,
 *   contributions: Contribution[], ranked: Contribution[]}} Band
 */
(function (bf) {
  "use strict";

  const { GAS_CONSTANT, LN10, constantsAt } = bf.temperature;
  const { davies, ideal } = bf.activity;
  const { solve } = bf.equilibrium;
  const { scaled } = bf.composition;
  const { mixtureOf, recipeWater, addShares } = bf.recipes;
  const { sensitivities } = bf.sensitivities;

  const VISIBLE = 5e-5; // in pH; what is smaller is not worth a line

  /** The expected reading of a formulation, or of another recipe of it, with its band.
   * Mirrors `band_of` in uncertainty.py.
   * Source: Guide to the expression of uncertainty in measurement (JCGM 100:2008), first order.
   * @param {Subject} subject
   * @param {number} temperature K
   * @param {Recipe | null} [recipe]
   * @param {number} [dilution] volume after over volume before
   * @returns {Band}
   */
  function bandOf(subject, temperature, recipe = null, dilution = 1) {
    const { model, interactions, care, doubts } = subject;
    const made = recipe === null ? subject.recipe : recipe;
    const mixture = scaled(mixtureOf(made, subject.mixture), 1 / dilution);
    const constants = constantsAt(mixture.families, temperature);
    const state = solve(mixture, constants, model, interactions);
    const by = sensitivities(mixture, temperature, model, state, interactions);
    const allowance = activityDoubt(subject, constants.debye_huckel, state.ionic_strength);
    const contributions = [
      ...ofConstants(mixture, temperature, by),
      named("water", "", by.pKw * doubts.pKw, false),
      named("activity", "", by.long_range * allowance, false),
      ...ofRecipe(subject, made, mixture, dilution, by),
      named(
        "temperature", "", by.temperature * care.temperature, care.stated.includes("temperature"),
      ),
      named("meter", "", care.meter, care.stated.includes("meter")),
      // What the author knows to be left out, which no sensitivity can carry.
      ...(care.model > 0 ? [named("model", "", care.model, true)] : []),
    ];
    const halfWidth = combined(contributions);
    return {
      temperature,
      pH: state.pH,
      half_width: halfWidth,
      low: state.pH - halfWidth,
      high: state.pH + halfWidth,
      contributions,
      ranked: ranked(contributions),
    };
  }

  /** The half width that independent contributions make together. Mirrors `combined`.
   * @param {Contribution[]} contributions
   * @returns {number} k = 2, in pH
   */
  function combined(contributions) {
    let squares = 0;
    for (const { effect } of contributions) squares += effect * effect;
    return Math.sqrt(squares);
  }

  /** The contributions that can be seen in a pH, largest first. Mirrors `Band.ranked`.
   * @param {Contribution[]} contributions
   * @returns {Contribution[]}
   */
  function ranked(contributions) {
    return contributions
      .filter(({ effect }) => Math.abs(effect) >= VISIBLE)
      .sort((a, b) => Math.abs(b.effect) - Math.abs(a.effect));
  }

  /** How far D of log10 γ = −z² D may be off, k = 2. Mirrors `activity_doubt`.
   * @param {Subject} subject
   * @param {number} coefficient (kg/mol)^0.5
   * @param {number} ionicStrength mol/kg
   * @returns {number}
   */
  function activityDoubt(subject, coefficient, ionicStrength) {
    if (subject.model.long_range === ideal) {
      const leftOut = { term: NaN, slope: NaN };
      davies(coefficient, ionicStrength, leftOut);
      return leftOut.term;
    }
    return subject.doubts.activity * coefficient * ionicStrength;
  }

  /** How well a pK is known at one temperature. Mirrors `pK_doubt` in tolerances.py.
   * @param {Step} step
   * @param {number} temperature K
   * @returns {number} k = 2
   */
  function pKDoubt(step, temperature) {
    const { law, doubt } = step;
    if (law.kind === "equation") return doubt.pK;
    const carried =
      (doubt.enthalpy * (1 / temperature - 1 / law.temperature)) / (GAS_CONSTANT * LN10);
    return Math.hypot(doubt.pK, carried);
  }

  /**
   * @param {Mixture} mixture
   * @param {number} temperature K
   * @param {Sensitivities} by
   * @returns {Contribution[]}
   */
  function ofConstants(mixture, temperature, by) {
    /** @type {Contribution[]} */
    const result = [];
    mixture.families.forEach((family, f) => {
      if (!(mixture.totals[f] > 0)) return;
      family.steps.forEach((step, number) => {
        const effect = by.pK[f][number] * pKDoubt(step, temperature);
        const { stated } = step.doubt;
        result.push({ kind: "constant", name: family.label, step: number + 1, stated, effect });
      });
    });
    return result;
  }

  /** What weighing, contents and the measure of the water contribute. Mirrors `_of_recipe`.
   * @param {Subject} subject
   * @param {Recipe} recipe
   * @param {Mixture} mixture
   * @param {number} dilution
   * @param {Sensitivities} by
   * @returns {Contribution[]}
   */
  function ofRecipe(subject, recipe, mixture, dilution, by) {
    const { care } = subject;
    const water = recipeWater(recipe);
    // By the logarithm of all the water; every molality falls as it rises.
    const byWater = -answer(by, mixture.totals, mixture.molalities);
    const result = [];
    for (const part of recipe.parts) {
      const totals = mixture.totals.map(() => 0);
      const molalities = mixture.molalities.map(() => 0);
      const inWater = part.amount / (water * dilution);
      addShares(part, inWater, mixture.families, mixture.ions, totals, molalities);
      let byAmount = answer(by, totals, molalities);
      if (recipe.counted) byAmount += (byWater * part.amount * part.added.water) / water;
      const measure = part.added.volume === null ? "weighing" : "volume";
      const stated = care.stated.includes(measure);
      result.push(named("weighing", part.label, byAmount * care[measure], stated));
      result.push(named("content", part.label, byAmount * part.doubt, false));
    }
    const measure = recipe.weighed ? "weighing" : "volume";
    const share = recipe.counted ? recipe.water / water : 1;
    const stated = care.stated.includes(measure);
    result.push(named("make-up", "", byWater * share * care[measure], stated));
    return result;
  }

  /** @param {Sensitivities} by @param {number[]} totals @param {number[]} molalities
   * @returns {number} */
  function answer(by, totals, molalities) {
    let sum = 0;
    for (let f = 0; f < totals.length; f += 1) sum += by.totals[f] * totals[f];
    for (let i = 0; i < molalities.length; i += 1) sum += by.ions[i] * molalities[i];
    return sum;
  }

  /** @param {string} kind @param {string} name @param {number} effect @param {boolean} stated
   * @returns {Contribution} */
  function named(kind, name, effect, stated) {
    return { kind, name, step: 0, stated, effect };
  }

  bf.uncertainty = { bandOf, combined, activityDoubt, pKDoubt };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
