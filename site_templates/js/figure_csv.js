/* All the numbers behind a figure as a table that spreadsheets and programs read. Pure. */
(function (bf) {
  "use strict";

  /** A figure as comma-separated values, after remarks that say what holds for them.
   * @param {Figure} figure
   * @param {string[]} remarks one a line
   * @returns {string}
   */
  function csv(figure, remarks) {
    const { head, rows } = figure.cells === null ? ofLines(figure) : ofMap(figure, figure.cells);
    const lines = [
      ...remarks.map((remark) => "# " + remark),
      head.map(quoted).join(","),
      ...rows.map((row) => row.map(written).join(",")),
    ];
    return lines.join("\r\n") + "\r\n";
  }

  function ofLines(figure) {
    const { axisTitle } = bf.figures;
    const { unit } = figure.y;
    const x = figure.series.length > 0 ? figure.series[0].x : [];
    return {
      head: [
        axisTitle(figure.x),
        ...figure.series.map((each) =>
          axisTitle({ label: figure.y.label + ": " + each.label, unit })),
      ],
      rows: Array.from(x, (value, at) => [value, ...figure.series.map((each) => each.y[at])]),
    };
  }

  function ofMap(figure, cells) {
    const { axisTitle } = bf.figures;
    const across = bf.figure_tables.centres(cells.x);
    const along = bf.figure_tables.centres(cells.y);
    const rows = [];
    along.forEach((y, row) => {
      across.forEach((x, column) => rows.push([y, x, cells.values[row][column]]));
    });
    return { head: [axisTitle(figure.y), axisTitle(figure.x), axisTitle(cells)], rows };
  }

  /** A gap is an empty cell. */
  function written(value) {
    if (value === null || !Number.isFinite(value)) return "";
    return String(Number(value.toPrecision(6)));
  }

  function quoted(text) {
    return '"' + text.replaceAll('"', '""') + '"';
  }

  bf.figure_csv = { csv };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
