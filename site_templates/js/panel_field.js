/* The sections of a sheet that answer a reading: what they are all told, and who is asked when.
 *
 * A section answers at once; one that is `late` answers with the next frame, so that numbers come
 * first. What it found goes to those after it, and into the log.
 *
 * @typedef {object} Situation
 * @property {object} data the page's data block
 * @property {Subject} subject at the strength that is set
 * @property {number} temperature K, of the sample
 * @property {number} reading as the meter shows it; NaN where none is given, or it is faulty
 * @property {number | null} compensation K, for which the meter's slope is set
 * @property {number} pH what the reading stands for
 * @property {Recipe | null} recipe as it was weighed; null: as the formulation says
 * @property {Record<string, number>} values of all inputs
 * @property {Map<string, string>} texts
 * @property {Set<string>} faults
 *
 * @typedef {{lines: string[], facts: Record<string, string>}} Outcome  lines to take along; facts
 *   by the column that they have in a log
 * @typedef {object} Section
 * @property {string} name
 * @property {boolean} late
 * @property {(situation: Situation, outcomes: Record<string, Outcome>) => Outcome} answer
 * @property {(() => void) | undefined} withhold takes back what somebody might act on
 *
 * @typedef {{data: object, sections: Section[], outcomes: Record<string, Outcome>,
 *   frame: number}} Field
 */
(function (bf) {
  "use strict";

  const { ZERO_CELSIUS } = bf.water;

  /** The sections that a page has, in the order in which they are asked.
   * @param {object} data the page's data block
   * @returns {Field}
   */
  function fieldOf(data) {
    const field = { data, sections: [], outcomes: {}, frame: 0 };
    const names = [
      "panel_make_up", "panel_judging", "panel_dosing", "panel_fault", "panel_titration",
      "panel_log",
    ];
    for (const name of names) {
      const section = bf[name].open(data, field.outcomes);
      if (section !== null) field.sections.push(section);
    }
    return field;
  }

  /** Let every section answer.
   * @param {Field} field
   * @param {Reading} reading of the inputs
   * @param {Subject} subject
   */
  function answer(field, reading, subject) {
    const situation = situationOf(field.data, reading, subject);
    ask(field, situation, false);
    cancelAnimationFrame(field.frame);
    field.frame = requestAnimationFrame(() => ask(field, situation, true));
  }

  /** Take answers back: a condition of the page cannot be used, so that they would mislead.
   * @param {Field} field
   */
  function withhold(field) {
    cancelAnimationFrame(field.frame);
    for (const section of field.sections) {
      if (section.withhold !== undefined) section.withhold();
    }
  }

  function ask(field, situation, late) {
    for (const section of field.sections) {
      if (section.late !== late) continue;
      field.outcomes[section.name] = section.answer(situation, field.outcomes);
    }
  }

  /** @param {object} data @param {Reading} reading @param {Subject} subject
   * @returns {Situation} */
  function situationOf(data, reading, subject) {
    const { values, texts, faults } = reading;
    const temperature = values.temperature + ZERO_CELSIUS;
    const compensation = Number.isNaN(values.compensation)
      ? null : values.compensation + ZERO_CELSIUS;
    const pH = bf.measurements.meant(values.reading, temperature, compensation);
    return {
      data, subject, temperature, reading: values.reading, compensation, pH,
      recipe: bf.weighed_batch.recipeOf(data, subject, reading), values, texts, faults,
    };
  }

  bf.panel_field = { fieldOf, answer, withhold };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
