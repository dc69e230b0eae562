/** Curves of equal value through a grid. Mirrors contours.py, which explains the method.
 * @typedef {{x: number[], y: number[], values: number[][]}} Lattice
 * @typedef {{x: number, y: number, inner: boolean}} Crossing */
(function (bf) {
  "use strict";

  // Corner bits: south-west 1, south-east 2, north-east 4, north-west 8; negative: kept apart.
  const WALKS = {
    1: ["SW"], 2: ["ES"], 3: ["EW"], 4: ["NE"], 5: ["SE", "NW"], "-5": ["SW", "NE"], 6: ["NS"],
    7: ["NW"], 8: ["WN"], 9: ["SN"], 10: ["WS", "EN"], "-10": ["ES", "WN"], 11: ["EN"],
    12: ["WE"], 13: ["SE"], 14: ["WS"],
  };

  /** Corners for a grid of cells: centres, the outer edges, and a ring without values.
   * @param {number[]} xEdges @param {number[]} yEdges @param {number[][]} values
   * @returns {Lattice} */
  function lattice(xEdges, yEdges, values) {
    const rows = values.map(extended);
    const columns = rows[0].map((each, at) => extended(rows.map((row) => row[at])));
    const empty = new Array(columns.length + 2).fill(NaN);
    const inner = columns[0].map((each, at) => [NaN, ...columns.map((column) => column[at]), NaN]);
    return { x: corners(xEdges), y: corners(yEdges), values: [empty, ...inner, empty] };
  }

  function corners(edges) {
    const first = edges[0];
    const last = edges[edges.length - 1];
    const centres = edges.slice(1).map((each, at) => (edges[at] + each) / 2);
    return [first, first, ...centres, last, last];
  }

  function extended(row) {
    const size = row.length;
    return [outer(row[0], row[1 % size]), ...row, outer(row[size - 1], row.at(size - 2))];
  }

  function outer(last, before) {
    const beyond = last + (last - before) / 2;
    return Number.isFinite(beyond) ? beyond : last;
  }

  /** The closed curves that together enclose every value at or above a level.
   * @param {Lattice} grid @param {number} level @returns {Crossing[][]} */
  function loops(grid, level) {
    const follows = segments(grid, level);
    const found = [];
    for (const start of follows.keys()) {
      const loop = [];
      let edge = start;
      while (follows.has(edge)) {
        loop.push(crossing(grid, level, edge));
        const next = follows.get(edge);
        follows.delete(edge);
        edge = next;
      }
      found.push(loop);
    }
    return found;
  }

  /** The parts of closed curves that run between values, without border and gaps.
   * @param {Crossing[][]} found @returns {Point[][]} */
  function lines(found) {
    const parts = [];
    for (const loop of found) {
      const outside = loop.findIndex((each) => !each.inner);
      if (outside < 0) {
        parts.push([...loop, loop[0]].map((each) => [each.x, each.y]));
        continue;
      }
      let part = [];
      for (const each of [...loop.slice(outside), ...loop.slice(0, outside + 1)]) {
        if (each.inner) {
          part.push([each.x, each.y]);
        } else if (part.length > 0) {
          parts.push(part);
          part = [];
        }
      }
    }
    return parts.filter((part) => part.length > 1);
  }

  /** Which edge of the grid a curve enters after which, for all cells. */
  function segments(grid, level) {
    const width = grid.x.length;
    const above = grid.values.map((row) => row.map((value) => (value >= level ? 1 : 0)));
    const follows = new Map();
    for (let row = 0; row < grid.y.length - 1; row += 1) {
      const lower = above[row];
      const upper = above[row + 1];
      for (let column = 0; column < width - 1; column += 1) {
        let corner = lower[column] + 2 * lower[column + 1];
        corner += 4 * upper[column + 1] + 8 * upper[column];
        if (corner === 0 || corner === 15) {
          continue;
        }
        if ((corner === 5 || corner === 10) && !centreAbove(grid, level, row, column)) {
          corner = -corner;
        }
        const south = 2 * (row * width + column);
        const edges = { S: south, W: south + 1, N: south + 2 * width, E: south + 3 };
        for (const step of WALKS[corner]) {
          follows.set(edges[step[0]], edges[step[1]]);
        }
      }
    }
    return follows;
  }

  function centreAbove(grid, level, row, column) {
    const lower = grid.values[row];
    const upper = grid.values[row + 1];
    return lower[column] + lower[column + 1] + upper[column] + upper[column + 1] >= 4 * level;
  }

  function crossing(grid, level, edge) {
    const width = grid.x.length;
    const row = Math.floor(Math.floor(edge / 2) / width);
    const column = Math.floor(edge / 2) % width;
    const upright = edge % 2 === 1;
    const farRow = upright ? row + 1 : row;
    const farColumn = upright ? column : column + 1;
    const near = grid.values[row][column];
    const far = grid.values[farRow][farColumn];
    const inner = Number.isFinite(near) && Number.isFinite(far);
    const part = inner ? (level - near) / (far - near) : 0.5;
    return {
      x: grid.x[column] + part * (grid.x[farColumn] - grid.x[column]),
      y: grid.y[row] + part * (grid.y[farRow] - grid.y[row]),
      inner,
    };
  }

  bf.contours = { lattice, loops, lines };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
