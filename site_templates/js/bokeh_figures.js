/** Figures as interactive Bokeh plots. The counterpart of bokeh_figures.py, which makes the empty
 * plots (`bufferfolio.skeletons`): their renderers and tools come in the order written there.
 *
 * Bokeh itself is needed from the first `embed` on; whoever calls has loaded it by then.
 *
 * @typedef {{element: HTMLElement, plot: object, view: object, figure: Figure, shape: string,
 *   parts: object}} Handle
 */
(function (bf) {
  "use strict";

  const SERIES = 10; // as in bokeh_figures.py
  const POINTS = 2;
  const TOOLS = ["box", "wheel", "pan"];

  /** Draw a figure into an element, which gets the shape of the static drawing.
   * @param {HTMLElement} element empty, in the page, with a width
   * @param {Figure} figure
   * @returns {Promise<Handle>} settled once the plot is drawn */
  async function embed(element, figure) {
    const { WIDTH, TALL } = bf.figure_layout;
    const shape = shapeOf(figure);
    element.style.aspectRatio = WIDTH + " / " + TALL;
    // Bokeh takes parts of the description for its own: every plot gets a copy.
    const copy = JSON.parse(JSON.stringify(bf.skeletons[shape]));
    globalThis.Bokeh.logger.set_level("warn"); // else it reports every plot on the console
    const views = await globalThis.Bokeh.embed.embed_item(copy, element);
    const view = views.roots[0];
    const handle = { element, plot: view.model, view, figure: null, shape, parts: null };
    handle.parts = partsOf(handle.plot, shape);
    update(handle, figure);
    await view.ready;
    // What takes the pointer would else be a tab stop without a name, inside a picture.
    view.canvas_view.events_el.removeAttribute("tabindex");
    return handle;
  }

  /** Show new data. What a reader has zoomed to stays, unless the figure's own axes have moved.
   * @param {Handle} handle @param {Figure} figure of the same kind and scale */
  function update(handle, figure) {
    if (shapeOf(figure) !== handle.shape) {
      throw new Error("a " + handle.shape + " plot cannot show " + shapeOf(figure));
    }
    const before = handle.figure;
    handle.figure = figure;
    if (before === null || !sameAxis(before.x, figure.x)) {
      setAxis(handle.plot.x_range, figure.x);
    }
    if (before === null || !sameAxis(before.y, figure.y)) {
      setAxis(handle.plot.y_range, figure.y);
    }
    fillSource(handle.parts.upright, { x: markValues(figure, "x") });
    fillSource(handle.parts.level, { y: markValues(figure, "y") });
    if (before === null || textsOf(before) !== textsOf(figure)) {
      fillTexts(handle, figure);
    }
    if (before === null) {
      recolour(handle);
    } else {
      fillInside(handle, figure);
    }
  }

  /** Let dragging and the wheel do one thing, or nothing, in which case they scroll the page.
   * @param {Handle} handle
   * @param {"box"|"wheel"|"pan"|null} tool drag a box to zoom to; zoom by wheel or pinch; drag */
  function activate(handle, tool) {
    TOOLS.forEach((name, at) => {
      handle.plot.toolbar.tools[at].active = name === tool;
    });
  }

  /** Show the whole figure again. @param {Handle} handle */
  function reset(handle) {
    setAxis(handle.plot.x_range, handle.figure.x);
    setAxis(handle.plot.y_range, handle.figure.y);
  }

  /** The plot as it is seen now. @param {Handle} handle @returns {Promise<Blob>} a PNG picture */
  function picture(handle) {
    const layer = handle.view.export();
    const { ctx } = layer;
    // The plot is transparent, as the page's own surface lies under it; a picture needs its own.
    ctx.setTransform(1, 0, 0, 1, 0, 0);
    ctx.globalCompositeOperation = "destination-over";
    ctx.fillStyle = lookOf(handle.element).surface;
    ctx.fillRect(0, 0, layer.canvas.width, layer.canvas.height);
    return layer.to_blob();
  }

  /** Take the colours and text sizes that the page has now. @param {Handle} handle */
  function recolour(handle) {
    const look = lookOf(handle.element);
    const { plot, parts } = handle;
    handle.element.style.background = look.surface;
    plot.outline_line_color = look.frame;
    const [xAxis, xTitle] = plot.below;
    for (const title of [plot.title, xTitle]) {
      title.setv({ text_color: look.ink, text_font: look.font, text_font_size: look.size });
    }
    for (const axis of [xAxis, plot.left[0]]) {
      axis.setv({
        major_tick_line_color: look.frame, major_label_text_color: look.ink,
        major_label_text_font: look.font, major_label_text_font_size: look.size,
      });
    }
    parts.upright.glyph.line_color = look.mark;
    parts.level.glyph.line_color = look.mark;
    parts.words.glyph.setv({
      background_fill_color: look.surface, text_font: look.font, text_font_size: look.size,
    });
    if (parts.between !== undefined) {
      parts.between.glyph.line_color = look.frame;
      parts.limits.glyph.line_color = look.mark;
    }
    for (const line of parts.lines || []) line.glyph.line_width = look.line;
    // Lines, bands and words carry colours with their data.
    fillInside(handle, handle.figure);
  }

  function shapeOf(figure) {
    return figure.kind === "lines" && figure.y.scale === "log" ? "log lines" : figure.kind;
  }

  /** The renderers of a plot by what they are for. */
  function partsOf(plot, shape) {
    const { renderers } = plot;
    const [upright, level, words] = renderers.slice(-3);
    if (shape !== "map") {
      const points = renderers.slice(SERIES, SERIES + POINTS);
      return { lines: renderers.slice(0, SERIES), points, upright, level, words };
    }
    const [bands, cells, between, limits] = renderers;
    return { bands, cells, between, limits, upright, level, words };
  }

  function sameAxis(one, other) {
    return one.low === other.low && one.high === other.high;
  }

  function setAxis(range, axis) {
    range.setv({ start: axis.low, end: axis.high });
  }

  function markValues(figure, axis) {
    return figure.marks.filter((mark) => mark.axis === axis).map((mark) => mark.value);
  }

  function fillSource(renderer, columns) {
    renderer.data_source.data = columns;
  }

  function fillInside(handle, figure) {
    if (figure.cells === null) {
      fillLines(handle, figure);
    } else {
      fillMap(handle, figure, figure.cells);
    }
  }

  function fillLines(handle, figure) {
    const look = lookOf(handle.element);
    const lines = figure.series.filter((each) => !each.points);
    handle.parts.lines.forEach((renderer, at) => {
      if (fillSeries(renderer, lines[at], look)) {
        renderer.glyph.line_dash = bf.skeletons.dashes[lines[at].style % bf.figures.STYLES];
      }
    });
    const points = figure.series.filter((each) => each.points);
    handle.parts.points.forEach((renderer, at) => fillSeries(renderer, points[at], look));
    fillWords(handle, bf.figure_layout.linesLayout(figure).words, look);
  }

  /** Show a series, or nothing where there is none; say whether it is seen. */
  function fillSeries(renderer, series, look) {
    const shown = series !== undefined && series.visible;
    renderer.visible = shown;
    if (shown) {
      fillSource(renderer, { x: numbers(series.x), y: numbers(series.y) });
      renderer.name = series.label;
      renderer.glyph.line_color = look.series(series.style);
    }
    return shown;
  }

  function fillMap(handle, figure, cells) {
    const look = lookOf(handle.element);
    const inside = bf.figure_layout.mapLayout(figure, cells);
    const colours = bf.figures.bands(figure).map((band) => look.band(band.colour));
    const rings = inside.regions.map((region) => closedRegion(region));
    fillSource(handle.parts.bands, {
      xs: rings.map((each) => [each.map((ring) => xValues(figure, ring))]),
      ys: rings.map((each) => [each.map((ring) => yValues(figure, ring))]),
      colour: colours,
    });
    fillSource(handle.parts.cells, cellColumns(cells));
    for (const [renderer, paths] of [
      [handle.parts.between, inside.between], [handle.parts.limits, inside.limits],
    ]) {
      fillSource(renderer, {
        xs: paths.map((path) => xValues(figure, path)),
        ys: paths.map((path) => yValues(figure, path)),
      });
    }
    fillWords(handle, inside.words, look);
  }

  /** The outlines of a region, after one without area around the whole frame: Bokeh looks at the
   * first outline only when it asks whether a region is in sight. */
  function closedRegion(region) {
    const { FRAME } = bf.figure_layout;
    const diagonal = [[FRAME.left, FRAME.top], [FRAME.right, FRAME.bottom]];
    return region.length === 0 ? [] : [diagonal, ...region];
  }

  /** One row for each cell with a value, for reading off. */
  function cellColumns(cells) {
    const columns = { left: [], right: [], bottom: [], top: [], x: [], y: [], value: [] };
    cells.values.forEach((row, up) => {
      row.forEach((value, along) => {
        if (Number.isFinite(value)) {
          columns.left.push(cells.x[along]);
          columns.right.push(cells.x[along + 1]);
          columns.bottom.push(cells.y[up]);
          columns.top.push(cells.y[up + 1]);
          columns.x.push((cells.x[along] + cells.x[along + 1]) / 2);
          columns.y.push((cells.y[up] + cells.y[up + 1]) / 2);
          columns.value.push(value);
        }
      });
    });
    return columns;
  }

  function fillWords(handle, words, look) {
    const { figure } = handle;
    const middles = words.map(({ box }) => [
      (box.left + box.right) / 2, (box.top + box.bottom) / 2,
    ]);
    fillSource(handle.parts.words, {
      x: xValues(figure, middles),
      y: yValues(figure, middles),
      text: words.map((word) => word.text),
      weight: words.map((word) => (word.classes.includes("name") ? "bold" : "normal")),
      colour: words.map((word) => {
        const own = /\bt(\d+)$/.exec(word.classes);
        return own === null ? look.ink : look.series(Number(own[1]));
      }),
    });
  }

  /** Everything that fillTexts writes, to be compared. */
  function textsOf(figure) {
    const { cells } = figure;
    const read = cells === null ? null : [cells.label, cells.unit, cells.decimals];
    return JSON.stringify([figure.x, figure.y, read]);
  }

  /** The titles of the axes, and what the pointer reads. */
  function fillTexts(handle, figure) {
    const { axisTitle } = bf.figures;
    const { plot } = handle;
    plot.title.text = axisTitle(figure.y);
    plot.below[1].text = axisTitle(figure.x);
    const hover = plot.toolbar.tools[TOOLS.length];
    const { cells } = figure;
    const first = cells === null
      ? "<b>$name</b>"
      : "<b>" + reading(cells, "value", decimalsFormat(cells.decimals)) + "</b>";
    const x = reading(figure.x, "x", axisFormat(figure.x));
    const y = reading(figure.y, "y", axisFormat(figure.y));
    // Markup of our own: Bokeh's own rows wear a blue too pale to read.
    hover.tooltips = [first, x, y].map((row) => "<div>" + row + "</div>").join("");
  }

  /** One row that the pointer reads: what, how much, in which unit. */
  function reading(what, column, format) {
    const unit = what.unit ? " " + what.unit : "";
    return bf.svg_figures.escaped(what.label) + " @" + column + "{" + format + "}" +
      bf.svg_figures.escaped(unit);
  }

  /** Digits that tell five hundred places of an axis apart. */
  function axisFormat(axis) {
    if (axis.scale === "log") {
      return "0.00e+0";
    }
    const [, exponent] = bf.figure_ticks.stepOf(axis.high - axis.low, 500);
    return decimalsFormat(Math.max(0, -exponent));
  }

  function decimalsFormat(decimals) {
    return decimals === 0 ? "0" : "0." + "0".repeat(decimals);
  }

  function numbers(values) {
    return Array.from(values, (each) => (each === null ? NaN : each));
  }

  function xValues(figure, points) {
    const { FRAME } = bf.figure_layout;
    return points.map(([x]) => along(figure.x, (x - FRAME.left) / (FRAME.right - FRAME.left)));
  }

  function yValues(figure, points) {
    const { FRAME } = bf.figure_layout;
    return points.map(([, y]) => along(figure.y, (FRAME.bottom - y) / (FRAME.bottom - FRAME.top)));
  }

  /** The value at a part of an axis: the inverse of figure_layout.across. */
  function along(axis, part) {
    return axis.scale === "log"
      ? axis.low * Math.pow(axis.high / axis.low, part)
      : axis.low + part * (axis.high - axis.low);
  }

  /** The colours of the page (custom properties of figure_styles.py) and the size of words. */
  function lookOf(element) {
    const style = getComputedStyle(element);
    const colour = (name) => style.getPropertyValue("--" + name).trim();
    // As large as in the static drawing at this width, within what reads well on any screen.
    const scaled = (14 * element.clientWidth) / bf.figure_layout.WIDTH;
    return {
      surface: colour("figure-surface"), ink: colour("figure-ink"),
      frame: colour("figure-frame"), mark: colour("figure-mark"),
      line: Number(colour("figure-line")),
      series: (at) => colour("s" + (at % bf.figures.STYLES)),
      band: (at) => colour("m" + at),
      font: style.fontFamily,
      size: Math.min(Math.max(Math.round(scaled), 10), 14) + "px",
    };
  }

  bf.bokeh_figures = { embed, update, activate, reset, picture, recolour };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
