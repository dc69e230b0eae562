/* Bokeh on the page: its scripts fetched once and late, its plots put in the place of the static
 * drawings. Whatever goes wrong here leaves a page with its drawings. */
(function (bf) {
  "use strict";

  const QUIET = 400; // ms without input before a plot is made: making one takes longer than a frame

  let shared = null; // a page fetches Bokeh once, and makes one plot at a time, whoever asks

  /** The maker of plots of this page.
   * @param {string} assets path of the shared scripts
   * @returns {{quietFrom: number, scripts: Promise<void> | null, assets: string, busy: boolean,
   *   waiting: (() => Promise<void>)[], broken: boolean}}
   */
  function studio(assets) {
    shared = shared ||
      { assets, scripts: null, quietFrom: 0, busy: false, waiting: [], broken: false };
    return shared;
  }

  /** Draw a figure as a Bokeh plot when the page has time for it.
   * @param {object} maker of `studio`
   * @param {HTMLElement} element the page's `figure`
   * @param {() => Figure} current what is to be drawn by then
   * @returns {Promise<object | null>} a handle of bokeh_figures; null where there will be none
   */
  function plotLater(maker, element, current) {
    return new Promise((resolve) => {
      maker.waiting.push(async () => resolve(await plotNow(maker, element, current)));
      work(maker);
    });
  }

  /** Make the plots that are wanted, one after the other, each in a quiet moment. */
  async function work(maker) {
    if (maker.busy) return;
    maker.busy = true;
    while (maker.waiting.length > 0) {
      await quietMoment(maker);
      await maker.waiting.shift()();
    }
    maker.busy = false;
  }

  /** Wait until what is due has been painted and nobody is moving anything. */
  async function quietMoment(maker) {
    do {
      await painted();
      const wait = maker.quietFrom - performance.now();
      if (wait > 0) await new Promise((resolve) => setTimeout(resolve, wait));
    } while (performance.now() < maker.quietFrom);
  }

  function painted() {
    return new Promise((resolve) => {
      requestAnimationFrame(() => setTimeout(resolve));
    });
  }

  /** Wait with plots: the reader is moving something. @param {object} maker */
  function disturb(maker) {
    maker.quietFrom = performance.now() + QUIET;
  }

  async function plotNow(maker, element, current) {
    if (maker.broken) return null;
    const place = document.createElement("div");
    place.className = "plot-live";
    place.setAttribute("role", "img");
    place.setAttribute("aria-label", current().title); // its whole words come with the first update
    try {
      maker.scripts = maker.scripts || fetchScripts(maker.assets);
      await maker.scripts;
      element.querySelector(".plot-picture").after(place);
      element.classList.add("embedding");
      const handle = await bf.bokeh_figures.embed(place, current());
      element.classList.replace("embedding", "live");
      return handle;
    } catch {
      maker.broken = true;
      element.classList.remove("embedding");
      place.remove();
      return null;
    }
  }

  async function fetchScripts(assets) {
    await Promise.all([fetchScript(assets + "bokeh.min.js"), fetchScript(assets + "skeletons.js")]);
  }

  function fetchScript(path) {
    return new Promise((resolve, reject) => {
      const script = document.createElement("script");
      script.src = path;
      script.addEventListener("load", resolve);
      script.addEventListener("error", reject);
      document.head.append(script);
    });
  }

  bf.panel_bokeh = { studio, plotLater, disturb };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
