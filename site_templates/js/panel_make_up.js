/* The section "Make-up": weigh-out for the batch at hand, by the way that is chosen, and what was
 * really taken. Words and numbers come from `weighed_batch` and `make_up_words`. */
(function (bf) {
  "use strict";

  const { numberOf } = bf.panel_state;

  const UNREAD = "What cannot be read does not count until it is put right.";

  /** @param {object} data the page's data block
   * @returns {Section | null} */
  function open(data) {
    const root = document.querySelector("[data-make-up]");
    if (root === null) return null;
    const part = (row, name) => row.querySelector('[data-part="' + name + '"]');
    const view = {
      data,
      root,
      route: document.getElementById("input-route"),
      rows: Array.from(root.querySelectorAll("[data-portion]"), (row, at) => ({
        row,
        part: (/** @type {string} */ name) => part(row, name),
        amount: row.querySelector('[data-value="amount"]'),
        form: document.getElementById("input-form-" + at),
        field: document.getElementById("input-weighed-" + at),
        drawn: null, // the part whose name and hazards stand in the row
        factor: NaN, // of the unit in which it was last read off
      })),
      water: root.querySelector("[data-water]"),
      waterField: document.getElementById("input-weighed-water"),
      batch: null,
      conditions: "", // to which `standing` belongs
      standing: null,
      lines: [],
    };
    const section = root.closest("section");
    for (const place of section.querySelectorAll("[data-opens]")) place.hidden = false;
    listen(view);
    bf.panel_copy.open(root.querySelector("[data-make-up-copy]"), () => view.lines);
    return { name: "make_up", late: false, answer: (situation) => answer(view, situation) };
  }

  /** What was typed for one reagent must not count for another, nor in another unit. These
   * listeners come before those of `panel_inputs`, which then read what is left. */
  function listen(view) {
    const fields = [...view.rows.map((row) => row.field), view.waterField];
    if (view.route !== null) {
      view.route.addEventListener("change", () => {
        for (const { form } of view.rows) form.value = "0";
        empty(fields);
      });
    }
    for (const { form, field } of view.rows) form.addEventListener("change", () => empty([field]));
    for (const name of ["balance", "cylinder"]) {
      document.getElementById("input-" + name).addEventListener("change", () => convert(view));
    }
    const back = view.root.querySelector("[data-make-up-back]");
    back.disabled = false;
    back.addEventListener("click", () => {
      if (view.route !== null) view.route.value = "0";
      for (const { form } of view.rows) form.value = "0";
      empty(fields);
      // Something has to tell the page, even where nothing was typed.
      view.waterField.dispatchEvent(new Event("input", { bubbles: true }));
      document.getElementById("input-batch").focus();
    });
  }

  function empty(fields) {
    for (const field of fields) {
      if (field.value === "") continue;
      field.value = "";
      field.dispatchEvent(new Event("input", { bubbles: true }));
    }
  }

  /** Write what was typed in the unit of another balance or cylinder. */
  function convert(view) {
    if (view.batch === null) return;
    const step = (name) =>
      Number(document.getElementById("input-" + name).selectedOptions[0].dataset.factor);
    const values = { balance: step("balance"), cylinder: step("cylinder") };
    view.batch.planned.parts.forEach((part, at) => {
      const row = view.rows[at];
      const { factor } = bf.weighed_batch.unitOf(part, values);
      const number = numberOf(row.field.value);
      if (factor === row.factor || Number.isNaN(number)) return;
      row.field.value = String(Number(((number * row.factor) / factor).toPrecision(12)));
      row.factor = factor;
    });
  }

  /** @param {object} view @param {Situation} situation @returns {Outcome} */
  function answer(view, situation) {
    const { data, subject, values, temperature, faults } = situation;
    const words = bf.make_up_words;
    const batch = bf.weighed_batch.batchOf(data, subject, situation);
    const made = view.root.querySelector("[data-made]");
    const own = [...view.rows.map((_, at) => "weighed-" + at), "weighed-water"];
    const faulty = own.some((name) => faults.has(name));
    const rows = words.rowsOf(batch, subject, values, data);
    view.batch = batch;
    view.rows.forEach((row, at) => showRow(view, row, at, batch, rows[at], values));
    const water = showWater(view, batch, situation);
    showWay(view, batch);
    made.classList.toggle("stale", faulty);
    const at = words.degrees(temperature, situation.texts.get("temperature-unit") || "C");
    const standing = standingUnder(view, situation);
    const outlook = words.outlookOf(batch, subject, temperature, values, standing);
    if (faulty) write(view.root.querySelector("[data-going-by]"), UNREAD);
    else showMade(view, batch, outlook, at);
    showList(document.querySelector("[data-order]"), words.orderWords(batch.planned));
    showAdvice(situation, standing.advice);
    view.lines = linesOf(view, batch, rows, water, words.outlookWords(outlook, at));
    return { lines: view.lines, facts: { batch: water, made: words.madeWords(batch) } };
  }

  /** What stands while only the batch changes is worked out once. */
  function standingUnder(view, { subject, temperature, values }) {
    const conditions = temperature + " K, " + values.strength;
    if (view.conditions !== conditions) {
      view.conditions = conditions;
      view.standing = bf.make_up_words.standingOf(subject, temperature);
    }
    return view.standing;
  }

  function showAdvice({ subject, texts }, advice) {
    const tolerance = subject.expected === null ? null : subject.expected.tolerance;
    const lines = bf.make_up_words.adjustmentWords(
      advice, tolerance, subject.additions.length > 0, texts.get("temperature-unit") || "C");
    showList(document.querySelector("[data-advice]"), lines.map((line) => ["", line]));
  }

  function showRow(view, row, at, batch, words, values) {
    row.row.hidden = words === undefined;
    if (words === undefined) return;
    const part = batch.planned.parts[at];
    if (row.drawn !== batch.choices[at][0].key + " " + words.key) {
      row.drawn = batch.choices[at][0].key + " " + words.key;
      nameRow(view, row, part, batch.choices[at]);
    }
    write(row.part("says"), words.says);
    write(row.amount, words.amount);
    write(row.part("out"), words.out);
    write(row.part("rounding"), words.rounding);
    row.part("outCell").dataset.label = part.added.volume === null ? "Weigh out" : "Measure out";
    write(row.part("unit"), words.unit);
    write(row.part("warning"), words.warning);
    row.part("warning").hidden = words.warning === "";
    row.factor = bf.weighed_batch.unitOf(part, values).factor;
    const wanted = part.amount * bf.recipes.measureOf(part);
    write(row.part("off"), bf.make_up_words.offWords(batch.taken.get(at), wanted));
  }

  /** Write a reagent's name and forms into its row. */
  function nameRow(view, row, part, choices) {
    const about = view.data.shelf.reagents[part.key];
    const name = row.part("name");
    write(name, part.label);
    name.setAttribute("href", "../reagents.html#reagent-" + part.key);
    const codes = about.hazards.length > 0 ? about.hazards.join(", ") : "no hazard assigned";
    const details = [about.formula, about.grade, codes].filter((text) => text !== "");
    write(row.part("formula"), details.join(", "));
    write(row.part("asked"), "Really taken of " + part.label);
    row.part("forms").hidden = choices.length < 2;
    Array.from(row.form.options).forEach((option, at) => {
      write(option, at < choices.length ? choices[at].label : "");
      option.hidden = at >= choices.length;
      option.disabled = at >= choices.length;
    });
  }

  /** @returns {string} the size of the batch, with its unit */
  function showWater(view, batch, { data, subject, values }) {
    const { mass, volume } = bf.formatting;
    const weighed = data.batch.quantity === "mass";
    // A hydrate of another way brings other water along.
    const kilograms = batch.planned.water;
    const cubicMetres = data.batch.amount * batch.factor;
    const amount = weighed ? mass(kilograms) : volume(cubicMetres);
    const part = (name) => view.water.querySelector('[data-part="' + name + '"]');
    write(view.water.querySelector("[data-value]"), amount);
    write(part("out"), amount);
    const unit = document.getElementById("input-batch-unit").selectedOptions[0];
    write(part("unit"), unit.textContent.trim());
    write(part("off"), bf.make_up_words.offWords(batch.water ?? undefined, kilograms));
    return weighed ? mass(subject.recipe.water * batch.factor) + " of water" : amount;
  }

  /** What is to be minded about the way that is chosen. */
  function showWay(view, batch) {
    const { shelf } = view.data;
    const told = bf.make_up_words.differenceWords(batch.differences, shelf.ions);
    write(view.root.querySelector("[data-difference]"), told);
    const list = document.querySelector("[data-handling]");
    if (list === null) return;
    const recipe = new Set(view.data.subject.recipe.parts.map((part) => part.key));
    const foreign = batch.planned.parts.some((part) => !recipe.has(part.key));
    document.querySelector("[data-other]").hidden = !foreign;
    const rows = batch.planned.parts.map((part) => {
      return [part.label, bf.make_up_words.handlingWords(part, shelf)];
    });
    showList(list, rows.filter(([, words]) => words !== ""));
  }

  function showMade(view, batch, outlook, at) {
    const words = bf.make_up_words;
    const place = (name) => view.root.querySelector("[data-" + name + "]");
    const told = words.outlookWords(outlook, at);
    const state = batch.own ? "recipe" : told.state;
    place("made").dataset.state = state;
    write(place("mark"), batch.own ? "○" : "●");
    write(place("going-by"), words.goingBy(batch));
    place("outlook").hidden = batch.own;
    place("make-up-back").hidden = batch.own;
    write(place("outlook-reading"), told.reading);
    write(place("outlook-than"), told.than);
    write(place("outlook-verdict"), told.verdict);
    write(place("outlook-facts"), words.factWords(outlook));
    write(place("rounding"), words.roundingWords(outlook));
  }

  function linesOf(view, batch, rows, water, told) {
    const taken = rows.map(({ label, out, unit }, at) => {
      const text = view.rows[at].field.value.trim();
      const really = batch.taken.has(at) ? " (taken: " + text + " " + unit + ")" : "";
      return label + ": " + out + really;
    });
    const unit = view.water.querySelector('[data-part="unit"]').textContent;
    const made = batch.water === null ? ""
      : " (taken: " + view.waterField.value.trim() + " " + unit + ")";
    return [
      document.title,
      "make-up of " + water,
      ...taken,
      "water: " + view.water.querySelector('[data-part="out"]').textContent + made,
      bf.make_up_words.goingBy(batch),
      "as made it should read " + told.reading,
    ];
  }

  /** Fill a list, if it says anything new. @param {HTMLElement} list
   * @param {[string, string][]} rows */
  function showList(list, rows) {
    const said = JSON.stringify(rows);
    if (list.dataset.said === said) return;
    list.dataset.said = said;
    list.replaceChildren(...rows.map(([label, words]) => {
      const item = document.createElement("li");
      if (label === "") {
        item.textContent = words;
      } else {
        const name = document.createElement("strong");
        name.textContent = label;
        item.append(name, ": " + words);
      }
      return item;
    }));
  }

  function write(element, text) {
    if (element.textContent !== text) element.textContent = text;
  }

  bf.panel_make_up = { open };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
