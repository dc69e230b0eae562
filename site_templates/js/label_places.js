/** Where words fit among the lines of a figure, in px of the drawing. Mirrors label_places.py.
 * @typedef {{top: number[], bottom: number[]}} Profile */
(function (bf) {
  "use strict";

  const COLUMN = 4;
  const HEIGHT = 13;
  const GAP = 3;
  const ENOUGH = 2;
  const PLACES = 26;
  const AMPLE = 24;
  const NARROW = new Set("₀₁₂₃₄₅₆₇₈₉₊₋⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻ .,:;()il");

  /** The width of a text of 14 px, on the safe side. @param {string} text @returns {number} */
  function textWidth(text) {
    let width = 0;
    for (const character of text) {
      width += NARROW.has(character) ? 5.8 : 8.7;
    }
    return width;
  }

  /** How high and low a line runs in each column of the frame.
   * @param {Point[][]} paths @param {Box} frame @returns {Profile} */
  function profile(paths, frame) {
    const count = Math.ceil((frame.right - frame.left) / COLUMN);
    const found = {
      top: new Array(count).fill(Infinity), bottom: new Array(count).fill(-Infinity),
    };
    for (const path of paths) {
      for (let at = 1; at < path.length; at += 1) {
        cover(found, frame, path[at - 1], path[at]);
      }
    }
    return found;
  }

  function cover(found, frame, start, end) {
    const [[x0, y0], [x1, y1]] = start[0] <= end[0] ? [start, end] : [end, start];
    const lastColumn = found.top.length - 1;
    const first = Math.min(Math.max(Math.floor((x0 - frame.left) / COLUMN), 0), lastColumn);
    const last = Math.min(Math.max(Math.floor((x1 - frame.left) / COLUMN), 0), lastColumn);
    const slope = x1 > x0 ? (y1 - y0) / (x1 - x0) : 0;
    for (let column = first; column <= last; column += 1) {
      const left = frame.left + column * COLUMN;
      const enter = column === first ? y0 : y0 + slope * (left - x0);
      const leave = column === last ? y1 : y0 + slope * (left + COLUMN - x0);
      found.top[column] = Math.min(found.top[column], enter, leave);
      found.bottom[column] = Math.max(found.bottom[column], enter, leave);
    }
  }

  /** The least upright distance from a box to any line; negative where one crosses it.
   * @param {Box} box @param {Profile[]} profiles @param {Box} frame @returns {number} */
  function room(box, profiles, frame) {
    const first = Math.max(Math.floor((box.left - frame.left) / COLUMN), 0);
    const last = Math.floor((box.right - frame.left) / COLUMN);
    let least = AMPLE;
    for (const each of profiles) {
      const end = Math.min(last + 1, each.top.length);
      for (let column = first; column < end; column += 1) {
        const distance = Math.max(each.top[column] - box.bottom, box.top - each.bottom[column]);
        least = Math.min(least, distance);
      }
      if (least < 0) {
        break;
      }
    }
    return least;
  }

  /** Whether a box lies inside the frame and meets no box taken before.
   * @param {Box} box @param {Box[]} taken @param {Box} frame @returns {boolean} */
  function clear(box, taken, frame) {
    if (box.left < frame.left + 2 || box.right > frame.right - 2) {
      return false;
    }
    if (box.top < frame.top + 2 || box.bottom > frame.bottom - 2) {
      return false;
    }
    return taken.every((other) =>
      box.right + 2 < other.left || other.right + 2 < box.left ||
      box.bottom < other.top || other.bottom < box.top);
  }

  /** The best box for a line's own label, above or below it; null where nothing fits.
   * @param {string} text @param {Profile} own @param {Profile[]} others @param {Box[]} taken
   * @param {Box} frame @returns {Box|null} */
  function linePlace(text, own, others, taken, frame) {
    const width = textWidth(text);
    let best = null;
    let bestScore = ENOUGH;
    for (let at = 1; at < PLACES; at += 1) {
      const left = frame.left + (at * (frame.right - frame.left)) / PLACES - width / 2;
      for (const box of beside(own, left, width, frame)) {
        if (!clear(box, taken, frame)) {
          continue;
        }
        const around = room(box, others, frame);
        const score = around - 0.7 * Math.max(ownDistance(own, box, frame) - GAP, 0);
        if (around > ENOUGH && score > bestScore + 0.01) {
          best = box;
          bestScore = score;
        }
      }
    }
    return best;
  }

  function beside(own, left, width, frame) {
    const first = Math.max(Math.floor((left - frame.left) / COLUMN), 0);
    const last = Math.max(Math.floor((left + width - frame.left) / COLUMN), 0);
    const top = Math.min(...own.top.slice(first, last + 1));
    const bottom = Math.max(...own.bottom.slice(first, last + 1));
    if (!Number.isFinite(top)) {
      return [];
    }
    return [
      { left, top: top - GAP - HEIGHT, right: left + width, bottom: top - GAP },
      { left, top: bottom + GAP, right: left + width, bottom: bottom + GAP + HEIGHT },
    ];
  }

  function ownDistance(own, box, frame) {
    const middle = Math.floor(((box.left + box.right) / 2 - frame.left) / COLUMN);
    return Math.max(own.top[middle] - box.bottom, box.top - own.bottom[middle]);
  }

  /** The first box with room, else the clear box with most; null where none is clear.
   * @param {Box[]} choices @param {Profile[]} profiles @param {Box[]} taken @param {Box} frame
   * @returns {Box|null} */
  function markPlace(choices, profiles, taken, frame) {
    let best = null;
    let bestRoom = -Infinity;
    for (const box of choices) {
      if (clear(box, taken, frame)) {
        const around = room(box, profiles, frame);
        if (around >= ENOUGH) {
          return box;
        }
        if (around > bestRoom) {
          best = box;
          bestRoom = around;
        }
      }
    }
    return best;
  }

  bf.label_places = { HEIGHT, textWidth, profile, clear, linePlace, markPlace };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
