/** What a picture shows. Mirrors figures.py: a figure is the object that `as_data` describes there,
 * with arrays of numbers in which NaN, null or infinity is a gap.
 *
 * @typedef {{label: string, unit: string, low: number, high: number, scale: "linear"|"log"}} Axis
 * @typedef {{name: string, label: string, style: number, x: number[], y: number[],
 *   visible: boolean, points: boolean}} Series
 * @typedef {{axis: "x"|"y"|"value", value: number, label: string}} Mark
 * @typedef {{x: number[], y: number[], values: number[][], label: string, unit: string,
 *   decimals: number}} Cells
 * @typedef {{key: string, kind: "lines"|"map", title: string, x: Axis, y: Axis, series: Series[],
 *   marks: Mark[], cells: Cells|null, summary: string}} Figure
 * @typedef {{name: string, label: string, style: number, visible: boolean,
 *   points: boolean}} Entry
 * @typedef {{low: number, high: number, label: string, colour: number}} Band
 */
(function (bf) {
  "use strict";

  const STYLES = 10; // how many there are in figure_styles.py
  const BAND_COLOURS = 10;
  const BANDS_ABOUT = 8;

  /** The words beside an axis. @param {Axis} axis @returns {string} */
  function axisTitle(axis) {
    return axis.unit ? axis.label + " (" + axis.unit + ")" : axis.label;
  }

  /** What a legend lists. @param {Figure} figure @returns {Entry[]} */
  function legend(figure) {
    return figure.series.map((each) => ({
      name: each.name, label: each.label, style: each.style % STYLES, visible: each.visible,
      points: each.points,
    }));
  }

  /** The steps of colour that cover a map's values, lowest first.
   * @param {Figure} figure @returns {Band[]} */
  function bands(figure) {
    let low = Infinity;
    let high = -Infinity;
    for (const row of figure.cells === null ? [] : figure.cells.values) {
      for (const value of row) {
        if (Number.isFinite(value)) {
          low = Math.min(low, value);
          high = Math.max(high, value);
        }
      }
    }
    if (low > high) {
      return [];
    }
    const span = Math.max(high - low, 0.01 * Math.abs(high), 1e-6);
    const [mantissa, exponent] = bf.figure_ticks.stepOf(span, BANDS_ABOUT);
    const step = bf.figure_ticks.shifted(mantissa, exponent);
    const first = Math.floor(low / step + 1e-6);
    const last = Math.max(Math.ceil(high / step - 1e-6), first + 1);
    const found = [];
    for (let count = first; count < last; count += 1) {
      found.push(band(count, count - first, last - first, mantissa, exponent));
    }
    return found;
  }

  function band(count, place, places, mantissa, exponent) {
    const { shifted, numberText } = bf.figure_ticks;
    const low = count * mantissa;
    const high = (count + 1) * mantissa;
    return {
      low: shifted(low, exponent),
      high: shifted(high, exponent),
      label: numberText(low, exponent) + " to " + numberText(high, exponent),
      colour: Math.floor((place * (BAND_COLOURS - 1)) / Math.max(places - 1, 1) + 0.5),
    };
  }

  bf.figures = { STYLES, axisTitle, legend, bands };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
