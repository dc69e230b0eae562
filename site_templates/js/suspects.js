/** What may have gone wrong with a batch or with its reading, and what each would make of it.
 * The twin of suspects.py; what stands beside each reagent on the shelf comes with the page's data.
 *
 * A suspect has an extent: a factor, a share, a temperature. Where it is not fixed it lies in a
 * range, and nearer to the harmless end is as likely as farther from it, counted as `extentAt`
 * spaces it.
 *
 * @typedef {{subject: Subject, carbonate: Family | null, substitutes: Part[][]}} Setting
 * @typedef {{kind: string, name: string, other: string, position: number, choice: number,
 *   low: number, high: number}} Suspect  as in suspects.py
 * @typedef {{setting: Setting, temperature: number, base: Mixture, in_air: number,
 *   aim: number}} Scene  as in suspects.py
 */
(function (bf) {
  "use strict";

  const { mixed, scaled } = bf.composition;
  const { listing, measureOf, mixtureOf } = bf.recipes;
  const { CARBONATE, carbonateInAir, withCarbonate } = bf.air;
  const { toLimit } = bf.reserves;
  const { ISOPOTENTIAL, measured, shown, targetAt, withExcess } = bf.measurements;

  const AMMONIA = "ammonia"; // key of the family that an open bottle loses
  const OVERSHOOT = 0.05; // mol/kg, where no reserve says how much would be much
  /** @type {Record<string, number>} */
  const VOLUME_FACTORS = {
    "half the water": 0.5,
    "too little water": 0.9,
    "too much water": 1.1,
    "twice the water": 2,
  };
  /** @type {Record<string, number>} */
  const PART_FACTORS = { "left out": 0, "too little": 0.9, "too much": 1.1, doubled: 2 };
  const PART_KINDS = [...Object.keys(PART_FACTORS), "other form", "conjugate", "interchanged"];
  const EVEN = ["adjusted", "slope", "offset", "compensation"];

  // What a page says of each kind.
  /** @type {Record<string, string>} */
  const KINDS = {
    nothing: "nothing is wrong",
    "left out": "{name} was left out",
    "too little": "10 % too little of {name}",
    "too much": "10 % too much of {name}",
    doubled: "twice as much of {name}",
    "other form": "{other} was taken for {name}",
    conjugate: "{other} was taken for {name}",
    interchanged: "the amounts of {name} and {other} were interchanged",
    "half the water": "half the volume of water",
    "too little water": "10 % too little water",
    "too much water": "10 % too much water",
    "twice the water": "twice the volume of water",
    evaporation: "water evaporated",
    "carbon dioxide": "carbon dioxide was exchanged with air",
    ammonia: "ammonia was lost to air",
    overshoot: "too much of {name} was added in adjusting it",
    adjusted: "it was adjusted to the same pH at another temperature",
    slope: "the electrode's slope is off",
    offset: "the meter is off by the same amount everywhere",
    "compensation off": "the meter does not compensate, and stands at 25 °C",
    compensation: "the meter compensates for another temperature",
  };

  /** A formulation with what may be mistaken for its reagents. Mirrors `setting_of` in
   * substitutes.py, whose result is in the page's data.
   * @param {Subject} subject
   * @param {{carbonate: Family | null, substitutes: Part[][]}} data
   * @returns {Setting}
   */
  function settingOf(subject, data) {
    return { subject, carbonate: data.carbonate, substitutes: data.substitutes };
  }

  /** Everything that may have gone wrong at one temperature. Mirrors `suspects_of`.
   * @param {Setting} setting
   * @param {number} temperature K
   * @returns {Suspect[]}
   */
  function suspectsOf(setting, temperature) {
    const { low, high } = setting.subject.use_temperature;
    return [
      suspect("nothing", 0),
      ...ofParts(setting),
      ...Object.entries(VOLUME_FACTORS).map(([kind, factor]) => suspect(kind, factor)),
      suspect("evaporation", 1, 0.5),
      ...ofGases(setting),
      ...ofTitrants(setting, temperature),
      suspect("adjusted", low, high),
      suspect("slope", 0.8, 1.05),
      suspect("offset", -0.5, 0.5),
      suspect("compensation off", 298.15),
      suspect("compensation", 273.15, 323.15),
    ];
  }

  /** @param {string} kind @param {number} low @param {number} [high] @param {string} [name]
   * @param {string} [other] @param {number} [position] @param {number} [choice]
   * @returns {Suspect} */
  function suspect(kind, low, high = low, name = "", other = "", position = -1, choice = -1) {
    return { kind, name, other, position, choice, low, high };
  }

  /** Mirrors `_of_parts`. @param {Setting} setting @returns {Suspect[]} */
  function ofParts(setting) {
    const { parts } = setting.subject.recipe;
    /** @type {Suspect[]} */
    const found = [];
    parts.forEach((part, at) => {
      const name = part.label;
      for (const [kind, factor] of Object.entries(PART_FACTORS)) {
        found.push(suspect(kind, factor, factor, name, "", at));
      }
      setting.substitutes[at].forEach((other, choice) => {
        const kind = sameIons(part, other) ? "other form" : "conjugate";
        found.push(suspect(kind, 1, 1, name, other.label, at, choice));
      });
      for (let later = at + 1; later < parts.length; later += 1) {
        const other = parts[later];
        if ((part.added.volume === null) === (other.added.volume === null)) {
          found.push(suspect("interchanged", 1, 1, name, other.label, at, later));
        }
      }
    });
    return found;
  }

  /** @param {Part} part @param {Part} other @returns {boolean} */
  function sameIons(part, other) {
    const own = new Map(part.added.ions.map((ion, k) => [ion.name, part.added.per_ion[k]]));
    return (
      own.size === other.added.ions.length &&
      other.added.ions.every((ion, k) => own.get(ion.name) === other.added.per_ion[k])
    );
  }

  /** Mirrors `_of_gases`. @param {Setting} setting @returns {Suspect[]} */
  function ofGases(setting) {
    const { mixture, recipe } = setting.subject;
    const found = [];
    if (setting.carbonate !== null || mixture.families.some(({ key }) => key === CARBONATE)) {
      found.push(suspect("carbon dioxide", 0, 1));
    }
    if (recipe.parts.some((part) => part.added.families.includes(AMMONIA))) {
      found.push(suspect("ammonia", 0, 0.9));
    }
    return found;
  }

  /** Mirrors `_of_titrants`.
   * @param {Setting} setting
   * @param {number} temperature K
   * @returns {Suspect[]}
   */
  function ofTitrants(setting, temperature) {
    const { subject } = setting;
    /** @type {Suspect[]} */
    const found = [];
    const seen = new Set();
    subject.additions.forEach((titrant, at) => {
      if (seen.has(titrant.direction)) return;
      seen.add(titrant.direction);
      const reserve = toLimit(subject, temperature, at, subject.mixture);
      let most = reserve > 0 ? 2 * reserve : OVERSHOOT;
      if (titrant.water > 0) most = Math.min(most, 1 / titrant.water);
      found.push(suspect("overshoot", 0, most, titrant.label, "", at));
    });
    return found;
  }

  /** An extent, `share` of the way through a suspect's range; small ones are denser.
   * Mirrors `extent_at`.
   * @param {Suspect} suspected
   * @param {number} share
   * @returns {number}
   */
  function extentAt(suspected, share) {
    const through = EVEN.includes(suspected.kind) ? share : share * share;
    return suspected.low + (suspected.high - suspected.low) * through;
  }

  /** A formulation at one temperature, ready to be altered. Mirrors `scene_of`.
   * @param {Setting} setting
   * @param {number} temperature K
   * @returns {Scene}
   */
  function sceneOf(setting, temperature) {
    const { subject } = setting;
    const base = baseOf(setting);
    const held = base.families.some((family) => family.key === CARBONATE);
    return {
      setting,
      temperature,
      base,
      in_air: held ? carbonateInAir(subject, base, temperature) : NaN,
      aim: targetAt(subject, subject.reference_temperature),
    };
  }

  /** Mirrors `_base`. @param {Setting} setting @returns {Mixture} */
  function baseOf(setting) {
    let like = setting.subject.mixture;
    if (setting.carbonate !== null) {
      const families = [...like.families, setting.carbonate];
      like = { ...like, families, totals: [...like.totals, 0] };
    }
    const others = setting.substitutes.flatMap((parts) => parts.map((part) => part.added));
    return withExcess(listing(like, others), 0);
  }

  /** What a batch holds where a suspect is true; as it should where only the reading errs.
   * Mirrors `altered`.
   * @param {Scene} scene
   * @param {Suspect} suspected
   * @param {number} extent
   * @returns {Mixture}
   */
  function altered(scene, suspected, extent) {
    const { base, setting } = scene;
    const { kind } = suspected;
    if (PART_KINDS.includes(kind)) return otherParts(scene, suspected, extent);
    if (kind in VOLUME_FACTORS || kind === "evaporation") return scaled(base, 1 / extent);
    if (kind === "carbon dioxide") {
      const own = base.totals[base.families.findIndex(({ key }) => key === CARBONATE)];
      return withCarbonate(base, own + extent * (scene.in_air - own));
    }
    if (kind === "ammonia") {
      const totals = base.families.map(({ key }, row) =>
        key === AMMONIA ? base.totals[row] * (1 - extent) : base.totals[row],
      );
      return { ...base, totals };
    }
    if (kind === "overshoot") {
      return mixed(base, setting.subject.additions[suspected.position], extent);
    }
    if (kind === "adjusted") {
      const { excess } = measured(setting.subject, extent, scene.aim);
      const molalities = base.molalities.slice();
      // The two nameless ions stand last.
      molalities[molalities.length - 2] = Math.max(excess, 0);
      molalities[molalities.length - 1] = Math.max(-excess, 0);
      return { ...base, molalities };
    }
    return base;
  }

  /** The mixture of a recipe in which one part, or two, are not what they should be.
   * Mirrors `_other_parts`.
   * @param {Scene} scene
   * @param {Suspect} suspected
   * @param {number} factor
   * @returns {Mixture}
   */
  function otherParts(scene, suspected, factor) {
    const { subject, substitutes } = scene.setting;
    const parts = subject.recipe.parts.slice();
    const { position: at, choice } = suspected;
    if (suspected.kind === "interchanged") {
      const [one, other] = [parts[at], parts[choice]];
      parts[at] = { ...one, amount: (other.amount * measureOf(other)) / measureOf(one) };
      parts[choice] = { ...other, amount: (one.amount * measureOf(one)) / measureOf(other) };
    } else if (choice >= 0) {
      parts[at] = substitutes[at][choice];
    } else {
      parts[at] = { ...parts[at], amount: factor * parts[at].amount };
    }
    return mixtureOf({ ...subject.recipe, parts }, scene.base);
  }

  /** What is read where a suspect is true, and the pH of the batch is `pH`. Mirrors `read_as`.
   * @param {Suspect} suspected
   * @param {number} extent
   * @param {number} pH
   * @param {number} temperature K
   * @returns {number}
   */
  function readAs(suspected, extent, pH, temperature) {
    const { kind } = suspected;
    if (kind === "slope") return ISOPOTENTIAL + extent * (pH - ISOPOTENTIAL);
    if (kind === "offset") return pH + extent;
    if (kind === "compensation" || kind === "compensation off") {
      return shown(pH, temperature, extent);
    }
    return pH;
  }

  /** A suspect in words, its extent left out. Mirrors `words_of`.
   * @param {Suspect} suspected
   * @returns {string}
   */
  function wordsOf(suspected) {
    return KINDS[suspected.kind]
      .replace("{name}", () => suspected.name)
      .replace("{other}", () => suspected.other);
  }

  bf.suspects = {
    KINDS, EVEN, settingOf, suspectsOf, extentAt, sceneOf, altered, readAs, wordsOf,
  };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
