/** How a pasted table is laid out: what separates its cells, its decimal mark, headings and units.
 * The twin of measured_layout.py. The choices are made for the whole text, by what most of its rows
 * do. Columns count characters (code points), as editors do.
 *
 * @typedef {{row: number, text: string}} Line  one row that holds something, counted from one
 * @typedef {{column: number, text: string}} Cell  without the blanks and quotation marks around it
 * @typedef {{line: Line, column: number, problem: string, accepted: string}} Misfit
 * @typedef {{separator: "tab"|"semicolon"|"comma"|"space", decimal: "point"|"comma", unit: string,
 *   unit_stated: boolean, headings: number, columns: number, volume_column: number,
 *   pH_column: number}} Layout
 */
(function (bf) {
  "use strict";

  const UNITS = { "µL": 1e-9, mL: 1e-6, L: 1e-3, m3: 1 }; // m3 each
  const SPELLINGS = {
    "µl": "µL", "μl": "µL", ul: "µL", ml: "mL", cm3: "mL", "cm³": "mL", cc: "mL",
    l: "L", dm3: "L", "dm³": "L", m3: "m3", "m³": "m3",
  };
  const BLANKS = " \t\u00a0\u2007\u2009\u202f";
  const AROUND = new RegExp(`^[${BLANKS}]+|[${BLANKS}]+$`, "g");
  const BEFORE = new RegExp(`^[${BLANKS}]+`);
  const BEHIND = new RegExp(`[${BLANKS}]+$`);
  const NOTHING = new RegExp(`^[${BLANKS};,"]*(#[^\\n]*)?$`);
  const QUOTED = /"[^"]*"/g;
  const BREAKS = {
    tab: "\\t",
    semicolon: ";",
    comma: ",",
    space: `[${BLANKS}]*,[${BLANKS}]+|[${BLANKS}]+,?`,
  };
  const NUMBER_PATTERN = "[-+−]?(?:[0-9]+(?:[.,][0-9]*)?|[.,][0-9]+)(?:[eE][-+−]?[0-9]+)?";
  const NUMBER = new RegExp(`^(?:${NUMBER_PATTERN})$`);
  const NUMBER_AT_START = new RegExp(`^(?:${NUMBER_PATTERN})`);
  const THOUSANDS = new RegExp(
    `^[-+−]?(?:[0-9]{1,3}(?:['’${BLANKS}][0-9]{3})+(?:[.,][0-9]*)?` +
      "|[0-9]{1,3}(?:,[0-9]{3})+\\.[0-9]*|[0-9]{1,3}(?:\\.[0-9]{3})+,[0-9]*" +
      "|[0-9]{1,3}(?:,[0-9]{3}){2,}|[0-9]{1,3}(?:\\.[0-9]{3}){2,})$",
  );
  const PH = /(?:^|[^a-z])ph(?![a-z])|reading/i;
  const VOLUME =
    /vol|added|titrant|buret|(?:^|[^a-z])v(?![a-z])|(?:^|[^a-zµμ])[mµμu]?l(?![a-z])/i;
  // U+FFFD stands for a letter that was not UTF-8: "�L" must not be read as litres.
  const UNIT =
    /(?:^|[^A-Za-zµμ\ufffd])([µμu]l|ml|cm3|cm³|cc|dm3|dm³|m3|m³|l)(?![A-Za-z0-9³\ufffd])/i;
  const STRANGE_UNIT = /[(\[/][ ]*([A-Za-zµμ\ufffd]{1,8}[0-9³]?)[ ]*(?:[)\]]|$)/;

  /** The rows that hold something; one that begins with # is a remark. Mirrors `content_lines`.
   * @param {string} text @returns {Line[]} */
  function contentLines(text) {
    return text.replace(/^\ufeff/, "").split(/\r\n|\r|\n/)
      .map((line, at) => ({ row: at + 1, text: line }))
      .filter((line) => !NOTHING.test(line.text));
  }

  /** How a table is laid out, null where there is none, and what is wrong with headings.
   * Mirrors `layout_of`.
   * @param {Line[]} lines @param {string} unit of volumes whose heading names none
   * @returns {[Layout | null, Misfit[]]} */
  function layoutOf(lines, unit) {
    const separator = separatorOf(lines.map((line) => line.text));
    const tables = lines.map((line) => cellsOf(line.text, separator));
    const headings = tables.findIndex((cells) => cells.some((cell) => isNumber(cell.text)));
    if (headings < 0) {
      const line = lines.length > 0 ? lines[0] : { row: 1, text: "" };
      const accepted = "rows of a volume and a pH, such as 12.5; 7.02";
      return [null, [{ line, column: 1, problem: "there are no points", accepted }]];
    }
    const chosen = columnsOf(lines, tables, headings, separator);
    const named = unitOf(lines, tables, headings, separator, chosen.volume_column);
    const texts = tables.slice(headings).flatMap((cells) => cells.map((cell) => cell.text));
    const layout = {
      separator,
      decimal: decimalOf(texts),
      unit: named.stated ? named.unit : unit,
      unit_stated: named.stated,
      headings,
      columns: chosen.columns,
      volume_column: chosen.volume_column,
      pH_column: chosen.pH_column,
    };
    return [layout, [...chosen.misfits, ...named.misfits]];
  }

  /** The cells of a row; empty ones at its end do not count. Mirrors `cells_of`.
   * @param {string} text @param {Layout["separator"]} separator @returns {Cell[]} */
  function cellsOf(text, separator) {
    let masked = text.replace(QUOTED, (found) => "q".repeat(found.length));
    let left = 0;
    if (separator === "space") {
      left = masked.length - masked.replace(BEFORE, "").length;
      masked = masked.replace(BEHIND, "");
    }
    const cells = [];
    const breaks = new RegExp(BREAKS[separator], "g");
    breaks.lastIndex = left;
    for (let found = breaks.exec(masked); found !== null; found = breaks.exec(masked)) {
      cells.push(cellOf(text, left, found.index));
      left = breaks.lastIndex;
    }
    cells.push(cellOf(text, left, masked.length));
    while (cells.length > 1 && cells[cells.length - 1].text === "") cells.pop();
    return cells;
  }

  /** @param {string} text @param {number} start @param {number} end @returns {Cell} */
  function cellOf(text, start, end) {
    const content = text.slice(start, end);
    const begun = content.replace(BEFORE, "");
    const column = Array.from(text.slice(0, start + content.length - begun.length)).length + 1;
    const trimmed = begun.replace(BEHIND, "");
    if (trimmed.length > 1 && trimmed.startsWith('"') && trimmed.endsWith('"')) {
      return { column: column + 1, text: trimmed.slice(1, -1).replace(AROUND, "") };
    }
    return { column, text: trimmed };
  }

  /** What most rows have between their cells; a blank counts before a comma.
   * @param {string[]} texts @returns {Layout["separator"]} */
  function separatorOf(texts) {
    const masked = texts.map((text) => text.replace(QUOTED, "q").replace(AROUND, ""));
    for (const name of /** @type {const} */ (["tab", "semicolon", "space", "comma"])) {
      const breaks = new RegExp(BREAKS[name]);
      if (2 * masked.filter((text) => breaks.test(text)).length > masked.length) return name;
    }
    return "space";
  }

  /** @param {string} text @returns {boolean} */
  function isNumber(text) {
    return NUMBER.test(text) || THOUSANDS.test(text);
  }

  /** @param {string[]} texts @returns {Layout["decimal"]} */
  function decimalOf(texts) {
    const numbers = texts.filter((text) => NUMBER.test(text));
    const points = numbers.filter((text) => text.includes(".")).length;
    const commas = numbers.filter((text) => text.includes(",")).length;
    return commas > points ? "comma" : "point";
  }

  /** How many cells a row may have, and which hold volume and pH. Mirrors `_columns`.
   * @param {Line[]} lines @param {Cell[][]} tables @param {number} headings
   * @param {Layout["separator"]} separator
   * @returns {{columns: number, volume_column: number, pH_column: number, misfits: Misfit[]}} */
  function columnsOf(lines, tables, headings, separator) {
    for (let at = headings - 1; at >= 0; at -= 1) {
      if (separator === "space") {
        // Blanks stand inside headings too: only the order of the two words can be told.
        const pH = PH.exec(lines[at].text);
        const volume = VOLUME.exec(lines[at].text);
        if (pH !== null && volume !== null) return pair(pH.index < volume.index ? 0 : 1);
        continue;
      }
      const texts = tables[at].map((cell) => cell.text);
      const pH = texts.findIndex((text) => PH.test(text));
      const volume = texts.findIndex((text, i) => i !== pH && VOLUME.test(text));
      if (pH >= 0 && volume >= 0) {
        return { columns: texts.length, volume_column: volume, pH_column: pH, misfits: [] };
      }
      if (pH >= 0 && texts.length === 2) return pair(pH);
    }
    const columns = tables[headings].length;
    const plain = separator === "tab" || separator === "semicolon";
    if (columns > 2 && (plain || (headings > 0 && separator === "comma"))) {
      const problem = `no heading says which of the ${columns} columns are volume and pH`;
      const accepted = "a heading such as Volume (mL) and one such as pH";
      const line = lines[Math.max(headings - 1, 0)];
      const misfits = [{ line, column: 1, problem, accepted }];
      return { columns, volume_column: 0, pH_column: 1, misfits };
    }
    return pair(1);
  }

  /** @param {number} pH which of two columns */
  function pair(pH) {
    return { columns: 2, volume_column: 1 - pH, pH_column: pH, misfits: [] };
  }

  /** The unit that a heading names, whether one does, and a complaint of an unknown one.
   * Mirrors `_unit`.
   * @param {Line[]} lines @param {Cell[][]} tables @param {number} headings
   * @param {Layout["separator"]} separator @param {number} column
   * @returns {{unit: string, stated: boolean, misfits: Misfit[]}} */
  function unitOf(lines, tables, headings, separator, column) {
    for (let at = headings - 1; at >= 0; at -= 1) {
      const cell = separator === "space" ? { column: 1, text: lines[at].text } : tables[at][column];
      if (cell === undefined) continue;
      const found = UNIT.exec(cell.text);
      if (found !== null) {
        return { unit: SPELLINGS[found[1].toLowerCase()], stated: true, misfits: [] };
      }
      const strange = separator === "space" ? null : STRANGE_UNIT.exec(cell.text);
      if (strange !== null) {
        const problem = `the volume has the unknown unit '${strange[1]}'`;
        const accepted = Object.keys(UNITS).join(", ");
        const misfits = [{ line: lines[at], column: cell.column, problem, accepted }];
        return { unit: "mL", stated: false, misfits };
      }
    }
    return { unit: "mL", stated: false, misfits: [] };
  }

  bf.measured_layout = {
    UNITS, NUMBER, NUMBER_AT_START, THOUSANDS, contentLines, layoutOf, cellsOf,
  };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
