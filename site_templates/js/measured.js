/** Measured points from text that was pasted or opened: volumes of titrant, readings of the meter.
 * The twin of measured.py, word for word.
 *
 * @typedef {{volume: number[], pH: number[], rows: number[]}} Points  m3 of titrant added so far,
 *   what the meter said, and rows of the text; in the order of addition
 * @typedef {{pH: number, volume: number}} Precision  standard uncertainty of a reading, and of a
 *   volume in m3
 * @typedef {{row: number, column: number, problem: string, accepted: string,
 *   line: string}} Complaint  row and column count from one
 * @typedef {{points: Points | null, layout: Layout | null, complaints: Complaint[]}} Parsed  points
 *   where nothing is wrong with the text, else every complaint
 */
(function (bf) {
  "use strict";

  const { UNITS, NUMBER, NUMBER_AT_START, THOUSANDS, contentLines, layoutOf, cellsOf } =
    bf.measured_layout;

  const MOST_POINTS = 5000;
  const LOWEST_PH = -1;
  const HIGHEST_PH = 15;
  const LONGEST_QUOTE = 40;
  const READING = 0.02; // pH; standard uncertainty of a reading where nothing is said
  const BURETTE_SHARE = 1e-3; // of the largest volume: that of a volume where nothing is said
  const LETTERS = /[A-Za-zµμ%°³]$/;
  const CONTROL = /[\u0000-\u001f\u007f-\u009f]/g;
  const EXAMPLES = { volume: "a number such as 12.5", pH: "a number such as 7.02" };
  const DECIMALS = {
    point: "has a comma where the other numbers have points: ",
    comma: "has a point where the other numbers have commas: ",
  };
  const ACCEPTED_BARE = "a number alone; the unit stands in the heading";
  const ACCEPTED_ROW = "a volume and a pH in each row; more columns only below a heading";
  const ACCEPTED_COMMAS = "semicolons or tabs between cells where numbers have decimal commas";

  /** The text of a file: UTF-8, or UTF-16 where the file begins by saying so. Mirrors `text_of`.
   * @param {Uint8Array} content @returns {string} */
  function textOf(content) {
    let encoding = "utf-8";
    if (content[0] === 0xff && content[1] === 0xfe) encoding = "utf-16le";
    if (content[0] === 0xfe && content[1] === 0xff) encoding = "utf-16be";
    return new TextDecoder(encoding).decode(content);
  }

  /** The points of a text. Mirrors `parsed` in measured.py.
   * @param {string} text
   * @param {string} [unit] of volumes whose heading names none, a key of UNITS
   * @returns {Parsed} */
  function parsed(text, unit = "mL") {
    const lines = contentLines(text);
    const [layout, misfits] = layoutOf(lines, unit);
    if (layout === null) return { points: null, layout, complaints: misfits.map(complaintOf) };
    const body = lines.slice(layout.headings);
    if (body.length > MOST_POINTS) misfits.push(tooMany(body[MOST_POINTS]));
    const { volumes, readings, wrong } = rowsOf(body.slice(0, MOST_POINTS), layout);
    const all = [...misfits, ...wrong].sort(
      (one, other) => one.line.row - other.line.row || one.column - other.column);
    if (all.length > 0) return { points: null, layout, complaints: all.map(complaintOf) };
    const factor = UNITS[layout.unit];
    const points = {
      volume: volumes.map((each) => each * factor),
      pH: readings,
      rows: body.map((line) => line.row),
    };
    return { points, layout, complaints: [] };
  }

  /** The precision that is taken where none is stated. Mirrors `default_precision`.
   * @param {Points} points @returns {Precision} */
  function defaultPrecision(points) {
    return { pH: READING, volume: BURETTE_SHARE * points.volume.reduce((most, each) => Math.max(most, each), 0) };
  }

  /** A complaint as one sentence for the page. @param {Complaint} complaint @returns {string} */
  function told(complaint) {
    return `row ${complaint.row}, column ${complaint.column}: ${complaint.problem}; ` +
      `accepted: ${complaint.accepted}`;
  }

  /** @param {Misfit} misfit @returns {Complaint} */
  function complaintOf({ line, column, problem, accepted }) {
    return { row: line.row, column, problem, accepted, line: line.text };
  }

  /** @param {Line} line @returns {Misfit} */
  function tooMany(line) {
    const problem = `there are more than ${MOST_POINTS} rows of points`;
    const accepted = `at most ${MOST_POINTS}: leave out some, or paste a part`;
    return { line, column: 1, problem, accepted };
  }

  /** The numbers of every sound row, and what is wrong with the others. Mirrors `_rows`.
   * @param {Line[]} body @param {Layout} layout
   * @returns {{volumes: number[], readings: number[], wrong: Misfit[]}} */
  function rowsOf(body, layout) {
    const found = { volumes: [], readings: [], wrong: [] };
    let last = { volume: -Infinity, text: "" };
    for (const line of body) {
      const cells = cellsOf(line.text, layout.separator);
      const count = countMisfit(line, cells, layout);
      if (count !== null) {
        found.wrong.push(count);
        continue;
      }
      const cell = cells[layout.volume_column];
      let volume = numberIn(line, cell, "volume", layout);
      if (typeof volume === "number" && volume < last.volume) {
        const problem =
          `the volume is smaller than ${quoted(last.text)} before it: ${quoted(cell.text)}`;
        volume = { line, column: cell.column, problem, accepted: "volumes in the order of addition" };
      }
      const pH = numberIn(line, cells[layout.pH_column], "pH", layout);
      for (const each of [volume, pH]) if (typeof each !== "number") found.wrong.push(each);
      if (typeof volume !== "number") continue;
      last = { volume, text: cell.text };
      if (typeof pH !== "number") continue;
      found.volumes.push(volume);
      found.readings.push(pH);
    }
    return found;
  }

  /** What is wrong with the number of cells in a row, if anything is. Mirrors `_count_misfit`.
   * @param {Line} line @param {Cell[]} cells @param {Layout} layout @returns {Misfit | null} */
  function countMisfit(line, cells, layout) {
    const needed = Math.max(layout.volume_column, layout.pH_column) + 1;
    if (needed <= cells.length && cells.length <= layout.columns) return null;
    const count = cells.length === 1 ? "1 cell" : `${cells.length} cells`;
    if (cells.length < needed) {
      const problem = `the row has ${count}, and a volume and a pH are needed`;
      return { line, column: cells[0].column, problem, accepted: ACCEPTED_ROW };
    }
    const problem = `the row has ${count} where ${layout.columns} are expected`;
    const accepted = layout.separator === "comma" ? ACCEPTED_COMMAS : ACCEPTED_ROW;
    return { line, column: cells[layout.columns].column, problem, accepted };
  }

  /** The number in a cell, or what is wrong with it. Mirrors `_number`.
   * @param {Line} line @param {Cell} cell @param {"volume"|"pH"} quantity @param {Layout} layout
   * @returns {number | Misfit} */
  function numberIn(line, cell, quantity, layout) {
    const wrong = problemOf(cell.text, quantity, layout);
    if (wrong === null) return Number(plain(cell.text));
    const [problem, accepted] = wrong;
    return { line, column: cell.column, problem: `the ${quantity} ${problem}`, accepted };
  }

  /** @param {string} text @param {"volume"|"pH"} quantity @param {Layout} layout
   * @returns {[string, string] | null} the problem, and what is accepted */
  function problemOf(text, quantity, layout) {
    if (text === "") return ["is missing", EXAMPLES[quantity]];
    if (THOUSANDS.test(text)) {
      return [`has a thousands separator: ${quoted(text)}`, "a number such as 1250.5"];
    }
    if (!NUMBER.test(text)) {
      if (NUMBER_AT_START.test(text) && LETTERS.test(text)) {
        return [`has something beside the number: ${quoted(text)}`, ACCEPTED_BARE];
      }
      return [`is not a number: ${quoted(text)}`, EXAMPLES[quantity]];
    }
    if (text.includes(layout.decimal === "point" ? "," : ".")) {
      return [DECIMALS[layout.decimal] + quoted(text), "one decimal mark, no thousands separators"];
    }
    const value = Number(plain(text));
    if (!Number.isFinite(value)) {
      return [`is not a finite number: ${quoted(text)}`, EXAMPLES[quantity]];
    }
    if (quantity === "volume" && value < 0) {
      return [`is negative: ${quoted(text)}`, "volumes from 0 up"];
    }
    if (quantity === "pH" && !(value >= LOWEST_PH && value <= HIGHEST_PH)) {
      return [`is out of bounds: ${quoted(text)}`, "a reading from -1 to 15"];
    }
    return null;
  }

  /** @param {string} text @returns {string} as a script reads numbers */
  function plain(text) {
    return text.replaceAll(",", ".").replaceAll("−", "-");
  }

  /** @param {string} text @returns {string} */
  function quoted(text) {
    const letters = Array.from(text);
    const cut = letters.length <= LONGEST_QUOTE
      ? text : letters.slice(0, LONGEST_QUOTE).join("") + "…";
    return "'" + cut.replace(CONTROL, " ") + "'";
  }

  bf.measured = { MOST_POINTS, textOf, parsed, defaultPrecision, told };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
