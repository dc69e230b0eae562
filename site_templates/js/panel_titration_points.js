/* The measured points as text: pasted, opened, dropped or invented; what is wrong with them, by
 * row; kept on the device where the browser lets a page keep anything.
 *
 * @typedef {object} Editor
 * @property {HTMLElement} root
 * @property {HTMLTextAreaElement} field
 * @property {string} key under which the text is kept
 * @property {boolean} invented whether an example stands in the field
 * @property {string} own what stood there before the example
 * @property {() => void} changed is called when the text has changed
 */
(function (bf) {
  "use strict";

  const LARGEST = 5e6; // bytes of a file
  const MOST_KEPT = 1e6; // characters
  const MOST_COMPLAINTS = 20;
  const NOT_KEPT = "This browser keeps nothing for a page: the points are gone after a reload.";
  const TOO_LONG = "So long a text is not kept over a reload.";
  const INVENTED = "Invented points, not measured. Paste, open or drop your own at any time.";

  /** Let points be given. @param {HTMLElement} root the section
   * @param {() => string} invent the text of an example
   * @param {() => void} changed @returns {Editor} */
  function open(root, invent, changed) {
    const field = root.querySelector("#titration-points");
    const key = "bufferfolio titration " + root.dataset.titration;
    const editor = { root, field, key, invented: false, own: "", changed };
    field.disabled = false;
    field.value = recalled(key);
    field.addEventListener("input", () => typed(editor));
    field.addEventListener("paste", (event) => pasted(editor, event));
    openFiles(editor);
    openButtons(editor, invent);
    showState(editor);
    return editor;
  }

  /** What the reader typed or pasted stands in the field. */
  function typed(editor) {
    keep(editor);
    showState(editor);
    editor.changed();
  }

  /** An example gives way to what is pasted over it. */
  function pasted(editor, event) {
    if (!editor.invented) return;
    event.preventDefault();
    put(editor, event.clipboardData.getData("text/plain"));
  }

  /** Put a text of the reader's own into the field. */
  function put(editor, text) {
    endExample(editor);
    editor.field.value = text;
    typed(editor);
  }

  function endExample(editor) {
    editor.invented = false;
    editor.field.readOnly = false;
  }

  function openFiles(editor) {
    const { root, field } = editor;
    const chooser = root.querySelector("#titration-file");
    chooser.disabled = false;
    chooser.addEventListener("change", () => {
      if (chooser.files.length > 0) read(editor, chooser.files[0]);
      chooser.value = ""; // the same file may be opened again
    });
    field.addEventListener("dragover", (event) => {
      if (!event.dataTransfer.types.includes("Files")) return;
      event.preventDefault();
      field.classList.add("over");
    });
    field.addEventListener("dragleave", () => field.classList.remove("over"));
    field.addEventListener("drop", (event) => {
      field.classList.remove("over");
      if (event.dataTransfer.files.length === 0) return;
      event.preventDefault();
      read(editor, event.dataTransfer.files[0]);
    });
  }

  async function read(editor, file) {
    if (file.size > LARGEST) {
      tell(editor, `${file.name} is too large: at most ${LARGEST / 1e6} MB. Nothing was changed.`);
      return;
    }
    try {
      put(editor, bf.measured.textOf(new Uint8Array(await file.arrayBuffer())));
    } catch {
      tell(editor, `${file.name} cannot be read. Nothing was changed.`);
    }
  }

  function openButtons(editor, invent) {
    const [example, clear] = buttonsOf(editor);
    example.disabled = false;
    example.addEventListener("click", () => {
      if (editor.invented) {
        put(editor, editor.own);
        return;
      }
      editor.own = editor.field.value;
      editor.invented = true;
      editor.field.readOnly = true;
      editor.field.value = invent();
      showState(editor);
      editor.changed();
    });
    clear.addEventListener("click", () => {
      put(editor, "");
      editor.field.focus();
    });
  }

  function buttonsOf({ root }) {
    return ["titration-example", "titration-clear"].map((action) =>
      root.querySelector('[data-action="' + action + '"]'));
  }

  /** Let buttons and words say what stands in the field. */
  function showState(editor) {
    const [example, clear] = buttonsOf(editor);
    const back = editor.own.trim() === "" ? "Take the example away" : "Back to my own points";
    example.textContent = editor.invented ? back : "Show an example";
    clear.disabled = editor.field.value === "" || editor.invented;
    editor.field.classList.toggle("invented", editor.invented);
    if (editor.invented) part(editor, "kept").textContent = INVENTED;
    else if (part(editor, "kept").textContent === INVENTED) part(editor, "kept").textContent = "";
  }

  /** Keep the text for a reload, or say that it is not kept. */
  function keep({ root, field, key }) {
    const place = root.querySelector('[data-part="kept"]');
    const long = field.value.length > MOST_KEPT;
    try {
      if (field.value === "" || long) localStorage.removeItem(key);
      else localStorage.setItem(key, field.value);
      place.textContent = long ? TOO_LONG : "";
    } catch {
      place.textContent = NOT_KEPT;
    }
  }

  function recalled(key) {
    try {
      return localStorage.getItem(key) || "";
    } catch {
      return "";
    }
  }

  function part({ root }, name) {
    return root.querySelector('[data-part="' + name + '"]');
  }

  /** Say what became of the text, in one sentence; "" for nothing. @param {Editor} editor
   * @param {string} words @param {Complaint[]} [complaints] */
  function tell(editor, words, complaints = []) {
    const told = part(editor, "told");
    if (told.textContent !== words) told.textContent = words;
    const list = part(editor, "complaints");
    list.hidden = complaints.length === 0;
    list.replaceChildren(...complaints.slice(0, MOST_COMPLAINTS).map((each) => entry(editor, each)));
    if (complaints.length > MOST_COMPLAINTS) {
      const more = document.createElement("li");
      more.textContent = `${complaints.length - MOST_COMPLAINTS} more places are wrong.`;
      list.append(more);
    }
    if (complaints.length > 0) editor.field.setAttribute("aria-invalid", "true");
    else editor.field.removeAttribute("aria-invalid");
  }

  /** A complaint that leads to its row. */
  function entry(editor, complaint) {
    const item = document.createElement("li");
    const button = document.createElement("button");
    button.type = "button";
    const [place, ...rest] = bf.measured.told(complaint).split(": ");
    button.textContent = place;
    button.addEventListener("click", () => pointAt(editor.field, complaint.row));
    item.append(button, ": " + rest.join(": "));
    return item;
  }

  /** Select a row of the text and bring it into sight. */
  function pointAt(field, row) {
    // A text field ends every row with one line feed, whatever was pasted.
    const lines = field.value.split("\n");
    const start = lines.slice(0, row - 1).reduce((sum, line) => sum + line.length + 1, 0);
    field.focus();
    field.setSelectionRange(start, start + (lines[row - 1] || "").length);
    field.scrollTop = ((row - 2) / lines.length) * field.scrollHeight;
  }

  bf.panel_titration_points = { open, tell };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
