/* What a page answers to its inputs: the results behind them, and the words that stand on the page.
 * Pure but for `answersOn` and `write`, which find and fill the places on the page.
 *
 * @typedef {{values: Record<string, number>}} Conditions  of `panel_inputs`
 * @typedef {{place: string, element: HTMLElement}} Answer
 */
(function (bf) {
  "use strict";

  const { ZERO_CELSIUS } = bf.water;

  const MILLI = 1e3;
  const NOTHING = "—";
  const STATES = ["solved", "out-of-range", "beyond-model", "no-solution"];
  const STATE_WORDS = [
    "within the range of every constant and of the activity model",
    "a constant is used outside its source's temperatures",
    "the ionic strength is above what the activity model is trusted to",
    "the equations have no solution here",
  ];

  /** An object whose properties are worked out when they are first asked for.
   * @param {Record<string, (self: object) => unknown>} makers
   * @returns {object}
   */
  function lazily(makers) {
    const result = {};
    for (const [name, make] of Object.entries(makers)) {
      Object.defineProperty(result, name, {
        configurable: true,
        enumerable: true,
        get() {
          const value = make(result);
          Object.defineProperty(result, name, { value, enumerable: true });
          return value;
        },
      });
    }
    return result;
  }

  /** A sheet's results under conditions, each worked out when a number or a figure needs it.
   * Mirrors `sheet_of` in sheets.py.
   * @param {object} data the page's data block
   * @param {Record<string, number>} values
   * @returns {Sheet}
   */
  function sheetUnder(data, values) {
    const { sheets, subjects } = bf;
    const temperature = values.temperature + ZERO_CELSIUS;
    const subject = subjects.subjectOf(data.subject, values.strength);
    return lazily({
      subject: () => subject,
      reference: () => subjects.stateAt(subject, temperature),
      drift: () => sheets.driftOf(subject),
      sweep: () => sheets.sweepOf(subject, temperature),
      sides: () => sheets.sidesOf(subject, temperature),
      surface: (self) => sheets.surfaceOf(subject, self.sides),
    });
  }

  /** A family's results under conditions.
   * @param {object} data the page's data block
   * @param {Record<string, number>} values
   * @returns {Exploration}
   */
  function explorationUnder(data, values) {
    const temperature = values.temperature + ZERO_CELSIUS;
    const { total, ionic_strength: strength } = values;
    return bf.explorations.explorationOf(data.family, temperature, total, strength);
  }

  /** The words for every place of a sheet.
   * @param {object} data
   * @param {Record<string, number>} values
   * @param {Sheet} sheet
   * @returns {Map<string, string>} by place, see `placeOf`
   */
  function sheetTexts(data, values, sheet) {
    const { fixed, plain, significant, signed } = bf.formatting;
    const state = sheet.reference;
    const { mixture } = sheet.subject;
    const constants = bf.temperature.constantsAt(mixture.families, state.temperature);
    const estimate = bf.buffering.hendersonHasselbalch(mixture, constants.pK);
    const texts = new Map([
      ["temperature", plain(values.temperature)],
      ["strength", plain(values.strength)],
      ["pH", fixed(state.pH, 2)],
      ["ionic_strength", significant(state.ionic_strength)],
      ["capacity", significant(state.capacity * MILLI)],
      ["estimate", Number.isNaN(estimate.pH) ? "none" : fixed(estimate.pH, 2)],
      ["estimate_difference", signed(state.pH - estimate.pH, 2)],
      ["status", STATE_WORDS[state.status]],
    ]);
    addReserves(texts, sheet);
    addSpecies(texts, mixture, state.forms);
    addConstants(texts, mixture.families, constants.pK);
    return texts;
  }

  /** What each titrant may add until the limit of use, and what that does to plain water. */
  function addReserves(texts, { subject, reference }) {
    const { significant, fixed, mass, volume } = bf.formatting;
    const { mixture, model, interactions, use_pH: limits } = subject;
    const { temperature } = reference;
    for (const direction of ["downward", "upward"]) {
      const added = subject.additions.find((each) => each.direction === direction);
      if (added === undefined) continue;
      const limit = direction === "upward" ? limits.high : limits.low;
      const reached = bf.titration.amountToReach(
        mixture, added, limit, temperature, model, interactions);
      const reserve = bf.sheets.practical(reached, added.water);
      const name = "reserve_" + direction;
      if (!(reserve > 0)) {
        for (const place of [name, name + "_volume", "contrast_" + direction]) {
          texts.set(place, NOTHING);
        }
        continue;
      }
      const water = { ...subject, mixture: bf.composition.pureWater(mixture) };
      const after = bf.subjects.stateAt(water, temperature, 1, [[added, reserve]]);
      texts.set(name, significant(reserve * MILLI));
      texts.set(name + "_volume", added.volume === null
        ? mass(reserve * added.mass, 3) : volume(reserve * added.volume, 3));
      texts.set("contrast_" + direction, fixed(after.pH, 2));
    }
  }

  function addSpecies(texts, mixture, forms) {
    const { percent, significant } = bf.formatting;
    const put = (name, molality, fraction) => {
      texts.set("species " + name + " molality", significant(molality));
      texts.set("species " + name + " fraction", percent(fraction));
    };
    put("H+", forms.hydrogen, NaN);
    put("OH-", forms.hydroxide, NaN);
    mixture.families.forEach((family, f) => {
      family.species.forEach((form, j) => {
        put(form.name, forms.families[f][j], forms.fractions[f][j]);
      });
    });
    mixture.ions.forEach((ion, at) => put(ion.name, mixture.molalities[at], NaN));
  }

  function addConstants(texts, families, pK) {
    families.forEach((family, f) => {
      pK[f].forEach((value, step) => {
        texts.set("step " + family.key + " " + step + " pK", bf.formatting.fixed(value, 3));
      });
    });
  }

  /** The words for every place of an explorer.
   * @param {object} data
   * @param {Record<string, number>} values
   * @returns {Map<string, string>}
   */
  function explorerTexts(data, values) {
    const { plain } = bf.formatting;
    const texts = new Map([
      ["temperature", plain(values.temperature)],
      ["total", plain(values.total)],
      ["ionic_strength", plain(values.ionic_strength)],
    ]);
    const families = [data.family];
    const constants = bf.temperature.constantsAt(families, values.temperature + ZERO_CELSIUS);
    addConstants(texts, families, constants.pK);
    return texts;
  }

  /** Where a page shows answers.
   * @param {ParentNode} root
   * @returns {Answer[]}
   */
  function answersOn(root) {
    const elements = Array.from(root.querySelectorAll("[data-value]"));
    return elements.map((element) => ({ place: placeOf(element), element }));
  }

  /** The name of a place: that of its value, after that of the row it stands in. */
  function placeOf(element) {
    const row = element.closest("[data-species], [data-step]");
    const name = element.dataset.value;
    if (row === null) return name;
    if (row.dataset.species !== undefined) return "species " + row.dataset.species + " " + name;
    return "step " + row.dataset.family + " " + row.dataset.step + " " + name;
  }

  /** Put words where they belong; what has not changed is left alone.
   * @param {Answer[]} answers
   * @param {Map<string, string>} texts
   */
  function write(answers, texts) {
    for (const { place, element } of answers) {
      const text = texts.get(place);
      if (text === undefined || text === element.textContent) continue;
      element.textContent = text;
      if (place !== "status") continue;
      const marked = element.closest("[data-state]");
      if (marked !== null) marked.dataset.state = STATES[STATE_WORDS.indexOf(text)];
    }
  }

  bf.panel_answers = {
    sheetUnder, explorationUnder, sheetTexts, explorerTexts, answersOn, write,
  };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
