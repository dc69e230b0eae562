/** A make-up as amounts that can be changed: what was weighed and measured, and what that makes.
 * The twin of recipes.py; the recipe of the formulation itself comes with the page's data.
 *
 * @typedef {{key: string, label: string, added: Addition, amount: number, doubt: number,
 *   releases: string[], nature: "acid" | "base" | "neutral"}} Part  one reagent: mol; doubt of its
 *   content relative, k = 2; `added.volume` is null where it is weighed
 * @typedef {{parts: Part[], water: number, counted: boolean, weighed: boolean}} Recipe  kg of water
 *   that is measured out, or that the volume counts as; whether the parts' own water comes on top;
 *   whether the water is weighed
 */
(function (bf) {
  "use strict";

  /** All the water that a recipe's molalities refer to. Mirrors `recipe_water` in recipes.py.
   * @param {Recipe} recipe
   * @returns {number} kg
   */
  function recipeWater(recipe) {
    if (!recipe.counted) return recipe.water;
    let brought = 0;
    for (const part of recipe.parts) brought += part.amount * part.added.water;
    return recipe.water + brought;
  }

  /** What one mole of a part weighs (kg), or measures (m3) where it is a liquid.
   * Mirrors `measure_of`.
   * @param {Part} part
   * @returns {number}
   */
  function measureOf(part) {
    return part.added.volume === null ? part.added.mass : part.added.volume;
  }

  /** A recipe with other amounts of some parts. Mirrors `with_amounts`.
   * @param {Recipe} recipe
   * @param {Map<number, number>} amounts mol, by position
   * @returns {Recipe}
   */
  function withAmounts(recipe, amounts) {
    const parts = recipe.parts.map((part, position) => {
      const amount = amounts.get(position);
      return amount === undefined ? part : { ...part, amount };
    });
    return { ...recipe, parts };
  }

  /** A mixture that also lists ions of what is to be added, none of it yet. Mirrors `listing`;
   * families are all listed by the page's data already.
   * @param {Mixture} mixture
   * @param {Addition[]} others
   * @returns {Mixture}
   */
  function listing(mixture, others) {
    const ions = mixture.ions.slice();
    const molalities = mixture.molalities.slice();
    const known = new Set(ions.map((ion) => ion.name));
    for (const other of others) {
      for (const ion of other.ions) {
        if (known.has(ion.name)) continue;
        known.add(ion.name);
        ions.push(ion);
        molalities.push(0);
      }
    }
    return { families: mixture.families, totals: mixture.totals, ions, molalities };
  }

  /** What one kilogram of the recipe's water holds, families and ions of `like` first.
   * Mirrors `mixture_of`.
   * @param {Recipe} recipe
   * @param {Mixture} like
   * @returns {Mixture}
   */
  function mixtureOf(recipe, like) {
    const added = recipe.parts.map((part) => part.added);
    const { families, ions } = listing(like, added);
    const water = recipeWater(recipe);
    const totals = families.map(() => 0);
    const molalities = ions.map(() => 0);
    for (const part of recipe.parts) {
      addShares(part, part.amount / water, families, ions, totals, molalities);
    }
    return { families, totals, ions, molalities };
  }

  /** Add what so many moles of a part bring to totals and molalities.
   * @param {Part} part
   * @param {number} moles
   * @param {Family[]} families
   * @param {Ion[]} ions
   * @param {number[]} totals
   * @param {number[]} molalities
   */
  function addShares(part, moles, families, ions, totals, molalities) {
    const { added } = part;
    for (let k = 0; k < added.families.length; k += 1) {
      const key = added.families[k];
      const row = families.findIndex((family) => family.key === key);
      if (row < 0) throw new RangeError(`the mixture does not list the family ${key}`);
      totals[row] += moles * added.per_family[k];
    }
    for (let k = 0; k < added.ions.length; k += 1) {
      const row = ions.findIndex((ion) => ion.name === added.ions[k].name);
      molalities[row] += moles * added.per_ion[k];
    }
  }

  bf.recipes = { recipeWater, measureOf, withAmounts, listing, mixtureOf, addShares };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
