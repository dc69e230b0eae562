/** What is said of a fault: how large it would be, and what to check or to do about it.
 * Mirrors fault_words.py: the same characters come out. Ranges are told by the build alone. */
(function (bf) {
  "use strict";

  const { EVEN, wordsOf } = bf.suspects;
  const { ZERO_CELSIUS } = bf.water;

  /** A suspect in words, with the extent that explains the readings best. An extent that does no
   * harm, or that rounds to none, is left out. Mirrors `said`.
   * @param {Subject} subject
   * @param {Suspect} suspected
   * @param {number} extent
   * @returns {string}
   */
  function said(subject, suspected, extent) {
    const tell = EXTENTS[suspected.kind];
    const harmless = !EVEN.includes(suspected.kind) && extent === suspected.low;
    if (tell === undefined || harmless) return wordsOf(suspected);
    return tell(subject, suspected, extent) || wordsOf(suspected);
  }

  /** @param {number} share @returns {string} in per cent, two figures */
  function perCent(share) {
    return bf.formatting.significant(100 * share, 2) + " %";
  }

  /** @param {number} kelvin @returns {string} */
  function degrees(kelvin) {
    return bf.formatting.fixed(kelvin - ZERO_CELSIUS, 0) + " °C";
  }

  /** @param {Subject} _subject @param {Suspect} suspected @param {number} extent
   * @returns {string} */
  function exchanged(_subject, suspected, extent) {
    const howFar = extent < 1
      ? "about " + perCent(extent) + " of the way to equilibrium" : "until equilibrium";
    return wordsOf(suspected) + ", " + howFar;
  }

  /** @param {Subject} subject @param {Suspect} suspected @param {number} extent
   * @returns {string} */
  function overshot(subject, suspected, extent) {
    const { mass, significant, volume } = bf.formatting;
    const added = subject.additions[suspected.position];
    const dose = added.volume === null
      ? mass(extent * added.mass, 2) : volume(extent * added.volume, 2);
    return "about " + significant(1000 * extent, 2) + " mmol/kg too much of " + suspected.name +
      " was added in adjusting it (" + dose + " for each kg of water)";
  }

  /** @param {Subject} _subject @param {Suspect} _suspected @param {number} extent
   * @returns {string} */
  function sloping(_subject, _suspected, extent) {
    const share = bf.formatting.fixed(100 * extent, 0);
    return share === "100" ? "" : "the electrode's slope is " + share + " % of the right one";
  }

  /** @param {Subject} _subject @param {Suspect} _suspected @param {number} extent
   * @returns {string} */
  function offset(_subject, _suspected, extent) {
    const size = bf.formatting.signed(extent, 2);
    return "+−".includes(size[0]) ? "the meter is off by " + size + " everywhere" : "";
  }

  // Of kinds whose extent is not fixed; "" where an extent comes to nothing.
  /** @type {Record<string, (subject: Subject, suspected: Suspect, extent: number) => string>} */
  const EXTENTS = {
    evaporation: (_subject, _suspected, extent) =>
      "about " + perCent(1 - extent) + " of the water evaporated",
    "carbon dioxide": exchanged,
    ammonia: (_subject, _suspected, extent) =>
      "about " + perCent(extent) + " of the ammonia was lost to air",
    overshoot: overshot,
    adjusted: (_subject, _suspected, extent) =>
      "it was adjusted to the same pH, but at about " + degrees(extent),
    slope: sloping,
    offset,
    compensation: (_subject, _suspected, extent) =>
      "the meter compensates for about " + degrees(extent),
  };

  const CALIBRATE = "Calibrate with two fresh buffers, one on each side of the reading; rinse";
  const RECORD = "Check the record of weighing";
  const LABEL = "Read the label of the bottle that was used";
  const MARK = "Check the mark or the weight it was filled up to";
  const FILL = MARK + ". Fill up, mix, and read again.";
  const ANEW = MARK + ". If there is too much, make it anew.";
  const COMPENSATE =
    "Set the compensation to the temperature of the sample, or connect its probe, and read again.";

  // What to check or to do, by kind.
  /** @type {Record<string, string>} */
  const CHECKS = {
    nothing: "Read a second sample if in doubt.",
    "left out": RECORD + ". If it is missing, add it, mix, and read again; in doubt make it anew.",
    "too little": RECORD + " and the balance. Add what is missing, mix, and read again.",
    "too much": RECORD + " and the balance. Correct the batch, or make it anew.",
    doubled: RECORD + ": was it added twice? If so, make it anew.",
    "other form": LABEL + ": hydrate, strength, grade. If it was the other, make it anew.",
    conjugate: LABEL + ": acid, base or salt. If it was the other, make it anew.",
    interchanged: RECORD + " line by line. If they are interchanged, make it anew.",
    "half the water": FILL,
    "too little water": FILL,
    "too much water": ANEW,
    "twice the water": ANEW,
    evaporation: "Was it open, warm or old? Fill up to the mark with water, mix, and read again.",
    "carbon dioxide": "Read a fresh sample at once and little stirred. Keep the batch closed.",
    ammonia: "Was it open or warm? Keep it closed, under ventilation; make it anew.",
    overshoot: "See “Correct the batch”: the other titrant, in portions, reading between them.",
    adjusted: "Bring a sample to the temperature of use, read it there, and correct it there.",
    slope: CALIBRATE + ", and read again. Clean or change an electrode whose slope stays off.",
    offset: CALIBRATE + ", and read again.",
    "compensation off": COMPENSATE,
    compensation: COMPENSATE,
  };

  bf.fault_words = { CHECKS, said };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
