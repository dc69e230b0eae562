/** A formulation ready for questions, and its state under given conditions. The twin of
 * subjects.py; what a page's data block says of a formulation takes the place of the definition.
 *
 * @typedef {object} Subject
 * @property {Mixture} mixture of one kg of water; lists the titrants' families and ions too
 * @property {number} water kg in the make-up
 * @property {ActivityModel} model
 * @property {Interaction[]} interactions among the species present
 * @property {Addition[]} additions one a titrant, with its label and direction
 * @property {Interval} use_temperature K
 * @property {Interval} use_pH
 * @property {{pH: number, temperature: number, tolerance: number} | null} expected
 * @property {Recipe} recipe
 * @property {Record<string, any>} care tolerances, and in `stated` those that the file states
 * @property {{pKw: number, activity: number}} doubts of pKw and of activity models, k = 2
 * @property {string[]} accepted_dangers
 * @property {boolean} never_corrected
 * @property {number} reference_temperature K
 * @property {number} make_up_temperature K
 *
 * @typedef {{temperature: number, pH: number, ionic_strength: number, capacity: number,
 *   status: number, forms: Forms}} SolutionState  one solution at one temperature
 */
(function (bf) {
  "use strict";

  const { constantsAt } = bf.temperature;
  const { MODELS } = bf.activity;
  const { formsAt } = bf.speciation;
  const { solve } = bf.equilibrium;
  const { mixed, scaled } = bf.composition;
  const { bufferCapacity } = bf.buffering;

  /** A formulation with what is needed to reckon with it. Mirrors `subject_of` in subjects.py.
   * @param {any} data the `subject` of a page's data block, see engine_data.py
   * @param {number} [strength] multiplies everything in the water
   * @returns {Subject}
   */
  function subjectOf(data, strength = 1) {
    const { families, totals, ions, molalities } = data;
    return {
      mixture: scaled({ families, totals, ions, molalities }, strength),
      water: data.water,
      model: MODELS[data.model],
      interactions: data.interactions,
      additions: data.titrants,
      use_temperature: data.use_temperature,
      use_pH: data.use_pH,
      expected: data.expected,
      recipe: strengthened(data.recipe, strength),
      care: data.care,
      doubts: data.doubts,
      accepted_dangers: data.accepted_dangers,
      never_corrected: data.never_corrected,
      reference_temperature: data.reference_temperature,
      make_up_temperature: data.make_up_temperature,
    };
  }

  /** @param {Recipe} recipe @param {number} strength @returns {Recipe} */
  function strengthened(recipe, strength) {
    const parts = recipe.parts.map((part) => ({ ...part, amount: part.amount * strength }));
    return { ...recipe, parts };
  }

  /** The equilibrium of a formulation, or of another mixture by its model. Mirrors `solved_at`.
   * @param {Subject} subject
   * @param {number} temperature K
   * @param {Mixture} [mixture]
   * @param {Equilibrium | null} [near] where to begin
   * @returns {Equilibrium}
   */
  function solvedAt(subject, temperature, mixture = subject.mixture, near = null) {
    const constants = constantsAt(mixture.families, temperature);
    return solve(mixture, constants, subject.model, subject.interactions, near);
  }

  /** The state of a formulation at one temperature. Mirrors `state_at`.
   * @param {Subject} subject
   * @param {number} temperature K
   * @param {number} [strength] multiplies everything in the water
   * @param {[Addition, number][]} [additions] mol per kg of its water
   * @returns {SolutionState}
   */
  function stateAt(subject, temperature, strength = 1, additions = []) {
    const { model, interactions } = subject;
    let mixture = scaled(subject.mixture, strength);
    for (const [added, amount] of additions) mixture = mixed(mixture, added, amount);
    const constants = constantsAt(mixture.families, temperature);
    const solved = solve(mixture, constants, model, interactions);
    const { pH, ionic_strength: strengthThere, status, offsets } = solved;
    return {
      temperature,
      pH,
      ionic_strength: strengthThere,
      capacity: bufferCapacity(mixture, constants, model, solved),
      status,
      forms: formsAt(mixture, constants, model, pH, strengthThere, offsets),
    };
  }

  bf.subjects = { subjectOf, solvedAt, stateAt };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
