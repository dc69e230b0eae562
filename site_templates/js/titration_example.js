/* An invented titration, so that a reader sees what the page makes of points: the formulation's own
 * curve with a titrant weaker than its label says, and readings that scatter. Pure, and the same
 * every time. */
(function (bf) {
  "use strict";

  const FACTOR = 0.97; // of the strength on the label: what a fit should find
  const NOISE = 0.02; // pH, standard deviation of the readings
  const EVENLY = 48; // portions along the whole curve
  const CLOSE = 12; // more of them about each equivalence
  const ABOUT = 0.05; // of the equivalence volume, either way
  const BEYOND = 1.5; // times the last equivalence
  const AWAY = 2.5; // pH to go where no equivalence shows
  const OTHERWISE = 0.05; // mol/kg, where that is never reached
  const DIGITS = 3; // of the last volume, below its first
  const SEED = 7;

  /** A text as one might be pasted: invented, and saying so.
   * @param {Subject} subject
   * @param {Addition[]} titrants liquids to choose from: the first with an equivalence that shows
   * @param {number} temperature K
   * @param {number | null} sample m3; null for the whole make-up
   * @returns {{text: string, titrant: Addition, factor: number, noise: number}}
   */
  function exampleOf(subject, titrants, temperature, sample) {
    const plans = titrants.map((each) => planOf(subject, each, temperature, sample));
    const plan = plans.find((each) => each.places.length > 0) || plans[0];
    const [unit, scale] = unitOf(plan.end);
    const decimals = Math.max(DIGITS - Math.floor(Math.log10(plan.end * scale)), 0);
    const volume = volumesOf(plan).map((each) => (each * scale).toFixed(decimals));
    const amounts = volume.map((each) => Number(each) / scale);
    const added = bf.experiments.withStrength(plan.experiment.added, FACTOR);
    const weak = { ...plan.experiment, added };
    const { pH } = bf.experiments.predictedCurve(weak, amounts).state;
    const scatter = scattered();
    const rows = [];
    pH.forEach((each, at) => {
      const reading = each + NOISE * scatter();
      if (Number.isFinite(reading)) rows.push(volume[at] + ";" + reading.toFixed(2));
    });
    const remark = "# Invented, not measured: this sheet's own curve with " +
      bf.formatting.plain(100 * FACTOR, 3) + " % of the titrant's strength, and readings that " +
      "scatter by " + NOISE;
    const text = [remark, "Volume (" + unit + ");pH", ...rows].join("\n") + "\n";
    return { text, titrant: plan.experiment.added, factor: FACTOR, noise: NOISE };
  }

  /** How far a titration goes, and where it needs more points: volumes in m3. */
  function planOf(subject, added, temperature, sample) {
    const experiment = bf.experiments.experimentOf(subject, added, temperature, sample);
    const { mixture, model, interactions, water } = experiment;
    const per = added.volume * water; // m3 for one mol/kg
    const places = bf.titration
      .equivalences(mixture, added, temperature, model, interactions)
      .filter((each) => each.visible)
      .map((each) => (each.amount * per) / FACTOR);
    if (places.length > 0) return { experiment, places, end: BEYOND * places[places.length - 1] };
    const here = bf.subjects.solvedAt(subject, temperature).pH;
    const pH = added.direction === "upward" ? here + AWAY : here - AWAY;
    const far = bf.titration.amountToReach(mixture, added, pH, temperature, model, interactions);
    return { experiment, places, end: (far > 0 ? far : OTHERWISE) * per };
  }

  function volumesOf({ places, end }) {
    const volumes = Array.from({ length: EVENLY + 1 }, (_, at) => (at * end) / EVENLY);
    for (const place of places) {
      for (let at = 0; at <= CLOSE; at += 1) {
        volumes.push(place * (1 + ABOUT * ((2 * at) / CLOSE - 1)));
      }
    }
    return volumes.sort((one, other) => one - other);
  }

  /** A unit that headings know, in which the last volume is easy to read, and how many make a m3. */
  function unitOf(end) {
    if (end >= 1e-3) return ["L", 1e3];
    return end >= 1e-6 ? ["mL", 1e6] : ["µL", 1e9];
  }

  /** Numbers that scatter about zero with a standard deviation of one, always the same.
   * @returns {() => number} twelve even ones added up, from a multiplicative generator */
  function scattered() {
    let state = SEED;
    return () => {
      let sum = -6;
      for (let count = 0; count < 12; count += 1) {
        state = (state * 48271) % 2147483647;
        sum += state / 2147483647;
      }
      return sum;
    };
  }

  bf.titration_example = { exampleOf };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
