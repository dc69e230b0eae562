/* The index's search: formulations, families and reagents by words, by pH and by temperature. */
(function (bf) {
  "use strict";

  const { numberOf } = bf.panel_state;

  const PH_MARGIN = 0.5; // how far a pH may lie outside what a formulation has
  const PK_MARGIN = 1; // how far from its pK a family buffers
  const DOTS = /[.·•*⋅∙]/g; // of hydrates, as they are typed
  const RANGE = /^(.*\S)\s*(?:to|…|–|-)\s*(\S.*)$/;

  /** Let the search work. */
  function start() {
    const form = document.querySelector("form[data-filters]");
    if (form === null) return;
    const groups = Array.from(document.querySelectorAll("[data-group]"), (element) => ({
      element, entries: Array.from(element.querySelectorAll("[data-entry]")),
    }));
    form.hidden = false;
    form.addEventListener("submit", (event) => event.preventDefault());
    form.addEventListener("input", () => filter(form, groups));
    // A browser may have kept what was typed before the page was left.
    filter(form, groups);
  }

  /** Show what fits what is typed, and say how many of each group. */
  function filter(form, groups) {
    const typed = (name) => form.querySelector('[data-filter="' + name + '"]');
    const sought = {
      words: plainer(typed("text").value).split(/\s+/).filter((word) => word !== ""),
      pH: rangeIn(typed("ph")),
      temperature: numberIn(typed("temperature")),
    };
    let all = 0;
    for (const { element, entries } of groups) {
      let shown = 0;
      for (const entry of entries) {
        entry.hidden = !fits(entry.dataset, sought);
        if (!entry.hidden) shown += 1;
      }
      // A heading over nothing only stands in the way.
      element.hidden = shown === 0 && entries.length > 0;
      const count = form.querySelector('[data-value="shown-' + element.dataset.group + '"]');
      count.textContent = shown + " of " + entries.length;
      all += shown;
    }
    const none = document.querySelector("[data-filter-empty]");
    if (none !== null) none.hidden = all > 0;
  }

  /** Whether an entry fits everything that is sought.
   * @param {DOMStringMap} entry
   * @param {{words: string[], pH: Range | null, temperature: number | null}} sought
   */
  function fits(entry, { words, pH, temperature }) {
    if (!words.every((word) => entry.text.includes(word))) return false;
    if (pH !== null && !buffers(entry, pH)) return false;
    if (temperature === null || entry.temperatureLow === undefined) return true;
    return temperature >= Number(entry.temperatureLow)
      && temperature <= Number(entry.temperatureHigh);
  }

  /** Whether an entry has, or buffers at, some pH of a range. */
  function buffers({ phLow, phHigh, pk }, { low, high }) {
    if (phLow !== undefined) {
      // A range says itself how far off is near enough.
      const margin = low === high ? PH_MARGIN : 0;
      return high >= Number(phLow) - margin && low <= Number(phHigh) + margin;
    }
    const every = pk === undefined ? [] : pk.split(" ").map(Number);
    return every.some((each) => high >= each - PK_MARGIN && low <= each + PK_MARGIN);
  }

  /** What is typed as the index has it. Mirrors `typed` in search_words.py. */
  function plainer(text) {
    return text.normalize("NFKC").toLowerCase().replaceAll("\u2212", "-").replace(DOTS, "");
  }

  /** The number in a field, or the two ends of a range; null where it is empty or neither.
   * @param {HTMLInputElement} field
   * @returns {{low: number, high: number} | null}
   */
  function rangeIn(field) {
    const text = field.value.trim();
    const ends = RANGE.exec(text);
    const [low, high] = Number.isNaN(numberOf(text)) && ends !== null
      ? [numberOf(ends[1]), numberOf(ends[2])].sort((a, b) => a - b)
      : [numberOf(text), numberOf(text)];
    const faulty = text !== "" && (Number.isNaN(low) || Number.isNaN(high));
    mark(field, faulty, "is neither a number nor a range such as 7 to 9");
    return faulty || text === "" ? null : { low, high };
  }

  /** What a field holds; null where it is empty or no number, which is then marked.
   * @param {HTMLInputElement} field
   * @returns {number | null}
   */
  function numberIn(field) {
    const number = numberOf(field.value);
    mark(field, field.value.trim() !== "" && Number.isNaN(number), "is not a number");
    return Number.isNaN(number) ? null : number;
  }

  /** Mark a field whose contents cannot be used, or take the mark away. */
  function mark(field, faulty, problem) {
    if (faulty) field.setAttribute("aria-invalid", "true");
    else field.removeAttribute("aria-invalid");
    tell(field, faulty ? "“" + field.value.trim() + "” " + problem + "; it is left out." : "");
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

  start();
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
