/* The page's input fields: a text field and sliders for each quantity, in step with each other.
 *
 * @typedef {{name: string, field: HTMLInputElement | HTMLSelectElement,
 *   sliders: HTMLInputElement[], low: number, high: number, logarithmic: boolean,
 *   message: HTMLElement | null, standard: string}} Input
 * @typedef {{texts: Map<string, string>, values: Record<string, number>, faulty: boolean}} Reading
 *   texts, as they stand in the address; values, of a choice the factor that it stands for
 */
(function (bf) {
  "use strict";

  const { complaint, numberOf } = bf.panel_state;

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
        field,
        sliders,
        low: limit(field.dataset.min, -Infinity),
        high: limit(field.dataset.max, Infinity),
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

  /** The text that belongs to a slider's place. */
  function slidTo(input, slider) {
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
    const number = numberOf(input.field.value);
    const place = String(input.logarithmic ? Math.log10(number) : number);
    for (const slider of input.sliders) {
      if (slider !== leader) slider.value = place;
    }
  }

  /** Say what is wrong with a field. @returns {boolean} whether something is */
  function judge(input) {
    if (isChoice(input)) return false;
    const words = complaint(input.field.value, input.low, input.high);
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
    let faulty = false;
    for (const input of inputs.values()) {
      const text = input.field.value;
      if (isChoice(input)) {
        texts.set(input.name, text);
        values[input.name] = Number(input.field.selectedOptions[0].dataset.factor);
      } else if (complaint(text, input.low, input.high) === "") {
        values[input.name] = numberOf(text);
        texts.set(input.name, String(values[input.name]));
      } else {
        faulty = true;
      }
    }
    return { texts, values, faulty };
  }

  /** Set the inputs; what is not named goes back to the page's own value.
   * @param {Map<string, Input>} inputs
   * @param {Map<string, string>} texts
   */
  function set(inputs, texts) {
    for (const input of inputs.values()) {
      const wanted = texts.get(input.name);
      if (!isChoice(input)) {
        input.field.value = wanted === undefined ? input.standard : wanted;
        follow(input);
        continue;
      }
      const known = Array.from(input.field.options, (option) => option.value);
      input.field.value = known.includes(wanted) ? wanted : input.standard;
    }
  }

  /** The page's own settings, written as `read` writes them.
   * @param {Map<string, Input>} inputs
   * @returns {Map<string, string>}
   */
  function standards(inputs) {
    const texts = new Map();
    for (const input of inputs.values()) {
      const text = isChoice(input) ? input.standard : String(numberOf(input.standard));
      texts.set(input.name, text);
    }
    return texts;
  }

  bf.panel_inputs = { inputsOf, open, read, set, standards };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
