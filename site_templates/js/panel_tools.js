/* The buttons beside a plot: zoom to a box, zoom with the wheel, show all, save the picture. They
 * are real buttons, because those that Bokeh draws cannot be told apart by a screen reader. */
(function (bf) {
  "use strict";

  const MODES = { zoom: "box", wheel: "wheel" };

  function toolsOf(picture) {
    return picture.element.querySelector(".plot-tools");
  }

  function buttonsOf(picture) {
    return Array.from(picture.element.querySelectorAll(".plot-tools button[data-tool]"));
  }

  /** Show the tools, not to be used yet, so that nothing moves when the plot comes.
   * @param {Picture} picture
   */
  function makeRoom(picture) {
    for (const button of buttonsOf(picture)) button.disabled = true;
    if (toolsOf(picture) !== null) toolsOf(picture).hidden = false;
  }

  /** Put the tools of a picture away: there is no plot to use them on.
   * @param {Picture} picture
   */
  function close(picture) {
    if (toolsOf(picture) !== null) toolsOf(picture).hidden = true;
  }

  /** Let the tools of a picture work; its plot is there by now.
   * @param {Picture} picture
   */
  function open(picture) {
    const buttons = buttonsOf(picture);
    for (const button of buttons) {
      button.disabled = false;
      button.addEventListener("click", () => use(picture, button, buttons));
    }
  }

  function use(picture, button, buttons) {
    if (picture.plot === null) return;
    const { tool } = button.dataset;
    if (tool in MODES) toggle(picture, button, buttons);
    if (tool === "reset") bf.bokeh_figures.reset(picture.plot);
    if (tool === "save") {
      bf.bokeh_figures.picture(picture.plot).then((blob) => save(blob, picture.key + ".png"));
    }
  }

  /** One way of zooming at a time; without one, dragging and the wheel scroll the page. */
  function toggle(picture, button, buttons) {
    const on = button.getAttribute("aria-pressed") !== "true";
    for (const each of buttons) {
      if (each.dataset.tool in MODES) {
        each.setAttribute("aria-pressed", String(on && each === button));
      }
    }
    bf.bokeh_figures.activate(picture.plot, on ? MODES[button.dataset.tool] : null);
  }

  /** Hand a file to the reader, named after the page.
   * @param {Blob} blob
   * @param {string} name
   */
  function save(blob, name) {
    const page = decodeURIComponent(location.pathname).split("/").pop().replace(/\.html?$/, "");
    const link = document.createElement("a");
    link.href = URL.createObjectURL(blob);
    link.download = page + "-" + name;
    link.click();
    setTimeout(() => URL.revokeObjectURL(link.href), 10000);
  }

  bf.panel_tools = { makeRoom, open, close, save };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
