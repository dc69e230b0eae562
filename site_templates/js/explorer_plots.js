/* From results to figures: what each picture of an explorer shows. The twin of explorer_plots.py.
 *
 * @typedef {{family: Family, temperature: number, total: number, ionic_strength: number,
 *   sweep: Sweep, pK_temperature: number[], pK: number[][]}} Exploration  of explorations.js
 */
(function (bf) {
  "use strict";

  const { fixed, plain, significant } = bf.formatting;
  const { ZERO_CELSIUS } = bf.water;
  const { PH, MILLI, axis, line, lines } = bf.plots;

  const TINY = 1e-300;

  /** Share of each form against pH. @param {Exploration} exploration @returns {Figure} */
  function explorerFractions(exploration) {
    const { sweep, family } = exploration;
    const series = family.species.map((form, row) =>
      line(form.name, form.label, sweep.pH, sweep.forms.fractions[0][row]));
    return lines(
      "fractions", "Forms against pH", PH, axis("share", "", 0, 1), series, [],
      crossingWords(exploration),
    );
  }

  /** Name the pH at which neighbouring forms are equal. */
  function crossingWords({ sweep, family }) {
    const shares = sweep.forms.fractions[0];
    const parts = [];
    for (let step = 0; step < family.steps.length; step += 1) {
      const difference = shares[step].map((each, at) => each - shares[step + 1][at]);
      const after = difference.findIndex((each) => each < 0);
      if (after <= 0) continue;
      const before = after - 1;
      const share = difference[before] / (difference[before] - difference[after]);
      const crossing = sweep.pH[before] + share * (sweep.pH[after] - sweep.pH[before]);
      const [acid, base] = [family.species[step].label, family.species[step + 1].label];
      parts.push(acid + " and " + base + " are equal at pH " + fixed(crossing, 2));
    }
    return (parts.length > 0 ? parts.join("; ") : "One form prevails from pH 0 to 14") + ".";
  }

  /** Logarithm of molality against pH, water's own ions included.
   * @param {Exploration} exploration @returns {Figure} */
  function explorerLogs(exploration) {
    const { sweep, family } = exploration;
    const logarithm = (molalities) => molalities.map((each) => Math.log10(each));
    const series = family.species.map((form, row) => {
      const molalities = sweep.forms.families[0][row].map((each) => each + TINY);
      return line(form.name, form.label, sweep.pH, logarithm(molalities));
    });
    series.push(line("H+", "H⁺", sweep.pH, logarithm(sweep.forms.hydrogen)));
    series.push(line("OH-", "OH⁻", sweep.pH, logarithm(sweep.forms.hydroxide)));
    return lines(
      "logs", "Log molality against pH", PH, axis("log₁₀ of molality", "mol/kg", -10, 0), series,
      [],
      "Forms of " + family.label + " at " + plain(exploration.total) +
        " mol/kg in all, with H⁺ and OH⁻.",
    );
  }

  /** Buffer capacity against pH. @param {Exploration} exploration @returns {Figure} */
  function explorerCapacity({ sweep }) {
    const { hydrogen, hydroxide } = sweep.forms;
    const own = sweep.capacity.map((each, at) => each - Math.LN10 * (hydrogen[at] + hydroxide[at]));
    const best = own.indexOf(Math.max(...own));
    const capacity = sweep.capacity.map((each) => each * MILLI);
    const high = 1.3 * sweep.capacity[best] * MILLI;
    return lines(
      "capacity", "Buffer capacity against pH", PH,
      axis("buffer capacity", "mmol/kg per pH", 0, high),
      [line("capacity", "capacity", sweep.pH, capacity)], [],
      "Water's own ions apart, it buffers best at pH " + fixed(sweep.pH[best], 1) +
        "; with them it takes up " + significant(sweep.capacity[best] * MILLI) +
        " mmol/kg per pH unit there.",
    );
  }

  /** Each pK along temperature, within its source's range.
   * @param {Exploration} exploration @returns {Figure} */
  function explorerPK({ family, pK, pK_temperature: temperature }) {
    const celsius = temperature.map((each) => each - ZERO_CELSIUS);
    const series = pK.map((values, row) => {
      const label = family.species[row].label + " → " + family.species[row + 1].label;
      return line("pK" + (row + 1), label, celsius, values);
    });
    const known = pK.flat().filter((each) => !Number.isNaN(each));
    const low = Math.min(...known);
    const high = Math.max(...known);
    const margin = Math.max(0.2, 0.08 * (high - low));
    return lines(
      "pK", "pK against temperature",
      axis("temperature", "°C", celsius[0], celsius[celsius.length - 1]),
      axis("pK at zero ionic strength", "", low - margin, high + margin), series, [],
      "Each line ends where the source of its constant no longer vouches for it.",
    );
  }

  const EXPLORER_FIGURES = {
    fractions: explorerFractions,
    logs: explorerLogs,
    capacity: explorerCapacity,
    pK: explorerPK,
  };

  bf.explorer_plots = { EXPLORER_FIGURES };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
