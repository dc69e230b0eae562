/* The page's figures while numbers move: drawn again where they are in sight, after the frame that
 * shows the numbers, one plot a frame, the latest results only. Elsewhere they wait until they come
 * into sight.
 *
 * @typedef {object} Picture
 * @property {HTMLElement} element the page's `figure`
 * @property {string} key
 * @property {HTMLElement} drawing holds the static drawing
 * @property {HTMLElement} summary the words under it
 * @property {HTMLElement | null} bands the colours of a map
 * @property {{drawing: string, summary: string, bands: string}} original what the build made
 *   of them, for paper
 * @property {Figure} figure what is shown, or will be
 * @property {Set<string>} hidden series that the reader has switched off
 * @property {boolean} inSight
 * @property {boolean} asked whether a plot has been asked for
 * @property {boolean} stale whether newer results wait
 * @property {number} refreshed when it was last drawn, in ms of the page's clock
 * @property {object | null} plot a handle of bokeh_figures
 *
 * @typedef {object} Stage
 * @property {Picture[]} pictures
 * @property {Record<string, (results: object) => Figure | null>} makers
 * @property {object | null} results what the pictures are to show; null: what they came with
 * @property {boolean} queued whether a frame has been asked for
 * @property {object} maker of plots, see panel_bokeh
 */
