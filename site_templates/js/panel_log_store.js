/* Where readings are kept: in the browser's storage on this device, under one key for all pages.
 * Where that is refused, in the page's memory, and the reader is told.
 *
 * @typedef {{storage: Storage | null, waiting: LogEntry[], trouble: string}} LogStore
 *   waiting, entries that could not be stored, newest first; trouble, in words
 */
(function (bf) {
  "use strict";

  const KEY = "bufferfolio-log";
  const ASIDE = "bufferfolio-log-unreadable-"; // and a time
  const ONLY_HERE =
    " Readings stay only as long as this page is open: download or copy them before you leave it.";
  const REFUSED = "This browser keeps nothing for this page." + ONLY_HERE;
  const FULL = "This browser did not take the last change (its storage may be full)." + ONLY_HERE;
  const STUCK =
    "What was kept on this device under “" + KEY + "” cannot be read and is left as it is." +
    ONLY_HERE;

  /** @returns {LogStore} */
  function opened() {
    const store = { storage: null, waiting: [], trouble: "" };
    try {
      const storage = window.localStorage;
      // Some browsers offer a storage and refuse its use.
      storage.setItem(KEY + "-try", "1");
      storage.removeItem(KEY + "-try");
      store.storage = storage;
    } catch {
      store.trouble = REFUSED;
    }
    return store;
  }

  /** All entries, newest first. @param {LogStore} store @returns {LogEntry[]} */
  function entries(store) {
    return [...store.waiting, ...stored(store)];
  }

  /** What is stored now; another page may have changed it since. */
  function stored(store) {
    if (store.storage === null) return [];
    try {
      const text = store.storage.getItem(KEY);
      const found = bf.panel_log_entries.entriesIn(text);
      return found === null ? setAside(store, text) : found;
    } catch {
      store.storage = null;
      store.trouble = REFUSED;
      return [];
    }
  }

  /** A text that is no log is never written over: it moves under a name of its own. */
  function setAside(store, text) {
    const name = ASIDE + bf.panel_log_entries.localTime(new Date());
    try {
      store.storage.setItem(name, text);
      store.storage.removeItem(KEY);
      store.trouble = "What was kept on this device could not be read as a log. It was put aside " +
        "under “" + name + "” in the browser’s storage, unchanged; a new log begins here.";
    } catch {
      store.storage = null;
      store.trouble = STUCK;
    }
    return [];
  }

  /** @param {LogStore} store @param {LogEntry} entry */
  function keep(store, entry) {
    const before = stored(store);
    if (written(store, [entry, ...before])) return;
    store.waiting.unshift(entry);
  }

  /** @param {LogStore} store @param {string} id @returns {LogEntry | null} what was taken out */
  function remove(store, id) {
    const all = entries(store);
    const found = all.find((entry) => entry.id === id);
    if (found === undefined) return null;
    const waiting = store.waiting.filter((entry) => entry.id !== id);
    if (waiting.length < store.waiting.length) store.waiting = waiting;
    else if (!written(store, stored(store).filter((entry) => entry.id !== id))) return null;
    return found;
  }

  /** Put an entry back where its time says. @param {LogStore} store @param {LogEntry} entry */
  function restore(store, entry) {
    const later = (one) => one.id.split("-")[0] > entry.id.split("-")[0];
    const before = stored(store);
    const all = [...before.filter(later), entry, ...before.filter((one) => !later(one))];
    if (!written(store, all)) store.waiting.unshift(entry);
  }

  function written(store, list) {
    if (store.storage === null) return false;
    try {
      store.storage.setItem(KEY, JSON.stringify(list));
      return true;
    } catch {
      store.trouble = FULL;
      return false;
    }
  }

  /** Call `changed` when another page of the folder has changed the log.
   * @param {() => void} changed */
  function watch(changed) {
    addEventListener("storage", (event) => {
      if (event.key === KEY || event.key === null) changed();
    });
  }

  bf.panel_log_store = { opened, entries, keep, remove, restore, watch };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
