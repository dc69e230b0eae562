/** The numbers behind a figure, thinned to what a reader scans. Mirrors figure_tables.py.
 *
 * @typedef {{head: string[], rows: string[][]}} NumbersTable
 */
(function (bf) {
  "use strict";

  const MOST_ROWS = 33;
  const MOST_MAP_ROWS = 7;
  const MOST_MAP_COLUMNS = 9;
  const MOST_DECIMALS = 5;

  /** Some of a figure's numbers: every so many points, and the last.
   * @param {import("./figures.js").Figure} figure @returns {NumbersTable} */
  function numbersTable(figure) {
    const { plain } = bf.formatting;
    if (figure.cells !== null) return ofMap(figure, figure.cells);
    if (figure.series.length === 0) return { head: [bf.figures.axisTitle(figure.x)], rows: [] };
    const x = figure.series[0].x;
    if (!figure.series.every((series) => same(series.x, x))) {
      return oneAfterTheOther(figure);
    }
    return {
      head: [bf.figures.axisTitle(figure.x), ...figure.series.map((series) => series.label)],
      rows: thinned(x.length, MOST_ROWS).map((at) => [
        plain(x[at]), ...figure.series.map((series) => textOf(number(series.y[at]), figure.y)),
      ]),
    };
  }

  /** Lines that do not share their points. */
  function oneAfterTheOther(figure) {
    const { plain } = bf.formatting;
    const { axisTitle } = bf.figures;
    const most = Math.max(2, Math.floor(MOST_ROWS / figure.series.length));
    return {
      head: ["", axisTitle(figure.x), axisTitle(figure.y)],
      rows: figure.series.flatMap((series) => thinned(series.x.length, most).map((at) => [
        series.label, plain(series.x[at]), textOf(number(series.y[at]), figure.y),
      ])),
    };
  }

  function same(one, other) {
    return one.length === other.length && one.every((each, at) => each === other[at]);
  }

  function ofMap(figure, cells) {
    const { fixed, plain } = bf.formatting;
    const across = centres(cells.x);
    const along = centres(cells.y);
    const shown = thinned(across.length, MOST_MAP_COLUMNS);
    return {
      head: [bf.figures.axisTitle(figure.y), ...shown.map((column) => plain(across[column], 3))],
      rows: thinned(along.length, MOST_MAP_ROWS).map((row) => [
        plain(along[row]),
        ...shown.map((column) => fixed(number(cells.values[row][column]), cells.decimals)),
      ]),
    };
  }

  /** In data, null is a gap. @param {number|null} value @returns {number} */
  function number(value) {
    return value === null ? NaN : value;
  }

  function thinned(count, most) {
    const every = Math.max(1, Math.ceil((count - 1) / (most - 1)));
    const chosen = [];
    for (let at = 0; at < count; at += every) chosen.push(at);
    if (chosen.length > 0 && chosen[chosen.length - 1] !== count - 1) chosen.push(count - 1);
    return chosen;
  }

  /** The points that cells stand for: the outermost two lie on the frame itself. */
  function centres(edges) {
    const found = [edges[0]];
    for (const edge of edges.slice(1, -2)) found.push(2 * edge - found[found.length - 1]);
    if (edges.length > 2) found.push(edges[edges.length - 1]);
    // Rounding must not make a tiny number of the point that is zero.
    const tiny = 1e-4 * (edges[edges.length - 1] - edges[0]);
    return found.map((centre) => (Math.abs(centre) < tiny ? 0 : centre));
  }

  /** A value written more finely than a reader could take it from the picture. */
  function textOf(value, axis) {
    if (axis.scale === "log") return bf.formatting.significant(value);
    const finest = (axis.high - axis.low) / 200;
    let decimals = 0;
    while (decimals < MOST_DECIMALS && bf.figure_ticks.powerOfTen(-decimals) > finest) decimals += 1;
    return bf.formatting.fixed(value, decimals);
  }

  bf.figure_tables = { numbersTable, centres };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
