/** Lines in px of a drawing: cut at gaps and at a frame, and without points nobody would miss.
 * Mirrors line_paths.py. @typedef {[number, number]} Point
 * @typedef {{left: number, top: number, right: number, bottom: number}} Box */
(function (bf) {
  "use strict";

  const TOLERANCE = 0.25; // px
  const CROWDED = 3; // px; of points in the same square of this side one is drawn

  /** The parts of a line that lie in the frame; a point that is not finite is a gap.
   * @param {Point[]} points @param {Box} frame @returns {Point[][]} */
  function clipped(points, frame) {
    const paths = [];
    for (let at = 1; at < points.length; at += 1) {
      const part = inside(points[at - 1], points[at], frame);
      if (part === null) {
        continue;
      }
      const path = paths.length > 0 ? paths[paths.length - 1] : null;
      const end = path === null ? null : path[path.length - 1];
      if (end !== null && end[0] === part[0][0] && end[1] === part[0][1]) {
        path.push(part[1]);
      } else {
        paths.push([part[0], part[1]]);
      }
    }
    return paths;
  }

  /** The part of a segment inside the frame (Liang and Barsky's clipping). */
  function inside(start, end, frame) {
    const acrossX = end[0] - start[0];
    const acrossY = end[1] - start[1];
    if (!Number.isFinite(acrossX) || !Number.isFinite(acrossY)) {
      return null;
    }
    let enter = 0;
    let leave = 1;
    for (const [step, distance] of [
      [-acrossX, start[0] - frame.left],
      [acrossX, frame.right - start[0]],
      [-acrossY, start[1] - frame.top],
      [acrossY, frame.bottom - start[1]],
    ]) {
      if (step === 0) {
        if (distance < 0) {
          return null;
        }
      } else if (step < 0) {
        enter = Math.max(enter, distance / step);
      } else {
        leave = Math.min(leave, distance / step);
      }
    }
    if (enter > leave) {
      return null;
    }
    return [
      enter === 0 ? start : [start[0] + enter * acrossX, start[1] + enter * acrossY],
      leave === 1 ? end : [start[0] + leave * acrossX, start[1] + leave * acrossY],
    ];
  }

  /** A path with fewer points, nowhere off by more than the tolerance (Douglas, Peucker).
   * @param {Point[]} path @returns {Point[]} */
  function simplified(path) {
    const keep = new Set([0, path.length - 1]);
    const stack = [[0, path.length - 1]];
    while (stack.length > 0) {
      const [first, last] = stack.pop();
      let furthest = first;
      let most = TOLERANCE * TOLERANCE;
      for (let at = first + 1; at < last; at += 1) {
        const distance = squareDistance(path[at], path[first], path[last]);
        if (distance > most) {
          furthest = at;
          most = distance;
        }
      }
      if (furthest !== first) {
        keep.add(furthest);
        stack.push([first, furthest]);
        stack.push([furthest, last]);
      }
    }
    return path.filter((each, at) => keep.has(at));
  }

  /** The points inside the frame as paths of no length, without those that hide others.
   * @param {Point[]} points @param {Box} frame @returns {Point[][]} */
  function scattered(points, frame) {
    const taken = new Set();
    const paths = [];
    for (const [x, y] of points) {
      // A comparison with what is not finite is false.
      if (frame.left <= x && x <= frame.right && frame.top <= y && y <= frame.bottom) {
        const square = Math.floor(x / CROWDED) + " " + Math.floor(y / CROWDED);
        if (!taken.has(square)) {
          taken.add(square);
          paths.push([[x, y], [x, y]]);
        }
      }
    }
    return paths;
  }

  function squareDistance(point, start, end) {
    const acrossX = end[0] - start[0];
    const acrossY = end[1] - start[1];
    let x = point[0] - start[0];
    let y = point[1] - start[1];
    const length = acrossX * acrossX + acrossY * acrossY;
    let part = length === 0 ? 0 : (x * acrossX + y * acrossY) / length;
    part = Math.min(Math.max(part, 0), 1);
    x -= part * acrossX;
    y -= part * acrossY;
    return x * x + y * y;
  }

  bf.line_paths = { clipped, scattered, simplified };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
