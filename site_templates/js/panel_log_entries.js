/* Readings that are kept: what an entry holds, as stored text and as a table to take away. Pure.
 *
 * @typedef {Record<string, string>} LogEntry  by the columns below, and `id`
 */
(function (bf) {
  "use strict";

  // Columns of the table, with where their text comes from: a section of the page and its fact.
  const COLUMNS = [
    { key: "time", title: "time" },
    { key: "title", title: "formulation" },
    { key: "key", title: "key" },
    { key: "revision", title: "revision" },
    { key: "fingerprint", title: "fingerprint" },
    { key: "strength", title: "strength (times the recipe)" },
    { key: "temperature", title: "temperature (°C)" },
    { key: "reading", title: "reading (pH)" },
    { key: "compensation", title: "meter compensates for (°C)" },
    { key: "expected", title: "expected (pH)", from: ["judging", "expected"] },
    { key: "band", title: "band (± pH)", from: ["judging", "band"] },
    { key: "target", title: "target (pH)", from: ["judging", "target"] },
    { key: "tolerance", title: "tolerance (± pH)", from: ["judging", "tolerance"] },
    { key: "verdict", title: "verdict", from: ["judging", "verdict"] },
    { key: "volume", title: "volume of the batch", from: ["dosing", "volume"] },
    { key: "titrant", title: "suggested titrant", from: ["dosing", "titrant"] },
    { key: "first", title: "suggested first portion", from: ["dosing", "first"] },
    { key: "whole", title: "suggested whole", from: ["dosing", "whole"] },
    { key: "second", title: "second reading", from: ["fault", "second"] },
    { key: "fault", title: "likeliest fault", from: ["fault", "fault"] },
    { key: "note", title: "note" },
    { key: "initials", title: "initials" },
  ];
  const NUMBER = /^[+-]?\d+(\.\d+)?$/;
  const FORMULA = /^[=+\-@\t\r]/; // what a spreadsheet would take for one

  /** An entry for what a page shows now.
   * @param {Record<string, string>} sheet title, key, revision and fingerprint
   * @param {Situation} situation with a reading
   * @param {Record<string, Outcome>} outcomes of the page's sections
   * @param {{note: string, initials: string}} words
   * @param {Date} now
   * @returns {LogEntry}
   */
  function entryOf(sheet, situation, outcomes, words, now) {
    const { compensation, reading, temperature, values } = situation;
    const entry = {
      ...sheet,
      id: now.getTime().toString(36) + "-" + Math.random().toString(36).slice(2, 10),
      time: localTime(now),
      temperature: degrees(temperature),
      reading: String(reading),
      strength: Number.isFinite(values.strength) ? String(values.strength) : "",
      compensation: compensation === null ? "" : degrees(compensation),
      note: words.note.trim(),
      initials: words.initials.trim(),
    };
    for (const { key, from } of COLUMNS) {
      if (from !== undefined) entry[key] = factOf(outcomes, from);
    }
    return entry;
  }

  /** A fact of a section; of any other section where that one has none. */
  function factOf(outcomes, [section, fact]) {
    const told = [outcomes[section], ...Object.values(outcomes)];
    for (const outcome of told) {
      const facts = outcome === undefined || outcome === null ? undefined : outcome.facts;
      const text = facts === undefined || facts === null ? undefined : facts[fact];
      if (text !== undefined && text !== null) return String(text);
    }
    return "";
  }

  function degrees(kelvin) {
    return bf.formatting.celsius(kelvin).replace("−", "-");
  }

  /** The device's own time, with its distance from universal time.
   * @param {Date} now
   * @returns {string} "2026-03-01T09:05:00+01:00"
   */
  function localTime(now) {
    const offset = -now.getTimezoneOffset(); // minutes
    const local = new Date(now.getTime() + offset * 60000).toISOString().slice(0, 19);
    const two = (number) => String(number).padStart(2, "0");
    const away = two(Math.floor(Math.abs(offset) / 60)) + ":" + two(Math.abs(offset) % 60);
    return local + (offset < 0 ? "-" : "+") + away;
  }

  /** The entries in a stored text; null where it is no log.
   * @param {string | null} text
   * @returns {LogEntry[] | null}
   */
  function entriesIn(text) {
    if (text === null) return [];
    try {
      const found = JSON.parse(text);
      return Array.isArray(found) && found.every(isEntry) ? found : null;
    } catch {
      return null;
    }
  }

  function isEntry(each) {
    return each !== null && typeof each === "object" && typeof each.id === "string";
  }

  /** A column's text. */
  function textOf(entry, key) {
    const text = entry[key];
    return text === undefined || text === null ? "" : String(text);
  }

  /** Entries as comma-separated values (RFC 4180), with a line of titles.
   * @param {LogEntry[]} entries
   * @returns {string}
   */
  function csvOf(entries) {
    const quoted = (text) => '"' + text.replaceAll('"', '""') + '"';
    return tableOf(entries).map((row) => row.map(quoted).join(",") + "\r\n").join("");
  }

  /** Entries as lines with tabs, as spreadsheets take them from the clipboard.
   * @param {LogEntry[]} entries
   * @returns {string[]}
   */
  function tabbed(entries) {
    return tableOf(entries).map((row) =>
      row.map((text) => text.replace(/[\t\r\n]+/g, " ")).join("\t"));
  }

  function tableOf(entries) {
    const rows = entries.map((entry) => COLUMNS.map(({ key }) => guarded(textOf(entry, key))));
    return [COLUMNS.map(({ title }) => title), ...rows];
  }

  /** A text that no spreadsheet reckons with: a number as programs write it; before anything else
   * that begins like a formula, an apostrophe. */
  function guarded(text) {
    const plain = text.replace(/^−/, "-");
    if (NUMBER.test(plain)) return plain;
    return FORMULA.test(text) ? "'" + text : text;
  }

  bf.panel_log_entries = { COLUMNS, entryOf, entriesIn, textOf, csvOf, tabbed, localTime };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
