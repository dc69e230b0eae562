/** How the pH of a mixture answers to a small change of anything in it, without trial and error.
 * The twin of curve_derivatives.py, for one mixture.
 *
 * The two balances hold before and after a change, so that their differentials give the answer:
 *
 *     charge     Σ z dm = 0
 *     strength   2 dI = Σ z² dm
 *
 * with dm of each species from its share of a changed total, from a changed constant, and from the
 * pH, the ionic strength and the pair terms that follow. Movements of all species by several
 * changes stand in one array, a row a species.
 *
 * @typedef {{totals: number[], molalities: number[], pK: [number, number] | null}} Change  a
 *   direction in which a mixture is changed, per unit of whatever changes it: mol/kg a family and
 *   an ion; family and step whose pK moves by one
 * @typedef {{charges: Float64Array, starts: number[], by_x: Float64Array, by_u: Float64Array,
 *   strength: number}} Answer  how molalities move with x = ln a(H+) and u = ln I
 */
(function (bf) {
  "use strict";

  const { LN10 } = bf.temperature;
  const { formsAt, stacked } = bf.speciation;
  const { solveInPlace } = bf.linear;

  /** The derivative of pH by each change. Mirrors `pH_derivatives` in curve_derivatives.py.
   * Source: implicit differentiation of electroneutrality, ionic strength, mass action and the
   * activity model, pair terms included.
   * @param {Mixture} mixture
   * @param {Constants} constants
   * @param {ActivityModel} model
   * @param {Equilibrium} state
   * @param {Change[]} changes
   * @param {Float64Array | null} matrix of `interactionMatrix`
   * @returns {number[]} pH per unit of each change
   */
  function pHDerivatives(mixture, constants, model, state, changes, matrix) {
    const { pH, ionic_strength: strength, offsets } = state;
    const forms = formsAt(mixture, constants, model, pH, strength, offsets);
    const there = stacked(forms, mixture);
    const answer = answerOf(mixture, constants, model, strength, there);
    const moved = new Float64Array(there.length * changes.length);
    changes.forEach((change, at) => {
      addDirect(moved, changes.length, at, mixture, forms.fractions, there, change);
    });
    if (matrix !== null) addPairs(answer, offsetsOf(mixture, answer, there), matrix, moved);
    return followed(answer, moved).map(([dx]) => -dx / LN10);
  }

  /** @param {Mixture} mixture @param {Constants} constants @param {ActivityModel} model
   * @param {number} strength @param {Float64Array} there @returns {Answer} */
  function answerOf(mixture, constants, model, strength, there) {
    const charges = new Float64Array(there.length);
    const byX = new Float64Array(there.length);
    const byU = new Float64Array(there.length);
    const longRange = { term: NaN, slope: NaN };
    model.long_range(constants.debye_huckel, strength, longRange);
    const gByU = LN10 * longRange.slope;
    [charges[0], charges[1]] = [1, -1];
    [byX[0], byX[1]] = [there[0], -there[1]];
    [byU[0], byU[1]] = [gByU * there[0], gByU * there[1]];
    const starts = [2];
    for (const family of mixture.families) {
      const start = starts[starts.length - 1];
      const count = family.species.length;
      let [total, lost, squares] = [1e-300, 0, 0];
      for (let j = 0; j < count; j += 1) {
        total += there[start + j];
        lost += j * there[start + j];
        squares += (family.charge - j) ** 2 * there[start + j];
      }
      for (let j = 0; j < count; j += 1) {
        const z = family.charge - j;
        charges[start + j] = z;
        byX[start + j] = -(j - lost / total) * there[start + j];
        byU[start + j] = gByU * (z * z - squares / total) * there[start + j];
      }
      starts.push(start + count);
    }
    const ions = starts[starts.length - 1];
    mixture.ions.forEach((ion, at) => (charges[ions + at] = ion.charge));
    return { charges, starts, by_x: byX, by_u: byU, strength };
  }

  /** Put in how molalities move at the same pH, ionic strength and activity coefficients.
   * Mirrors `_direct`.
   * @param {Float64Array} moved @param {number} width @param {number} at which change
   * @param {Mixture} mixture @param {number[][]} shares @param {Float64Array} there
   * @param {Change} change */
  function addDirect(moved, width, at, mixture, shares, there, change) {
    let row = 2;
    for (let f = 0; f < shares.length; f += 1) {
      const step = change.pK !== null && change.pK[0] === f ? change.pK[1] : -1;
      let after = 0;
      for (let j = step + 1; step >= 0 && j < shares[f].length; j += 1) after += shares[f][j];
      for (let j = 0; j < shares[f].length; j += 1) {
        let value = shares[f][j] * change.totals[f];
        if (step >= 0) value -= LN10 * there[row] * ((j > step ? 1 : 0) - after);
        moved[row * width + at] = value;
        row += 1;
      }
    }
    for (const molality of change.molalities) {
      moved[row * width + at] = molality;
      row += 1;
    }
  }

  /** The dx and du of each movement that balance charge and strength again. Mirrors `_followed`.
   * @param {Answer} answer @param {Float64Array} moved @returns {[number, number][]} */
  function followed(answer, moved) {
    const { charges, by_x: byX, by_u: byU } = answer;
    const size = charges.length;
    const width = moved.length / size;
    let [chargeX, squaresX, chargeU, squaresU] = [0, 0, 0, 0];
    for (let s = 0; s < size; s += 1) {
      chargeX += charges[s] * byX[s];
      squaresX += charges[s] * charges[s] * byX[s];
      chargeU += charges[s] * byU[s];
      squaresU += charges[s] * charges[s] * byU[s];
    }
    const own = 2 * answer.strength - squaresU;
    const along = chargeU / own;
    const slope = chargeX + along * squaresX;
    const result = [];
    for (let k = 0; k < width; k += 1) {
      let charge = 0;
      let squares = 0;
      for (let s = 0; s < size; s += 1) {
        charge += charges[s] * moved[s * width + k];
        squares += charges[s] * charges[s] * moved[s * width + k];
      }
      const dx = -(charge + along * squares) / slope;
      result.push([dx, (squaresX * dx + squares) / own]);
    }
    return result;
  }

  /** How molalities (rows) move with the log10 γ of each species (columns). Mirrors `_by_offset`.
   * @param {Mixture} mixture @param {Answer} answer @param {Float64Array} there
   * @returns {Float64Array} */
  function offsetsOf(mixture, answer, there) {
    const size = there.length;
    const result = new Float64Array(size * size);
    for (let f = 0; f + 1 < answer.starts.length; f += 1) {
      const [start, stop] = [answer.starts[f], answer.starts[f + 1]];
      let total = 1e-300;
      for (let row = start; row < stop; row += 1) total += there[row];
      for (let row = start; row < stop; row += 1) {
        for (let column = start; column < stop; column += 1) {
          result[row * size + column] = (LN10 * there[row] * there[column]) / total;
        }
      }
    }
    for (let row = 0; row < size - mixture.ions.length; row += 1) {
      result[row * size + row] -= LN10 * there[row];
    }
    return result;
  }

  /** Add what the pair terms, which move along, do to each movement. Mirrors `_with_pairs`.
   * @param {Answer} answer @param {Float64Array} byOffset @param {Float64Array} matrix
   * @param {Float64Array} moved */
  function addPairs(answer, byOffset, matrix, moved) {
    const size = answer.charges.length;
    const width = moved.length / size;
    const feedback = product(matrix, withFollowing(answer, byOffset), size);
    for (let at = 0; at < feedback.length; at += 1) feedback[at] = -feedback[at];
    for (let row = 0; row < size; row += 1) feedback[row * size + row] += 1;
    const first = product(matrix, withFollowing(answer, moved), size);
    const more = product(byOffset, solveInPlace(feedback, first, size), size);
    for (let at = 0; at < size * width; at += 1) moved[at] += more[at];
  }

  /** A movement with that of the pH and the ionic strength that follow it. Mirrors `_following`.
   * @param {Answer} answer @param {Float64Array} moved @returns {Float64Array} */
  function withFollowing(answer, moved) {
    const size = answer.charges.length;
    const width = moved.length / size;
    const result = Float64Array.from(moved);
    const follows = followed(answer, moved);
    for (let s = 0; s < size; s += 1) {
      for (let k = 0; k < width; k += 1) {
        result[s * width + k] += answer.by_x[s] * follows[k][0] + answer.by_u[s] * follows[k][1];
      }
    }
    return result;
  }

  /** @param {Float64Array} matrix size × size @param {Float64Array} right size rows
   * @param {number} size @returns {Float64Array} */
  function product(matrix, right, size) {
    const width = right.length / size;
    const result = new Float64Array(right.length);
    for (let row = 0; row < size; row += 1) {
      for (let s = 0; s < size; s += 1) {
        const factor = matrix[row * size + s];
        if (factor === 0) continue;
        for (let k = 0; k < width; k += 1) result[row * width + k] += factor * right[s * width + k];
      }
    }
    return result;
  }

  bf.curve_derivatives = { pHDerivatives };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
