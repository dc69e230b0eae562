/** What a band is made of, in words. The twin of band_words.py. */
(function (bf) {
  "use strict";

  /** @type {Record<string, string>} */
  const WORDS = {
    constant: "pK {step} of {name}",
    water: "ionisation of water, pKw",
    activity: "activity model",
    weighing: "amount of {name}",
    content: "content of {name}, as bought",
    "make-up": "amount of water, or volume made up to",
    temperature: "thermometer",
    meter: "meter",
    model: "what is not modelled here",
  };

  /** What one contribution comes from. Mirrors `contribution_words`.
   * @param {Contribution} item
   * @returns {string}
   */
  function contributionWords({ kind, name, step }) {
    return WORDS[kind].replace("{step}", String(step)).replace("{name}", () => name);
  }

  bf.band_words = { WORDS, contributionWords };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
