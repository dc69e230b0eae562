/** How the pH of a mixture answers to everything that decides it, by implicit differentiation.
 * The twin of sensitivities.py, for one mixture.
 *
 * At equilibrium the molalities m of all species follow from x = ln a(H+), u = ln I, the inputs,
 * and, with pair interactions, from themselves. Small changes obey
 *
 *     dm + ln 10 · S E dm = m_x dx + m_u du + Σ m_p dp,    Σ z dm = 0,    Σ z² dm = 2 I du
 *
 * where S = ∂m/∂ln(weight) is how a family shares itself out and E holds the pair coefficients.
 * The system is linear: solved once, it gives the pH by every input, pair terms included.
 *
 * @typedef {{pK: number[][], pKw: number, totals: number[], ions: number[], long_range: number,
 *   temperature: number}} Sensitivities  of the pH: by each pK, pKw, each total and strong ion
 *   (kg/mol), by D where log10 γ = −z² D + …, and by temperature (1/K)
 */
(function (bf) {
  "use strict";

  const { LN10, constantSlopesAt, constantsAt } = bf.temperature;
  const { formsAt, interactionMatrix, stacked } = bf.speciation;

  /** How the pH of a mixture answers to its constants, its contents and temperature.
   * Mirrors `sensitivities` in sensitivities.py.
   * Source: implicit differentiation of mass action, electroneutrality and ionic strength.
   * @param {Mixture} mixture
   * @param {number} temperature K
   * @param {ActivityModel} model
   * @param {Equilibrium} state
   * @param {Interaction[]} [interactions]
   * @returns {Sensitivities}
   */
  function sensitivities(mixture, temperature, model, state, interactions = []) {
    const { families, ions } = mixture;
    const constants = constantsAt(families, temperature);
    const there = { term: NaN, slope: NaN };
    model.long_range(constants.debye_huckel, state.ionic_strength, there);
    const forms = formsAt(
      mixture, constants, model, state.pH, state.ionic_strength, state.offsets,
    );
    const matrix = model.uses_interactions ? interactionMatrix(mixture, interactions) : null;
    const by = pHBy(mixture, forms, state.ionic_strength, there.slope, matrix);
    let at = 0;
    const pK = families.map((family) => by.slice(at, (at += family.steps.length)));
    const [pKw, longRange] = by.slice(at, (at += 2));
    const totals = by.slice(at, (at += families.length));
    const moving = constantSlopesAt(families, temperature);
    const termSlope = (there.term * moving.debye_huckel) / constants.debye_huckel;
    let drift = pKw * moving.pKw + longRange * termSlope;
    for (let f = 0; f < pK.length; f += 1) {
      for (let step = 0; step < pK[f].length; step += 1) drift += pK[f][step] * moving.pK[f][step];
    }
    const byIons = by.slice(at, at + ions.length);
    return { pK, pKw, totals, ions: byIons, long_range: longRange, temperature: drift };
  }

  /** The derivatives of pH, by each pK, pKw, D, each total and each ion in turn.
   * Mirrors `_pH_by`.
   * @param {Mixture} mixture
   * @param {Forms} forms
   * @param {number} strength mol/kg
   * @param {number} slope of D by ln I
   * @param {Float64Array | null} matrix of `interactionMatrix`
   * @returns {number[]}
   */
  function pHBy(mixture, forms, strength, slope, matrix) {
    const { charge, lost } = charges(mixture);
    const sharing = sharingOf(mixture, forms);
    const spread = times(sharing, charge.map((z) => z * z)).map((each) => LN10 * each);
    const columns = [
      times(sharing, lost).map((each) => -each),
      spread.map((each) => slope * each),
      ...inputs(mixture, forms, sharing, spread),
    ];
    if (matrix !== null) solveLinear(coupled(sharing, matrix), columns);
    const net = columns.map((column) => dot(charge, column, 1));
    const squares = columns.map((column) => dot(charge, column, 2));
    squares[1] -= 2 * strength;
    const determinant = net[0] * squares[1] - net[1] * squares[0];
    const result = [];
    for (let k = 2; k < columns.length; k += 1) {
      result.push((net[k] * squares[1] - squares[k] * net[1]) / determinant / LN10);
    }
    return result;
  }

  /** Each species' charge, and how many protons its weight says it has lost.
   * @param {Mixture} mixture
   * @returns {{charge: number[], lost: number[]}}
   */
  function charges(mixture) {
    const charge = [1, -1];
    const lost = [-1, 1];
    for (const family of mixture.families) {
      family.species.forEach((form, number) => {
        charge.push(form.charge);
        lost.push(number);
      });
    }
    for (const ion of mixture.ions) {
      charge.push(ion.charge);
      lost.push(0);
    }
    return { charge, lost };
  }

  /** The derivatives of every molality by the logarithm of every weight. Mirrors `_sharing`.
   * @param {Mixture} mixture
   * @param {Forms} forms
   * @returns {Float64Array[]} a row for each molality
   */
  function sharingOf(mixture, forms) {
    const there = stacked(forms, mixture);
    const sharing = Array.from(there, () => new Float64Array(there.length));
    sharing[0][0] = there[0];
    sharing[1][1] = there[1];
    let start = 2;
    for (let f = 0; f < forms.fractions.length; f += 1) {
      const own = forms.fractions[f];
      const total = mixture.totals[f];
      for (let row = 0; row < own.length; row += 1) {
        // Off the diagonal −t α α', and each row adds up to nothing: no small difference is taken.
        let rest = 0;
        for (let k = 0; k < own.length; k += 1) {
          if (k === row) continue;
          const shared = total * own[row] * own[k];
          sharing[start + row][start + k] = -shared;
          rest += shared;
        }
        sharing[start + row][start + row] = rest;
      }
      start += own.length;
    }
    return sharing;
  }

  /** The derivatives of every molality by each input at constant x and u. Mirrors `_inputs`.
   * @param {Mixture} mixture
   * @param {Forms} forms
   * @param {Float64Array[]} sharing
   * @param {number[]} spread of the molalities, by D
   * @returns {number[][]} a column for each input
   */
  function inputs(mixture, forms, sharing, spread) {
    const size = sharing.length;
    const columns = [];
    let start = 2;
    for (const family of mixture.families) {
      const stop = start + family.species.length;
      for (let first = start + 1; first < stop; first += 1) {
        const weights = new Array(size).fill(0).fill(1, first, stop);
        columns.push(times(sharing, weights).map((each) => -LN10 * each));
      }
      start = stop;
    }
    columns.push(sharing.map((row) => -LN10 * row[1]), spread.slice());
    start = 2;
    for (const own of forms.fractions) {
      const column = new Array(size).fill(0);
      own.forEach((share, number) => (column[start + number] = share));
      columns.push(column);
      start += own.length;
    }
    for (let ion = size - mixture.ions.length; ion < size; ion += 1) {
      columns.push(new Array(size).fill(0).fill(1, ion, ion + 1));
    }
    return columns;
  }

  /** @param {Float64Array[]} rows @param {number[]} column @returns {number[]} their product */
  function times(rows, column) {
    return rows.map((row) => {
      let sum = 0;
      for (let k = 0; k < column.length; k += 1) sum += row[k] * column[k];
      return sum;
    });
  }

  /** @param {number[]} charge @param {number[]} column @param {number} power
   * @returns {number} Σ z^power · column */
  function dot(charge, column, power) {
    let sum = 0;
    for (let k = 0; k < column.length; k += 1) sum += charge[k] ** power * column[k];
    return sum;
  }

  /** Unity + ln 10 · S E, in rows.
   * @param {Float64Array[]} sharing
   * @param {Float64Array} matrix square, row after row
   * @returns {Float64Array[]}
   */
  function coupled(sharing, matrix) {
    const size = sharing.length;
    return sharing.map((row, at) => {
      const result = new Float64Array(size);
      for (let k = 0; k < size; k += 1) {
        if (row[k] === 0) continue;
        for (let j = 0; j < size; j += 1) result[j] += LN10 * row[k] * matrix[k * size + j];
      }
      result[at] += 1;
      return result;
    });
  }

  /** Put the solution in the place of each right-hand side; Gaussian elimination with pivots.
   * @param {Float64Array[]} rows of the matrix, used up
   * @param {number[][]} columns right-hand sides, overwritten
   */
  function solveLinear(rows, columns) {
    const size = rows.length;
    for (let pivot = 0; pivot < size; pivot += 1) {
      let best = pivot;
      for (let row = pivot + 1; row < size; row += 1) {
        if (Math.abs(rows[row][pivot]) > Math.abs(rows[best][pivot])) best = row;
      }
      if (best !== pivot) {
        [rows[pivot], rows[best]] = [rows[best], rows[pivot]];
        for (const column of columns) {
          [column[pivot], column[best]] = [column[best], column[pivot]];
        }
      }
      for (let row = pivot + 1; row < size; row += 1) {
        const factor = rows[row][pivot] / rows[pivot][pivot];
        if (factor === 0) continue;
        for (let k = pivot; k < size; k += 1) rows[row][k] -= factor * rows[pivot][k];
        for (const column of columns) column[row] -= factor * column[pivot];
      }
    }
    for (const column of columns) {
      for (let row = size - 1; row >= 0; row -= 1) {
        let rest = column[row];
        for (let k = row + 1; k < size; k += 1) rest -= rows[row][k] * column[k];
        column[row] = rest / rows[row][row];
      }
    }
  }

  bf.sensitivities = { sensitivities };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
