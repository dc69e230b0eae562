/** Gran functions: straight lines whose zero is the equivalence volume. The twin of gran.py.
 *
 * Before an end point they show what is left of the sample, after it what is in excess of the
 * titrant:
 *
 *     strong   G = (m(H+) − m(OH−)) W, the kilograms of water times what is left in each
 *     weak     G = (V − Vp + d) / r, with r the ratio of product to what is left, and d what the
 *              water's own ions add to the volume: G falls along V + d as what is left does
 *
 * m and r come from the measured pH and the engine's activity coefficients at the ionic strength
 * that recipe and label lead one to expect. Points are left out where anything else takes up
 * titrant.
 *
 * @typedef {{side: "before"|"after", kind: "strong"|"weak", family: string, step: number,
 *   volume: number, standard_error: number, x: number[], y: number[]}} GranLine  volume of
 *   equivalence in m3; x in m3 and the function y at the points used
 * @typedef {{volume: number, water: number, free: number, both: number, bound: number,
 *   pairs: {row: number, step: number, taken: number, acid: number, base: number}[]}} Titrated
 *   what a reading says is in the water
 */
(function (bf) {
  "use strict";

  const { LN10, constantsAt } = bf.temperature;
  const { strongCharge, formsAt } = bf.speciation;
  const { solve } = bf.equilibrium;
  const { mixed } = bf.composition;
  const { protonLadder } = bf.titration;
  const { amountIn } = bf.experiments;

  const BEFORE = [0.2, 0.97]; // of the way from the last end point to this one: points used
  const AFTER = [1.03, 2]; // likewise, beyond it
  const PURE = 0.01; // of the titrant: the share that something else may take up
  const FEWEST = 4;
  const ROUNDS = 8;

  /** The Gran lines before each end point and after the last, where enough points serve.
   * Mirrors `gran_lines` in gran.py.
   * Source: Gran, Analyst 77 (1952) 661; with water's ions as in Rossotti & Rossotti, J. Chem.
   * Educ. 42 (1965) 375.
   * @param {Experiment} experiment @param {Points} points @param {EndPoint[]} found
   * @param {Precision} precision
   * @returns {GranLine[]} none for a titrant that is not strong */
  function granLines(experiment, points, found, precision) {
    const charge = chargeOf(experiment);
    if (charge === 0 || found.length === 0) return [];
    const there = titrated(experiment, points, Math.sign(charge));
    const starts = [0, ...found.map((each) => each.volume)];
    const lines = found.map((each, at) =>
      before(experiment, there, charge, precision, starts[at], each.volume));
    lines.push(after(there, precision, starts[starts.length - 2], starts[starts.length - 1]));
    return lines.filter((line) => line !== null);
  }

  /** Charge that one m3 of titrant brings, in mol; 0 for one that is not strong.
   * @param {Experiment} experiment @returns {number} */
  function chargeOf({ added }) {
    let charge = 0;
    added.ions.forEach((ion, k) => (charge += ion.charge * added.per_ion[k]));
    return added.families.length > 0 || added.volume === null ? 0 : charge / added.volume;
  }

  /** Mirrors `_measured`.
   * @param {Experiment} experiment @param {Points} points @param {number} sign
   * @returns {Titrated[]} */
  function titrated(experiment, points, sign) {
    const { mixture, added, model, interactions, temperature } = experiment;
    const constants = constantsAt(mixture.families, temperature);
    let state = null;
    return points.volume.map((volume, at) => {
      const amount = amountIn(experiment, volume);
      const there = mixed(mixture, added, amount);
      state = solve(there, constants, model, interactions, state);
      const { ionic_strength: strength, offsets } = state;
      const forms = formsAt(there, constants, model, points.pH[at], strength, offsets);
      return {
        volume,
        water: experiment.water * (1 + amount * added.water),
        free: sign * (forms.hydrogen - forms.hydroxide),
        both: forms.hydrogen + forms.hydroxide,
        ...taken(there.totals, forms.fractions),
      };
    });
  }

  /** What all families and each step of them take up, mol/kg for each unit of ln a(H+).
   * @param {number[]} totals @param {number[][]} fractions */
  function taken(totals, fractions) {
    let bound = 0;
    const pairs = [];
    fractions.forEach((shares, row) => {
      let mean = 0;
      shares.forEach((share, lost) => (mean += lost * share));
      shares.forEach((share, lost) => (bound += totals[row] * (lost - mean) ** 2 * share));
      for (let step = 0; step + 1 < shares.length; step += 1) {
        const [acid, base] = [shares[step], shares[step + 1]];
        pairs.push({ row, step, taken: totals[row] * acid * base, acid, base });
      }
    });
    return { bound, pairs };
  }

  /** The line of what takes up the titrant half-way to an end point. Mirrors `_before`.
   * @param {Experiment} experiment @param {Titrated[]} there @param {number} charge
   * @param {Precision} precision @param {number} start @param {number} end
   * @returns {GranLine | null} */
  function before(experiment, there, charge, precision, start, end) {
    const [low, high] = BEFORE.map((part) => start + part * (end - start));
    const inside = there.filter((each) => each.volume > low && each.volume < high);
    const middle = nearest(there, 0.5 * (start + end));
    let chosen = -1;
    middle.pairs.forEach((pair, at) => {
      if (chosen < 0 || pair.taken > middle.pairs[chosen].taken) chosen = at;
    });
    if (chosen < 0 || middle.pairs[chosen].taken < middle.both) {
      const used = inside.filter((each) => each.bound < PURE * each.both);
      const y = used.map((each) => each.free * each.water);
      return zero(used.map((each) => each.volume), y, precision, named("before", "strong", "", 0));
    }
    const { row, step } = middle.pairs[chosen];
    const used = inside.filter(({ pairs, bound }) =>
      bound - pairs[chosen].taken < PURE * pairs[chosen].taken);
    const previous = start > 0 ? start : rungBefore(experiment, charge, row, step);
    const x = used.map((each) => each.volume + (each.free * each.water) / Math.abs(charge));
    const y = used.map(({ pairs }, at) => {
      const { acid, base } = pairs[chosen];
      return (x[at] - previous) * (charge > 0 ? acid / base : base / acid);
    });
    const family = experiment.mixture.families[row].key;
    return zero(x, y, precision, named("before", "weak", family, step));
  }

  /** @param {Titrated[]} there @param {number} volume @returns {Titrated} */
  function nearest(there, volume) {
    let best = there[0];
    for (const each of there) {
      if (Math.abs(each.volume - volume) < Math.abs(best.volume - volume)) best = each;
    }
    return best;
  }

  /** The volume, before the start perhaps, at which a step began to take up titrant.
   * Mirrors `_rung_before`.
   * @param {Experiment} experiment @param {number} charge @param {number} row
   * @param {number} step @returns {number} m3 */
  function rungBefore(experiment, charge, row, step) {
    const { mixture, temperature, water } = experiment;
    const ladder = protonLadder(mixture, constantsAt(mixture.families, temperature));
    const { key } = mixture.families[row];
    const at = ladder.findIndex((rung) => rung.family === key && rung.step === step + 1);
    const { required } = ladder[charge > 0 ? at - 1 : at];
    return ((required - strongCharge(mixture)) * water) / charge;
  }

  /** The line of the titrant in excess. Mirrors `_after`.
   * @param {Titrated[]} there @param {Precision} precision @param {number} start
   * @param {number} end @returns {GranLine | null} */
  function after(there, precision, start, end) {
    const [low, high] = AFTER.map((part) => start + part * (end - start));
    const used = there.filter(({ volume, bound, both }) =>
      volume > low && volume < high && bound < PURE * both);
    const y = used.map((each) => -each.free * each.water);
    return zero(used.map((each) => each.volume), y, precision, named("after", "strong", "", 0));
  }

  /** @param {"before"|"after"} side @param {"strong"|"weak"} kind @param {string} family
   * @param {number} step */
  function named(side, kind, family, step) {
    return { side, kind, family, step };
  }

  /** Where a line meets zero; a value counts by the error that its reading gives it.
   * Mirrors `_zero`.
   * @param {number[]} x @param {number[]} y @param {Precision} precision
   * @param {ReturnType<typeof named>} names @returns {GranLine | null} */
  function zero(x, y, precision, names) {
    if (x.length < FEWEST) return null;
    let fitted = y;
    let slope = 0;
    let line = null;
    for (let round = 0; round < ROUNDS; round += 1) {
      const weights = fitted.map((value) => {
        const variance = (LN10 * precision.pH * value) ** 2 + (slope * precision.volume) ** 2;
        return 1 / Math.max(variance, 1e-300);
      });
      line = weighted(x, y, weights);
      slope = line.slope;
      fitted = line.fitted;
    }
    const { total, xMean, yMean, squares, misses } = line;
    const volume = xMean - yMean / slope;
    const scatter = misses / (x.length - 2);
    const variance = (scatter * (1 / total + (volume - xMean) ** 2 / squares)) / slope ** 2;
    return { ...names, volume, standard_error: Math.sqrt(variance), x, y };
  }

  /** @param {number[]} x @param {number[]} y @param {number[]} weights */
  function weighted(x, y, weights) {
    let [total, xMean, yMean, squares, products, misses] = [0, 0, 0, 0, 0, 0];
    weights.forEach((weight, at) => {
      total += weight;
      xMean += weight * x[at];
      yMean += weight * y[at];
    });
    xMean /= total;
    yMean /= total;
    weights.forEach((weight, at) => {
      squares += weight * (x[at] - xMean) ** 2;
      products += weight * (x[at] - xMean) * (y[at] - yMean);
    });
    const slope = products / squares;
    const fitted = x.map((each) => yMean + slope * (each - xMean));
    weights.forEach((weight, at) => (misses += weight * (y[at] - fitted[at]) ** 2));
    return { slope, fitted, total, xMean, yMean, squares, misses };
  }

  bf.gran = { granLines };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
