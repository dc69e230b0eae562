/** What stands in the beaker and what runs into it: a titration, before anything is measured.
 * The twin of experiments.py; the formulation comes from a page's data block.
 *
 * @typedef {object} Experiment
 * @property {Mixture} mixture of one kg of the sample's water; lists what the titrant brings
 * @property {number} water kg in the sample
 * @property {Addition} added one mole of titrant, as its label says
 * @property {number} temperature K
 * @property {ActivityModel} model
 * @property {Interaction[]} interactions
 * @property {number} strength of the titrant, as its label says, mol/L
 */
(function (bf) {
  "use strict";

  const { density } = bf.water;
  const { titrate } = bf.titration;

  const LITRE = 1e-3; // m3

  /** The titration of a sample, or of the whole make-up where no volume is given.
   * Mirrors `experiment_of` in experiments.py.
   *
   * A sample counts as its volume of water at the temperature of the titration.
   * @param {Subject} subject
   * @param {Addition} added one of the subject's additions
   * @param {number} temperature K
   * @param {number | null} [sampleVolume] m3
   * @returns {Experiment}
   */
  function experimentOf(subject, added, temperature, sampleVolume = null) {
    if (added.volume === null) {
      throw new RangeError(`${added.label} is a solid: its solution needs a strength`);
    }
    return {
      mixture: subject.mixture,
      water: sampleVolume === null ? subject.water : sampleVolume * density(temperature),
      added,
      temperature,
      model: subject.model,
      interactions: subject.interactions,
      strength: LITRE / added.volume,
    };
  }

  /** The amount of titrant in a volume. Mirrors `amounts`.
   * @param {Experiment} experiment @param {number} volume m3
   * @returns {number} mol per kg of the sample's water
   */
  function amountIn(experiment, volume) {
    return volume / (experiment.added.volume * experiment.water);
  }

  /** What recipe and label lead one to expect after each volume of titrant.
   * Mirrors `predicted_curve`.
   * @param {Experiment} experiment @param {number[]} volume m3 @returns {Curve}
   */
  function predictedCurve(experiment, volume) {
    const { mixture, added, temperature, model, interactions } = experiment;
    const amount = volume.map((each) => amountIn(experiment, each));
    return titrate(mixture, added, amount, temperature, model, interactions);
  }

  /** A titrant of other strength: per volume as much water, and a multiple of the rest.
   * Mirrors `with_strength`.
   * @param {Addition} added @param {number} factor @returns {Addition}
   */
  function withStrength(added, factor) {
    return {
      ...added,
      per_family: added.per_family.map((share) => share * factor),
      per_ion: added.per_ion.map((share) => share * factor),
    };
  }

  /** The first liquid titrant that moves readings the way they went. Mirrors `suited`.
   * @param {Addition[]} titrants @param {number[]} pH in the order of addition
   * @returns {Addition | null}
   */
  function suited(titrants, pH) {
    const upward = pH.length > 0 && pH[pH.length - 1] >= pH[0];
    const direction = upward ? "upward" : "downward";
    const found = titrants.find((each) => each.volume !== null && each.direction === direction);
    return found === undefined ? null : found;
  }

  bf.experiments = { experimentOf, amountIn, predictedCurve, withStrength, suited };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
