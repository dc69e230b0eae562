/** What open air makes of a solution: how much carbonate it holds once nothing moves any more.
 * The twin of air.py. */
(function (bf) {
  "use strict";

  const { constantsAt } = bf.temperature;
  const { formsAt } = bf.speciation;
  const { solve } = bf.equilibrium;
  const { carbonDioxideInWater } = bf.gases;

  const CARBONATE = "carbonate"; // key of the family whose first form is dissolved carbon dioxide
  const MOST = 20; // mol/kg; nothing takes up more
  const SETTLED = 1e-13; // in ln of the total
  const ROUNDS = 100;

  /** The total of carbonate that a mixture holds in equilibrium with air.
   * Mirrors `carbonate_in_air` in air.py.
   * Source: Henry's law and electroneutrality; secant steps inside a bracket.
   * @param {Subject} subject
   * @param {Mixture} mixture lists the carbonate family
   * @param {number} temperature K
   * @returns {number} mol/kg
   */
  function carbonateInAir(subject, mixture, temperature) {
    const row = carbonateRow(mixture);
    const constants = constantsAt(mixture.families, temperature);
    const wanted = Math.log(carbonDioxideInWater(temperature));
    /** @type {Equilibrium | null} */
    let near = null;
    /** ln of the molality of carbon dioxide where carbonate has a given total, less what is wanted.
     * @param {number} lnTotal
     * @returns {number}
     */
    function excess(lnTotal) {
      const there = withCarbonate(mixture, Math.exp(lnTotal));
      const state = solve(there, constants, subject.model, subject.interactions, near);
      near = state;
      const { pH, ionic_strength: strength, offsets } = state;
      const forms = formsAt(there, constants, subject.model, pH, strength, offsets);
      return Math.log(forms.families[row][0]) - wanted;
    }
    // Of a total, never more than all of it is carbon dioxide.
    let low = wanted;
    let high = Math.log(MOST);
    let below = excess(low);
    let above = excess(high);
    let at = low;
    let last = high - low;
    for (let round = 0; round < ROUNDS; round += 1) {
      const target = low - (below * (high - low)) / (above - below);
      const good = low < target && target < high && Math.abs(target - at) < 0.5 * last;
      const following = good ? target : 0.5 * (low + high);
      last = Math.abs(following - at);
      at = following;
      if (last < SETTLED || high - low < SETTLED) break;
      const off = excess(at);
      if (off < 0) [low, below] = [at, off];
      else [high, above] = [at, off];
    }
    return Math.exp(at);
  }

  /** A mixture with another total of carbonate. Mirrors `with_carbonate`.
   * @param {Mixture} mixture
   * @param {number} total mol/kg
   * @returns {Mixture}
   */
  function withCarbonate(mixture, total) {
    const totals = mixture.totals.slice();
    totals[carbonateRow(mixture)] = total;
    return { ...mixture, totals };
  }

  /** @param {Mixture} mixture @returns {number} */
  function carbonateRow(mixture) {
    return mixture.families.findIndex((family) => family.key === CARBONATE);
  }

  bf.air = { CARBONATE, carbonateInAir, withCarbonate };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
