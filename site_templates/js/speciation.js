/** How each family of a mixture shares itself out over its forms at a given pH.
 * The twin of speciation.py, for one mixture.
 *
 * @typedef {{name: string, charge: number}} Ion
 * @typedef {{families: Family[], totals: number[], ions: Ion[],
 *   molalities: number[]}} Mixture  what is in the water, mol/kg
 * @typedef {{hydrogen: number, hydroxide: number, families: number[][],
 *   fractions: number[][]}} Forms  molalities in mol/kg, and shares of each family
 * @typedef {{cation: string, anion: string, epsilon: number}} Interaction  epsilon: kg/mol
 */
(function (bf) {
  "use strict";

  const { LN10 } = bf.temperature;

  /** Σ weight · amount over the ions that keep their charge, in their order.
   * @param {Mixture} mixture
   * @param {(charge: number) => number} weight
   * @returns {number} mol/kg
   */
  function weighted(mixture, weight) {
    let total = 0;
    for (let i = 0; i < mixture.ions.length; i += 1) {
      total += weight(mixture.ions[i].charge) * mixture.molalities[i];
    }
    return total;
  }

  /** Net charge of the ions that keep theirs. Mirrors `Mixture.strong_charge`.
   * @param {Mixture} mixture
   * @returns {number} mol/kg
   */
  function strongCharge(mixture) {
    return weighted(mixture, (charge) => charge);
  }

  /** Σ z² m over the ions that keep their charge. Mirrors `Mixture.strong_strength`.
   * @param {Mixture} mixture
   * @returns {number} mol/kg
   */
  function strongStrength(mixture) {
    return weighted(mixture, (charge) => charge * charge);
  }

  /** Names in the order of every species axis: H+, OH-, each family's forms, the ions.
   * Mirrors `Mixture.species`.
   * @param {Mixture} mixture
   * @returns {string[]}
   */
  function species(mixture) {
    const names = ["H+", "OH-"];
    for (const family of mixture.families) {
      for (const form of family.species) names.push(form.name);
    }
    for (const ion of mixture.ions) names.push(ion.name);
    return names;
  }

  /** The share of each form of one family. Mirrors `fractions` in speciation.py.
   * Source: mass action, m_j γ_j a(H) = K_j m_(j−1) γ_(j−1), any textbook.
   * @param {number} charge of the first form
   * @param {ArrayLike<number>} pK a step each
   * @param {number} pH
   * @param {number} debyeTerm the D of log10 γ = −z² D + offset
   * @param {ArrayLike<number> | null} offsets a species of the mixture each
   * @param {number} start where this family's forms begin in `offsets`
   * @returns {number[]} a form each
   */
  function fractions(charge, pK, pH, debyeTerm, offsets, start) {
    const count = pK.length + 1;
    const shares = [];
    let largest = -Infinity;
    let summed = 0;
    for (let lost = 0; lost < count; lost += 1) {
      const z = charge - lost;
      if (lost > 0) summed += pK[lost - 1];
      let log = lost * pH + z * z * debyeTerm - summed;
      if (offsets !== null) log -= offsets[start + lost];
      shares.push(log);
      if (!(log <= largest)) largest = log;
    }
    // Taken from the largest so that nothing overflows.
    let total = 0;
    for (let lost = 0; lost < count; lost += 1) {
      shares[lost] = Math.exp(LN10 * (shares[lost] - largest));
      total += shares[lost];
    }
    for (let lost = 0; lost < count; lost += 1) shares[lost] /= total;
    return shares;
  }

  /** The molality of every form at a given pH and ionic strength. Mirrors `forms_at`.
   * Source: mass action with the model's activity coefficients.
   * @param {Mixture} mixture
   * @param {Constants} constants
   * @param {ActivityModel} model
   * @param {number} pH
   * @param {number} ionicStrength mol/kg
   * @param {ArrayLike<number> | null} [offsets] Σ ε m, a species each
   * @returns {Forms}
   */
  function formsAt(mixture, constants, model, pH, ionicStrength, offsets = null) {
    const longRange = { term: NaN, slope: NaN };
    model.long_range(constants.debye_huckel, ionicStrength, longRange);
    const term = longRange.term;
    const shares = [];
    const molalities = [];
    let start = 2;
    for (let f = 0; f < mixture.families.length; f += 1) {
      const pK = constants.pK[f];
      const share = fractions(mixture.families[f].charge, pK, pH, term, offsets, start);
      const total = mixture.totals[f];
      shares.push(share);
      molalities.push(share.map((part) => part * total));
      start += pK.length + 1;
    }
    const hydrogenOffset = offsets === null ? 0 : offsets[0];
    const hydroxideOffset = offsets === null ? 0 : offsets[1];
    return {
      hydrogen: 10 ** (term - pH - hydrogenOffset),
      hydroxide: 10 ** (pH - constants.pKw + term - hydroxideOffset),
      families: molalities,
      fractions: shares,
    };
  }

  /** Every molality of a mixture along one species axis. Mirrors `stacked`.
   * @param {Forms} forms
   * @param {Mixture} mixture
   * @returns {Float64Array} mol/kg, in the order of `species`
   */
  function stacked(forms, mixture) {
    let size = 2 + mixture.ions.length;
    for (const family of forms.families) size += family.length;
    const result = new Float64Array(size);
    result[0] = forms.hydrogen;
    result[1] = forms.hydroxide;
    let start = 2;
    for (const family of forms.families) {
      result.set(family, start);
      start += family.length;
    }
    result.set(mixture.molalities, start);
    return result;
  }

  /** The pair coefficients of a mixture's species, or null where none is published.
   * Mirrors `interaction_matrix`.
   * Source: each interaction's own; an unpublished pair counts as zero.
   * @param {Mixture} mixture
   * @param {Interaction[]} interactions
   * @returns {Float64Array | null} kg/mol, symmetric, row after row
   */
  function interactionMatrix(mixture, interactions) {
    const names = species(mixture);
    const index = new Map(names.map((name, position) => [name, position]));
    const matrix = new Float64Array(names.length * names.length);
    for (const pair of interactions) {
      const a = index.get(pair.cation);
      const b = index.get(pair.anion);
      if (a === undefined || b === undefined) continue;
      matrix[a * names.length + b] = pair.epsilon;
      matrix[b * names.length + a] = pair.epsilon;
    }
    return matrix.some((epsilon) => epsilon !== 0) ? matrix : null;
  }

  bf.speciation = {
    strongCharge,
    strongStrength,
    species,
    fractions,
    formsAt,
    stacked,
    interactionMatrix,
  };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
