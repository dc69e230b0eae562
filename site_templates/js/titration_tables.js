/* What a titration tells, as rows and lines of text: for the page's tables, for a note, for a file.
 * Pure.
 *
 * @typedef {object} View  one titration, answered
 * @property {string} title of the sheet
 * @property {string} sample in words
 * @property {Experiment} experiment
 * @property {Points} points
 * @property {Layout} layout of their text
 * @property {Precision} precision
 * @property {EndPoint[]} found
 * @property {GranLine[]} lines
 * @property {Fit | null} fit
 * @property {boolean} invented
 *
 * @typedef {{by: string, volume: string, error: string, pH: string, of: string,
 *   predicted: boolean}} Meeting  one finding of an equivalence
 */
(function (bf) {
  "use strict";

  const REACH = 1.25; // times the last volume: equivalences farther off are not listed

  /** How many of the unit in which volumes are shown make a m3. @param {View} view */
  function unitOf({ points }) {
    return bf.measured_plots.volumeUnit(points);
  }

  /** Everything that says where titrant and sample meet, by volume.
   * @param {View} view @returns {Meeting[]} */
  function meetings(view) {
    const { experiment, found, lines } = view;
    const { fixed } = bf.formatting;
    const [, scale] = unitOf(view);
    const rows = found.map((each) => ({
      by: "steepest slope",
      at: each.volume,
      error: each.standard_error,
      pH: fixed(each.pH, 2),
      of: each.window + " points smoothed",
    }));
    for (const line of lines) {
      rows.push({
        by: "Gran line " + line.side + " it",
        at: line.volume,
        error: line.standard_error,
        pH: "",
        of: bf.fit_words.granWords(line, experiment) + ", " + line.x.length + " points",
      });
    }
    rows.push(...predictedMeetings(view));
    rows.sort((one, other) => one.at - other.at);
    return rows.map(({ at, error, by, pH, of }) => {
      const predicted = error === null;
      const [volume, doubt] = predicted
        ? [bf.formatting.significant(at * scale, 4), ""]
        : bf.fit_words.withError(at * scale, error * scale);
      return { by, volume, error: doubt, pH, of, predicted };
    });
  }

  /** Where recipe and label let the titrant meet a whole number of protons: what shows on the
   * curve; what does not only where nothing does. */
  function predictedMeetings({ experiment, points }) {
    const { mixture, added, temperature, model, interactions, water } = experiment;
    const labels = new Map(mixture.families.map((family) => [family.key, family.label]));
    const per = added.volume * water;
    const last = REACH * points.volume[points.volume.length - 1];
    const ahead = bf.titration
      .equivalences(mixture, added, temperature, model, interactions)
      .filter((each) => each.amount * per <= last);
    const visible = ahead.filter((each) => each.visible);
    return (visible.length > 0 ? visible : ahead)
      .map((each) => ({
        by: "predicted by the recipe",
        at: each.amount * per,
        error: null,
        pH: bf.formatting.fixed(each.pH, 2),
        of: (each.family === "" ? "strong acid or base" :
          `step ${each.step} of ${labels.get(each.family)}`) +
          (each.visible ? "" : "; does not show on the curve"),
      }));
  }

  /** The quantities of a fit. @param {Fit} fit
   * @returns {{name: string, value: string, error: string, unit: string, recipe: string,
   *   off: string}[]} off: the value against what recipe and label say */
  function estimateRows(fit) {
    const { plain, signed } = bf.formatting;
    return fit.estimates.map((each) => {
      const [value, error] = bf.fit_words.withError(each.value, each.standard_error);
      const relative = ["strength", "total"].includes(each.free.kind);
      return {
        name: bf.fit_words.quantityName(each.free, fit.experiment),
        value,
        error,
        unit: bf.fit_words.quantityUnit(each.free),
        recipe: plain(each.recipe),
        off: relative ? signed(100 * (each.value / each.recipe - 1), 1) + " %"
          : signed(each.value - each.recipe, 3),
      };
    });
  }

  /** How the quantities of a fit hang together, one pair a row; none for one quantity.
   * @param {Fit} fit @returns {{pair: string, value: string}[]} */
  function correlationRows(fit) {
    const names = fit.estimates.map((each) =>
      bf.fit_words.quantityName(each.free, fit.experiment));
    const rows = [];
    names.forEach((name, at) => names.slice(0, at).forEach((before, k) => rows.push({
      pair: before + " and " + name,
      value: bf.formatting.signed(fit.correlation[at][k], 3),
    })));
    return rows;
  }

  /** What the reduced chi-squared of a fit says. @param {Fit} fit @returns {string} */
  function scatterLine(fit) {
    return "Reduced chi-squared " + bf.formatting.significant(fit.reduced_chi_squared, 3) + ": " +
      bf.fit_words.scatterWords(fit) + ".";
  }

  /** What was titrated, with what, and how its text was read. @param {View} view
   * @returns {string[]} lines */
  function conditionLines({ title, sample, experiment, points, layout, invented }) {
    const celsius = bf.formatting.celsius(experiment.temperature);
    const stated = layout.unit_stated ? "" : " (no heading says so)";
    return [
      ...(invented ? ["Invented points, not measured"] : []),
      title,
      `${sample}, ${celsius} °C, titrated with ${experiment.added.label}`,
      `${points.pH.length} points; volumes in ${layout.unit}${stated}, decimal ${layout.decimal}`,
    ];
  }

  /** A whole titration as lines for a note. @param {View} view @returns {string[]} */
  function resultLines(view) {
    const [unit] = unitOf(view);
    const lines = [...conditionLines(view), "", "equivalence:"];
    for (const { by, volume, error, pH, of } of meetings(view)) {
      const doubt = error === "" ? "" : " ± " + error;
      lines.push(`  ${by}: ${volume}${doubt} ${unit}${pH === "" ? "" : ", pH " + pH} (${of})`);
    }
    if (view.fit === null) return lines;
    lines.push("", "fitted:");
    for (const { name, value, error, unit: own, recipe } of estimateRows(view.fit)) {
      lines.push(`  ${name}: ${value} ± ${error} ${own}`.trimEnd() + ` (recipe and label: ${recipe})`);
    }
    for (const { pair, value } of correlationRows(view.fit)) {
      lines.push(`  correlation of ${pair}: ${value}`);
    }
    lines.push(bf.fit_words.verdictWords(view.fit), scatterLine(view.fit));
    return lines;
  }

  /** The points beside what was expected of them.
   * @param {View} view @returns {{head: string[], columns: number[][]}} */
  function pointColumns({ experiment, points, fit, ...view }) {
    const [unit, scale] = unitOf({ points, ...view });
    const { pH } = bf.experiments.predictedCurve(experiment, points.volume).state;
    const away = (/** @type {number[]} */ from) => points.pH.map((each, at) => each - from[at]);
    const head = [
      "row", `volume (${unit})`, "measured pH", "recipe and label", "measured less recipe",
    ];
    const columns = [
      points.rows, points.volume.map((each) => each * scale), points.pH, pH, away(pH),
    ];
    if (fit === null) return { head, columns };
    head.push("best fit", "measured less fit");
    return { head, columns: [...columns, fit.predicted, fit.residuals] };
  }

  /** Points, curves and differences as comma-separated values, after remarks.
   * @param {View} view @returns {string} */
  function csv(view) {
    const { head, columns } = pointColumns(view);
    const rows = columns[0].map((_, at) => columns.map((each) => written(each[at])).join(","));
    const quoted = head.map((each) => '"' + each + '"').join(",");
    const remarks = resultLines(view).map((line) => ("# " + line).trimEnd());
    return [...remarks, quoted, ...rows].join("\r\n") + "\r\n";
  }

  function written(value) {
    return Number.isFinite(value) ? String(Number(value.toPrecision(7))) : "";
  }

  bf.titration_tables = {
    unitOf, meetings, estimateRows, correlationRows, scatterLine, conditionLines, resultLines,
    pointColumns, csv,
  };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
