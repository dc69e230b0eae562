/** What a fit says, in words and rounded numbers. Mirrors fit_words.py: the same characters. */
(function (bf) {
  "use strict";

  const { NOTHING, fixed, plain, significant, volume } = bf.formatting;
  const { keyOf } = bf.fit_parameters;

  const MOST_DECIMALS = 5;
  const FEWEST = 3; // as in fit_quality.py
  const MISFIT = 4; // likewise
  const NAMES = {
    strength: "strength of the titrant",
    offset: "offset of the electrode",
    slope: "slope of the electrode",
  };
  const UNITS = { strength: "mol/L", total: "mol/kg" };
  const VERDICTS = {
    "well determined": "Well determined: every standard error is small enough to be of use.",
    "poorly determined":
      "Poorly determined: these points leave the {names} uncertain. Take more points where the " +
      "curve answers to it, or free less.",
    "not separable":
      "Not separable: these points do not tell the {names} from what else is free. Hold one of " +
      "them at a value that is known otherwise.",
    "at a bound":
      "At a bound: the {names} went as far as a fit may go. Sample, titrant or volumes may not " +
      "be what they are said to be.",
    "does not fit":
      "Does not fit: the points lie {times} times as far from the best curve as reading and " +
      "burette explain. Something is at work that is not free here.",
    "too few points":
      "Too few points: {points} for {free}. At least {least} are needed to judge the result.",
    "no solution": "No solution: the equations cannot be met at some of the points.",
  };

  /** What a quantity is called: pK 2 of phosphoric acid. Mirrors `quantity_name`.
   * @param {Free} free @param {Experiment} experiment @returns {string} */
  function quantityName(free, experiment) {
    if (free.family === "") return NAMES[free.kind];
    const family = experiment.mixture.families.find((each) => each.key === free.family);
    const first = free.kind === "total" ? "total" : `pK ${free.step + 1}`;
    return `${first} of ${family.label}`;
  }

  /** The unit of a quantity, "" where it has none. @param {Free} free @returns {string} */
  function quantityUnit(free) {
    return free.kind in UNITS ? UNITS[free.kind] : "";
  }

  /** A value and its standard error, two figures of the error deciding the decimals.
   * Mirrors `with_error`.
   * @param {number} value @param {number} error @returns {[string, string]} */
  function withError(value, error) {
    if (!(error > 0 && error < Infinity)) return [significant(value, 4), NOTHING];
    let decimals = 0;
    while (error * bf.figure_ticks.powerOfTen(decimals) < 9.95) {
      decimals += 1;
      if (decimals > MOST_DECIMALS) return [significant(value, 6), significant(error, 2)];
    }
    return [fixed(value, decimals), fixed(error, decimals)];
  }

  /** The verdict on a fit, and what to do about it. Mirrors `verdict_words`.
   * @param {Fit} result @returns {string} */
  function verdictWords(result) {
    const { verdict, estimates, experiment } = result;
    const names = verdict.about.map((key) => quantityName(
      estimates.find((each) => keyOf(each.free) === key).free, experiment));
    const free = estimates.length;
    const values = {
      names: listed(names),
      points: String(result.freedom + free),
      free: free === 1 ? "1 free quantity" : `${free} free quantities`,
      least: String(free + FEWEST),
      times: significant(Math.sqrt(result.reduced_chi_squared), 2),
    };
    return VERDICTS[verdict.kind].replace(/\{(\w+)\}/g, (_, name) => values[name]);
  }

  /** What the reduced chi-squared says: how far the points lie off, and why they may.
   * Mirrors `scatter_words`.
   * @param {Fit} result @returns {string} */
  function scatterWords(result) {
    const { precision, residuals } = result;
    const squares = residuals.reduce((sum, each) => sum + each * each, 0);
    const spread = Math.sqrt(squares / residuals.length);
    const chiSquared = result.reduced_chi_squared;
    let wide = chiSquared >= 1 / MISFIT && chiSquared <= MISFIT ? "as far off as" : "nearer than";
    if (!(chiSquared <= MISFIT)) wide = "farther off than";
    return `the points lie ${wide} reading and burette explain (${fixed(spread, 3)} pH about the ` +
      `curve; a reading is taken to be good to ${plain(precision.pH)}, a volume to ` +
      `${volume(precision.volume, 2)})`;
  }

  /** What a Gran line belongs to. Mirrors `gran_words`.
   * @param {GranLine} line @param {Experiment} experiment @returns {string} */
  function granWords({ side, kind, family, step }, experiment) {
    if (kind === "weak") return quantityName({ kind: "pK", family, step }, experiment);
    return side === "before" ? "strong acid or base" : "titrant in excess";
  }

  /** Names as a list in a sentence. @param {string[]} names @returns {string} */
  function listed(names) {
    if (names.length < 2) return names.join("");
    return names.slice(0, -1).join(", ") + " and " + names[names.length - 1];
  }

  bf.fit_words = {
    quantityName, quantityUnit, withError, verdictWords, scatterWords, granWords, listed,
  };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
