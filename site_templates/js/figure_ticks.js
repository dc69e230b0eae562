/** Round numbers along an axis, and how they are written. Mirrors figure_ticks.py: the same
 * characters come out, so powers of ten are products and halves are rounded by Math.floor. */
(function (bf) {
  "use strict";

  const SUPERSCRIPTS = {
    "-": "⁻", 0: "⁰", 1: "¹", 2: "²", 3: "³", 4: "⁴", 5: "⁵", 6: "⁶", 7: "⁷", 8: "⁸", 9: "⁹",
  };

  /** Ten to a whole power. @param {number} exponent @returns {number} */
  function powerOfTen(exponent) {
    let power = 1;
    for (let count = 0; count < Math.abs(exponent); count += 1) {
      power *= 10;
    }
    return exponent >= 0 ? power : 1 / power;
  }

  /** A whole number times a power of ten.
   * @param {number} whole @param {number} exponent @returns {number} */
  function shifted(whole, exponent) {
    return exponent >= 0 ? whole * powerOfTen(exponent) : whole / powerOfTen(-exponent);
  }

  /** A whole number times a power of ten, written with a true minus sign.
   * @param {number} whole @param {number} exponent @returns {string} */
  function numberText(whole, exponent) {
    const sign = whole < 0 ? "−" : "";
    let digits = String(Math.abs(whole));
    if (whole === 0) {
      return exponent >= 0 ? "0" : "0." + "0".repeat(-exponent);
    }
    if (exponent < -5 || exponent > 5) {
      while (digits.endsWith("0")) {
        digits = digits.slice(0, -1);
        exponent += 1;
      }
      return sign + (digits === "1" ? "" : digits + "×") + powerText(exponent);
    }
    if (exponent >= 0) {
      return sign + digits + "0".repeat(exponent);
    }
    digits = digits.padStart(1 - exponent, "0");
    return sign + digits.slice(0, exponent) + "." + digits.slice(exponent);
  }

  /** A power of ten as people write it: 10⁻³. @param {number} exponent @returns {string} */
  function powerText(exponent) {
    return "10" + Array.from(String(exponent), (each) => SUPERSCRIPTS[each]).join("");
  }

  /** The smallest round step that a span holds `about` times.
   * @param {number} span @param {number} about
   * @returns {[number, number]} 1, 2 or 5; exponent */
  function stepOf(span, about) {
    for (let exponent = -18; exponent < 19; exponent += 1) {
      for (const mantissa of [1, 2, 5]) {
        if (span <= about * shifted(mantissa, exponent) * (1 + 1e-9)) {
          return [mantissa, exponent];
        }
      }
    }
    return [1, 19];
  }

  /** The round numbers from `low` to `high`.
   * @param {number} low @param {number} high @param {"linear"|"log"} scale @param {number} about
   * @returns {{value: number, text: string}[]} */
  function ticks(low, high, scale, about) {
    if (scale === "log" && high >= 5 * low) {
      return logTicks(low, high, about);
    }
    const [mantissa, exponent] = stepOf(high - low, about);
    const step = shifted(mantissa, exponent);
    const first = Math.ceil(low / step - 1e-6);
    const last = Math.floor(high / step + 1e-6);
    const found = [];
    for (let count = first; count <= last; count += 1) {
      const text = count === 0 ? "0" : numberText(count * mantissa, exponent);
      found.push({ value: shifted(count * mantissa, exponent), text });
    }
    return found;
  }

  /** The decades from `low` to `high`; 1, 2 and 5 in each where decades are few.
   * @param {number} low @param {number} high @param {number} about
   * @returns {{value: number, text: string}[]} */
  function logTicks(low, high, about) {
    const decades = [];
    const all = [];
    for (let exponent = -18; exponent < 19; exponent += 1) {
      for (const mantissa of [1, 2, 5]) {
        const value = shifted(mantissa, exponent);
        if (low <= value * (1 + 1e-9) && value <= high * (1 + 1e-9)) {
          all.push({ value, text: numberText(mantissa, exponent) });
          if (mantissa === 1) {
            decades.push({ value, text: powerText(exponent) });
          }
        }
      }
    }
    if (decades.length < 3) {
      return all;
    }
    const every = Math.ceil(decades.length / about);
    return decades.filter((each, at) => at % every === 0);
  }

  /** A number with so many decimals, halves away from zero, never as minus zero.
   * @param {number} value @param {number} decimals @returns {string} */
  function fixed(value, decimals) {
    const whole = Math.floor(Math.abs(value) * powerOfTen(decimals) + 0.5);
    return numberText(value < 0 ? -whole : whole, -decimals);
  }

  bf.figure_ticks = { powerOfTen, shifted, numberText, powerText, stepOf, ticks, fixed };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
