/** Numbers as pages print them. Mirrors formatting.py: the same characters come out. */
(function (bf) {
  "use strict";

  const NOTHING = "—";
  const ZERO_CELSIUS = 273.15;
  const SMALLEST_PLAIN = -4; // power of ten of the first digit below which powers are written out

  /** With so many decimals. @param {number} value @param {number} decimals @returns {string} */
  function fixed(value, decimals) {
    return Number.isFinite(value) ? bf.figure_ticks.fixed(value, decimals) : NOTHING;
  }

  /** A difference with its sign; one that rounds to zero has none.
   * @param {number} value @param {number} decimals @returns {string} */
  function signed(value, decimals) {
    const text = fixed(value, decimals);
    return !/[1-9]/.test(text) || value < 0 ? text : "+" + text;
  }

  /** With so many significant figures, trailing zeros included.
   * @param {number} value @param {number} [figures] @returns {string} */
  function significant(value, figures = 3) {
    const [digits, exponent] = rounded(value, figures);
    return written(value, digits, exponent, figures);
  }

  /** With so many significant figures at most, without trailing zeros.
   * @param {number} value @param {number} [figures] @returns {string} */
  function plain(value, figures = 4) {
    const [digits, exponent] = rounded(value, figures);
    return written(value, digits.replace(/0+$/, "") || "0", exponent, figures);
  }

  /** A share in per cent. @param {number} fraction @returns {string} */
  function percent(fraction) {
    return Number.isFinite(fraction) ? significant(100 * fraction, 3) + " %" : NOTHING;
  }

  /** A temperature as a number of degrees Celsius, to a hundredth at most.
   * @param {number} temperature K @returns {string} */
  function celsius(temperature) {
    const text = fixed(temperature - ZERO_CELSIUS, 2);
    return text.includes(".") ? text.replace(/0+$/, "").replace(/\.$/, "") : text;
  }

  /** A mass with its unit. @param {number} kilograms @param {number} [figures] @returns {string} */
  function mass(kilograms, figures = 4) {
    if (kilograms >= 1) return plain(kilograms, figures) + " kg";
    if (kilograms >= 1e-3) return plain(kilograms * 1e3, figures) + " g";
    return plain(kilograms * 1e6, figures) + " mg";
  }

  /** A volume with its unit. @param {number} cubicMetres @param {number} [figures]
   * @returns {string} */
  function volume(cubicMetres, figures = 4) {
    if (cubicMetres >= 1) return plain(cubicMetres, figures) + " m³";
    if (cubicMetres >= 1e-3) return plain(cubicMetres * 1e3, figures) + " L";
    if (cubicMetres >= 1e-6) return plain(cubicMetres * 1e6, figures) + " mL";
    return plain(cubicMetres * 1e9, figures) + " µL";
  }

  /** The significant digits and the power of ten of the first.
   * @param {number} value @param {number} figures @returns {[string, number]} */
  function rounded(value, figures) {
    if (!Number.isFinite(value) || value === 0) return ["0", 0];
    const [mantissa, exponent] = Math.abs(value).toExponential(figures - 1).split("e");
    return [mantissa.replace(".", ""), Number(exponent)];
  }

  /** @param {number} value @param {string} digits @param {number} exponent
   * @param {number} figures @returns {string} */
  function written(value, digits, exponent, figures) {
    if (!Number.isFinite(value)) return NOTHING;
    if (value === 0) return "0";
    const sign = value < 0 ? "−" : "";
    if (exponent < SMALLEST_PLAIN || exponent > figures) {
      const mantissa = digits[0] + (digits.length > 1 ? "." + digits.slice(1) : "");
      return sign + mantissa + "×" + bf.figure_ticks.powerText(exponent);
    }
    if (exponent < 0) return sign + "0." + "0".repeat(-exponent - 1) + digits;
    const before = digits.slice(0, exponent + 1).padEnd(exponent + 1, "0");
    const after = digits.slice(exponent + 1);
    return after ? sign + before + "." + after : sign + before;
  }

  bf.formatting = {
    NOTHING, fixed, signed, significant, plain, percent, celsius, mass, volume,
  };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
