/* Whether the page's engine still reckons as the build did: the cases that the build worked out
 * (engine_data.py) are worked out again. Pure.
 *
 * @typedef {{count: number, failed: number}} Outcome
 */
(function (bf) {
  "use strict";

  const SAME = 1e-9; // in pH, and relative in everything else

  /** Work out every case of a page again.
   * @param {object} data the page's data block
   * @returns {Outcome}
   */
  function runChecks(data) {
    const agrees = data.kind === "sheet" ? sheetAgrees(data) : explorerAgrees(data);
    let failed = 0;
    for (const expected of data.checks) {
      if (!passes(agrees, expected)) failed += 1;
    }
    const count = data.checks.length;
    if (data.kind !== "sheet") return { count, failed };
    const field = bf.field_checks.runFieldChecks(bf.subjects.subjectOf(data.subject), data.field);
    return { count: count + field.count, failed: failed + field.failed };
  }

  /** A case that cannot even be worked out has failed. */
  function passes(agrees, expected) {
    try {
      return agrees(expected);
    } catch {
      return false;
    }
  }

  function sheetAgrees(data) {
    const subject = bf.subjects.subjectOf(data.subject);
    return (expected) => {
      const { temperature, strength, titrant, amount } = expected;
      const added = titrant === null ? [] : [[subject.additions[titrant], amount]];
      const found = bf.subjects.stateAt(subject, temperature, strength, added);
      return (
        Math.abs(found.pH - expected.pH) <= SAME &&
        near(found.ionic_strength, expected.ionic_strength) &&
        near(found.capacity, expected.capacity) &&
        near(found.forms.fractions, expected.fractions)
      );
    };
  }

  function explorerAgrees(data) {
    const families = [data.family];
    const model = bf.activity.MODELS[data.model];
    return (expected) => {
      const mixture = { families, totals: [expected.total], ions: [], molalities: [] };
      const constants = bf.temperature.constantsAt(families, expected.temperature);
      const strength = expected.ionic_strength;
      const found = bf.buffering.sweep(mixture, constants, model, expected.pH, [], strength);
      return (
        near(found.capacity, expected.capacity) &&
        near(found.forms.hydroxide, expected.hydroxide) &&
        near(found.forms.fractions[0], expected.fractions)
      );
    };
  }

  /** Say whether numbers, or lists of them of any depth, agree.
   * @param {number | ArrayLike<number>} found
   * @param {number | ArrayLike<number>} expected
   * @returns {boolean}
   */
  function near(found, expected) {
    if (typeof expected === "number") {
      return Math.abs(found - expected) <= SAME * Math.abs(expected);
    }
    const items = Array.from(expected);
    return found.length === items.length && items.every((each, at) => near(found[at], each));
  }

  bf.panel_checks = { runChecks };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
