/** From a recipe to what the balance shows, and back: as weighed, in which order, set at what pH.
 * The twin of weighing.py.
 *
 * @typedef {{part: Part, wanted: number, rounded: number, error: number}} Weighing  kg, or m3 of a
 *   liquid; error of rounding, relative
 * @typedef {{temperature: number, slope: number, pH: number, reference_temperature: number,
 *   reference_pH: number, mistaken: number, matters: boolean}} Adjustment  as in weighing.py
 */
(function (bf) {
  "use strict";

  const { measureOf } = bf.recipes;
  const { sensitivities } = bf.sensitivities;
  const { solvedAt } = bf.subjects;
  const { measured, targetAt } = bf.measurements;

  const USUAL_TOLERANCE = 0.05; // in pH, where no tolerance is stated
  const ACTION_OF = ["dissolve", "slowly", "last"]; // by rank
  const ACTIONS = {
    "all the water": "Measure out the water.",
    "most of the water": "Begin with about four fifths of the water.",
    dissolve: "Add it with stirring, and wait until it is dissolved.",
    slowly: "Add it slowly, with stirring; the solution may become warm.",
    last: "Add it last, under ventilation: it may give off a toxic gas.",
    "fill up": "Let it come to the temperature of making up; fill up with water to the volume.",
    set: "Let it come to the temperature of use; mix, read, and correct where it is needed.",
  };

  /** So many times as much of everything. Mirrors `times` in weighing.py.
   * @param {Recipe} recipe
   * @param {number} factor
   * @returns {Recipe}
   */
  function times(recipe, factor) {
    const parts = recipe.parts.map((part) => ({ ...part, amount: factor * part.amount }));
    return { ...recipe, parts, water: factor * recipe.water };
  }

  /** The ways to make a formulation, as field_data.py packs them: recipes, and for each part its
   * other forms.
   * @param {Subject} subject
   * @param {{bottles: Part[], ways: any[]}} data
   * @returns {{kind: string, recipe: Recipe, instead: Part[][],
   *   differences: [string, number][]}[]}
   */
  function routesOf(subject, data) {
    return data.ways.map((way) => {
      const parts = way.parts.map((/** @type {[number, number]} */ [bottle, amount]) => {
        return { ...data.bottles[bottle], amount };
      });
      const instead = way.instead.map((/** @type {number[]} */ bottles, /** @type {number} */ at) =>
        bottles.map((bottle) => ({ ...data.bottles[bottle], amount: parts[at].amount })),
      );
      const recipe = { ...subject.recipe, parts, water: way.water };
      return { kind: way.kind, recipe, instead, differences: way.differences };
    });
  }

  /** What to weigh and measure, rounded to the steps of balance and cylinder.
   * Mirrors `weighings`.
   * @param {Recipe} recipe
   * @param {number} massStep kg
   * @param {number} volumeStep m3
   * @returns {Weighing[]}
   */
  function weighings(recipe, massStep, volumeStep) {
    return recipe.parts.map((part) => {
      const wanted = part.amount * measureOf(part);
      const step = part.added.volume === null ? massStep : volumeStep;
      const rounded = step * Math.floor(wanted / step + 0.5);
      return { part, wanted, rounded, error: rounded / wanted - 1 };
    });
  }

  /** The recipe that was really made. Mirrors `as_weighed`.
   * @param {Recipe} recipe
   * @param {Map<number, number>} measures kg, or m3 of a liquid, by position
   * @param {number | null} [water] kg of water, or of what the volume counts as
   * @returns {Recipe}
   */
  function asWeighed(recipe, measures, water = null) {
    const parts = recipe.parts.map((part, at) => {
      const measure = measures.get(at);
      return measure === undefined ? part : { ...part, amount: measure / measureOf(part) };
    });
    return { ...recipe, parts, water: water === null ? recipe.water : water };
  }

  /** The positions of a recipe's parts in the order of addition, each with its action; −1 stands
   * for water. Mirrors `order_of`.
   * @param {Recipe} recipe
   * @returns {[number, string][]}
   */
  function orderOf(recipe) {
    /** @type {[number, string][]} */
    const steps = [[-1, recipe.counted ? "all the water" : "most of the water"]];
    const ranks = recipe.parts.map(rankOf);
    const ranked = ranks.map((_, at) => at).sort((a, b) => ranks[a] - ranks[b] || a - b);
    for (const at of ranked) steps.push([at, ACTION_OF[ranks[at]]]);
    if (!recipe.counted) steps.push([-1, "fill up"]);
    steps.push([-1, "set"]);
    return steps;
  }

  /** @param {Part} part @returns {number} */
  function rankOf(part) {
    if (part.releases.length > 0) return 2;
    // Strong acids and bases, and whatever acid or base comes as a liquid: both heat the water.
    const hot = part.added.families.length === 0 || part.added.volume !== null;
    return part.nature !== "neutral" && hot ? 1 : 0;
  }

  /** At what pH to set a batch where it is made up, and what a mistake would cost.
   * Mirrors `adjustment_of`.
   * @param {Subject} subject
   * @returns {Adjustment}
   */
  function adjustmentOf(subject) {
    const { mixture, model, interactions } = subject;
    const madeAt = subject.make_up_temperature;
    const reference = subject.reference_temperature;
    const aim = targetAt(subject, reference);
    const wrong = measured(subject, madeAt, aim);
    const mistaken = solvedAt(subject, reference, wrong.mixture).pH;
    const tolerance = subject.expected === null ? USUAL_TOLERANCE : subject.expected.tolerance;
    const state = solvedAt(subject, reference);
    return {
      temperature: madeAt,
      slope: sensitivities(mixture, reference, model, state, interactions).temperature,
      pH: targetAt(subject, madeAt),
      reference_temperature: reference,
      reference_pH: aim,
      mistaken,
      matters: Math.abs(mistaken - aim) > tolerance,
    };
  }

  bf.weighing = { ACTIONS, times, routesOf, weighings, asWeighed, orderOf, adjustmentOf };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
