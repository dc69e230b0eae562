/** A measured titration as pictures: points over the predicted curve, and what is left of them.
 * The twin of measured_plots.py. */
(function (bf) {
  "use strict";

  const { fixed, plain, signed } = bf.formatting;
  const { axis, line, lines } = bf.plots;
  const { predictedCurve } = bf.experiments;
  const { modelOf } = bf.fit_model;
  const { verdictWords, withError } = bf.fit_words;

  const CURVE_POINTS = 241;
  const MARGIN = 0.2; // pH, around the curve
  const LEAST_RESIDUAL = 0.02; // pH, of the axis where nothing differs
  const RECIPE = "recipe and label";
  const BEST = "best fit";
  const VOLUME_UNITS = [["m³", 1], ["L", 1e3], ["mL", 1e6]]; // the first in which the largest is ≥ 1
  const SMALLEST = ["µL", 1e9];

  /** Measured points over the predicted curve and the best fit, and the differences.
   * Mirrors `measured_figure` in measured_plots.py.
   * @param {Experiment} experiment @param {Points} points @param {EndPoint[]} found
   * @param {Fit | null} [fit] @returns {[Figure, Figure]} */
  function measuredFigure(experiment, points, found, fit = null) {
    const [unit, scale] = volumeUnit(points);
    const end = points.volume.reduce((most, each) => Math.max(most, each), 0);
    const volume = Array.from({ length: CURVE_POINTS }, (_, k) => (k * end) / (CURVE_POINTS - 1));
    const along = volume.map((each) => each * scale);
    const places = points.volume.map((each) => each * scale);
    // Points come first, and lie under the curves where there are thousands of them.
    const series = [{ ...line("measured", "measured", places, points.pH), points: true }];
    series.push(line("recipe", RECIPE, along, predictedCurve(experiment, volume).state.pH));
    if (fit !== null) series.push(line("fit", BEST, along, fittedCurve(experiment, volume, fit)));
    const [low, high] = ends(series.flatMap((each) => each.y));
    const x = axis("volume of titrant", unit, 0, end * scale);
    const measured = lines(
      "measured", "Measured and predicted", x,
      axis("pH", "", Math.floor(low - MARGIN), Math.ceil(high + MARGIN)), series,
      found.map((each) => ({
        axis: "x", value: each.volume * scale, label: "end point " + volumeOf(each, scale)[0],
      })),
      measuredWords(points, found, unit, scale),
    );
    return [measured, residualsFigure(experiment, points, fit, x, scale)];
  }

  /** The unit in which the volumes are easy to read, and how many make a m3.
   * @param {Points} points @returns {[string, number]} */
  function volumeUnit(points) {
    const largest = points.volume.reduce((most, each) => Math.max(most, each), 0);
    return VOLUME_UNITS.find(([, per]) => largest * per >= 1) || SMALLEST;
  }

  function fittedCurve(experiment, volume, fit) {
    const model = modelOf(experiment, fit.estimates.map((each) => each.free), fit.parameters);
    let guess = null;
    return volume.map((each) => {
      const [point, state] = model(each, guess);
      guess = state;
      return point.reading;
    });
  }

  function ends(values) {
    const finite = values.filter((each) => !Number.isNaN(each));
    return [
      finite.reduce((least, each) => Math.min(least, each), Infinity),
      finite.reduce((most, each) => Math.max(most, each), -Infinity),
    ];
  }

  function residualsFigure(experiment, points, fit, x, scale) {
    const recipe = fit === null ? predictedCurve(experiment, points.volume).state.pH : [];
    const left = fit === null ? points.pH.map((pH, at) => pH - recipe[at]) : fit.residuals;
    const reference = fit === null ? RECIPE : BEST;
    const [, largest] = ends([0, ...left.map(Math.abs)]);
    const most = Math.max(1.15 * largest, LEAST_RESIDUAL);
    const places = points.volume.map((each) => each * scale);
    const series = { ...line("residuals", "measured less " + reference, places, left), points: true };
    return lines(
      "residuals", "Measured less predicted", x, axis("difference", "pH", -most, most), [series],
      [{ axis: "y", value: 0, label: reference }],
      residualWords(left, x, scale, points, fit),
    );
  }

  function volumeOf(endPoint, scale) {
    return withError(endPoint.volume * scale, endPoint.standard_error * scale);
  }

  function measuredWords(points, found, unit, scale) {
    const [low, high] = ends(points.pH);
    const parts = [`${points.pH.length} readings from pH ${fixed(low, 2)} to ${fixed(high, 2)}`];
    for (const each of found) {
      const [volume, error] = volumeOf(each, scale);
      parts.push(`end point at ${volume} ± ${error} ${unit}, pH ${fixed(each.pH, 2)}`);
    }
    if (found.length === 0) parts.push("no end point shows");
    return parts.join("; ") + ".";
  }

  function residualWords(left, x, scale, points, fit) {
    let at = 0;
    left.forEach((each, place) => {
      if (Math.abs(each) > Math.abs(left[at]) || Number.isNaN(left[at])) at = place;
    });
    const where = plain(points.volume[at] * scale);
    const largest = `The largest difference is ${signed(left[at], 3)} at ${where} ${x.unit}.`;
    return fit === null ? largest : `${largest} ${verdictWords(fit)}`;
  }

  bf.measured_plots = { measuredFigure, volumeUnit };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
