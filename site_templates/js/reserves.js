/** How much acid or base a batch takes until the limit of its use. The twin of reserves.py.
 *
 * @typedef {{direction: string, titrant: number, right: number, before: number,
 *   after: number}} Reserve  mol of titrant per kg of water until the limit of use
 */
(function (bf) {
  "use strict";

  const { amountToReach } = bf.titration;
  const { solvedAt } = bf.subjects;

  const MOST_GROWTH = 1; // kg of the titrant's water per kg of the batch's
  const DIRECTIONS = ["downward", "upward"];

  /** The reserve on both sides: made rightly, as a batch is now, and after a correction.
   * Mirrors `reserves_of`.
   * @param {Subject} subject
   * @param {number} temperature K
   * @param {Mixture} now
   * @param {Mixture | null} [after]
   * @returns {Reserve[]}
   */
  function reservesOf(subject, temperature, now, after = null) {
    const found = [];
    for (const direction of DIRECTIONS) {
      const titrant = subject.additions.findIndex((each) => each.direction === direction);
      if (titrant < 0) continue;
      found.push({
        direction,
        titrant,
        right: toLimit(subject, temperature, titrant, subject.mixture),
        before: toLimit(subject, temperature, titrant, now),
        after: after === null ? NaN : toLimit(subject, temperature, titrant, after),
      });
    }
    return found;
  }

  /** The amount until the limit of use: 0 beyond it, NaN: not before the batch has doubled.
   * Mirrors `_to_limit`.
   * @param {Subject} subject
   * @param {number} temperature K
   * @param {number} titrant
   * @param {Mixture} mixture
   * @returns {number}
   */
  function toLimit(subject, temperature, titrant, mixture) {
    const { model, interactions, use_pH: use } = subject;
    const added = subject.additions[titrant];
    const upward = added.direction === "upward";
    const { pH } = solvedAt(subject, temperature, mixture);
    if (upward ? pH >= use.high : pH <= use.low) return 0;
    const limit = upward ? use.high : use.low;
    const reached = amountToReach(mixture, added, limit, temperature, model, interactions);
    return reached * added.water <= MOST_GROWTH ? reached : NaN;
  }

  bf.reserves = { MOST_GROWTH, reservesOf, toLimit };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
