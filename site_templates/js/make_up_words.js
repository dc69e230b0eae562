/** The words of a make-up: amounts and warnings, order, advice, what a batch should read as made.
 * The twin of make_up_words.py, which has those that stand on the page without an input.
 *
 * @typedef {{label: string, key: string, says: string, amount: string, out: string, unit: string,
 *   rounding: string, warning: string}} WeighRow
 * @typedef {{band: Band, own: Band, target: number, tolerance: number | null,
 *   ionic_strength: number, capacity: number, planned: number, rounded: number}} Outlook  what a
 *   batch should read, and what the recipe does; pH as planned, and of what displays can show
 */
(function (bf) {
  "use strict";

  const { celsius, fixed, mass, plain, significant, signed, volume } = bf.formatting;
  const { ACTIONS, asWeighed, orderOf, weighings } = bf.weighing;
  const { mixtureOf } = bf.recipes;
  const { stateAt, solvedAt } = bf.subjects;

  const FIRM = "\u00a0"; // a space at which no line ends
  const USUAL_TOLERANCE = 0.05; // in pH, where no tolerance is stated
  const SAME = 0.5; // K: closer temperatures are one
  const FLAT = 5e-4; // 1/K: less is lost in rounding
  const SEEN = 5e-5; // relative: what is rounded by less is not worth a word
  /** @type {Record<string, string>} */
  const GOING_BY = {
    "by the recipe": "Judging and correcting go by the recipe.",
    "other reagents": "Judging and correcting now go by the reagents that are chosen here.",
    "as weighed": "Judging and correcting now go by what was weighed and measured out.",
  };
  const VISIBLE = 0.005; // in pH: what shows on a meter

  /** One line for each part of the batch.
   * @param {Batch} batch
   * @param {Subject} subject
   * @param {Record<string, number>} values
   * @param {object} data the page's data block
   * @returns {WeighRow[]}
   */
  function rowsOf(batch, subject, values, data) {
    const { amount, quantity } = data.batch;
    const size = quantity === "mass" ? mass(amount) : volume(amount);
    const found = weighings(batch.planned, values.balance, values.cylinder);
    return found.map(({ part, wanted, rounded, error }, at) => {
      const own = batch.route === 0 && part.key === subject.recipe.parts[at].key;
      const solid = part.added.volume === null;
      const step = solid ? values.balance : values.cylinder;
      const unit = bf.weighed_batch.unitOf(part, values);
      const decimals = Math.max(0, Math.round(-Math.log10(step / unit.factor)));
      const written = solid ? mass : volume;
      return {
        label: part.label,
        key: part.key,
        says: own ? data.shelf.stated[at] : written(wanted / batch.factor) + " for " + size,
        amount: written(wanted),
        out: fixed(rounded / unit.factor, decimals) + " " + unit.label,
        unit: unit.label,
        rounding: Math.abs(error) < SEEN ? "" : "rounded by " + signed(100 * error, 2) + " %",
        warning: tooLittle(solid, step / 2 / wanted, subject.care),
      };
    });
  }

  /** What is wrong with weighing so little; "" where nothing is.
   * @param {boolean} solid
   * @param {number} half a step of the display, relative to what is wanted
   * @param {{weighing: number, volume: number}} care
   * @returns {string}
   */
  function tooLittle(solid, half, care) {
    const allowed = solid ? care.weighing : care.volume;
    if (half <= allowed) return "";
    const share = half > 1 ? "more than all" : significant(100 * half, 2) + FIRM + "%";
    const limit = plain(100 * allowed) + FIRM + "%";
    const about = " is " + share + " of the amount, and " + limit + " is allowed. ";
    return solid
      ? "Too little to weigh on this balance: half a step of it" + about
        + "Take a finer one, or make a larger batch, or use a stock solution."
      : "Too little to measure with this: half a mark" + about
        + "Take a finer pipette, or make a larger batch, or use a weaker stock.";
  }

  /** The steps of making a batch. Mirrors `order_words`.
   * @param {Recipe} recipe
   * @returns {[string, string][]} a reagent's label ("" for water), and what to do
   */
  function orderWords(recipe) {
    return orderOf(recipe).map(([at, action]) => {
      const words = ACTIONS[action];
      if (at < 0) return ["", words];
      return [recipe.parts[at].label, words[0].toLowerCase() + words.slice(1)];
    });
  }

  /** What the drift with temperature means for setting a batch. Mirrors `adjustment_words`.
   * @param {Adjustment} advice
   * @param {number | null} tolerance
   * @param {boolean} canBeSet whether a titrant is named
   * @param {string} [unit] of temperature, "C" or "F"
   * @returns {string[]}
   */
  function adjustmentWords(advice, tolerance, canBeSet, unit = "C") {
    const made = degrees(advice.temperature, unit);
    const used = degrees(advice.reference_temperature, unit);
    const pH = fixed(advice.pH, 2);
    const aim = fixed(advice.reference_pH, 2);
    const verb = canBeSet ? "set it to" : "it should read";
    const drift = driftWords(advice.slope, unit);
    if (Math.abs(advice.temperature - advice.reference_temperature) < SAME) {
      return ["At " + used + ", for which its pH is stated, " + verb + " pH " + aim + ".", drift];
    }
    const wrong = fixed(advice.mistaken, 2);
    const edge = tolerance === null
      ? "±" + FIRM + plain(USUAL_TOLERANCE) + " (no tolerance is stated)"
      : "the tolerance of ±" + FIRM + plain(tolerance);
    const side = advice.matters ? "outside" : "inside";
    const lines = [
      "At " + made + " " + verb + " pH " + pH + ": at " + used + " it then reads " + aim + ".",
      drift,
      "A batch that reads " + aim + " at " + made + " reads " + wrong + " at " + used + ", "
        + side + " " + edge + ".",
    ];
    if (advice.matters && canBeSet) {
      lines.push("Let it come to " + used
        + ", or set it to the value for the temperature that it has.");
    }
    return lines;
  }

  function driftWords(slope, unit) {
    if (Math.abs(slope) < FLAT) return "Its pH hardly changes with temperature.";
    const each = Math.abs(slope) / (unit === "F" ? 1.8 : 1);
    return "Its pH " + (slope > 0 ? "rises" : "falls") + " by " + fixed(each, 3)
      + " for each °" + unit + " that it is warmer.";
  }

  /** @param {number} kelvin @param {string} unit @returns {string} */
  function degrees(kelvin, unit) {
    if (unit !== "F") return celsius(kelvin) + FIRM + "°C";
    const { degreesIn } = bf.panel_state;
    return String(Number(degreesIn(Number(celsius(kelvin).replace("−", "-")), "F").toFixed(1)))
      .replace("-", "−") + FIRM + "°F";
  }

  /** How a way differs from the recipe. @param {[string, number][]} differences
   * @param {Record<string, string>} labels of ions @returns {string} "" where it does not */
  function differenceWords(differences, labels) {
    if (differences.length === 0) return "";
    const each = differences.map(([ion, more]) =>
      significant(Math.abs(more), 2) + " mol/kg " + (more > 0 ? "more " : "less ") + labels[ion]);
    return "It holds " + each.join(", ") + " than the recipe.";
  }

  /** What does not depend on a batch: the recipe's own reading, and the advice.
   * @param {Subject} subject
   * @param {number} temperature K, of the page
   * @returns {{own: Band, target: number, advice: Adjustment}}
   */
  function standingOf(subject, temperature) {
    const far = Math.abs(temperature - subject.reference_temperature) >= SAME;
    const madeAt = far ? temperature : subject.make_up_temperature;
    return {
      own: bf.uncertainty.bandOf(subject, temperature),
      target: bf.measurements.targetAt(subject, temperature),
      advice: bf.weighing.adjustmentOf({ ...subject, make_up_temperature: madeAt }),
    };
  }

  /** What a batch should read as it was made, beside the recipe's own reading.
   * @param {Batch} batch
   * @param {Subject} subject
   * @param {number} temperature K
   * @param {Record<string, number>} values
   * @param {{own: Band, target: number}} standing
   * @returns {Outlook}
   */
  function outlookOf(batch, subject, temperature, values, { own, target }) {
    const mixture = mixtureOf(batch.made, subject.mixture);
    const state = stateAt({ ...subject, mixture }, temperature);
    const pHOf = (recipe) =>
      solvedAt(subject, temperature, mixtureOf(recipe, subject.mixture)).pH;
    const found = weighings(batch.planned, values.balance, values.cylinder);
    const shown = asWeighed(batch.planned, new Map(found.map(({ rounded }, at) => [at, rounded])));
    return {
      band: batch.own ? own : bf.uncertainty.bandOf(subject, temperature, batch.made),
      own,
      target,
      tolerance: subject.expected === null ? null : subject.expected.tolerance,
      ionic_strength: state.ionic_strength,
      capacity: state.capacity,
      planned: batch.own ? own.pH : pHOf(batch.planned),
      rounded: pHOf(shown),
    };
  }

  /** What judging and correcting go by. @param {Batch} batch @returns {string} */
  function goingBy(batch) {
    return GOING_BY[madeWords(batch)];
  }

  /** @param {Batch} batch @returns {string} for a column of a log */
  function madeWords(batch) {
    if (batch.own) return "by the recipe";
    return batch.taken.size === 0 && batch.water === null ? "other reagents" : "as weighed";
  }

  /** The expected reading in words, and whether it will do.
   * @param {Outlook} outlook
   * @param {string} at the temperature, with its unit
   * @returns {{reading: string, than: string, state: string, verdict: string}}
   */
  function outlookWords({ band, own, target, tolerance }, at) {
    const reading = "pH" + FIRM + about(band.pH, fixed(band.half_width, 2)) + " at " + at;
    const difference = band.pH - own.pH;
    const than = Math.abs(difference) < VISIBLE
      ? "The same as by the recipe."
      : fixed(Math.abs(difference), 2) + (difference > 0 ? " above" : " below")
        + " what the recipe gives, " + fixed(own.pH, 2) + ".";
    if (!Number.isFinite(band.pH)) {
      return { reading: "no solution of the equations", than: "", state: "off", verdict: "" };
    }
    if (tolerance === null) {
      return { reading, than, state: "open", verdict: "No tolerance is stated." };
    }
    const inside = Math.abs(band.pH - target) <= tolerance + 1e-9;
    const limits = "the tolerance, " + about(target, plain(tolerance)) + ".";
    return {
      reading, than, state: inside ? "right" : "off",
      verdict: (inside ? "✓ Inside " : "✗ Outside ") + limits,
    };
  }

  /** @param {number} pH @param {string} width @returns {string} */
  function about(pH, width) {
    return fixed(pH, 2) + FIRM + "±" + FIRM + width;
  }

  /** What rounding to the displays does; "" where no meter shows it.
   * @param {Outlook} outlook @returns {string} */
  function roundingWords({ planned, rounded }) {
    if (!(Math.abs(rounded - planned) >= VISIBLE)) return "";
    return "Weighed out as rounded here, it would read pH " + fixed(rounded, 2) + " instead of "
      + fixed(planned, 2) + ".";
  }

  /** @param {Outlook} outlook @returns {string} */
  function factWords({ ionic_strength: strength, capacity }) {
    return "Ionic strength " + significant(strength) + " mol/kg, buffer capacity "
      + significant(1000 * capacity) + " mmol/kg per pH.";
  }

  /** How far what was taken is from what was asked for; "" where nothing was taken.
   * @param {number | undefined} taken
   * @param {number} wanted
   * @returns {string}
   */
  function offWords(taken, wanted) {
    if (taken === undefined) return "";
    const off = taken / wanted - 1;
    if (Math.abs(off) < SEEN) return "as asked for";
    const far = off > 1 || off < -0.5 ? ". Is it for this batch?" : "";
    const decimals = [0.01, 1].filter((limit) => Math.abs(off) < limit).length;
    return signed(100 * off, decimals) + " %" + far;
  }

  /** What is to be minded about a reagent: handling, gases, hazard statements spelled out.
   * @param {Part} part
   * @param {{reagents: Record<string, any>, statements: Record<string, string>}} shelf
   * @returns {string}
   */
  function handlingWords(part, shelf) {
    const { handling, hazards } = shelf.reagents[part.key];
    const words = handling === "" ? [] : [handling];
    if (part.releases.length > 0) words.push("May set free " + part.releases.join("; ") + ".");
    if (hazards.length > 0) {
      const told = hazards.map((code) => code + " " + shelf.statements[code].toLowerCase());
      words.push("Hazards: " + told.join("; ") + ".");
    }
    return words.join(" ");
  }

  bf.make_up_words = {
    rowsOf, orderWords, adjustmentWords, degrees, differenceWords, standingOf, outlookOf,
    madeWords, goingBy, outlookWords, roundingWords, factWords, offWords, handlingWords,
  };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
