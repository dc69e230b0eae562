/* The section of a sheet for a titration of one's own: it puts together what the reader gave, and
 * answers once nothing has moved for a moment, so that other answers never wait for it.
 *
 * @typedef {object} Own
 * @property {HTMLElement} root
 * @property {Situation | null} situation the last that the page was in
 * @property {{text: string, unit: string, parsed: Parsed, found: EndPoint[]} | null} read the text
 *   as it was last understood
 * @property {number} timer
 * @property {Editor} editor
 * @property {Show} show
 * @property {Fitter} fitter
 */
(function (bf) {
  "use strict";

  const QUIET = 150; // ms without a change before points are looked at
  const FEWEST = 3;
  const PREFIX = "titration-";
  const NOTES = [
    "", "A constant is used outside its source’s temperatures.",
    "The ionic strength goes above what the activity model is trusted to.",
    "The equations have no solution at some of the volumes.",
  ];

  /** @param {object} data the page's data block @returns {Section | null} */
  function open(data) {
    const root = document.querySelector("[data-titration]");
    if (root === null) return null;
    const own = { root, situation: null, read: null, timer: 0 };
    const again = () => soon(own);
    own.editor = bf.panel_titration_points.open(root, () => invented(own), again);
    own.show = bf.panel_titration_show.open(root);
    own.fitter = bf.panel_titration_fit.open(root, () => work(own), (fit) => fitted(own, fit));
    return { name: "titration", late: true, answer: (situation) => answer(own, situation) };
  }

  function answer(own, situation) {
    own.situation = situation;
    if (own.editor.field.value !== "" || own.show.view !== null) soon(own);
    return { lines: [], facts: {} };
  }

  function soon(own) {
    clearTimeout(own.timer);
    own.timer = setTimeout(() => work(own), QUIET);
  }

  /** The text of an example under the conditions of now. */
  function invented({ situation }) {
    const { subject, texts } = situation;
    const chosen = subject.additions[texts.get(PREFIX + "titrant")];
    const liquids = subject.additions.filter((each) => each.volume !== null);
    const { temperature, sample } = settingOf(situation);
    const titrants = chosen === undefined ? liquids : [chosen];
    return bf.titration_example.exampleOf(subject, titrants, temperature, sample).text;
  }

  /** What the reader set for the titration, in SI units. */
  function settingOf({ values, temperature }) {
    const number = (/** @type {string} */ name) => values[PREFIX + name];
    const given = (/** @type {string} */ name) => Number.isFinite(number(name));
    return {
      temperature: given("temperature")
        ? number("temperature") + bf.water.ZERO_CELSIUS : temperature,
      sample: given("sample") ? number("sample") * 1e-6 : null,
      reading: given("reading") ? number("reading") : null,
      burette: given("burette") ? number("burette") * 1e-6 : null,
    };
  }

  /** Look at the points under the conditions of now, and show what they tell. */
  function work(own) {
    clearTimeout(own.timer);
    const { situation, editor, show } = own;
    if (situation === null) return;
    if (Array.from(situation.faults).some((name) => name.startsWith(PREFIX))) {
      bf.panel_titration_show.setBack(show, true);
      return;
    }
    if (editor.field.value.trim() === "") {
      give(own, null, "");
      return;
    }
    const { parsed } = understood(own);
    if (parsed.points === null) {
      const count = parsed.complaints.length;
      const words = count === 1 ? "One place cannot be read; the text stays as it is."
        : `${count} places cannot be read; the text stays as it is.`;
      bf.panel_titration_points.tell(editor, words, parsed.complaints);
      bf.panel_titration_fit.end(own.fitter);
      bf.panel_titration_show.setBack(show, true);
      return;
    }
    const { view, problem } = viewOf(own, parsed);
    give(own, view, problem);
  }

  /** The points of the text, read again only where it has changed. */
  function understood(own) {
    const text = own.editor.field.value;
    const unit = own.situation.texts.get(PREFIX + "unit");
    if (own.read === null || own.read.text !== text || own.read.unit !== unit) {
      const parsed = bf.measured.parsed(text, unit);
      const found = parsed.points === null ? [] : bf.end_points.endPoints(parsed.points);
      own.read = { text, unit, parsed, found };
    }
    return own.read;
  }

  /** @returns {{view: View | null, problem: string}} what stands in the way, or a remark */
  function viewOf({ situation, read, editor }, { points, layout }) {
    const last = points.volume[points.volume.length - 1];
    if (points.pH.length < FEWEST || !(last > 0)) {
      const count = points.pH.length === 1 ? "1 point" : points.pH.length + " points";
      return { view: null, problem: `${count}: at least ${FEWEST}, and some titrant, are needed.` };
    }
    const { subject, texts } = situation;
    const chosen = texts.get(PREFIX + "titrant");
    const added = chosen === "auto"
      ? bf.experiments.suited(subject.additions, points.pH) : subject.additions[chosen];
    if (added === null) {
      const problem = "No liquid titrant of this formulation moves the pH the way these readings " +
        "went. Choose the titrant above.";
      return { view: null, problem };
    }
    const { temperature, sample, reading, burette } = settingOf(situation);
    const experiment = bf.experiments.experimentOf(subject, added, temperature, sample);
    const usual = bf.measured.defaultPrecision(points);
    const precision = {
      pH: reading === null ? usual.pH : reading,
      volume: burette === null ? usual.volume : burette,
    };
    const { found } = read;
    const { status } = bf.experiments.predictedCurve(experiment, [0, last / 2, last]).state;
    const view = {
      title: document.querySelector("h1").textContent,
      sample: sample === null ? "The whole make-up" : bf.formatting.volume(sample) + " of sample",
      experiment, points, layout, precision, found,
      lines: bf.gran.granLines(experiment, points, found, precision),
      fit: null,
      invented: editor.invented,
    };
    return { view, problem: NOTES[Math.max(...status)] };
  }

  /** Show a view, or that there is none, and fit it where a fit has been asked for. */
  function give(own, view, words) {
    const { fitter, show, situation } = own;
    bf.panel_titration_points.tell(own.editor, words);
    if (view === null) {
      bf.panel_titration_fit.end(fitter);
      bf.panel_titration_show.put(show, null);
      return;
    }
    bf.panel_titration_show.put(show, view, fitter.wanted);
    if (!fitter.wanted) return;
    const free = bf.panel_titration_fit.freeOf(situation.texts);
    bf.panel_titration_fit.start(fitter, view, free);
  }

  function fitted({ show }, fit) {
    if (show.view === null || show.view.experiment !== fit.experiment) return;
    show.view.fit = fit;
    bf.panel_titration_show.putFit(show);
    bf.panel_titration_show.follow(show);
  }

  bf.panel_titration = { open };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
