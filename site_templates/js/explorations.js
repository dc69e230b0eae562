/** Every analysis of a family on its own, as a record that an explorer shows.
 * The twin of explorations.py.
 *
 * @typedef {{family: Family, temperature: number, total: number, ionic_strength: number,
 *   model: ActivityModel, sweep: Sweep, pK_temperature: number[], pK: number[][]}} Exploration
 *   K, mol/kg; pK: a list along `pK_temperature` for each step, NaN outside its range
 */
(function (bf) {
  "use strict";

  const { ZERO_CELSIUS } = bf.water;
  const { constantsAt, pKAt } = bf.temperature;
  const { MODELS } = bf.activity;
  const { sweep } = bf.buffering;
  const { linspace } = bf.sheets;

  const STANDARD_TEMPERATURE = 298.15; // K
  const SWEEP_POINTS = 141; // pH 0 to 14 in tenths
  const EXPLORER_TOTAL = 0.05; // mol/kg
  const EXPLORER_STRENGTH = 0.1; // mol/kg

  /** Every analysis of a family on its own, an inert salt holding the ionic strength.
   * Mirrors `exploration_of` in explorations.py.
   * @param {Family} family
   * @param {number} [temperature] K
   * @param {number} [total] mol/kg
   * @param {number} [ionicStrength] mol/kg
   * @returns {Exploration}
   */
  function explorationOf(
    family,
    temperature = STANDARD_TEMPERATURE,
    total = EXPLORER_TOTAL,
    ionicStrength = EXPLORER_STRENGTH,
  ) {
    const alone = { families: [family], totals: [total], ions: [], molalities: [] };
    const constants = constantsAt(alone.families, temperature);
    const model = MODELS.davies;
    const pH = linspace(0, 14, SWEEP_POINTS);
    const axis = linspace(ZERO_CELSIUS, ZERO_CELSIUS + 60, 61);
    const pK = family.steps.map((step) => {
      const { low, high } = step.valid_temperature;
      /** @param {number} kelvin */
      const within = (kelvin) =>
        kelvin >= low - 1e-3 && kelvin <= high + 1e-3 ? pKAt(step, kelvin) : NaN;
      return axis.map(within);
    });
    return {
      family,
      temperature,
      total,
      ionic_strength: ionicStrength,
      model,
      sweep: sweep(alone, constants, model, pH, [], ionicStrength),
      pK_temperature: axis,
      pK,
    };
  }

  bf.explorations = { explorationOf };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
