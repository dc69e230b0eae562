/* The section that keeps readings: it shows those of its formulation, and hands out all. */
(function (bf) {
  "use strict";

  const { csvOf, entryOf, tabbed, textOf } = bf.panel_log_entries;

  const SHOWN = 50; // entries in the table; the files have all
  const MISSING = "There is no reading to keep yet. Type temperature and reading first.";

  /** @param {object} data @param {Record<string, Outcome>} outcomes of all sections, as they are
   * @returns {Section | null} */
  function open(data, outcomes) {
    const root = document.querySelector("[data-log=sheet]");
    if (root === null) return null;
    const part = (name) => root.querySelector('[data-log="' + name + '"]');
    const { title, key, revision, fingerprint } = data;
    const view = {
      sheet: { title, key, revision, fingerprint }, outcomes, situation: null,
      store: bf.panel_log_store.opened(), deleted: null,
      note: root.querySelector("#log-note"), initials: root.querySelector("#log-initials"),
      told: part("told"), undo: part("undo"), trouble: part("trouble"), table: part("table"),
      caption: part("caption"), rows: part("rows"), none: part("none"), files: part("files"),
      own: root.querySelector('[data-action="log-own"]'),
      all: root.querySelector('[data-action="log-all"]'),
    };
    part("live").hidden = false;
    listen(view, root);
    show(view);
    return {
      name: "log",
      late: true,
      answer: (situation) => answer(view, situation),
      withhold() {
        view.situation = null;
      },
    };
  }

  function answer(view, situation) {
    view.situation = situation;
    return { lines: [], facts: {} };
  }

  function listen(view, root) {
    for (const field of [view.note, view.initials]) field.disabled = false;
    for (const button of document.querySelectorAll('[data-action="keep"]')) {
      button.disabled = false;
      button.addEventListener("click", () => keep(view));
    }
    view.undo.disabled = false;
    view.undo.addEventListener("click", () => undo(view));
    for (const [button, list, name] of [
      [view.own, () => ownOf(view), "readings.csv"],
      [view.all, () => bf.panel_log_store.entries(view.store), "all-readings.csv"],
    ]) {
      button.disabled = false;
      // The mark in front tells spreadsheets that the text is UTF-8.
      button.addEventListener("click", () => bf.panel_tools.save(
        new Blob(["\ufeff", csvOf(list())], { type: "text/csv" }), name));
    }
    bf.panel_copy.open(root.querySelector('[data-action="copy-log"]'), () => tabbed(ownOf(view)));
    bf.panel_log_store.watch(() => show(view));
  }

  function ownOf(view) {
    const all = bf.panel_log_store.entries(view.store);
    return all.filter((entry) => entry.key === view.sheet.key);
  }

  /** Keep what the page shows, once its late answers are there. */
  function keep(view) {
    requestAnimationFrame(() => requestAnimationFrame(() => {
      const { situation } = view;
      const given = situation !== null && !Number.isNaN(situation.reading);
      if (given) {
        const words = { note: view.note.value, initials: view.initials.value };
        const entry = entryOf(view.sheet, situation, view.outcomes, words, new Date());
        bf.panel_log_store.keep(view.store, entry);
        view.note.value = "";
        tell(view, "Kept: pH " + entry.reading + " at " + entry.temperature + " °C, " +
          clock(entry.time) + ".");
      } else {
        tell(view, MISSING);
      }
      show(view);
    }));
  }

  function undo(view) {
    if (view.deleted === null) return;
    bf.panel_log_store.restore(view.store, view.deleted);
    tell(view, "It is back.");
    show(view);
  }

  function take(view, entry) {
    const taken = bf.panel_log_store.remove(view.store, entry.id);
    const words = taken === null
      ? "It could not be deleted." : "Deleted: the reading of " + clock(entry.time) + ".";
    tell(view, words, taken);
    show(view);
    if (taken !== null) view.undo.focus();
  }

  /** Say what was done, wherever a button for keeping stands. */
  function tell(view, words, deleted = null) {
    view.deleted = deleted;
    view.undo.hidden = deleted === null;
    view.told.textContent = words;
    for (const place of document.querySelectorAll("[data-kept]")) place.textContent = words;
  }

  function show(view) {
    const all = bf.panel_log_store.entries(view.store);
    const own = all.filter((entry) => entry.key === view.sheet.key);
    view.trouble.textContent = view.store.trouble;
    view.none.hidden = own.length > 0;
    view.table.hidden = own.length === 0;
    view.files.hidden = all.length === 0;
    view.own.textContent = "Download CSV of this formulation (" + own.length + ")";
    view.all.textContent = "Download CSV of all formulations (" + all.length + ")";
    view.caption.textContent = own.length + (own.length === 1 ? " reading" : " readings") +
      " of this formulation, newest first" +
      (own.length > SHOWN ? "; the table shows " + SHOWN + ", the file has all" : "");
    view.rows.replaceChildren(...own.slice(0, SHOWN).map((entry) => rowOf(view, entry)));
  }

  function rowOf(view, entry) {
    const text = (key) => textOf(entry, key);
    const row = document.createElement("tr");
    const head = document.createElement("th");
    head.scope = "row";
    head.textContent = clock(text("time"));
    const expected = text("expected") === "" ? "—"
      : text("expected") + (text("band") === "" ? "" : " ± " + text("band").replace(/^±\s*/, ""));
    const words = [text("note"), text("initials")].filter((each) => each !== "").join("; ");
    row.append(
      head,
      cell("Reading", "pH " + text("reading") + " at " + text("temperature") + " °C"),
      cell("Expected", expected),
      cell("Verdict", text("verdict") || "—"),
      cell("Likeliest fault", text("fault") || "—"),
      cell("Note", words || "—"),
      cell("", "", remover(view, entry)),
    );
    return row;
  }

  function remover(view, entry) {
    const button = document.createElement("button");
    button.type = "button";
    button.textContent = "Delete";
    button.setAttribute("aria-label", "Delete the reading of " + clock(textOf(entry, "time")));
    button.addEventListener("click", () => take(view, entry));
    return button;
  }

  function cell(label, text, child = null) {
    const made = document.createElement("td");
    made.dataset.label = label;
    made.textContent = text;
    if (child !== null) made.append(child);
    return made;
  }

  /** A stored time as people read it. */
  function clock(time) {
    return time.slice(0, 16).replace("T", " ");
  }

  bf.panel_log = { open };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
