/** The batch at hand: by which way and of which size it is made, and what was really taken.
 *
 * @typedef {{label: string, factor: number}} Unit  of a display: kg or m3 in one of it
 * @typedef {object} Batch
 * @property {number} route position among the ways; 0: as the recipe says
 * @property {Part[][]} choices for each part, itself and its other forms, in their amounts
 * @property {[string, number][]} differences inert ions, mol/kg more than the recipe
 * @property {number} factor batch over the recipe's own batch
 * @property {Recipe} planned for the batch
 * @property {Map<number, number>} taken kg or m3 by position, of what was typed
 * @property {number | null} water kg of water, or of what the volume counts as; null: as planned
 * @property {Recipe} made for the batch: as planned, but for what was typed
 * @property {boolean} own whether it is the recipe as written, nothing typed
 */
(function (bf) {
  "use strict";

  const { recipeWater } = bf.recipes;
  const { asWeighed, routesOf, times } = bf.weighing;

  const GRAM = { label: "g", factor: 1e-3 };
  const KILOGRAM = { label: "kg", factor: 1 };
  const MILLILITRE = { label: "mL", factor: 1e-6 };
  const LITRE = { label: "L", factor: 1e-3 };
  const SCALE = 1e-2; // kg: a step from which on displays are in kg
  const TANK = 1e-4; // m3: likewise, in L

  /** The unit in which a part is read off.
   * @param {Part} part
   * @param {Record<string, number>} values
   * @returns {Unit}
   */
  function unitOf(part, values) {
    if (part.added.volume === null) return values.balance < SCALE ? GRAM : KILOGRAM;
    return values.cylinder < TANK ? MILLILITRE : LITRE;
  }

  /** What is to be made, and what was.
   * @param {object} data the page's data block
   * @param {Subject} subject at the strength that is set
   * @param {{values: Record<string, number>, texts: Map<string, string>}} reading of the inputs
   * @returns {Batch}
   */
  function batchOf(data, subject, { values, texts }) {
    const ways = routesOf(subject, data.field.routes);
    const route = chosen(texts.get("route"), ways.length);
    const way = ways[route];
    const choices = way.recipe.parts.map((part, at) => {
      const forms = [part, ...way.instead[at]];
      return forms.map((form) => ({ ...form, amount: form.amount * values.strength }));
    });
    const forms = choices.map((each, at) => chosen(texts.get("form-" + at), each.length));
    const asWritten = route === 0 && forms.every((form) => form === 0);
    const parts = choices.map((each, at) => each[forms[at]]);
    const recipe = asWritten ? subject.recipe : inWater(subject.recipe, parts);
    const factor = (values.batch * values["batch-unit"]) / data.batch.amount;
    const planned = times(recipe, factor);
    const taken = takenOf(parts, values);
    const water = waterOf(data, subject, values);
    return {
      route,
      choices,
      differences: way.differences.map(([ion, more]) => [ion, more * values.strength]),
      factor,
      planned,
      taken,
      water,
      made: asWeighed(planned, taken, water),
      own: asWritten && taken.size === 0 && water === null,
    };
  }

  /** @param {string | undefined} text a position @param {number} count @returns {number} */
  function chosen(text, count) {
    const position = Number(text);
    return Number.isInteger(position) && position > 0 && position < count ? position : 0;
  }

  /** Other parts in as much water as the recipe has: hydrates bring some of it themselves.
   * @param {Recipe} recipe
   * @param {Part[]} parts
   * @returns {Recipe}
   */
  function inWater(recipe, parts) {
    if (!recipe.counted) return { ...recipe, parts };
    const brought = recipeWater({ ...recipe, parts, water: 0 });
    return { ...recipe, parts, water: recipeWater(recipe) - brought };
  }

  /** @param {Part[]} parts @param {Record<string, number>} values
   * @returns {Map<number, number>} */
  function takenOf(parts, values) {
    const taken = new Map();
    parts.forEach((part, at) => {
      const value = values["weighed-" + at];
      if (Number.isFinite(value)) taken.set(at, value * unitOf(part, values).factor);
    });
    return taken;
  }

  /** @returns {number | null} kg of water, or of what the volume counts as */
  function waterOf(data, subject, values) {
    const value = values["weighed-water"];
    if (!Number.isFinite(value)) return null;
    return (value * values["batch-unit"] * subject.recipe.water) / data.batch.amount;
  }

  /** The recipe that judging and correcting go by, for the recipe's own batch.
   * @param {object} data the page's data block
   * @param {Subject} subject at the strength that is set
   * @param {{values: Record<string, number>, texts: Map<string, string>}} reading of the inputs
   * @returns {Recipe | null} null: as the formulation says
   */
  function recipeOf(data, subject, reading) {
    const batch = batchOf(data, subject, reading);
    return batch.own ? null : times(batch.made, 1 / batch.factor);
  }

  bf.weighed_batch = { unitOf, batchOf, recipeOf };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