(function (bf) {
  "use strict";

  const FRAME_SHARE = 8; // ms of a frame for working out and drawing

  /** Every figure of a page, ready to follow.
   * @param {ParentNode} root
   * @param {Record<string, Figure>} figures by key, from the page's data block
   * @param {Record<string, (results: object) => Figure | null>} makers by key
   * @param {string} assets path of the shared scripts
   * @returns {Stage}
   */
  function stageOf(root, figures, makers, assets) {
    const elements = Array.from(root.querySelectorAll("figure[data-figure]"));
    const known = elements.filter((element) => element.dataset.figure in figures);
    return {
      pictures: known.map((element) => pictureOf(element, figures[element.dataset.figure])),
      makers,
      results: null,
      queued: false,
      maker: bf.panel_bokeh.studio(assets),
    };
  }

  function pictureOf(element, figure) {
    const drawing = element.querySelector(".plot-picture");
    const summary = element.querySelector("[data-summary]");
    const bands = element.querySelector(".legend.bands");
    const original = {
      drawing: drawing.innerHTML,
      summary: summary.textContent,
      bands: bands === null ? "" : bands.innerHTML,
    };
    return {
      element, key: figure.key, drawing, summary, bands, original, figure, plot: null,
      hidden: new Set(), inSight: false, asked: false, stale: false, refreshed: 0,
    };
  }

  /** Let the figures follow: watch which ones are in sight, and let legends and tables work.
   * @param {Stage} stage
   * @param {() => string[]} remarks what holds for the numbers, for files to take away
   */
  function open(stage, remarks) {
    const byElement = new Map(stage.pictures.map((picture) => [picture.element, picture]));
    const watcher = new IntersectionObserver((entries) => {
      for (const entry of entries) {
        const picture = byElement.get(entry.target);
        picture.inSight = entry.isIntersecting;
        if (picture.inSight) appear(stage, picture);
      }
    }, { rootMargin: "60px" });
    for (const picture of stage.pictures) {
      watcher.observe(picture.element);
      openLegend(picture);
      bf.panel_tools.makeRoom(picture);
      bf.panel_tables.open(picture, remarks, () => {
        if (picture.stale) refresh(stage, picture);
        else bf.panel_tables.refresh(picture);
      });
    }
    matchMedia("(prefers-color-scheme: dark)").addEventListener("change", () => recolour(stage));
    addEventListener("bufferfolio-contrast", () => recolour(stage));
    addEventListener("resize", () => recolour(stage));
  }

  function appear(stage, picture) {
    if (picture.stale) ask(stage);
    if (picture.asked) return;
    picture.asked = true;
    bf.panel_bokeh.plotLater(stage.maker, picture.element, () => picture.figure).then((plot) => {
      if (plot === null) {
        bf.panel_tools.close(picture);
        return;
      }
      picture.plot = plot;
      bf.panel_tools.open(picture);
      draw(picture);
    });
  }

  /** Show new results as soon as a frame allows.
   * @param {Stage} stage
   * @param {object} results
   */
  function follow(stage, results) {
    stage.results = results;
    for (const picture of stage.pictures) picture.stale = true;
    bf.panel_bokeh.disturb(stage.maker);
    ask(stage);
  }

  /** Have figures drawn after the next frame, so that numbers are on the screen before. */
  function ask(stage) {
    if (stage.queued) return;
    stage.queued = true;
    requestAnimationFrame(() => setTimeout(() => work(stage)));
  }

  /** Refresh what waits in sight, the longest waiting first: one plot, or drawings while there is
   * time in a frame. */
  function work(stage) {
    stage.queued = false;
    const waiting = stage.pictures.filter((picture) => picture.stale && picture.inSight);
    waiting.sort((one, other) => one.refreshed - other.refreshed);
    const start = performance.now();
    for (const picture of waiting) {
      refresh(stage, picture);
      picture.refreshed = performance.now();
      if (picture.plot !== null || picture.refreshed - start > FRAME_SHARE) break;
    }
    if (waiting.some((picture) => picture.stale)) ask(stage);
  }

  /** Work out a figure's newest state and draw it.
   * @param {Stage} stage
   * @param {Picture} picture
   */
  function refresh(stage, picture) {
    picture.stale = false;
    const figure = stage.results === null ? null : stage.makers[picture.key](stage.results);
    if (figure === null) return;
    picture.figure = withHidden(figure, picture.hidden);
    draw(picture);
    bf.panel_tables.refresh(picture);
  }

  function withHidden(figure, hidden) {
    const series = figure.series.map((each) => ({ ...each, visible: !hidden.has(each.name) }));
    return { ...figure, series };
  }

  /** Draw a figure where it is seen: in its plot or, without one, as SVG. */
  function draw(picture) {
    const { figure, summary, bands } = picture;
    if (picture.plot !== null) drawPlot(picture);
    if (picture.plot === null) picture.drawing.innerHTML = bf.svg_figures.svg(figure);
    if (summary.textContent !== figure.summary) summary.textContent = figure.summary;
    if (bands !== null) bands.innerHTML = bf.figures.bands(figure).map(bandEntry).join("");
  }

  function drawPlot(picture) {
    try {
      bf.bokeh_figures.update(picture.plot, picture.figure);
      const words = picture.figure.title + ". " + picture.figure.summary;
      picture.plot.element.setAttribute("aria-label", words);
    } catch {
      // The drawing takes over again, and live answers go on.
      picture.plot = null;
      picture.element.classList.remove("live");
      bf.panel_tools.close(picture);
    }
  }

  function bandEntry(band) {
    return '<li><span class="band-swatch m' + band.colour + '"></span>' +
      bf.svg_figures.escaped(band.label) + "</li>";
  }

  /** Let the buttons of a legend switch its lines on and off. */
  function openLegend(picture) {
    for (const button of picture.element.querySelectorAll("button[data-series]")) {
      button.disabled = false;
      button.addEventListener("click", () => {
        const name = button.dataset.series;
        if (!picture.hidden.delete(name)) picture.hidden.add(name);
        button.setAttribute("aria-pressed", String(!picture.hidden.has(name)));
        picture.figure = withHidden(picture.figure, picture.hidden);
        draw(picture);
      });
    }
  }

  /** Take the page's colours and the plots' new sizes once they have settled. */
  function recolour(stage) {
    requestAnimationFrame(() => {
      for (const { plot } of stage.pictures) {
        if (plot !== null) bf.bokeh_figures.recolour(plot);
      }
    });
  }

  /** Show the definition's own conditions, as drawings, while the page is printed.
   * @param {Stage} stage
   */
  function toPaper(stage) {
    for (const { drawing, summary, bands, original } of stage.pictures) {
      drawing.innerHTML = original.drawing;
      summary.textContent = original.summary;
      if (bands !== null) bands.innerHTML = original.bands;
    }
  }

  /** Show again what was shown before. @param {Stage} stage */
  function fromPaper(stage) {
    for (const picture of stage.pictures) draw(picture);
  }

  bf.panel_figures = { stageOf, open, follow, toPaper, fromPaper };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
