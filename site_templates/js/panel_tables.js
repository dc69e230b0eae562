/* The numbers under a figure: a table that follows while it is open, and a file to take away. */
(function (bf) {
  "use strict";

  /** Let the table and the download of a picture work.
   * @param {Picture} picture
   * @param {() => string[]} remarks what holds for the numbers, one remark a line
   * @param {() => void} catchUp brings the picture and its table up to date
   */
  function open(picture, remarks, catchUp) {
    const numbers = picture.element.querySelector("details.numbers");
    if (numbers === null) return;
    numbers.addEventListener("toggle", catchUp);
    const button = numbers.querySelector('[data-action="download"]');
    if (button === null) return;
    button.disabled = false;
    button.addEventListener("click", () => {
      catchUp();
      const text = bf.figure_csv.csv(picture.figure, [picture.figure.title, ...remarks()]);
      // The mark in front tells spreadsheets that the text is UTF-8.
      bf.panel_tools.save(new Blob(["\ufeff", text], { type: "text/csv" }), picture.key + ".csv");
    });
  }

  /** Write the table of a picture again, if anybody can see it.
   * @param {Picture} picture
   */
  function refresh(picture) {
    const numbers = picture.element.querySelector("details.numbers");
    if (numbers === null || !numbers.open) return;
    const { head, rows } = bf.figure_tables.numbersTable(picture.figure);
    const table = numbers.querySelector("table");
    table.querySelector("thead").replaceChildren(rowOf(head, "col"));
    table.querySelector("tbody").replaceChildren(...rows.map((row) => rowOf(row, "row")));
  }

  /** @param {string[]} texts @param {"col" | "row"} scope head cells: all, or the first */
  function rowOf(texts, scope) {
    const row = document.createElement("tr");
    texts.forEach((text, at) => {
      const isHead = scope === "col" || at === 0;
      const cell = document.createElement(isHead ? "th" : "td");
      if (isHead) cell.scope = scope;
      cell.textContent = text;
      row.append(cell);
    });
    return row;
  }

  bf.panel_tables = { open, refresh };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
