/* The band around the expected reading, and whether the reader's own lies where it should. */
(function (bf) {
  "use strict";

  const { ZERO_CELSIUS } = bf.water;
  const { celsius, fixed, plain, signed } = bf.formatting;

  const WITHHELD = "A condition above cannot be used; see beside it. Nothing is judged until it can.";
  const ANEW = "Read again. If it stays so, throw the batch away and make it anew.";
  const ASKED = "Type what the meter reads, above, and it is judged here.";

  /** @param {object} data @returns {Section | null} */
  function open(data) {
    const root = document.querySelector("[data-judging]");
    if (root === null) return null;
    let lines = [];
    bf.panel_copy.open(root.querySelector('[data-action="copy-judge"]'), () => lines);
    return {
      name: "judging",
      late: false,
      answer(situation) {
        const answered = answerTo(situation);
        write(root, answered);
        lines = linesOf(data, situation, answered);
        const verdict = verdictOf(answered.judgement);
        return { lines, facts: factsOf(situation, answered), verdict };
      },
      withhold() {
        lines = [];
        withhold(root);
      },
    };
  }

  /** What can be said of a situation. Pure.
   * @param {Situation} situation
   * @returns {{band: Band, judgement: Judgement | null, forbidden: boolean,
   *   gas: string}}  forbidden to correct; gas that the batch may be giving off, in words
   */
  function answerTo({ subject, temperature, reading, compensation, recipe, values }) {
    const band = bf.uncertainty.bandOf(subject, temperature, recipe);
    const { never_corrected: forbidden } = subject;
    if (Number.isNaN(reading)) return { band, judgement: null, forbidden, gas: "" };
    const elsewhere = values["batch-temperature"];
    const batch = Number.isNaN(elsewhere) ? null : elsewhere + ZERO_CELSIUS;
    const judgement = bf.judging.judged(
      subject, temperature, reading, compensation, batch, recipe);
    const gas = judgement.refusal === "" ? bf.panel_dosing.gasText(subject, judgement.pH) : "";
    return { band, judgement, forbidden, gas };
  }

  /** The words of an answer by the place where they belong. Pure.
   * @returns {Record<string, string>} */
  function wordsOf({ band, judgement, forbidden, gas }) {
    const words = {
      half_width: fixed(band.half_width, 2), low: fixed(band.low, 2), high: fixed(band.high, 2),
      mark: "", words: ASKED, action: "", reading: "", stands_for: "", band: rangeOf(band),
      should_show: "", difference: "", target: "", batch_temperature: "", batch: "", gas,
    };
    if (judgement === null) return words;
    words.reading = plain(judgement.reading, 5);
    if (judgement.refusal !== "") {
      return { ...words, mark: "✗", words: bf.measurements.REFUSALS[judgement.refusal] };
    }
    const { mark, words: said, action } = bf.judging.VERDICTS[judgement.verdict];
    Object.assign(words, { mark, words: said, action: forbidden && mark === "✗" ? ANEW : action });
    // Nobody is sent to read again, or to correct, what may be giving off gas.
    if (gas !== "") words.action = "";
    words.difference = signed(judgement.difference, 2);
    if (judgement.pH !== judgement.reading) {
      words.stands_for = fixed(judgement.pH, 2);
      words.should_show = fixed(judgement.shown, 2);
    }
    if (judgement.tolerance !== null) words.target = targetOf(judgement);
    if (judgement.batch !== null) {
      words.batch_temperature = celsius(judgement.batch.temperature);
      words.batch = batchOf(judgement.batch);
    }
    return words;
  }

  function rangeOf({ pH, half_width: half, low, high }) {
    return `${fixed(pH, 2)} ± ${fixed(half, 2)} (${fixed(low, 2)} to ${fixed(high, 2)})`;
  }

  function targetOf({ target, tolerance }) {
    return `${fixed(target, 2)} ± ${plain(tolerance)}`;
  }

  function batchOf({ pH, expected, within_use: within }) {
    const use = within ? "within its limits of use" : "outside its limits of use";
    return `${fixed(pH, 2)}, ${fixed(expected, 2)} expected; ${use}`;
  }

  function show(words) {
    for (const [name, text] of Object.entries(words)) {
      for (const place of document.querySelectorAll(`[data-shows="${name}"]`)) {
        if (place.textContent !== text) place.textContent = text;
      }
    }
  }

  function write(root, answered) {
    const words = wordsOf(answered);
    const { judgement, band } = answered;
    show(words);
    for (const [name, text] of Object.entries(words)) {
      const row = root.querySelector(`[data-row="${name}"]`);
      if (row !== null) row.hidden = text === "";
    }
    const judged = judgement !== null && judgement.refusal === "";
    for (const place of root.querySelectorAll("[data-judged]")) place.hidden = !judged;
    root.dataset.verdict = verdictOf(judgement);
    writeContributions(document.querySelector("[data-contributions]"), band);
  }

  function withhold(root) {
    show({ mark: "", words: WITHHELD, action: "", gas: "" });
    root.querySelector('[data-row="gas"]').hidden = true;
    for (const place of root.querySelectorAll("[data-judged]")) place.hidden = true;
    root.dataset.verdict = "none";
  }

  function verdictOf(judgement) {
    if (judgement === null) return "none";
    return judgement.refusal === "" ? judgement.verdict : "refused";
  }

  function writeContributions(body, band) {
    const rows = band.ranked.map((item) => {
      const row = document.createElement("tr");
      const head = document.createElement("th");
      head.scope = "row";
      head.textContent = bf.band_words.contributionWords(item);
      const effect = document.createElement("td");
      effect.className = "number";
      effect.textContent = signed(item.effect, 4);
      const known = document.createElement("td");
      known.textContent = item.stated ? "stated" : "assumed";
      row.append(head, effect, known);
      return row;
    });
    body.replaceChildren(...rows);
  }

  /** Lines to take along. Pure. */
  function linesOf(data, { temperature, recipe }, answered) {
    const words = wordsOf(answered);
    const lines = [document.title, "revision " + data.revision + ", fingerprint " + data.fingerprint];
    lines.push("temperature of the sample: " + celsius(temperature) + " °C");
    if (recipe !== null) lines.push("batch as weighed");
    if (words.reading !== "") lines.push("meter reads: pH " + words.reading);
    if (words.stands_for !== "") lines.push("stands for: pH " + words.stands_for);
    lines.push("expected: pH " + words.band + ", k = 2");
    if (words.target !== "") lines.push("accepted: pH " + words.target);
    if (words.batch !== "") {
      lines.push(`batch at ${words.batch_temperature} °C: pH ${words.batch}`);
    }
    if (words.reading !== "") lines.push(`${words.words} ${words.action} ${words.gas}`.trim());
    return lines;
  }

  /** What a log keeps. Pure. @returns {Record<string, string>} */
  function factsOf({ temperature }, answered) {
    const words = wordsOf(answered);
    const { judgement, band } = answered;
    return {
      temperature: celsius(temperature),
      reading: words.reading,
      expected: fixed(band.pH, 2),
      band: words.half_width,
      target: words.target,
      tolerance: judgement === null || judgement.tolerance === null
        ? "" : plain(judgement.tolerance),
      verdict: words.reading === "" ? "" : words.words,
    };
  }

  bf.panel_judging = { open };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
