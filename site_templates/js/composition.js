/** What a titrant adds to the water, and a mixture at another strength. The twin of those parts of
 * composition.py that a page needs: the make-up itself is worked out once, by the build.
 *
 * @typedef {{label: string, reagent: string, direction: "upward" | "downward",
 *   families: string[], per_family: number[], ions: Ion[], per_ion: number[], water: number,
 *   volume: number | null, mass: number, key: string, nature: string,
 *   releases: string[]}} Addition  what one mole of a titrant's solute carries
 *   along: keys of families, mol; water kg; volume m3, null for a solid; mass kg
 */
(function (bf) {
  "use strict";

  /** Water that holds nothing, with the same lists of families and ions.
   * Mirrors `pure_water` in composition.py.
   * @param {Mixture} like
   * @returns {Mixture}
   */
  function pureWater(like) {
    return {
      families: like.families,
      totals: like.totals.map(() => 0),
      ions: like.ions,
      molalities: like.molalities.map(() => 0),
    };
  }

  /** A mixture after some of a titrant went in. Mirrors `mixed`.
   * Source: conservation of mass.
   * @param {Mixture} mixture lists the titrant's families and ions already
   * @param {Addition} added
   * @param {number} amount mol of titrant per kg of the mixture's water
   * @returns {Mixture} mol/kg of all the water
   */
  function mixed(mixture, added, amount) {
    const dilution = 1 + amount * added.water;
    const totals = mixture.totals.slice();
    const molalities = mixture.molalities.slice();
    for (let k = 0; k < added.families.length; k += 1) {
      const key = added.families[k];
      const row = mixture.families.findIndex((family) => family.key === key);
      if (row < 0) throw new RangeError(`the mixture does not list the family ${key}`);
      totals[row] += added.per_family[k] * amount;
    }
    for (let k = 0; k < added.ions.length; k += 1) {
      const name = added.ions[k].name;
      const row = mixture.ions.findIndex((ion) => ion.name === name);
      if (row < 0) throw new RangeError(`the mixture does not list the ion ${name}`);
      molalities[row] += added.per_ion[k] * amount;
    }
    for (let row = 0; row < totals.length; row += 1) totals[row] /= dilution;
    for (let row = 0; row < molalities.length; row += 1) molalities[row] /= dilution;
    return { families: mixture.families, totals, ions: mixture.ions, molalities };
  }

  /** A mixture at another strength: everything but water multiplied. Mirrors `scaled`.
   * @param {Mixture} mixture
   * @param {number} factor
   * @returns {Mixture}
   */
  function scaled(mixture, factor) {
    return {
      families: mixture.families,
      totals: mixture.totals.map((total) => total * factor),
      ions: mixture.ions,
      molalities: mixture.molalities.map((molality) => molality * factor),
    };
  }

  bf.composition = { pureWater, mixed, scaled };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
