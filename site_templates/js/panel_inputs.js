/* The page's input fields: a text field and sliders for each quantity, in step with each other.
 * Temperatures are typed in the unit that the reader chose; limits and sliders are in °C.
 *
 * @typedef {{name: string, group: string, field: HTMLInputElement | HTMLSelectElement,
 *   sliders: HTMLInputElement[], low: number, high: number, logarithmic: boolean,
 *   optional: boolean, degrees: boolean, unit: string, message: HTMLElement | null,
 *   standard: string}} Input
 *   group, the section that alone depends on it; "" where the whole page does
 * @typedef {{texts: Map<string, string>, values: Record<string, number>, faulty: boolean,
 *   faults: Set<string>}} Reading
 *   texts, as they stand in the address; values, of a choice the factor that it stands for, of a
 *   temperature °C, NaN where an optional field is empty; faulty, where an input of the whole page
 *   cannot be used; faults, the names of all that cannot
 */
(function (bf) {
  "use strict";

  const { celsiusOf, complaint, degreesIn, numberOf } = bf.panel_state;

  const UNIT_CHOICE = "temperature-unit";
  const WITH_UNIT = /^(.*[\d.,])\s*°?\s*([CF])$/i;

  /** The inputs of a page, by name.
   * @param {ParentNode} root
   * @returns {Map<string, Input>}
   */
  function inputsOf(root) {
    const inputs = new Map();
    for (const field of root.querySelectorAll("[data-input]:not([type=range])")) {
      const name = field.dataset.input;
      const twins = root.querySelectorAll('[type=range][data-input="' + name + '"]');
      const sliders = Array.from(twins);
      inputs.set(name, {
        name,
        group: field.dataset.group || "",
        field,
        sliders,
        low: limit(field.dataset.min, -Infinity),
        high: limit(field.dataset.max, Infinity),
        optional: field.dataset.optional !== undefined,
        degrees: field.dataset.quantity === "temperature",
        unit: "C",
        logarithmic: sliders.some((slider) => slider.dataset.scale === "log10"),
        message: root.querySelector('[data-message="' + name + '"]'),
        standard: standardOf(field),
      });
    }
    return inputs;
  }

  /** What the page came with, whatever the browser has filled in since. */
  function standardOf(field) {
    if (field.tagName !== "SELECT") return field.defaultValue;
    const options = Array.from(field.options);
    return (options.find((option) => option.defaultSelected) || options[0]).value;
  }

  function limit(text, otherwise) {
    return text === undefined ? otherwise : Number(text);
  }

  /** Let the reader use the inputs; `changed` is called after each change that they make.
   * @param {Map<string, Input>} inputs
   * @param {() => void} changed
   */
  function open(inputs, changed) {
    for (const input of inputs.values()) {
      input.field.disabled = false;
      if (input.message !== null) input.message.setAttribute("role", "status");
      const fieldEvent = isChoice(input) ? "change" : "input";
      input.field.addEventListener(fieldEvent, () => {
        if (input.name === UNIT_CHOICE) useUnit(inputs, input.field.value);
        follow(input);
        changed();
      });
      for (const slider of input.sliders) {
        slider.disabled = false;
        slider.addEventListener("input", () => {
          input.field.value = slidTo(input, slider);
          follow(input, slider);
          changed();
        });
      }
    }
  }

  function isChoice(input) {
    return input.field.tagName === "SELECT";
  }

  /** Let temperatures be typed in a unit; what is typed already is written in it. */
  function useUnit(inputs, unit) {
    for (const input of inputs.values()) {
      if (!input.degrees) continue;
      const celsius = valueOf(input);
      const faulty = wrongWith(input) !== "";
      input.unit = unit;
      // What could not be used was meant in the other unit.
      if (!faulty && !Number.isNaN(celsius)) input.field.value = degreesText(input, celsius);
      judge(input);
    }
    for (const place of document.querySelectorAll("[data-degrees]")) place.textContent = "°" + unit;
  }

  /** @param {Input} input @param {number} celsius @returns {string} in its unit, to 0.01 */
  function degreesText(input, celsius) {
    return String(Number(degreesIn(celsius, input.unit).toFixed(2)));
  }

  /** What stands in a field: a number as text, and the unit of a temperature; "77 F" names its own.
   * @param {Input} input
   * @returns {{text: string, unit: string}}
   */
  function typedIn(input) {
    const text = input.field.value;
    const found = input.degrees ? WITH_UNIT.exec(text.trim()) : null;
    if (found === null) return { text, unit: input.unit };
    return { text: found[1], unit: found[2].toUpperCase() };
  }

  /** The number in a field, of a temperature °C. @param {Input} input @returns {number} */
  function valueOf(input) {
    const { text, unit } = typedIn(input);
    return celsiusOf(numberOf(text), unit);
  }

  /** @param {Input} input @returns {string} what is wrong with its text, "" where nothing is */
  function wrongWith(input) {
    const { text, unit } = typedIn(input);
    if (input.optional && text.trim() === "") return "";
    // The second decimal of a converted limit must not shut it out.
    const [low, high] = [input.low, input.high].map((limit) =>
      unit === "F" ? Number(degreesIn(limit, "F").toFixed(2)) : limit);
    const words = complaint(text, low, high);
    return words === "" || !input.degrees ? words : words.replace(/\.$/, ` °${unit}.`);
  }

  /** The text that belongs to a slider's place. */
  function slidTo(input, slider) {
    if (input.degrees) return degreesText(input, Number(slider.value));
    if (!input.logarithmic) return slider.value;
    const number = 10 ** Number(slider.value);
    // Three figures, and never a rounding beyond the limits.
    const rounded = Number(number.toPrecision(3));
    return String(Math.min(Math.max(rounded, input.low), input.high));
  }

  /** Bring the sliders to where their field is, and say what is wrong with the field.
   * @param {Input} input
   * @param {HTMLInputElement | null} [leader] the slider that a hand is on
   */
  function follow(input, leader = null) {
    if (judge(input)) return;
    const number = valueOf(input);
    const place = String(input.logarithmic ? Math.log10(number) : number);
    for (const slider of input.sliders) {
      if (slider !== leader) slider.value = place;
    }
  }

  /** Say what is wrong with a field. @returns {boolean} whether something is */
  function judge(input) {
    if (isChoice(input)) return false;
    const words = wrongWith(input);
    if (input.message !== null && input.message.textContent !== words) {
      input.message.textContent = words;
    }
    if (words === "") input.field.removeAttribute("aria-invalid");
    else input.field.setAttribute("aria-invalid", "true");
    return words !== "";
  }

  /** What the inputs say now.
   * @param {Map<string, Input>} inputs
   * @returns {Reading} numbers written one way; what is faulty is left out
   */
  function read(inputs) {
    const texts = new Map();
    const values = {};
    const faults = new Set();
    let faulty = false;
    for (const input of inputs.values()) {
      const text = input.field.value;
      if (isChoice(input)) {
        texts.set(input.name, text);
        values[input.name] = Number(input.field.selectedOptions[0].dataset.factor);
      } else if (wrongWith(input) === "") {
        values[input.name] = valueOf(input);
        texts.set(input.name, written(input));
      } else {
        values[input.name] = NaN;
        faults.add(input.name);
        faulty = faulty || input.group === "";
      }
    }
    return { texts, values, faulty, faults };
  }

  /** The text of a sound field as it stands in the address: one way for every number. */
  function written(input) {
    const { text, unit } = typedIn(input);
    if (text.trim() === "") return "";
    return String(numberOf(text)) + (unit === input.unit ? "" : unit);
  }

  /** Set the inputs; what is not named goes back to the page's own value.
   * @param {Map<string, Input>} inputs
   * @param {Map<string, string>} texts
   */
  function set(inputs, texts) {
    const choice = inputs.get(UNIT_CHOICE);
    if (choice !== undefined) {
      choose(choice, texts.get(UNIT_CHOICE));
      useUnit(inputs, choice.field.value);
    }
    for (const input of inputs.values()) {
      const wanted = texts.get(input.name);
      if (!isChoice(input)) {
        input.field.value = wanted === undefined ? standardIn(input) : wanted;
        follow(input);
      } else if (input !== choice) {
        choose(input, wanted);
      }
    }
  }

  function choose(input, wanted) {
    const known = Array.from(input.field.options, (option) => option.value);
    input.field.value = known.includes(wanted) ? wanted : input.standard;
  }

  /** The page's own setting, in the unit that the reader chose. */
  function standardIn(input) {
    if (!input.degrees || input.standard === "" || input.unit === "C") return input.standard;
    return degreesText(input, numberOf(input.standard));
  }

  /** The page's own settings, written as `read` writes them.
   * @param {Map<string, Input>} inputs
   * @returns {Map<string, string>}
   */
  function standards(inputs) {
    const texts = new Map();
    for (const input of inputs.values()) {
      const plain = isChoice(input) || input.standard === "";
      const text = plain ? input.standard : String(numberOf(input.standard));
      texts.set(input.name, text);
    }
    return texts;
  }

  bf.panel_inputs = { inputsOf, open, read, set, standards };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
