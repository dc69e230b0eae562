/* Taking an answer along: a button that copies lines of text, and says whether it did. */
(function (bf) {
  "use strict";

  const COPIED = "Copied.";
  const BY_HAND = "This browser lets no page copy. Select the text below and copy it:";

  /** Let a button copy what `told` returns then.
   * @param {HTMLButtonElement | null} button
   * @param {() => string[]} told lines
   */
  function open(button, told) {
    if (button === null) return;
    button.disabled = false;
    const say = document.createElement("p");
    say.className = "copied";
    say.setAttribute("role", "status");
    button.after(say);
    button.addEventListener("click", async () => {
      const text = told().join("\n");
      say.replaceChildren((await copied(text)) ? COPIED : byHand(text));
    });
  }

  /** @param {string} text @returns {Promise<boolean>} whether it could be copied */
  async function copied(text) {
    try {
      await navigator.clipboard.writeText(text);
      return true;
    } catch {
      return false;
    }
  }

  function byHand(text) {
    const place = document.createDocumentFragment();
    const field = document.createElement("textarea");
    field.readOnly = true;
    field.value = text;
    field.rows = text.split("\n").length;
    field.setAttribute("aria-label", "The result as text");
    field.addEventListener("focus", () => field.select());
    place.append(BY_HAND, field);
    return place;
  }

  bf.panel_copy = { open };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
