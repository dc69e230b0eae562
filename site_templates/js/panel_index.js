/* The index's filter: formulations by words, by pH and by temperature. */
(function (bf) {
  "use strict";

  const { numberOf } = bf.panel_state;

  const PH_MARGIN = 0.5; // how far a pH may lie outside what a formulation has

  /** Let the filter work. */
  function start() {
    const form = document.querySelector("form[data-filters]");
    if (form === null) return;
    const rows = Array.from(document.querySelectorAll("tr[data-text]"));
    form.hidden = false;
    form.addEventListener("submit", (event) => event.preventDefault());
    form.addEventListener("input", () => filter(form, rows));
    // A browser may have kept what was typed before the page was left.
    filter(form, rows);
  }

  /** Show the rows that fit what is typed, and say how many. */
  function filter(form, rows) {
    const typed = (name) => form.querySelector('[data-filter="' + name + '"]');
    const words = typed("text").value.toLowerCase().split(/\s+/).filter((word) => word !== "");
    const pH = numberIn(typed("ph"));
    const temperature = numberIn(typed("temperature"));
    let shown = 0;
    for (const row of rows) {
      const { text, phLow, phHigh, temperatureLow, temperatureHigh } = row.dataset;
      const fits =
        words.every((word) => text.includes(word)) &&
        holds(Number(phLow) - PH_MARGIN, Number(phHigh) + PH_MARGIN, pH) &&
        holds(Number(temperatureLow), Number(temperatureHigh), temperature);
      row.hidden = !fits;
      if (fits) shown += 1;
    }
    form.querySelector('[data-value="shown"]').textContent = shown + " of " + rows.length;
    const none = document.querySelector("[data-filter-empty]");
    if (none !== null) none.hidden = shown > 0;
  }

  /** What a field holds; null where it is empty or no number, which is then marked.
   * @param {HTMLInputElement} field
   * @returns {number | null}
   */
  function numberIn(field) {
    const number = numberOf(field.value);
    const faulty = field.value.trim() !== "" && Number.isNaN(number);
    if (faulty) field.setAttribute("aria-invalid", "true");
    else field.removeAttribute("aria-invalid");
    tell(field, faulty ? "“" + field.value.trim() + "” is not a number; it is left out." : "");
    return Number.isNaN(number) ? null : number;
  }

  /** Say something about a field under it. */
  function tell(field, words) {
    const id = field.id + "-message";
    let message = document.getElementById(id);
    if (message === null) {
      message = document.createElement("p");
      message.className = "message";
      message.id = id;
      message.setAttribute("role", "status");
      field.after(message);
      field.setAttribute("aria-describedby", id);
    }
    if (message.textContent !== words) message.textContent = words;
  }

  function holds(low, high, number) {
    return number === null || (number >= low && number <= high);
  }

  start();
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
