/** What a fit may change, where each quantity begins, and how far it may go.
 * The twin of fit_parameters.py.
 *
 * @typedef {{kind: "strength"|"total"|"pK"|"offset"|"slope", family: string, step: number}} Free
 *   family: key, of a total and of a pK; step: of a pK, counted from zero
 */
(function (bf) {
  "use strict";

  const { constantsAt } = bf.temperature;

  const MOST_FREE = 4;
  // How far from the recipe a fit may go: factors, or differences.
  const BOUNDS = {
    strength: [0.1, 10],
    total: [0.1, 10],
    pK: [-2, 2],
    offset: [-1.5, 1.5],
    slope: [0.7, 1.2],
  };

  /** How the command and the page write it, steps counted from one: pK:phosphate:2.
   * @param {Free} free @returns {string} */
  function keyOf(free) {
    if (free.kind === "total") return `total:${free.family}`;
    return free.kind === "pK" ? `pK:${free.family}:${free.step + 1}` : free.kind;
  }

  /** Where a family stands in the sample, −1 where it does not.
   * @param {Experiment} experiment @param {string} family @returns {number} */
  function rowOf(experiment, family) {
    return experiment.mixture.families.findIndex((each) => each.key === family);
  }

  /** The parameters of recipe, label and an electrode without fault. Mirrors `nominal`.
   * @param {Experiment} experiment @param {Free[]} free @returns {number[]} strength and totals as
   *   multiples of the recipe's */
  function nominal(experiment, free) {
    const constants = constantsAt(experiment.mixture.families, experiment.temperature);
    return free.map((each) => {
      if (each.kind === "pK") return constants.pK[rowOf(experiment, each.family)][each.step];
      return each.kind === "offset" ? 0 : 1;
    });
  }

  /** What turns parameters into the quantities they stand for. Mirrors `units`.
   * @param {Experiment} experiment @param {Free[]} free @returns {number[]} mol/L, mol/kg, or 1 */
  function units(experiment, free) {
    return free.map((each) => {
      if (each.kind === "total") return experiment.mixture.totals[rowOf(experiment, each.family)];
      return each.kind === "strength" ? experiment.strength : 1;
    });
  }

  /** How far each parameter may go. Mirrors `bounds`.
   * @param {number[]} start @param {Free[]} free
   * @returns {[number[], number[]]} the low and the high ends */
  function bounds(start, free) {
    const centres = free.map((each, at) => (each.kind === "pK" ? start[at] : 0));
    return [
      free.map((each, at) => BOUNDS[each.kind][0] + centres[at]),
      free.map((each, at) => BOUNDS[each.kind][1] + centres[at]),
    ];
  }

  /** What keeps these quantities from being free together, or null. Mirrors `check_free`.
   * @param {Experiment} experiment @param {Free[]} free @returns {string | null} */
  function freeProblem(experiment, free) {
    if (free.length < 1 || free.length > MOST_FREE) {
      return `${free.length} quantities cannot be free: choose 1 to ${MOST_FREE}`;
    }
    const kinds = free.map((each) => each.kind);
    const twice = kinds.find((kind, at) => kinds.indexOf(kind) !== at);
    if (twice !== undefined) return `more than one ${twice} is free: choose one`;
    for (const each of free) {
      const problem = ["total", "pK"].includes(each.kind) ? familyProblem(experiment, each) : null;
      if (problem !== null) return problem;
    }
    return null;
  }

  /** @param {Experiment} experiment @param {Free} free @returns {string | null} */
  function familyProblem(experiment, free) {
    const { families, totals } = experiment.mixture;
    const row = rowOf(experiment, free.family);
    if (row < 0) {
      const known = families.map((family) => family.key).join(", ") || "no family";
      return `the sample does not hold '${free.family}'; it holds: ${known}`;
    }
    const last = families[row].steps.length;
    if (free.kind === "pK" && !(free.step >= 0 && free.step < last)) {
      return `${free.family} has no step ${free.step + 1}; its steps are 1 to ${last}`;
    }
    if (free.kind === "total" && !(totals[row] > 0)) {
      return `the recipe brings no ${free.family} whose total could be free`;
    }
    return null;
  }

  bf.fit_parameters = { MOST_FREE, keyOf, rowOf, nominal, units, bounds, freeProblem };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
