/* How to bring the batch back to its target, in portions, or why not to. */
(function (bf) {
  "use strict";

  const { celsius, fixed, mass, plain, significant, volume } = bf.formatting;

  const ASKED = "Type what the meter reads, above.";
  const WITHHELD = "A condition above cannot be used; see beside it. Nothing is dosed until it can.";
  const FAULTY = "Something typed here cannot be used; see beside it.";
  const TOO_SMALL = "Give a volume from 1 mL to 100 m³.";
  const SMALLEST = 1e-6; // m3
  const LARGEST = 100;
  const MILLI = 1e3;
  const SHARE = 80; // % of the whole
  const OWN = ["volume", "target", "share", "dilution"];
  const NOTHING = "—";
  const NEUTRAL = 7; // the near side of it is neither acid nor base, whatever the limits of use
  const NONE = { words: "", dangers: "", first: "", now_downward: NOTHING, now_upward: NOTHING };
  // What comes before a correction, by the verdict on the reading.
  const FIRST = {
    right: "The batch is right as it is. If it must be nearer to the target, to",
    accepted: "The batch is accepted as it is. If it must be nearer to the target, to",
    doubtful: "First calibrate the meter and read again. If it stays so, to",
    off: "First check thermometer and meter. If the reading stands, to",
    unexpected: "First check thermometer and meter. If the reading stands, to",
  };

  /** @param {object} data @returns {Section | null} */
  function open(data) {
    const root = document.querySelector("[data-dosing] [data-plan]");
    if (root === null) return null;
    let lines = [];
    bf.panel_copy.open(root.querySelector('[data-action="copy-correct"]'), () => lines);
    return {
      name: "dosing",
      late: false,
      answer(situation, outcomes) {
        const plan = planOf(situation);
        const words = wordsOf(situation, plan, outcomes.judging.verdict);
        write(root, words);
        lines = [...outcomes.judging.lines, ...linesOf(words)];
        return { lines: linesOf(words), facts: factsOf(words) };
      },
      withhold() {
        lines = [];
        write(root, { ...NONE, words: WITHHELD });
      },
    };
  }

  /** @typedef {{complaint: string, correction: Correction | null, volume: number}} Plan
   *   complaint, why there is no correction to speak of */

  /** What to do about a reading. Pure. @param {Situation} situation @returns {Plan} */
  function planOf({ subject, temperature, reading, pH, recipe, values, texts, faults }) {
    const size = values.volume * values["volume-unit"];
    const without = (complaint) => ({ complaint, correction: null, volume: size });
    if (OWN.some((name) => faults.has(name))) return without(FAULTY);
    if (Number.isNaN(reading)) return without(ASKED);
    if (!(size >= SMALLEST && size <= LARGEST)) return without(TOO_SMALL);
    const dilution = or(values.dilution, 1);
    const batch = { temperature, pH, volume: size, dilution, recipe };
    const target = Number.isNaN(values.target) ? null : values.target;
    const titrant = texts.get("titrant") === "" ? null : Number(texts.get("titrant"));
    const share = or(values.share, SHARE) / 100;
    const correction = bf.dosing.corrected(subject, batch, target, titrant, share);
    return { complaint: "", correction, volume: size };
  }

  function or(value, otherwise) {
    return Number.isNaN(value) ? otherwise : value;
  }

  /** The words of a plan by the place where they belong; "" hides a row. Pure.
   * @param {Situation} situation @param {Plan} plan @param {string} verdict of the judgement
   * @returns {Record<string, string>} */
  function wordsOf({ subject, temperature, pH }, { complaint, correction, volume: size }, verdict) {
    const words = { ...NONE, words: complaint };
    if (correction === null) return words;
    const water = size * bf.water.density(temperature);
    for (const { direction, titrant, before } of correction.reserves) {
      const added = subject.additions[titrant];
      words["now_" + direction] = Number.isNaN(before) || before === 0
        ? (before === 0 ? "none left" : NOTHING)
        : `${significant(before * MILLI)} mmol/kg: ${amountText(before * water, added)}`;
    }
    words.dangers = dangersText(subject, correction) + gasText(subject, pH);
    if (correction.refusal !== "") {
      words.words = refusalText(correction.refusal);
      return words;
    }
    const from = `from pH ${fixed(pH, 2)} to ${fixed(correction.target, 2)}`;
    words.words = `${FIRST[verdict] || "To"} bring ${volume(size)} ${from} ` +
      `at ${celsius(temperature)} °C:`;
    return { ...words, ...plannedWords(subject, correction, size) };
  }

  function refusalText(refusal) {
    return bf.dosing.REFUSALS[refusal] || bf.measurements.REFUSALS[refusal];
  }

  function dangersText(subject, { dangers, titrant }) {
    if (dangers.length === 0) return "";
    return `${subject.additions[titrant].label}: may set free ${namesOf(dangers)}. Small portions, ` +
      "ventilation, and the cautions of this sheet. ";
  }

  /** What a batch may be giving off by itself: the gas is there before anybody adds anything. */
  function gasText(subject, pH) {
    const { low, high } = subject.use_pH;
    const acid = pH < Math.min(low, NEUTRAL);
    if (!acid && pH <= Math.max(high, NEUTRAL)) return "";
    const cause = acid ? " with acid" : " with base";
    const releases = subject.recipe.parts.flatMap((part) => part.releases);
    const gases = Array.from(new Set(releases)).filter((danger) => danger.endsWith(cause));
    if (gases.length === 0) return "";
    return `If this reading is right, the batch may be giving off ${namesOf(gases)}. Keep away, ` +
      "ventilate, add nothing, and call who is responsible.";
  }

  /** Gases with what sets them free, in brackets. @param {string[]} dangers */
  function namesOf(dangers) {
    return dangers.map((danger) => danger.replace(/ (with .*)$/, " ($1)")).join(", ");
  }

  function plannedWords(subject, correction, size) {
    const { titrant, whole, first, rest, growth, ionic_strength: strength } = correction;
    const words = {
      titrant: subject.additions[titrant].label,
      first: portionText(first),
      rest: rest.moles > 0 ? portionText(rest) : "",
      whole: portionText(whole),
      pH_first: fixed(correction.pH_first, 2),
      pH_after: fixed(correction.pH_after, 2),
      volume_before: volume(size),
      volume_after: `${volume(size * (1 + growth))} (+${plain(100 * growth, 2)} %)`,
      strength_before: significant(strength[0]),
      strength_after: significant(strength[1]),
    };
    for (const { direction, before, after } of correction.reserves) {
      words["before_" + direction] = reserveText(before);
      words["after_" + direction] = reserveText(after);
    }
    return words;
  }

  function reserveText(amount) {
    return Number.isNaN(amount) ? NOTHING : significant(amount * MILLI);
  }

  function portionText({ volume: size, mass: kilograms }) {
    return size === null ? mass(kilograms, 3) : volume(size, 3);
  }

  function amountText(moles, added) {
    const measured = added.volume === null
      ? mass(moles * added.mass, 3) : volume(moles * added.volume, 3);
    return `${measured} of ${added.label}`;
  }

  function write(root, words) {
    const planned = words.first !== "";
    root.dataset.plan = planned ? "planned" : words.words === ASKED ? "none" : "refused";
    for (const place of document.querySelectorAll("[data-dose]")) {
      const text = words[place.dataset.dose] || "";
      if (place.textContent !== text) place.textContent = text;
    }
    root.querySelector('[data-dose="dangers"]').hidden = words.dangers === "";
    for (const place of root.querySelectorAll("[data-planned]")) place.hidden = !planned;
    root.querySelector('[data-row="rest"]').hidden = !words.rest;
  }

  function linesOf(words) {
    if (words.first === "") return words.words === ASKED ? [] : ["correction: " + words.words];
    const lines = [words.words, `add ${words.first} of ${words.titrant}, read: ` +
      `pH ${words.pH_first} is expected`];
    if (words.rest) lines.push(`then ${words.rest}: pH ${words.pH_after} is expected`);
    if (words.dangers) lines.push(words.dangers);
    return lines;
  }

  /** What a log keeps. @returns {Record<string, string>} */
  function factsOf(words) {
    return {
      volume: words.volume_before || "", titrant: words.titrant || "", first: words.first,
      whole: words.whole || "",
    };
  }

  bf.panel_dosing = { open, gasText };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
