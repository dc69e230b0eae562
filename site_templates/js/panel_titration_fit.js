/* The fit of a titration on the page: what is free, started and ended by buttons, told as it goes.
 * Once asked for, it follows what the reader changes.
 *
 * @typedef {object} Fitter
 * @property {HTMLElement} root
 * @property {number} run counts fits: one that is not the last ends itself
 * @property {boolean} wanted whether the reader has asked for a fit
 * @property {(fit: Fit) => void} done
 */
(function (bf) {
  "use strict";

  /** @param {HTMLElement} root the section @param {() => void} start is asked to fit what is there
   * @param {(fit: Fit) => void} done @returns {Fitter} */
  function open(root, start, done) {
    const fitter = { root, run: 0, wanted: false, done };
    const [fit, cancel] = buttonsOf(fitter);
    fit.disabled = false;
    fit.addEventListener("click", () => {
      fitter.wanted = true;
      start();
    });
    cancel.disabled = false;
    cancel.addEventListener("click", () => {
      end(fitter);
      say(fitter, "The fit was ended. What stands below is of before.");
      fit.focus();
    });
    return fitter;
  }

  function buttonsOf({ root }) {
    return ["titration-fit", "titration-cancel"].map((action) =>
      root.querySelector('[data-action="' + action + '"]'));
  }

  /** The quantities that the reader has set free. @param {Map<string, string>} texts
   * @returns {Free[]} */
  function freeOf(texts) {
    const chosen = (/** @type {string} */ name) => texts.get("titration-" + name);
    const free = [];
    if (chosen("strength") === "free") free.push({ kind: "strength", family: "", step: 0 });
    if (chosen("total") !== "held") free.push({ kind: "total", family: chosen("total"), step: 0 });
    if (chosen("pK") !== "held") {
      const [family, step] = chosen("pK").split(":");
      free.push({ kind: "pK", family, step: Number(step) - 1 });
    }
    for (const kind of ["offset", "slope"]) {
      if (chosen(kind) === "free") free.push({ kind, family: "", step: 0 });
    }
    return free;
  }

  /** Fit a titration, in place of a fit that is still on its way.
   * @param {Fitter} fitter @param {View} view @param {Free[]} free */
  async function start(fitter, view, free) {
    fitter.run += 1;
    const { run } = fitter;
    const problem = bf.fit_parameters.freeProblem(view.experiment, free);
    say(fitter, problem === null ? "" : problem[0].toUpperCase() + problem.slice(1) + ".");
    busy(fitter, problem === null);
    if (problem !== null) return;
    try {
      const going = (/** @type {number} */ curves) => {
        if (run === fitter.run) tellProgress(fitter, curves);
        return run === fitter.run;
      };
      const fit = await bf.fitting.fit(view.experiment, view.points, free, view.precision, going);
      if (run !== fitter.run) return;
      busy(fitter, false);
      if (fit !== null) fitter.done(fit);
    } catch {
      if (run !== fitter.run) return;
      busy(fitter, false);
      say(fitter, "These points cannot be fitted.");
    }
  }

  /** End the fit that is on its way, and do not start another. @param {Fitter} fitter */
  function end(fitter) {
    fitter.run += 1;
    fitter.wanted = false;
    busy(fitter, false);
    say(fitter, "");
  }

  function busy(fitter, on) {
    const [, cancel] = buttonsOf(fitter);
    cancel.hidden = !on;
    fitter.root.querySelector('[data-part="progress"]').textContent = on ? "Fitting …" : "";
  }

  function tellProgress({ root }, curves) {
    root.querySelector('[data-part="progress"]').textContent =
      `Fitting … ${curves} curves worked out`;
  }

  function say({ root }, words) {
    const place = root.querySelector('[data-part="refused"]');
    if (place.textContent !== words) place.textContent = words;
  }

  bf.panel_titration_fit = { open, freeOf, start, end };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
