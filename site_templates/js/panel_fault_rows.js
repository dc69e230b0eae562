/* What the list of faults says, as texts: from a reading, or two, to ranked lines. Pure.
 *
 * @typedef {{words: string, predicted: string, mark: string, fit: string, share: string,
 *   weight: number, check: string}} FaultRow
 * @typedef {{mark: string, state: string, words: string, note: string, caption: string,
 *   second: string, leading: FaultRow[], all: FaultRow[], rest: string}} FaultAnswer
 *   mark, a sign; state, "right", "found", "none" or "refused"; second, the second reading; rest,
 *   what is not in the list
 */
(function (bf) {
  "use strict";

  const { ZERO_CELSIUS } = bf.water;

  const LEAST_SHARE = 0.02; // of the weight; what has less is not among the leading
  const MOST = 8; // leading ones
  const DILUTION = 2; // sample with as much water
  const FITS = [
    { to: 0.5, mark: "✓", words: "fits well" },
    { to: 1, mark: "✓", words: "fits, towards the edge of the band" },
    { to: 1.5, mark: "~", words: "just outside the band" },
    { to: Infinity, mark: "✗", words: "does not fit" },
  ];

  /** The readings that a page has, and what is still missing of the second.
   * @param {Situation} situation
   * @returns {{readings: {temperature: number, pH: number, dilution: number}[], missing: string}}
   */
  function readingsOf({ temperature, compensation, pH, values, texts, faults }) {
    const readings = [{ temperature, pH, dilution: 1 }];
    const kind = texts.get("second") || "none";
    if (kind === "none" || faults.has("second-reading") || faults.has("second-temperature")) {
      return { readings, missing: "" };
    }
    const [read, celsius] = [values["second-reading"], values["second-temperature"]];
    if (Number.isNaN(read)) return { readings, missing: "The second reading is still to be given." };
    if (kind === "temperature" && Number.isNaN(celsius)) {
      return { readings, missing: "The temperature of the second reading is still to be given." };
    }
    const kelvin = Number.isNaN(celsius) ? temperature : celsius + ZERO_CELSIUS;
    readings.push({
      temperature: kelvin,
      pH: bf.measurements.meant(read, kelvin, compensation),
      dilution: kind === "dilution" ? DILUTION : 1,
    });
    return { readings, missing: "" };
  }

  /** The formulation as it is set and weighed, with what may be mistaken for its reagents: of a
   * part that was weighed in another amount, so much of another was taken.
   * @param {Situation} situation
   * @returns {Setting}
   */
  function settingOf({ data, subject, recipe }) {
    const { carbonate, substitutes } = data.field.setting;
    const { mixtureOf } = bf.recipes;
    const made = recipe === null
      ? subject : { ...subject, recipe, mixture: mixtureOf(recipe, subject.mixture) };
    const written = data.subject.recipe.parts;
    const likely = made.recipe.parts.map((part) => {
      const at = written.findIndex(({ key }) => key === part.key);
      if (at < 0) return [];
      const times = part.amount / written[at].amount;
      return substitutes[at].map((other) => ({ ...other, amount: other.amount * times }));
    });
    return bf.suspects.settingOf(made, { carbonate, substitutes: likely });
  }

  /** What the page answers to its readings.
   * @param {Situation} situation with a reading
   * @returns {FaultAnswer}
   */
  function answerTo(situation) {
    const { readings, missing } = readingsOf(situation);
    const setting = settingOf(situation);
    const found = bf.faults.diagnosed(setting, readings);
    const caption = captionOf(readings, situation);
    if (found.refusal !== "") {
      return {
        mark: "!", state: "refused", words: bf.measurements.REFUSALS[found.refusal], note: missing,
        caption, second: "", leading: [], all: [], rest: "",
      };
    }
    const rows = (each) => each.map((one) => rowOf(setting.subject, one));
    const list = sorted(found).filter(({ suspect }) => suspect.kind !== "nothing");
    const leading = leadingOf(found, list);
    return {
      ...headline(found, list, leading, readings.length), note: missing, caption,
      second: readings.slice(1).map(toldOf).join(""), leading: rows(leading), all: rows(list),
      rest: "How likely: among the faults of this list, before anything else is known. Amounts that " +
        "are off by other shares than those listed, and what nobody thought of, are not on it.",
    };
  }

  /** Weights of what does not fit come to nothing; then the nearest comes first. */
  function sorted({ none_fits: noneFits, explanations }) {
    if (!noneFits) return explanations;
    return explanations.slice().sort((one, other) => one.misfit - other.misfit);
  }

  function leadingOf(found, list) {
    if (found.nothing_wrong || found.none_fits) return [];
    const heavy = list.filter(({ weight }) => weight >= LEAST_SHARE);
    return (heavy.length > 0 ? heavy : list.filter(({ fits }) => fits)).slice(0, MOST);
  }

  function headline(found, list, leading, readings) {
    const all = list.length + " faults";
    const fitting = list.filter(({ fits }) => fits).length;
    const each = readings === 1 ? "the reading" : "both readings";
    if (found.nothing_wrong) {
      const hidden = fitting === 0 ? "" : " " + fitting + " of " + all +
        " would read the same within the band, and such a reading cannot tell them.";
      const right = readings === 1
        ? "the reading tells: it is" : "both readings tell: they are";
      return {
        mark: "✓", state: "right",
        words: "Nothing is wrong, as far as " + right + " as expected of a right batch." + hidden,
      };
    }
    if (found.none_fits) {
      return {
        mark: "✗", state: "none",
        words: "None of these: not one of " + all + " explains " + each + ". Check the meter in " +
          "two fresh buffers and read again; then think of what is not on the list.",
      };
    }
    const [{ weight }] = leading;
    const beyond = found.unexplained > weight
      ? " Something that is not on the list is likelier than any of them." : "";
    return {
      mark: "?", state: "found",
      words: fitting + " of " + all + (fitting === 1 ? " explains " : " explain ") + each +
        "; the likeliest comes first." + beyond,
    };
  }

  function rowOf(subject, explanation) {
    const { suspect, extent, predicted, misfit, weight } = explanation;
    const fit = FITS.find(({ to }) => misfit <= to) || FITS[FITS.length - 1];
    return {
      words: bf.fault_words.said(subject, suspect, extent),
      predicted: predicted.map(number).join(", then "),
      mark: fit.mark,
      fit: fit.words,
      share: shareText(weight),
      weight,
      check: bf.fault_words.CHECKS[suspect.kind],
    };
  }

  function captionOf(readings, { compensation, recipe }) {
    const told = readings.map(toldOf);
    const meter = compensation === null ? "" : ", the meter’s compensation undone";
    const batch = recipe === null ? "the recipe" : "what was weighed";
    return "By " + batch + ", for " + told.join(" and ") + meter;
  }

  function toldOf({ temperature, pH, dilution }) {
    return "pH " + number(pH) + " at " + bf.formatting.celsius(temperature) + " °C" +
      (dilution === 1 ? "" : ", diluted with as much water");
  }

  function number(pH) {
    return bf.formatting.fixed(pH, 2);
  }

  function shareText(weight) {
    if (weight >= 0.995) return "over 99 %";
    return weight < 0.005 ? "under 1 %" : bf.formatting.fixed(100 * weight, 0) + " %";
  }

  /** An answer as lines of text to take along.
   * @param {FaultAnswer} answer
   * @returns {string[]}
   */
  function linesOf({ words, note, caption, leading, rest }) {
    const lines = ["Find the fault: " + caption, words];
    if (note !== "") lines.push(note);
    leading.forEach((row, at) => {
      lines.push((at + 1) + ". " + row.words + ": would read " + row.predicted + "; " + row.fit +
        "; " + row.share + " likely. " + row.check);
    });
    if (leading.length > 0) lines.push(rest);
    return lines;
  }

  bf.panel_fault_rows = { answerTo, linesOf, readingsOf, settingOf };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
