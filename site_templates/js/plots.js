/* From results to figures: what each picture of a sheet shows. The twin of plots.py: the same
 * words and ranges, from the engine's own results. Numbers are rounded as the build rounds them,
 * so that both draw the same picture.
 *
 * @typedef {{subject: object, reference: State, drift: Drift, sweep: Sweep, sides: Side[],
 *   surface: Surface | null}} Sheet  the records of sheets.js
 */
(function (bf) {
  "use strict";

  const { formatting } = bf;
  const { fixed, plain } = formatting;
  const { ZERO_CELSIUS } = bf.water;

  const PH = { label: "pH", unit: "", low: 0, high: 14, scale: "linear" };
  const SHOWN = 1e-3; // of the largest total: below it a form is not drawn
  const MOST_LINES = 10;
  const MILLI = 1e3;
  const SIGNIFICANT_DIGITS = 6; // as in figures.py

  function axis(label, unit, low, high) {
    return { label, unit, low, high, scale: "linear" };
  }

  function line(name, label, x, y) {
    return { name, label, style: 0, x, y, visible: true, points: false };
  }

  function mark(along, value, label) {
    return { axis: along, value, label };
  }

  /** The figure with its numbers rounded as a page's data has them. Mirrors `rounded` in
   * figures.py. @param {Figure} figure @returns {Figure} */
  function rounded(figure) {
    const { cells } = figure;
    const roundedAxis = (each) => ({
      ...each, low: significant(each.low), high: significant(each.high),
    });
    return {
      ...figure,
      x: roundedAxis(figure.x),
      y: roundedAxis(figure.y),
      series: figure.series.map((each) => ({
        ...each, x: each.x.map(significant), y: each.y.map(significant),
      })),
      marks: figure.marks.map((each) => ({ ...each, value: significant(each.value) })),
      cells: cells && {
        ...cells,
        x: cells.x.map(significant),
        y: cells.y.map(significant),
        values: cells.values.map((row) => row.map(significant)),
      },
    };
  }

  function significant(number) {
    // Off by a hair from where halves lie: see `_significant` in figures.py.
    return Number((number * (1 + 1e-11)).toPrecision(SIGNIFICANT_DIGITS));
  }

  /** A figure of lines. Every line gets its style by its place, and what could not be told apart
   * is left out (Mirrors `styled`). */
  function lines(key, title, x, y, series, marks, summary) {
    const styled = series.slice(0, MOST_LINES).map((each, style) => ({ ...each, style }));
    const figure = { key, kind: "lines", title, x, y, series: styled, marks, cells: null, summary };
    return rounded(figure);
  }

  /** Share of each form of each family against pH, the formulation's own pH marked.
   * @param {Sheet} sheet @returns {Figure} */
  function fractionsFigure(sheet) {
    const { families, totals } = sheet.subject.mixture;
    const { sweep } = sheet;
    const least = SHOWN * Math.max(...totals);
    const series = [];
    families.forEach((family, at) => {
      if (!(totals[at] > least)) return;
      family.species.forEach((form, row) => {
        series.push(line(form.name, form.label, sweep.pH, sweep.forms.fractions[at][row]));
      });
    });
    const { pH } = sheet.reference;
    return lines(
      "fractions", "Forms of each family", PH, axis("share of the family", "", 0, 1), series,
      [mark("x", pH, "pH " + fixed(pH, 2))], speciesWords(sheet),
    );
  }

  function speciesWords(sheet) {
    const { families, totals } = sheet.subject.mixture;
    const parts = [];
    families.forEach((family, at) => {
      if (!(totals[at] > 0)) return;
      const shares = Array.from(sheet.reference.forms.fractions[at]);
      const top = shares.indexOf(Math.max(...shares));
      const share = fixed(shares[top] * 100, 0);
      parts.push(share + " % of " + family.label + " as " + family.species[top].label);
    });
    const named = parts.length > 0 ? parts.join("; ") : "no family is present";
    return "At pH " + fixed(sheet.reference.pH, 2) + ": " + named + ".";
  }

  /** Buffer capacity against pH, within and around the limits of use.
   * @param {Sheet} sheet @returns {Figure} */
  function capacityFigure(sheet) {
    const { sweep, reference: at } = sheet;
    const limits = sheet.subject.use_pH;
    const inside = (pH) => pH >= limits.low - 1.5 && pH <= limits.high + 1.5;
    const top = Math.max(...sweep.capacity.filter((_, place) => inside(sweep.pH[place]))) * MILLI;
    const capacity = sweep.capacity.map((each) => each * MILLI);
    return lines(
      "capacity", "Buffer capacity", PH, axis("buffer capacity", "mmol/kg per pH", 0, 1.1 * top),
      [line("capacity", "capacity", sweep.pH, capacity)],
      [mark("x", at.pH, "pH " + fixed(at.pH, 2)), ...limitMarks(limits, "x")],
      "At its own pH of " + fixed(at.pH, 2) + " the formulation takes up " +
        formatting.significant(at.capacity * MILLI) +
        " mmol of strong base per kg of water and pH unit.",
    );
  }

  function limitMarks(limits, along) {
    return [limits.low, limits.high].map((limit) => mark(along, limit, "limit " + plain(limit)));
  }

  /** PH after each amount of acid (left) and base (right), plain water for contrast.
   * @param {Sheet} sheet @returns {Figure | null} */
  function titrationFigure(sheet) {
    const { sides } = sheet;
    if (sides.length === 0) return null;
    const { amount, own, contrast } = joined(sides);
    const marks = [];
    for (const side of sides) {
      for (const point of side.equivalences.filter((each) => each.visible)) {
        const label = "equivalence, pH " + fixed(point.pH, 1);
        marks.push(mark("x", signed(side, point.amount) * MILLI, label));
      }
    }
    const low = Math.min(0, amount[0]);
    const high = Math.max(0, amount[amount.length - 1]);
    return lines(
      "titration", "Titration both ways", axis(amountLabel(sides), "mmol/kg", low, high), PH,
      [
        line("formulation", "this formulation", amount, own),
        line("water", "plain water", amount, contrast),
      ],
      [...marks, ...limitMarks(sheet.subject.use_pH, "y")], titrationWords(sides),
    );
  }

  function signed(side, amount) {
    return side.titrant.direction === "downward" ? -amount : amount;
  }

  function amountLabel(sides) {
    const directions = sides.map((side) => side.titrant.direction);
    if (!directions.includes("upward")) return "acid added";
    if (!directions.includes("downward")) return "base added";
    return "acid ← added → base";
  }

  /** Both directions on one axis, acid to the left, the start counted once. */
  function joined(sides) {
    const amount = [];
    const own = [];
    const contrast = [];
    for (const side of sides) {
      const downward = side.titrant.direction === "downward";
      const skip = !downward && amount.length > 0 ? 1 : 0;
      const placed = (each) => (downward ? each.slice().reverse() : each.slice(skip));
      amount.push(...placed(side.curve.amount).map((each) => signed(side, each) * MILLI));
      own.push(...placed(side.curve.state.pH));
      contrast.push(...placed(side.contrast.state.pH));
    }
    return { amount, own, contrast };
  }

  function titrationWords(sides) {
    const parts = [];
    for (const side of sides) {
      const name = side.titrant.reagent;
      parts.push(side.reserve > 0
        ? formatting.significant(side.reserve * MILLI) + " mmol of " + name +
          " per kg of water lead to the limit of use"
        : name + " does not lead to the limit of use before the batch has doubled");
      const hidden = side.equivalences.filter((each) => !each.visible).length;
      if (hidden > 0) {
        parts.push(hidden + " equivalence point(s) with " + name + " do not show on the curve");
      }
    }
    return parts.join("; ") + ".";
  }

  /** PH along temperature over the range of use. @param {Sheet} sheet @returns {Figure} */
  function driftFigure(sheet) {
    const celsius = Array.from(sheet.drift.temperature, (each) => each - ZERO_CELSIUS);
    const pH = sheet.drift.state.pH;
    const last = celsius.length - 1;
    const { expected } = sheet.subject;
    let low = Math.min(...pH);
    let high = Math.max(...pH);
    const margin = Math.max(0.1, 0.15 * (high - low));
    const slope = (pH[last] - pH[0]) / (celsius[last] - celsius[0]);
    const here = sheet.reference.temperature - ZERO_CELSIUS;
    const marks = [mark("x", here, plain(here) + " °C")];
    if (expected !== null) {
      marks.push(mark("y", expected.pH, "expected " + plain(expected.pH)));
      low = Math.min(low, expected.pH);
      high = Math.max(high, expected.pH);
    }
    const ends = [celsius[0], celsius[last]];
    return lines(
      "drift", "pH and temperature", axis("temperature", "°C", ...ends),
      axis("pH", "", low - margin, high + margin), [line("pH", "pH", celsius, pH)], marks,
      "From " + plain(ends[0]) + " to " + plain(ends[1]) + " °C the pH goes from " +
        fixed(pH[0], 2) + " to " + fixed(pH[last], 2) + ", " +
        formatting.signed(slope, 4) + " per °C on average.",
    );
  }

  /** PH over temperature and added acid or base, as a map.
   * @param {Sheet} sheet @returns {Figure | null} */
  function surfaceFigure(sheet) {
    const { surface, sides } = sheet;
    if (surface === null) return null;
    const amount = surface.amount.map((each) => each * MILLI);
    const celsius = surface.temperature.map((each) => each - ZERO_CELSIUS);
    const values = surface.pH.flat().filter((each) => !Number.isNaN(each));
    return rounded({
      key: "surface",
      kind: "map",
      title: "pH over temperature and added acid or base",
      x: axis(amountLabel(sides), "mmol/kg", amount[0], amount[amount.length - 1]),
      y: axis("temperature", "°C", celsius[0], celsius[celsius.length - 1]),
      series: [],
      marks: limitMarks(sheet.subject.use_pH, "value"),
      cells: {
        x: edges(amount), y: edges(celsius), values: surface.pH, label: "pH", unit: "", decimals: 2,
      },
      summary:
        "Over the temperatures of use and these additions the pH runs from " +
        fixed(Math.min(...values), 2) + " to " + fixed(Math.max(...values), 2) + ".",
    });
  }

  /** The edges of cells around grid points, the outermost cells cut at their points.
   * @param {number[]} centres @returns {number[]} one more */
  function edges(centres) {
    const middles = centres.slice(1).map((each, at) => 0.5 * (each + centres[at]));
    return [centres[0], ...middles, centres[centres.length - 1]];
  }

  const SHEET_FIGURES = {
    fractions: fractionsFigure,
    capacity: capacityFigure,
    titration: titrationFigure,
    drift: driftFigure,
    surface: surfaceFigure,
  };

  bf.plots = { PH, MILLI, SHEET_FIGURES, axis, line, lines };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
