/* The section that looks for a fault: it writes what panel_fault_rows.js says. */
(function (bf) {
  "use strict";

  const NEEDED = "Give a reading and its temperature above; then this list ranks what explains it.";

  /** @param {object} data the page's data block @returns {Section | null} */
  function open(data) {
    const root = document.querySelector("[data-fault=live]");
    if (root === null) return null;
    const part = (name) => root.querySelector('[data-fault="' + name + '"]');
    const view = {
      root, lines: [], all: [], second: part("second"), status: part("status"),
      results: part("results"), mark: part("mark"), words: part("words"), note: part("note"),
      table: part("table"), caption: part("caption"), leading: part("leading"), rest: part("rest"),
      details: part("details"), summary: part("summary"), every: part("every"),
    };
    root.hidden = false;
    view.details.addEventListener("toggle", () => writeAll(view));
    bf.panel_copy.open(root.querySelector('[data-action="copy-fault"]'), () => [
      document.querySelector("h1").textContent.trim(), ...view.lines,
    ]);
    return {
      name: "fault",
      late: true,
      answer: (situation) => answer(view, situation),
      withhold() {
        waitWith(view, "A condition above cannot be used; see beside it.");
      },
    };
  }

  /** @returns {Outcome} */
  function answer(view, situation) {
    const { faults, reading, texts } = situation;
    const kind = texts.get("second") || "none";
    for (const field of view.second.querySelectorAll("[data-second]")) {
      field.hidden = kind === "none";
    }
    const faulty = faults.has("reading") || faults.has("compensation") || (kind !== "none" &&
      (faults.has("second-reading") || faults.has("second-temperature")));
    view.results.classList.toggle("stale", faulty);
    if (faulty) return { lines: view.lines, facts: {} };
    const given = !Number.isNaN(reading);
    view.results.hidden = false;
    if (!given) {
      waitWith(view, NEEDED);
      return { lines: [], facts: {} };
    }
    const found = bf.panel_fault_rows.answerTo(situation);
    write(view, found);
    view.lines = bf.panel_fault_rows.linesOf(found);
    const [first] = found.leading;
    return { lines: view.lines, facts: { fault: factOf(found, first), second: found.second } };
  }

  /** Rank nothing, and say what is missing. */
  function waitWith(view, words) {
    view.results.hidden = true;
    view.lines = [];
    tell(view.words, words);
    tell(view.note, "");
    view.mark.textContent = "";
    view.status.dataset.state = "waiting";
  }

  /** What the log keeps: the leading fault, or that there is none. */
  function factOf({ state }, first) {
    if (first !== undefined) return first.words + " (" + first.share + ")";
    return { right: "nothing is wrong", none: "none of these" }[state] || "";
  }

  function write(view, found) {
    view.status.dataset.state = found.state;
    view.mark.textContent = found.mark;
    tell(view.words, found.words);
    tell(view.note, found.note);
    view.table.hidden = found.leading.length === 0;
    view.caption.textContent = found.caption;
    view.leading.replaceChildren(...found.leading.map((row, at) => leadingRow(row, at + 1)));
    view.rest.textContent = found.leading.length === 0 ? "" : found.rest;
    view.details.hidden = found.all.length === 0;
    view.summary.textContent = "All " + found.all.length + " faults that were tried";
    view.all = found.all;
    writeAll(view);
  }

  /** Rows that nobody sees are not made: there are dozens, with every key that is pressed. */
  function writeAll(view) {
    const rows = view.details.open && !view.details.hidden ? view.all : [];
    view.every.replaceChildren(...rows.map(plainRow));
  }

  /** Words that are the same again would be read out again. */
  function tell(element, words) {
    if (element.textContent !== words) element.textContent = words;
  }

  function leadingRow(row, rank) {
    const head = cell("th", "", row.words);
    head.scope = "row";
    const place = document.createElement("span");
    place.className = "rank";
    place.textContent = rank + ".";
    head.prepend(place, " ");
    const check = cell("td", "Check or do", row.check);
    check.className = "check";
    return line(head, cell("td", "It would read", row.predicted), fitCell(row), shareCell(row),
      check);
  }

  function plainRow(row) {
    const head = cell("th", "", row.words);
    head.scope = "row";
    return line(head, cell("td", "It would read", row.predicted), fitCell(row), shareCell(row));
  }

  function line(...cells) {
    const row = document.createElement("tr");
    row.append(...cells);
    return row;
  }

  function fitCell({ mark, fit }) {
    const made = cell("td", "Fit", "");
    const sign = document.createElement("span");
    sign.className = "fit-mark";
    sign.setAttribute("aria-hidden", "true");
    sign.textContent = mark;
    made.append(sign, " ", fit);
    return made;
  }

  /** A share of the weight in figures, and as a bar. */
  function shareCell({ share, weight }) {
    const made = cell("td", "How likely", share);
    const bar = document.createElement("span");
    bar.className = "share-bar";
    bar.setAttribute("aria-hidden", "true");
    const filled = document.createElement("span");
    filled.style.width = (100 * weight).toFixed(1) + "%";
    bar.append(filled);
    made.append(bar);
    return made;
  }

  function cell(tag, label, text) {
    const made = document.createElement(tag);
    if (label !== "") made.dataset.label = label;
    made.textContent = text;
    return made;
  }

  bf.panel_fault = { open };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
