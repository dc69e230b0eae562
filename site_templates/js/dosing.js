/** How to bring a batch back: from a reading and a volume to portions of a titrant, or a refusal.
 * The twin of dosing.py.
 *
 * @typedef {{temperature: number, pH: number, volume: number, dilution: number,
 *   recipe: Recipe | null}} Batch  K, m3; dilution: volume now over volume by the recipe
 * @typedef {{moles: number, volume: number | null, mass: number}} Amount  m3, null for a solid; kg
 * @typedef {{refusal: string, dangers: string[], titrant: number, target: number, excess: number,
 *   whole: Amount, first: Amount, rest: Amount, pH_first: number, pH_after: number,
 *   ionic_strength: [number, number], growth: number, reserves: Reserve[]}} Correction  as in
 *   dosing.py
 */
(function (bf) {
  "use strict";

  const { density } = bf.water;
  const { constantsAt } = bf.temperature;
  const { mixed } = bf.composition;
  const { sweep } = bf.buffering;
  const { amountToReach } = bf.titration;
  const { solvedAt } = bf.subjects;
  const { MOST_GROWTH, reservesOf } = bf.reserves;
  const { measured, refusalOf, targetAt } = bf.measurements;

  const MOST_EXCESS = 0.5; // mol/kg of strange acid or base; beyond it the batch is not this one
  const NOTHING_TO_DO = 0.005; // in pH: a display of hundredths shows the target
  const LEAST_CAPACITY = 5e-5; // mol/kg per pH; a few times what carbon dioxide of the air brings
  const LEAST_VOLUME = 1e-9; // m3, a microlitre
  const LEAST_MASS = 1e-6; // kg, a milligram

  const REFUSALS = {
    impossible:
      "No reading of this solution: it would have to hold so much acid or base that it " +
      "would be another one. Check the electrode, and that it stands in the right batch.",
    target: "The target lies outside the limits of use.",
    reached: "The batch is at its target. Nothing is to be added.",
    forbidden:
      "Its author says that a batch is never corrected: one that is outside its tolerance " +
      "is thrown away. Make it anew.",
    "no titrant": "The formulation names no reagent that moves the pH in this direction.",
    direction: "This reagent moves the pH away from the target. Choose another one.",
    dangers: "This reagent may set a toxic gas free from the batch. Do not add it.",
    reserve:
      "The reading lies outside the limits of use. Check the meter first. If the reading " +
      "stands, the batch has taken up more than its reserve, and a correction would not give back " +
      "what it has lost: make it anew.",
    dilute:
      "The batch buffers so little that air and glass move it more than a correction can " +
      "hold. Do not correct it.",
    never: "No amount of this reagent brings the batch to the target.",
    doubles:
      "The correction would more than double the volume. Use a stronger reagent, or make " +
      "the batch anew.",
    little:
      "So little is needed that it cannot be measured out. Dilute the reagent first, or " +
      "leave the batch as it is.",
  };

  /** What brings a batch to its target, or a refusal with a reason. Mirrors `corrected` in
   * dosing.py.
   *
   * The batch is taken to be what the recipe says, with the strong acid or base that explains the
   * reading. `share` of the amount goes in first; what it should lead to is told.
   * @param {Subject} subject
   * @param {Batch} batch
   * @param {number | null} [target] pH
   * @param {number | null} [titrant] position; null: the first that leads there
   * @param {number} [share]
   * @returns {Correction}
   */
  function corrected(subject, batch, target = null, titrant = null, share = 0.8) {
    const { temperature, pH } = batch;
    const aim = target === null ? targetAt(subject, temperature) : target;
    const chosen = titrant === null ? titrantFor(subject, pH, aim) : titrant;
    let refusal = refusalOf(subject, temperature, pH);
    if (refusal) return refused(refusal, chosen, aim);
    const found = measured(subject, temperature, pH, batch.dilution, batch.recipe);
    const dangers = dangersOf(subject, chosen);
    refusal = refusalFor(subject, batch, aim, chosen, found, dangers);
    if (refusal) {
      const reserves = reservesOf(subject, temperature, found.mixture);
      return { ...refused(refusal, chosen, aim), dangers, excess: found.excess, reserves };
    }
    return planned(subject, batch, found, aim, chosen, dangers, share);
  }

  /** Mirrors `_planned`.
   * @param {Subject} subject
   * @param {Batch} batch
   * @param {Measured} found
   * @param {number} aim pH
   * @param {number} chosen titrant
   * @param {string[]} dangers
   * @param {number} share
   * @returns {Correction}
   */
  function planned(subject, batch, found, aim, chosen, dangers, share) {
    const { model, interactions } = subject;
    const added = subject.additions[chosen];
    const kelvin = batch.temperature;
    const amount = amountToReach(found.mixture, added, aim, kelvin, model, interactions);
    const water = batch.volume * density(kelvin);
    const whole = amountOf(added, amount * water);
    const refusal = refusalOfAmount(added, amount, whole);
    const end = mixed(found.mixture, added, refusal ? 0 : amount);
    const reserves = reservesOf(subject, kelvin, found.mixture, refusal ? null : end);
    const told = { ...refused(refusal, chosen, aim), dangers, excess: found.excess, reserves };
    if (refusal) return told;
    const before = solvedAt(subject, kelvin, found.mixture);
    const halfway = solvedAt(subject, kelvin, mixed(found.mixture, added, share * amount), before);
    const after = solvedAt(subject, kelvin, end, halfway);
    return {
      ...told,
      whole,
      first: amountOf(added, share * amount * water),
      rest: amountOf(added, (1 - share) * amount * water),
      pH_first: halfway.pH,
      pH_after: after.pH,
      ionic_strength: [before.ionic_strength, after.ionic_strength],
      growth: (whole.volume || 0) / batch.volume,
    };
  }

  /** The position of the first titrant that leads from a pH to a target; −1: none does.
   * Mirrors `titrant_for`.
   * @param {Subject} subject
   * @param {number} pH
   * @param {number} target
   * @returns {number}
   */
  function titrantFor(subject, pH, target) {
    const wanted = target > pH ? "upward" : "downward";
    return subject.additions.findIndex((titrant) => titrant.direction === wanted);
  }

  /** The gases that may come off when a titrant meets a batch, with what frees them.
   * Mirrors `dangers_of`.
   * @param {Subject} subject
   * @param {number} titrant
   * @returns {string[]}
   */
  function dangersOf(subject, titrant) {
    if (titrant < 0) return [];
    const chosen = subject.additions[titrant];
    const comes = [chosen.nature, ...chosen.families];
    const found = [];
    for (const part of subject.recipe.parts) {
      if (part.key === chosen.key) continue;
      const meets = [part.nature, ...part.added.families];
      found.push(...part.releases.filter((danger) => comes.includes(partnerOf(danger))));
      found.push(...chosen.releases.filter((danger) => meets.includes(partnerOf(danger))));
    }
    return [...new Set(found)];
  }

  /** @param {string} danger @returns {string} what sets the gas free */
  function partnerOf(danger) {
    return danger.slice(danger.lastIndexOf(" with ") + 6);
  }

  /** Mirrors `_refusal`.
   * @param {Subject} subject
   * @param {Batch} batch
   * @param {number} aim pH
   * @param {number} chosen titrant
   * @param {Measured} found
   * @param {string[]} dangers
   * @returns {string}
   */
  function refusalFor(subject, batch, aim, chosen, found, dangers) {
    const { low, high } = subject.use_pH;
    if (!(Math.abs(found.excess) <= MOST_EXCESS)) return "impossible";
    if (!(low <= aim && aim <= high)) return "target";
    if (Math.abs(aim - batch.pH) < NOTHING_TO_DO) return "reached";
    if (subject.never_corrected) return "forbidden";
    if (chosen < 0) return "no titrant";
    if ((subject.additions[chosen].direction === "upward") !== aim > batch.pH) return "direction";
    if (dangers.some((danger) => !subject.accepted_dangers.includes(danger))) return "dangers";
    if (!(low <= batch.pH && batch.pH <= high)) return "reserve";
    if (bestCapacity(subject, batch.temperature, found, aim) < LEAST_CAPACITY) return "dilute";
    return "";
  }

  /** The larger of the buffer capacities where a correction begins and where it ends.
   * Mirrors `_best_capacity`.
   * @param {Subject} subject
   * @param {number} temperature K
   * @param {Measured} found
   * @param {number} aim pH
   * @returns {number} mol/kg per pH
   */
  function bestCapacity(subject, temperature, found, aim) {
    const { model, interactions } = subject;
    const constants = constantsAt(found.mixture.families, temperature);
    const { pH } = solvedAt(subject, temperature, found.mixture);
    const { capacity } = sweep(found.mixture, constants, model, [pH, aim], interactions);
    return Math.max(capacity[0], capacity[1]);
  }

  /** @param {Addition} added @param {number} amount mol/kg @param {Amount} whole
   * @returns {string} */
  function refusalOfAmount(added, amount, whole) {
    if (Number.isNaN(amount)) return "never";
    if (amount * added.water > MOST_GROWTH) return "doubles";
    const small = whole.volume !== null && whole.volume < LEAST_VOLUME;
    return whole.mass < LEAST_MASS || small ? "little" : "";
  }

  /** @param {Addition} added @param {number} moles @returns {Amount} */
  function amountOf(added, moles) {
    const volume = added.volume === null ? null : moles * added.volume;
    return { moles, volume, mass: moles * added.mass };
  }

  /** @param {string} refusal @param {number} titrant @param {number} target
   * @returns {Correction} */
  function refused(refusal, titrant, target) {
    const nothing = { moles: NaN, volume: null, mass: NaN };
    return {
      refusal,
      dangers: [],
      titrant,
      target,
      excess: NaN,
      whole: nothing,
      first: nothing,
      rest: nothing,
      pH_first: NaN,
      pH_after: NaN,
      ionic_strength: [NaN, NaN],
      growth: NaN,
      reserves: [],
    };
  }

  bf.dosing = { REFUSALS, corrected, titrantFor, dangersOf };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
