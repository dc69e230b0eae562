/** Which fault explains a reading best: every suspect's own reading, and how well it fits.
 * The twin of faults.py.
 *
 * How likely the readings are where a suspect is true follows from the band; where its extent is
 * not known, that likelihood is averaged over the range of the extent, so that a suspect who could
 * explain everything is not preferred to one who explains this. Before the reading all are equally
 * likely.
 *
 * @typedef {{temperature: number, pH: number, dilution: number}} Reading  K; dilution: volume of
 *   the diluted sample over volume of the batch in it
 * @typedef {{suspect: Suspect, words: string, extent: number, predicted: number[], misfit: number,
 *   fits: boolean, weight: number}} Explanation  as in faults.py
 * @typedef {{refusal: string, nothing_wrong: boolean, none_fits: boolean,
 *   explanations: Explanation[], unexplained: number}} Diagnosis
 * @typedef {{share: number, seen: number[]}[]} ReadingCurve  where readings go along extents
 * @typedef {{read: number[], inverse: number[][], chance: number}} Evidence
 * @typedef {{share: number, misfit: number, likelihood: number}} Fit
 */
(function (bf) {
  "use strict";

  const { bandOf } = bf.uncertainty;
  const { constantsAt } = bf.temperature;
  const { solve } = bf.equilibrium;
  const { scaled } = bf.composition;
  const { refusalOf } = bf.measurements;
  const { suspectsOf, extentAt, sceneOf, altered, readAs, wordsOf } = bf.suspects;

  const STEPS = 8; // of a range at first
  const ROUNDS = 5; // the first, and so many less one of coming closer to the best extent
  const FLAT = 1e-3; // of a piece of a curve, in χ²: its middle stands for it
  const SAME = 1e-9; // of χ²
  const PH_RANGE = 14;
  const FITTING = [4, 6.18]; // χ² that 95.45 % stay below, for one reading and for two

  /** What would explain one reading, or two. Mirrors `diagnosed` in faults.py.
   *
   * The batch is as it was at the first reading's temperature; the second may be of a sample
   * diluted with water, or of the batch at another temperature.
   * Source: Bayes' theorem with equal weights before; normal errors as the band has them.
   * @param {Setting} setting
   * @param {Reading[]} readings
   * @returns {Diagnosis}
   */
  function diagnosed(setting, readings) {
    for (const { temperature, pH } of readings) {
      const refusal = refusalOf(setting.subject, temperature, pH);
      if (refusal) {
        return {
          refusal, nothing_wrong: false, none_fits: false, explanations: [], unexplained: NaN,
        };
      }
    }
    const scene = sceneOf(setting, readings[0].temperature);
    const suspects = suspectsOf(setting, readings[0].temperature);
    const evidence = evidenceOf(setting.subject, readings);
    const look = lookerOf(scene, readings);
    const curves = suspects.map((/** @type {Suspect} */ each) => {
      /** @type {ReadingCurve} */
      const curve = sharesOf(each).map((share) => look(each, share));
      for (let round = 1; round < ROUNDS && each.low !== each.high; round += 1) {
        curve.push(look(each, fitOf(curve, evidence).share));
        curve.sort((a, b) => a.share - b.share || a.seen[0] - b.seen[0]);
      }
      return curve;
    });
    return ranked(suspects, curves, evidence);
  }

  /** Mirrors `_evidence`.
   * @param {Subject} subject
   * @param {Reading[]} readings
   * @returns {Evidence}
   */
  function evidenceOf(subject, readings) {
    const bands = readings.map(({ temperature, dilution }) =>
      bandOf(subject, temperature, null, dilution),
    );
    const covariance = readings.map(() => readings.map(() => 0));
    const [{ contributions }] = bands;
    for (let c = 0; c < contributions.length; c += 1) {
      const { kind } = contributions[c];
      const effect = bands.map((band) => band.contributions[c].effect / 2);
      // Meter and thermometer err anew with each reading; the rest errs the same way in all.
      const apart = kind === "meter" || kind === "temperature";
      for (let k = 0; k < effect.length; k += 1) {
        for (let j = 0; j < effect.length; j += 1) {
          if (k === j || !apart) covariance[k][j] += effect[k] * effect[j];
        }
      }
    }
    const { determinant, inverse } = inverted(covariance);
    const spread = Math.sqrt(2 * Math.PI) ** bands.length * Math.sqrt(determinant);
    return {
      read: readings.map((reading) => reading.pH),
      inverse,
      chance: spread / PH_RANGE ** bands.length,
    };
  }

  /** The inverse of a matrix of one row or two.
   * @param {number[][]} matrix
   * @returns {{determinant: number, inverse: number[][]}}
   */
  function inverted(matrix) {
    if (matrix.length === 1) {
      return { determinant: matrix[0][0], inverse: [[1 / matrix[0][0]]] };
    }
    const [[a, b], [c, d]] = matrix;
    const determinant = a * d - b * c;
    const inverse = [
      [d / determinant, -b / determinant],
      [-c / determinant, a / determinant],
    ];
    return { determinant, inverse };
  }

  /** @param {Suspect} suspected @returns {number[]} */
  function sharesOf(suspected) {
    if (suspected.low === suspected.high) return [0];
    return Array.from({ length: STEPS + 1 }, (_, step) => step / STEPS);
  }

  /** A function that tells what is read at a share of a suspect's range. Mirrors `_extend`.
   * @param {Scene} scene
   * @param {{temperature: number, dilution: number}[]} readings
   * @returns {(suspected: Suspect, share: number) => {share: number, seen: number[]}}
   */
  function lookerOf(scene, readings) {
    const { model, interactions } = scene.setting.subject;
    const constants = readings.map(({ temperature }) =>
      constantsAt(scene.base.families, temperature),
    );
    /** @type {(Equilibrium | null)[]} */
    const near = readings.map(() => null);
    return (suspected, share) => {
      const extent = extentAt(suspected, share);
      const made = altered(scene, suspected, extent);
      const seen = readings.map(({ temperature, dilution }, k) => {
        const there = dilution === 1 ? made : scaled(made, 1 / dilution);
        const state = solve(there, constants[k], model, interactions, near[k]);
        near[k] = state;
        return readAs(suspected, extent, state.pH, temperature);
      });
      return { share, seen };
    };
  }

  /** Fit the extent, readings being straight between the points of a curve. Mirrors `_fit`.
   * @param {ReadingCurve} curve
   * @param {Evidence} evidence
   * @returns {Fit}
   */
  function fitOf(curve, evidence) {
    if (curve.length === 1) {
      const misfit = chi(curve[0].seen, evidence);
      return { share: 0, misfit, likelihood: Math.exp(-0.5 * misfit) };
    }
    let best = Infinity;
    let at = 0;
    let likelihood = 0;
    for (let piece = 1; piece < curve.length; piece += 1) {
      const { share: start, seen: low } = curve[piece - 1];
      const { share: stop, seen: high } = curve[piece];
      const fromLow = evidence.read.map((pH, k) => pH - low[k]);
      const along = high.map((pH, k) => pH - low[k]);
      const square = form(along, evidence.inverse, along);
      if (Number.isNaN(square)) continue;
      const flat = square < FLAT;
      const nearest = flat ? 0.5 : form(along, evidence.inverse, fromLow) / square;
      const through = Math.min(Math.max(nearest, 0), 1);
      const least = chi(low.map((pH, k) => pH + nearest * along[k]), evidence);
      const misfit = chi(low.map((pH, k) => pH + through * along[k]), evidence);
      if (misfit < best - SAME) {
        best = misfit;
        at = start + through * (stop - start);
      }
      // Along the piece χ² is least + square (t − nearest)²; its likelihood has a closed mean.
      const root = flat ? 1 : Math.sqrt(0.5 * square);
      const reach = erf(root * (1 - nearest)) + erf(root * nearest);
      const mean = flat ? 1 : (Math.sqrt(Math.PI) / (2 * root)) * reach;
      likelihood += (stop - start) * Math.exp(-0.5 * least) * mean;
    }
    return { share: at, misfit: best, likelihood };
  }

  /** @param {number[]} a @param {number[][]} matrix @param {number[]} b @returns {number} */
  function form(a, matrix, b) {
    let sum = 0;
    for (let k = 0; k < a.length; k += 1) {
      for (let j = 0; j < b.length; j += 1) sum += a[k] * matrix[k][j] * b[j];
    }
    return sum;
  }

  /** @param {number[]} predicted @param {Evidence} evidence @returns {number} χ² */
  function chi(predicted, evidence) {
    const away = evidence.read.map((pH, k) => pH - predicted[k]);
    return form(away, evidence.inverse, away);
  }

  /** The error function; every term of the series has the same sign, so that none cancels.
   * Source: erf x = 2/√π e^(−x²) Σ 2^n x^(2n+1) / (1·3·5 … (2n+1)).
   * @param {number} x
   * @returns {number}
   */
  function erf(x) {
    if (Math.abs(x) > 6) return Math.sign(x); // what is left is below 1e-16
    let term = x;
    let sum = x;
    for (let n = 1; Math.abs(term) > 1e-17 * Math.abs(sum); n += 1) {
      term *= (2 * x * x) / (2 * n + 1);
      sum += term;
    }
    return (2 / Math.sqrt(Math.PI)) * Math.exp(-x * x) * sum;
  }

  /** Weigh the suspects; each is shown at the point of its curve that fits best.
   * Mirrors `_ranked`.
   * @param {Suspect[]} suspects
   * @param {ReadingCurve[]} curves
   * @param {Evidence} evidence
   * @returns {Diagnosis}
   */
  function ranked(suspects, curves, evidence) {
    const fits = curves.map((curve) => fitOf(curve, evidence));
    const total = fits.reduce((sum, fit) => sum + fit.likelihood, 0) + evidence.chance;
    const limit = FITTING[evidence.read.length - 1];
    const explanations = suspects.map((suspected, number) => {
      const curve = curves[number];
      const misfits = curve.map(({ seen }) => chi(seen, evidence));
      let nearest = 0;
      misfits.forEach((misfit, k) => {
        if (misfit < misfits[nearest] || Number.isNaN(misfits[nearest])) nearest = k;
      });
      return {
        suspect: suspected,
        words: wordsOf(suspected),
        extent: extentAt(suspected, curve[nearest].share),
        predicted: curve[nearest].seen,
        misfit: Math.sqrt(misfits[nearest] / limit),
        fits: misfits[nearest] <= limit,
        weight: fits[number].likelihood / total,
      };
    });
    const others = explanations.filter((each) => each.suspect.kind !== "nothing");
    return {
      refusal: "",
      nothing_wrong: explanations[0].fits,
      none_fits: !others.some((each) => each.fits),
      explanations: explanations.slice().sort((a, b) => b.weight - a.weight),
      unexplained: evidence.chance / total,
    };
  }

  bf.faults = { diagnosed, erf };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
