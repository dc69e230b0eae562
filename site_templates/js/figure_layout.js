/** Where everything inside a figure's frame lies, in px of the drawing. Mirrors figure_layout.py.
 * @typedef {{text: string, box: Box, classes: string}} Word */
(function (bf) {
  "use strict";

  const WIDTH = 520;
  const TALL = 336;
  const FRAME = { left: 54, top: 30, right: 510, bottom: 290 };

  /** Where a value lies on an axis drawn from `start` to `end`; NaN if nowhere.
   * @param {Axis} axis @param {number|null} value @param {number} start @param {number} end
   * @returns {number} px */
  function across(axis, value, start, end) {
    if (!Number.isFinite(value)) {
      return NaN;
    }
    let { low, high } = axis;
    if (axis.scale === "log") {
      if (!(value > 0)) {
        return NaN;
      }
      low = Math.log10(low);
      high = Math.log10(high);
      value = Math.log10(value);
    }
    return start + ((value - low) / (high - low)) * (end - start);
  }

  /** A series in px: cut at gaps and at the frame, and simplified; points stay alone.
   * @param {Figure} figure @param {Series} series @param {Box} frame @returns {Point[][]} */
  function seriesPaths(figure, series, frame) {
    const points = [];
    for (let at = 0; at < series.x.length; at += 1) {
      points.push([
        across(figure.x, series.x[at], frame.left, frame.right),
        across(figure.y, series.y[at], frame.bottom, frame.top),
      ]);
    }
    if (series.points) {
      return bf.line_paths.scattered(points, frame);
    }
    return bf.line_paths.clipped(points, frame).map(bf.line_paths.simplified);
  }

  /** The visible lines of a figure, and its marks' and lines' words where they fit.
   * @param {Figure} figure @returns {{paths: Point[][][], words: Word[]}} */
  function linesLayout(figure) {
    const visible = figure.series.filter((each) => each.visible);
    const paths = visible.map((each) => seriesPaths(figure, each, FRAME));
    const profiles = paths.map((each) => bf.label_places.profile(each, FRAME));
    const words = markWords(figure, profiles);
    visible.forEach((each, at) => {
      const others = profiles.filter((other) => other !== profiles[at]);
      const taken = [...markBoxes(figure), ...words.map((word) => word.box)];
      const box = bf.label_places.linePlace(each.label, profiles[at], others, taken, FRAME);
      if (box !== null) {
        const classes = "halo name t" + (each.style % bf.figures.STYLES);
        words.push({ text: each.label, box, classes });
      }
    });
    return { paths, words };
  }

  /** The bands of a map, the lines between them, and the words that fit on it.
   * @param {Figure} figure @param {Cells} cells
   * @returns {{regions: Point[][][], between: Point[][], limits: Point[][], words: Word[]}} */
  function mapLayout(figure, cells) {
    const { simplified } = bf.line_paths;
    const grid = latticeOf(figure, cells);
    const words = markWords(figure, []);
    const limits = [];
    const marked = figure.marks.filter((mark) => mark.axis === "value");
    for (const mark of marked) {
      const lines = bf.contours.lines(bf.contours.loops(grid, mark.value)).map(simplified);
      limits.push(...lines);
      words.push(...valueWord(mark.label, lines, words, "halo name"));
    }
    const regions = [];
    const between = [];
    for (const band of bf.figures.bands(figure)) {
      const loops = bf.contours.loops(grid, band.low);
      const outlines = loops.map((loop) =>
        simplified([...loop, loop[0]].map((each) => [each.x, each.y])));
      regions.push(outlines.filter((each) => each.length > 3).map((each) => each.slice(0, -1)));
      if (regions.length > 1) {
        const lines = bf.contours.lines(loops).map(simplified);
        between.push(...lines);
        if (!marked.some((mark) => mark.value === band.low)) {
          words.push(...valueWord(band.label.split(" ")[0], lines, words, "halo"));
        }
      }
    }
    return { regions, between, limits, words };
  }

  function latticeOf(figure, cells) {
    return bf.contours.lattice(
      Array.from(cells.x, (each) => across(figure.x, each, FRAME.left, FRAME.right)),
      Array.from(cells.y, (each) => across(figure.y, each, FRAME.bottom, FRAME.top)),
      cells.values.map((row) => Array.from(row, (each) => (each === null ? NaN : each))),
    );
  }

  /** The words of marks across an axis.
   * @param {Figure} figure @param {Profile[]} profiles @returns {Word[]} */
  function markWords(figure, profiles) {
    const words = [];
    for (const mark of figure.marks) {
      const at = markPosition(figure, mark);
      if (at === null) {
        continue;
      }
      const taken = [...markBoxes(figure), ...words.map((word) => word.box)];
      const box = bf.label_places.markPlace(markChoices(mark, at), profiles, taken, FRAME);
      if (box !== null) {
        words.push({ text: mark.label, box, classes: "halo" });
      }
    }
    return words;
  }

  /** The hairlines of marks as boxes that no word should cross.
   * @param {Figure} figure @returns {Box[]} */
  function markBoxes(figure) {
    const boxes = [];
    for (const mark of figure.marks) {
      const at = markPosition(figure, mark);
      if (at !== null && mark.axis === "x") {
        boxes.push({ left: at, top: FRAME.top, right: at, bottom: FRAME.bottom });
      } else if (at !== null) {
        boxes.push({ left: FRAME.left, top: at, right: FRAME.right, bottom: at });
      }
    }
    return boxes;
  }

  /** Where a mark crosses its axis; null outside the frame or on no axis.
   * @param {Figure} figure @param {Mark} mark @returns {number|null} px */
  function markPosition(figure, mark) {
    if (mark.axis === "x") {
      const at = across(figure.x, mark.value, FRAME.left, FRAME.right);
      return at >= FRAME.left && at <= FRAME.right ? at : null;
    }
    if (mark.axis === "y") {
      const at = across(figure.y, mark.value, FRAME.bottom, FRAME.top);
      return at >= FRAME.top && at <= FRAME.bottom ? at : null;
    }
    return null;
  }

  function markChoices(mark, at) {
    const { HEIGHT, textWidth } = bf.label_places;
    const width = textWidth(mark.label);
    const boxes = [];
    const add = (left, top) => {
      boxes.push({ left, top, right: left + width, bottom: top + HEIGHT });
    };
    if (mark.axis === "y") {
      const eighths = [2, 4, 1, 3].map(
        (part) => FRAME.left + (part * (FRAME.right - FRAME.left)) / 8);
      for (const left of [FRAME.right - 6 - width, FRAME.left + 6, ...eighths]) {
        add(left, at - 3 - HEIGHT);
        add(left, at + 3);
      }
      return boxes;
    }
    for (let row = 0; row < 16; row += 1) {
      const top = row < 4 ? FRAME.top + 4 + row * HEIGHT : FRAME.bottom - 6 - (row - 3) * HEIGHT;
      add(at + 5, top);
      add(at - 5 - width, top);
    }
    return boxes;
  }

  /** The text of an equal-value line, as near the middle of the map as it fits. */
  function valueWord(text, lines, words, classes) {
    const { HEIGHT, textWidth, clear } = bf.label_places;
    const half = textWidth(text) / 2;
    const middle = (FRAME.top + FRAME.bottom) / 2;
    const taken = words.map((word) => word.box);
    let best = null;
    let bestDistance = Infinity;
    for (const [x, y] of spots(lines)) {
      const distance = Math.abs(y - middle);
      const box = { left: x - half, top: y - HEIGHT / 2, right: x + half, bottom: y + HEIGHT / 2 };
      if (distance < bestDistance && clear(box, taken, FRAME)) {
        best = box;
        bestDistance = distance;
      }
    }
    return best === null ? [] : [{ text, box: best, classes }];
  }

  /** Points along lines where a text may sit: five on each straight piece. */
  function spots(lines) {
    const found = [];
    for (const line of lines) {
      for (let at = 1; at < line.length; at += 1) {
        const [[x0, y0], [x1, y1]] = [line[at - 1], line[at]];
        for (let part = 0; part < 5; part += 1) {
          found.push([x0 + (part / 5) * (x1 - x0), y0 + (part / 5) * (y1 - y0)]);
        }
      }
    }
    return found;
  }

  bf.figure_layout = {
    WIDTH, TALL, FRAME, across, seriesPaths, linesLayout, mapLayout, markPosition,
  };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
