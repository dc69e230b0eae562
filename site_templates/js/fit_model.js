/** The readings that a titration should give, and how each answers to what a fit may change.
 * The twin of fit_model.py, point after point, so that a page can pause between points.
 *
 * @typedef {{reading: number, by_parameter: number[], by_volume: number}} ModelledPoint  what the
 *   meter should say; derivatives by each parameter and by volume, 1/m3
 */
(function (bf) {
  "use strict";

  const { constantsAt } = bf.temperature;
  const { interactionMatrix } = bf.speciation;
  const { solve } = bf.equilibrium;
  const { mixed } = bf.composition;
  const { amountIn, withStrength } = bf.experiments;
  const { pHDerivatives } = bf.curve_derivatives;
  const { rowOf } = bf.fit_parameters;

  const ISOPOTENTIAL = 7; // the pH at which a glass electrode's slope does not show

  /** What gives the reading at any point. Mirrors `modelled` in fit_model.py.
   * Source: titration; implicit differentiation. The electrode reads 7 + slope (pH − 7) + offset.
   * @param {Experiment} experiment
   * @param {Free[]} free
   * @param {number[]} parameters
   * @returns {(volume: number, guess: Equilibrium | null) => [ModelledPoint, Equilibrium]} volume
   *   in m3; the guess, such as the equilibrium of the last call, saves rounds
   */
  function modelOf(experiment, free, parameters) {
    const values = { strength: 1, offset: 0, slope: 1 };
    free.forEach((each, at) => (values[each.kind] = parameters[at]));
    const { model, interactions } = experiment;
    const added = withStrength(experiment.added, values.strength);
    const sample = sampleOf(experiment, free, parameters);
    const constants = constantsOf(experiment, free, parameters);
    const matrix = model.uses_interactions ? interactionMatrix(sample, interactions) : null;
    const bound = free.filter((each) => !["offset", "slope"].includes(each.kind));
    const brought = broughtBy(experiment);
    return (volume, guess) => {
      const amount = amountIn(experiment, volume);
      const there = mixed(sample, added, amount);
      const state = solve(there, constants, model, interactions, guess);
      const changes = [byVolume(experiment, brought, there, values.strength, amount)];
      for (const each of bound) changes.push(changeOf(experiment, brought, each, amount));
      const found = pHDerivatives(there, constants, model, state, changes, matrix);
      const away = state.pH - ISOPOTENTIAL;
      let next = 0;
      const byParameter = free.map((each) => {
        if (each.kind === "offset") return 1;
        if (each.kind === "slope") return away;
        next += 1;
        return values.slope * found[next];
      });
      const reading = ISOPOTENTIAL + values.slope * away + values.offset;
      return [{ reading, by_parameter: byParameter, by_volume: values.slope * found[0] }, state];
    };
  }

  /** @param {Experiment} experiment @param {Free[]} free @param {number[]} parameters
   * @returns {Mixture} */
  function sampleOf(experiment, free, parameters) {
    const totals = experiment.mixture.totals.slice();
    free.forEach((each, at) => {
      if (each.kind === "total") totals[rowOf(experiment, each.family)] *= parameters[at];
    });
    return { ...experiment.mixture, totals };
  }

  /** @param {Experiment} experiment @param {Free[]} free @param {number[]} parameters
   * @returns {Constants} */
  function constantsOf(experiment, free, parameters) {
    const constants = constantsAt(experiment.mixture.families, experiment.temperature);
    free.forEach((each, at) => {
      if (each.kind === "pK") constants.pK[rowOf(experiment, each.family)][each.step] = parameters[at];
    });
    return constants;
  }

  /** What one mole of titrant brings into undiluted water. Mirrors `_brought`.
   * @param {Experiment} experiment @returns {{totals: number[], molalities: number[]}} */
  function broughtBy(experiment) {
    const { mixture, added } = experiment;
    const totals = mixture.totals.map(() => 0);
    const molalities = mixture.molalities.map(() => 0);
    added.families.forEach((key, k) => (totals[rowOf(experiment, key)] += added.per_family[k]));
    added.ions.forEach((ion, k) => {
      molalities[mixture.ions.findIndex((each) => each.name === ion.name)] += added.per_ion[k];
    });
    return { totals, molalities };
  }

  /** What one more cubic metre of titrant does. Mirrors `_by_volume`.
   * @param {Experiment} experiment @param {{totals: number[], molalities: number[]}} brought
   * @param {Mixture} there @param {number} strength @param {number} amount @returns {Change} */
  function byVolume(experiment, brought, there, strength, amount) {
    const { water } = experiment.added;
    const per = amountIn(experiment, 1) / (1 + amount * water);
    const moved = (own, at, of) => (strength * own - water * of[at]) * per;
    return {
      totals: brought.totals.map((own, at) => moved(own, at, there.totals)),
      molalities: brought.molalities.map((own, at) => moved(own, at, there.molalities)),
      pK: null,
    };
  }

  /** What one unit of a parameter does. Mirrors `_change`.
   * @param {Experiment} experiment @param {{totals: number[], molalities: number[]}} brought
   * @param {Free} free @param {number} amount @returns {Change} */
  function changeOf(experiment, brought, free, amount) {
    const dilution = 1 + amount * experiment.added.water;
    if (free.kind === "strength") {
      return {
        totals: brought.totals.map((own) => (own * amount) / dilution),
        molalities: brought.molalities.map((own) => (own * amount) / dilution),
        pK: null,
      };
    }
    const row = rowOf(experiment, free.family);
    const totals = brought.totals.map(() => 0);
    const molalities = brought.molalities.map(() => 0);
    if (free.kind === "pK") return { totals, molalities, pK: [row, free.step] };
    totals[row] = experiment.mixture.totals[row] / dilution;
    return { totals, molalities, pK: null };
  }

  bf.fit_model = { modelOf };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
