/* What a reader has set, as words and numbers: what was typed, whether it can be used, and how it
 * stands in the page's address. Pure; `panel_inputs` reads and writes the page's fields. */
(function (bf) {
  "use strict";

  const NUMBER = /^[+-]?(\d+([.,]\d*)?|[.,]\d+)(e[+-]?\d+)?$/i;

  /** The number in a text: a point or a comma, a true minus sign or a hyphen.
   * @param {string} text
   * @returns {number} NaN where the text is no number
   */
  function numberOf(text) {
    const plain = text.trim().replace("−", "-");
    return NUMBER.test(plain) ? Number(plain.replace(",", ".")) : NaN;
  }

  /** What is wrong with a typed number, in words; "" where nothing is.
   * @param {string} text
   * @param {number} low −Infinity where there is no limit
   * @param {number} high
   * @returns {string}
   */
  function complaint(text, low, high) {
    const range = Number.isFinite(low) ? " from " + written(low) + " to " + written(high) : "";
    if (text.trim() === "") return "Give a number" + range + ".";
    const number = numberOf(text);
    if (Number.isNaN(number)) {
      return "“" + text.trim() + "” is not a number. Give one" + range + ".";
    }
    if (number < low) return text.trim() + " is too low. Give a number" + range + ".";
    if (number > high) return text.trim() + " is too high. Give a number" + range + ".";
    return "";
  }

  /** A number of degrees Celsius in the unit that a reader uses, and back.
   * @param {number} celsius
   * @param {string} unit "C" or "F"
   * @returns {number}
   */
  function degreesIn(celsius, unit) {
    return unit === "F" ? celsius * 1.8 + 32 : celsius;
  }

  /** @param {number} degrees @param {string} unit "C" or "F" @returns {number} degrees Celsius */
  function celsiusOf(degrees, unit) {
    return unit === "F" ? (degrees - 32) / 1.8 : degrees;
  }

  function written(number) {
    return String(number).replace("-", "−");
  }

  /** The settings in an address.
   * @param {string} hash "#temperature=4&batch-unit=L"
   * @returns {Map<string, string>}
   */
  function settingsOf(hash) {
    return new Map(new URLSearchParams(hash.replace(/^#/, "")));
  }

  /** The address of settings: those that differ from the page's own.
   * @param {Map<string, string>} settings
   * @param {Map<string, string>} defaults
   * @returns {string} "" or "#…"
   */
  function hashOf(settings, defaults) {
    const changed = new URLSearchParams();
    for (const [name, text] of settings) {
      if (text !== defaults.get(name)) changed.set(name, text);
    }
    const text = changed.toString();
    return text === "" ? "" : "#" + text;
  }

  bf.panel_state = { numberOf, complaint, degreesIn, celsiusOf, settingsOf, hashOf };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
