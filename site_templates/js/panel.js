/* A live page from its start on: it checks its engine, opens its inputs, and answers. With the
 * other panel_*.js files, the only script that touches the document. */
(function (bf) {
  "use strict";

  /** Bring the page to life, or say why it stays as it is. */
  function start() {
    const block = document.getElementById("page-data");
    if (block === null) return;
    const data = JSON.parse(block.textContent);
    const outcome = bf.panel_checks.runChecks(data);
    report(outcome);
    if (outcome.failed > 0) document.body.classList.add("withheld");
    else live(data);
  }

  /** Say in the page what became of the checks. @param {Outcome} outcome */
  function report({ count, failed }) {
    const words = failed === 0
      ? "This page re-solved " + count + " cases that came with it; all agree. Answers are live."
      : "This page re-solved " + count + " cases that came with it; " + failed + " do not agree. " +
        "Live answers are withheld. The tables and pictures stand: they were made with the page.";
    for (const place of document.querySelectorAll("[data-checks]")) place.textContent = words;
  }

  /** @typedef {object} Page
   * @property {object} data of the page's data block
   * @property {Map<string, Input>} inputs
   * @property {Map<string, string>} standards the page's own settings
   * @property {Answer[]} answers
   * @property {HTMLElement[]} living elements whose words are out of date with a faulty input
   * @property {Stage} stage
   * @property {string} drawn conditions that the figures show, as words
   * @property {Field | null} field the sections of a sheet that answer a reading
   */

  /** Open the inputs of a page whose engine can be trusted. @param {object} data */
  function live(data) {
    const makers =
      data.kind === "sheet" ? bf.plots.SHEET_FIGURES : bf.explorer_plots.EXPLORER_FIGURES;
    const inputs = bf.panel_inputs.inputsOf(document);
    const assets = document.body.dataset.assets;
    const page = {
      data,
      inputs,
      standards: bf.panel_inputs.standards(inputs),
      answers: bf.panel_answers.answersOn(document),
      living: Array.from(document.querySelectorAll("[data-live]")),
      stage: bf.panel_figures.stageOf(document, data.figures, makers, assets),
      drawn: "",
      field: data.kind === "sheet" ? bf.panel_field.fieldOf(data) : null,
    };
    page.drawn = conditionsOf(page.inputs, page.standards);
    bf.panel_inputs.open(inputs, () => change(page));
    openDefaults(page);
    addEventListener("hashchange", () => readAddress(page));
    for (const form of document.querySelectorAll("form")) {
      form.addEventListener("submit", (event) => event.preventDefault());
    }
    addEventListener("beforeprint", () => toPaper(page));
    addEventListener("afterprint", () => fromPaper(page));
    bf.panel_figures.open(page.stage, () => remarks(page));
    document.body.classList.add("live");
    readAddress(page);
  }

  /** Do as the address says. One that names a place on the page says nothing of conditions; the
   * page goes there and then keeps its conditions in the address as before. */
  function readAddress(page) {
    const settings = bf.panel_state.settingsOf(location.hash);
    const names = Array.from(settings.keys());
    if (location.hash !== "" && !names.some((name) => page.inputs.has(name))) {
      change(page);
      return;
    }
    bf.panel_inputs.set(page.inputs, settings);
    answer(page);
  }

  function openDefaults(page) {
    for (const button of document.querySelectorAll('[data-action="defaults"]')) {
      button.disabled = false;
      button.addEventListener("click", () => {
        bf.panel_inputs.set(page.inputs, new Map());
        change(page);
      });
    }
  }

  /** Answer a change that the reader made, and keep it in the address. */
  function change(page) {
    const { faulty, texts } = answer(page);
    if (faulty) return;
    const hash = bf.panel_state.hashOf(texts, page.standards);
    const place = !location.hash.includes("=");
    if (hash === location.hash || (hash === "" && place)) return;
    history.replaceState(null, "", hash === "" ? location.pathname + location.search : hash);
  }

  /** Work out and show what the inputs ask for: numbers now, figures as frames allow.
   * @param {Page} page
   * @returns {Reading}
   */
  function answer(page) {
    const reading = bf.panel_inputs.read(page.inputs);
    for (const element of page.living) element.classList.toggle("stale", reading.faulty);
    if (reading.faulty) {
      if (page.field !== null) bf.panel_field.withhold(page.field);
      return reading;
    }
    const results = show(page, reading.values);
    if (page.field !== null) bf.panel_field.answer(page.field, reading, results.subject);
    const conditions = conditionsOf(page.inputs, reading.texts);
    if (conditions !== page.drawn) {
      page.drawn = conditions;
      bf.panel_figures.follow(page.stage, results);
    }
    return reading;
  }

  /** Write the numbers that belong to conditions.
   * @returns {object} the results, for figures
   */
  function show({ data, answers }, values) {
    const { sheetUnder, sheetTexts, explorationUnder, explorerTexts, write } = bf.panel_answers;
    if (data.kind === "sheet") {
      const sheet = sheetUnder(data, values);
      write(answers, sheetTexts(data, values, sheet));
      return sheet;
    }
    write(answers, explorerTexts(data, values));
    return explorationUnder(data, values);
  }

  /** What figures depend on: not the size of a batch, nor what single sections ask for. */
  function conditionsOf(inputs, texts) {
    const words = [];
    for (const [name, text] of texts) {
      if (concernsFigures(inputs.get(name))) words.push(name + " " + text);
    }
    return words.join(", ");
  }

  function concernsFigures({ name, group }) {
    return group === "" && !name.startsWith("batch");
  }

  /** What holds for numbers that are taken away, a line each. */
  function remarks({ data, inputs, drawn }) {
    const lines = [document.title, "conditions: " + drawn];
    for (const input of inputs.values()) {
      const label = document.querySelector('label[for="' + input.field.id + '"]');
      if (label !== null && concernsFigures(input)) {
        lines.push(input.name + " is: " + label.textContent.trim().replace(/\s+/g, " "));
      }
    }
    const model = data.kind === "sheet" ? data.subject.model : data.model;
    lines.push("activity model: " + bf.activity.MODELS[model].label);
    lines.push("pH on the activity scale (IUPAC); molalities per kg of water");
    return lines;
  }

  /** Paper shows the definition's own conditions, whatever the inputs say. */
  function toPaper(page) {
    page.kept = new Map();
    for (const input of page.inputs.values()) page.kept.set(input.name, input.field.value);
    bf.panel_inputs.set(page.inputs, new Map());
    for (const element of page.living) element.classList.remove("stale");
    show(page, bf.panel_inputs.read(page.inputs).values);
    bf.panel_figures.toPaper(page.stage);
  }

  function fromPaper(page) {
    bf.panel_inputs.set(page.inputs, page.kept);
    bf.panel_figures.fromPaper(page.stage);
    answer(page);
  }

  start();
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
