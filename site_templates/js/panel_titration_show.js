/* A titration of one's own on the page: two figures, a table of equivalences, the fit in words and
 * numbers, and what can be taken along. */
(function (bf) {
  "use strict";

  const SIGNS = { "well determined": "good", "does not fit": "bad", "no solution": "bad" };
  const MARKS = { good: "✓ ", bad: "✗ ", doubtful: "! " };
  const MOST_ROWS = 101; // of the table of points; the file has all
  const FIGURES = [
    ["measured", "Measured and predicted", true], ["residuals", "Measured less predicted", false],
  ];

  /** @typedef {{root: HTMLElement, stage: Stage | null, view: View | null}} Show */

  /** Make ready to show. @param {HTMLElement} root the section @returns {Show} */
  function open(root) {
    const show = { root, stage: null, view: null };
    const copy = root.querySelector('[data-action="titration-copy"]');
    bf.panel_copy.open(copy, () => bf.titration_tables.resultLines(show.view));
    const download = root.querySelector('[data-action="titration-download"]');
    download.disabled = false;
    download.addEventListener("click", () => {
      const text = bf.titration_tables.csv(show.view);
      // The mark in front tells spreadsheets that the text is UTF-8.
      bf.panel_tools.save(new Blob(["\ufeff", text], { type: "text/csv" }), "titration.csv");
    });
    return show;
  }

  /** Show a titration; null takes away what is shown. @param {Show} show
   * @param {View | null} view
   * @param {boolean} [pending] whether a fit is about to come: the one before stays until then */
  function put(show, view, pending = false) {
    show.view = view;
    const results = part(show, "results");
    results.hidden = view === null;
    setBack(show, false);
    if (view === null) return;
    part(show, "found").replaceChildren(...paragraphs(bf.titration_tables.conditionLines(view)));
    part(show, "meetings").replaceChildren(...meetingsOf(view));
    if (pending) setBackFit(show, true);
    else putFit(show);
    follow(show);
  }

  /** Mark what is shown as an answer to earlier points or conditions, or as good again. */
  function setBack({ root }, stale) {
    root.querySelector('[data-part="results"]').classList.toggle("stale", stale);
  }

  function setBackFit(show, stale) {
    for (const name of ["fit", "estimates"]) part(show, name).classList.toggle("before", stale);
  }

  /** Show the fit of the view, or that there is none. @param {Show} show */
  function putFit(show) {
    const { fit } = show.view;
    setBackFit(show, false);
    if (fit === null) {
      part(show, "fit").replaceChildren();
      part(show, "estimates").replaceChildren();
      return;
    }
    const kind = SIGNS[fit.verdict.kind] || "doubtful";
    const verdict = document.createElement("p");
    verdict.className = "verdict";
    verdict.dataset.verdict = kind;
    verdict.textContent = MARKS[kind] + bf.fit_words.verdictWords(fit);
    part(show, "fit").replaceChildren(verdict);
    part(show, "estimates").replaceChildren(...estimatesOf(fit));
  }

  function part({ root }, name) {
    return root.querySelector('[data-part="' + name + '"]');
  }

  function paragraphs(lines) {
    return lines.map((line) => {
      const paragraph = document.createElement("p");
      paragraph.textContent = line;
      return paragraph;
    });
  }

  function meetingsOf(view) {
    const [unit] = bf.titration_tables.unitOf(view);
    const rows = bf.titration_tables.meetings(view);
    if (rows.length === 0) {
      return paragraphs(["No equivalence shows among these points, and none is predicted there."]);
    }
    const head = ["Found by", `Volume (${unit})`, "± standard error", "pH", "Belongs to"];
    const table = tableOf("Equivalence: what the points say, beside what the recipe leads to", head,
      rows.map((row) => [row.by, row.volume, row.error, row.pH, row.of]), [1, 2, 3]);
    Array.from(table.tBodies[0].rows).forEach((row, at) => {
      row.classList.toggle("predicted", rows[at].predicted);
    });
    return [table];
  }

  function estimatesOf(fit) {
    const { correlationRows, estimateRows, scatterLine } = bf.titration_tables;
    const head = [
      "Quantity", "Value", "± standard error", "Unit", "Recipe and label", "Value against them",
    ];
    const rows = estimateRows(fit).map((each) =>
      [each.name, each.value, each.error, each.unit, each.recipe, each.off]);
    const parts = [
      tableOf("Fitted quantities", head, rows, [1, 2, 4, 5]), ...paragraphs([scatterLine(fit)]),
    ];
    const pairs = correlationRows(fit).map(({ pair, value }) => [pair, value]);
    if (pairs.length > 0) {
      const caption = "Correlation: near +1 or −1, the points hardly tell the two apart";
      parts.push(tableOf(caption, ["Quantities", "Correlation"], pairs, [1]));
    }
    return parts;
  }

  /** @param {string} caption @param {string[]} head @param {string[][]} rows
   * @param {number[]} numbers columns of numbers @returns {HTMLTableElement} */
  function tableOf(caption, head, rows, numbers) {
    const table = document.createElement("table");
    table.className = "stack narrow";
    table.createCaption().textContent = caption;
    fill(table.createTHead().insertRow(), head, numbers, head, () => "col");
    const body = table.createTBody();
    for (const row of rows) {
      fill(body.insertRow(), row, numbers, head, (at) => (at === 0 ? "row" : ""));
    }
    return table;
  }

  /** @param {HTMLTableRowElement} row @param {string[]} texts @param {number[]} numbers
   * @param {string[]} labels @param {(at: number) => string} scope "" for no head cell */
  function fill(row, texts, numbers, labels, scope) {
    texts.forEach((text, at) => {
      const cell = document.createElement(scope(at) === "" ? "td" : "th");
      if (scope(at) === "") cell.dataset.label = labels[at];
      else cell.scope = scope(at);
      if (numbers.includes(at)) cell.className = "number";
      if (text === "") cell.classList.add("empty");
      cell.textContent = text;
      row.append(cell);
    });
  }

  /** Bring the figures to the view as frames allow; the first time, make them. */
  function follow(show) {
    const drawn = { view: show.view, figures: null };
    if (show.stage === null) {
      show.stage = stageOf(show, drawn);
    }
    const legend = part(show, "figures").querySelector('[data-series="fit"]');
    legend.closest("li").hidden = show.view.fit === null;
    const numbers = part(show, "figures").querySelector("details");
    if (numbers.open) fillNumbers(numbers, show.view);
    bf.panel_figures.follow(show.stage, drawn);
  }

  /** What both figures show, drawn when one of them is in sight. */
  function figuresOf(drawn) {
    const { experiment, points, found, fit } = drawn.view;
    drawn.figures = drawn.figures ||
      bf.measured_plots.measuredFigure(experiment, points, found, fit);
    return drawn.figures;
  }

  function stageOf(show, drawn) {
    const place = part(show, "figures");
    place.replaceChildren(...FIGURES.map(([key, title, several]) => elementOf(key, title, several)));
    const numbers = numbersOf();
    place.lastChild.append(numbers);
    numbers.addEventListener("toggle", () => {
      if (numbers.open) fillNumbers(numbers, show.view);
    });
    const makers = {
      measured: (each) => figuresOf(each)[0], residuals: (each) => figuresOf(each)[1],
    };
    const [measured, residuals] = figuresOf(drawn);
    const stage = bf.panel_figures.stageOf(
      place, { measured, residuals }, makers, document.body.dataset.assets);
    bf.panel_figures.open(stage, () => []);
    return stage;
  }

  /** A figure as the templates make it, still empty. */
  function elementOf(key, title, several) {
    const element = document.createElement("figure");
    element.className = "plot";
    element.dataset.figure = key;
    element.setAttribute("aria-labelledby", "figure-" + key);
    const head = document.createElement("h3");
    head.id = "figure-" + key;
    head.textContent = title;
    const picture = document.createElement("div");
    picture.className = "plot-picture";
    const caption = document.createElement("figcaption");
    caption.dataset.summary = "";
    element.append(head, picture, toolsOf(), ...(several ? [legendOf()] : []), caption);
    return element;
  }

  function toolsOf() {
    const tools = document.createElement("div");
    tools.className = "plot-tools";
    tools.hidden = true;
    for (const [tool, label] of [
      ["zoom", "Zoom box"], ["wheel", "Wheel zoom"], ["reset", "Reset"], ["save", "Save picture"],
    ]) {
      const button = document.createElement("button");
      button.type = "button";
      button.dataset.tool = tool;
      if (tool === "zoom" || tool === "wheel") button.setAttribute("aria-pressed", "false");
      button.textContent = label;
      tools.append(button);
    }
    return tools;
  }

  /** The legend of the first figure: styles by the place of a series in it. */
  function legendOf() {
    const list = document.createElement("ul");
    list.className = "legend";
    list.setAttribute("aria-label", "Lines");
    const swatches = [
      '<path class="circles s0" d="M14.5 5a2.5 2.5 0 1 0 5 0a2.5 2.5 0 1 0-5 0"/>',
      '<path class="line s1" d="M0 5H34"/>', '<path class="line s2" d="M0 5H34"/>',
    ];
    [["measured", "measured"], ["recipe", "recipe and label"], ["fit", "best fit"]].forEach(
      ([name, label], at) => {
        const item = document.createElement("li");
        item.innerHTML = '<button type="button" aria-pressed="true" data-series="' + name +
          '" disabled><svg class="figure swatch" viewBox="0 0 34 10" aria-hidden="true">' +
          swatches[at] + "</svg>" + label + "</button>";
        list.append(item);
      });
    return list;
  }

  function numbersOf() {
    const details = document.createElement("details");
    details.className = "numbers";
    details.innerHTML = "<summary>Numbers</summary>" +
      '<div class="scroll" tabindex="0" role="region" aria-label="Numbers of the points"></div>';
    return details;
  }

  /** The points as a table, thinned where there are many. */
  function fillNumbers(details, view) {
    const { head, columns } = bf.titration_tables.pointColumns(view);
    const every = Math.ceil(columns[0].length / MOST_ROWS);
    const digits = [0, null, 3, 3, 3, 3, 3];
    const rows = [];
    for (let at = 0; at < columns[0].length; at += every) {
      rows.push(columns.map((column, k) => digits[k] === null
        ? bf.formatting.plain(column[at], 5) : bf.formatting.fixed(column[at], digits[k])));
    }
    const caption = every === 1 ? "Every point" : `One point in ${every}; the file has all`;
    const table = tableOf(caption, head, rows, head.map((_, at) => at));
    table.className = "";
    details.querySelector(".scroll").replaceChildren(table);
  }

  bf.panel_titration_show = { open, put, putFit, follow, setBack };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
