/** Small systems of linear equations. Python has them from numpy; a page has no such library. */
(function (bf) {
  "use strict";

  /** Solve a system in place, several right-hand sides at once (Gauss, pivots by rows).
   * @param {Float64Array} matrix size × size, row after row; spoilt
   * @param {Float64Array} right size × count, row after row; becomes the solutions
   * @param {number} size
   * @returns {Float64Array} `right`
   */
  function solveInPlace(matrix, right, size) {
    const count = right.length / size;
    for (let column = 0; column < size; column += 1) {
      let pivot = column;
      for (let row = column + 1; row < size; row += 1) {
        const here = Math.abs(matrix[row * size + column]);
        if (here > Math.abs(matrix[pivot * size + column])) pivot = row;
      }
      if (pivot !== column) {
        swapRows(matrix, pivot, column, size);
        swapRows(right, pivot, column, count);
      }
      const above = matrix[column * size + column];
      for (let row = column + 1; row < size; row += 1) {
        const factor = matrix[row * size + column] / above;
        if (factor === 0) continue;
        for (let k = column + 1; k < size; k += 1) {
          matrix[row * size + k] -= factor * matrix[column * size + k];
        }
        for (let k = 0; k < count; k += 1) right[row * count + k] -= factor * right[column * count + k];
      }
    }
    for (let row = size - 1; row >= 0; row -= 1) {
      for (let k = 0; k < count; k += 1) {
        let rest = right[row * count + k];
        for (let column = row + 1; column < size; column += 1) {
          rest -= matrix[row * size + column] * right[column * count + k];
        }
        right[row * count + k] = rest / matrix[row * size + row];
      }
    }
    return right;
  }

  function swapRows(values, one, other, width) {
    for (let k = 0; k < width; k += 1) {
      const kept = values[one * width + k];
      values[one * width + k] = values[other * width + k];
      values[other * width + k] = kept;
    }
  }

  /** The inverse of a matrix. @param {number[][]} matrix @returns {number[][]} */
  function inverse(matrix) {
    const size = matrix.length;
    const right = new Float64Array(size * size);
    for (let row = 0; row < size; row += 1) right[row * size + row] = 1;
    solveInPlace(Float64Array.from(matrix.flat()), right, size);
    return matrix.map((_, row) => Array.from(right.subarray(row * size, (row + 1) * size)));
  }

  bf.linear = { solveInPlace, inverse };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
