/** Figures as SVG text. Mirrors svg_figures.py, character for character. */
(function (bf) {
  "use strict";

  const CIRCLE = "a2.5 2.5 0 1 0 5 0a2.5 2.5 0 1 0-5 0"; // around a point, from its left end
  const RADIUS = 2.5;
  const BASELINE = 10.5;

  /** The figure as an SVG element. @param {Figure} figure @returns {string} */
  function svg(figure) {
    const { WIDTH, TALL } = bf.figure_layout;
    const words = figure.title + ". " + figure.summary;
    const inside = figure.cells === null ? lines(figure) : map(figure, figure.cells);
    return (
      '<svg class="figure" viewBox="0 0 ' + WIDTH + " " + TALL + '" role="img" ' +
      'aria-label="' + escaped(words) + '">' + inside + axes(figure) + "</svg>"
    );
  }

  function lines(figure) {
    const inside = bf.figure_layout.linesLayout(figure);
    const visible = figure.series.filter((each) => each.visible);
    const drawn = visible.map((each, at) => series(each, inside.paths[at]));
    return marks(figure) + drawn.join("") + words(inside.words);
  }

  function map(figure, cells) {
    const inside = bf.figure_layout.mapLayout(figure, cells);
    const filled = bf.figures.bands(figure).map((band, at) =>
      path("m" + band.colour, inside.regions[at].map((each) => pathText(each) + "Z").join("")));
    const between = path("iso", inside.between.map(pathText).join(""));
    const limits = path("limit", inside.limits.map(pathText).join(""));
    return filled.join("") + between + limits + marks(figure) + words(inside.words);
  }

  function series(each, paths) {
    const style = "s" + (each.style % bf.figures.STYLES);
    if (each.points) {
      const starts = paths.map(([[x, y]]) => "M" + tenths(x - RADIUS) + " " + tenths(y));
      return path("circles " + style, starts.map((start) => start + CIRCLE).join(""));
    }
    return path("line " + style, paths.map(pathText).join(""));
  }

  function marks(figure) {
    const { FRAME, markPosition } = bf.figure_layout;
    let drawn = "";
    for (const mark of figure.marks) {
      const at = markPosition(figure, mark);
      if (at !== null && mark.axis === "x") {
        drawn += "M" + tenths(at) + " " + tenths(FRAME.top) + "V" + tenths(FRAME.bottom);
      } else if (at !== null) {
        drawn += "M" + tenths(FRAME.left) + " " + tenths(at) + "H" + tenths(FRAME.right);
      }
    }
    return path("mark", drawn);
  }

  function words(placed) {
    return placed.map((each) =>
      text(each.box.left, each.box.top + BASELINE, each.classes, each.text)).join("");
  }

  function axes(figure) {
    const { FRAME, TALL, across } = bf.figure_layout;
    const { ticks } = bf.figure_ticks;
    let drawn = "";
    let texts = "";
    for (const each of ticks(figure.x.low, figure.x.high, figure.x.scale, 9)) {
      const at = across(figure.x, each.value, FRAME.left, FRAME.right);
      drawn += "M" + tenths(at) + " " + tenths(FRAME.bottom) + "v-5";
      texts += text(at, FRAME.bottom + 17, "c", each.text);
    }
    for (const each of ticks(figure.y.low, figure.y.high, figure.y.scale, 7)) {
      const at = across(figure.y, each.value, FRAME.bottom, FRAME.top);
      drawn += "M" + tenths(FRAME.left) + " " + tenths(at) + "h5";
      texts += text(FRAME.left - 6, at + 5, "n", each.text);
    }
    texts += text(FRAME.right, TALL - 10, "n", bf.figures.axisTitle(figure.x));
    texts += text(8, 18, "", bf.figures.axisTitle(figure.y));
    return frame(FRAME) + path("frame", drawn) + texts;
  }

  function frame(box) {
    const [left, right] = [tenths(box.left), tenths(box.right)];
    const [top, bottom] = [tenths(box.top), tenths(box.bottom)];
    return path("frame", "M" + left + " " + top + "H" + right + "V" + bottom + "H" + left + "Z");
  }

  function path(classes, drawn) {
    return drawn === "" ? "" : '<path class="' + classes + '" d="' + drawn + '"/>';
  }

  function text(x, y, classes, content) {
    const named = classes === "" ? "" : ' class="' + classes + '"';
    return '<text x="' + tenths(x) + '" y="' + tenths(y) + '"' + named + ">" +
      escaped(content) + "</text>";
  }

  /** The path data of a line. @param {Point[]} points @returns {string} */
  function pathText(points) {
    return "M" + points.map(([x, y]) => tenths(x) + " " + tenths(y)).join("L");
  }

  /** Px in tenths, without a tail of zero. @param {number} value @returns {string} */
  function tenths(value) {
    const written = bf.figure_ticks.fixed(value, 1).replace("−", "-");
    return written.endsWith(".0") ? written.slice(0, -2) : written;
  }

  /** Text as it may stand in markup and in quoted attributes.
   * @param {string} content @returns {string} */
  function escaped(content) {
    return content.replaceAll("&", "&amp;").replaceAll("<", "&lt;").replaceAll(">", "&gt;")
      .replaceAll('"', "&quot;");
  }

  bf.svg_figures = { svg, pathText, tenths, escaped };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
