/** Where a measured curve is steepest: its end points, from the points alone.
 * The twin of end_points.py.
 *
 * The first derivative is largest there and the second is zero. Readings scatter and volumes are
 * unevenly spaced, so that differences of neighbours will not do: between the flat parts on both
 * sides the points are smoothed by
 *
 *     V = Ve + a 10^pH − b 10^−pH
 *
 * which is how a curve passes an equivalence point: what is left of the sample falls tenfold a pH,
 * what is in excess of the titrant rises tenfold. By its derivatives it is steepest at Ve itself.
 *
 * @typedef {{volume: number, standard_error: number, pH: number, slope: number,
 *   window: number}} EndPoint  m3, pH per m3; how many points were smoothed
 * @typedef {{volume: number[], pH: number[], sign: number, noise: number}} Turned  points with one
 *   reading a volume, turned so that the curve rises
 */
(function (bf) {
  "use strict";

  const { LN10 } = bf.temperature;
  const { inverse } = bf.linear;

  const FEWEST = 6; // points that are smoothed: three numbers, and some to spare
  const REACH = 0.4; // of the way from the end point to the flattest part, in pH, that is smoothed
  const CONTRAST = 2; // how much steeper than both sides an end point has to be
  const CERTAIN = 5; // standard errors by which it has to be so: thousands of places are compared
  const STEEP = 0.1; // of a peak's slope: where the curve may be steep again
  const STEADY = 0.25; // of the mean slope: the standard error of slopes for seeking peaks
  const ROUNDS = 8; // times that window and weights follow the end point
  const SETTLED = 1e-9; // of its volume
  const LEAST_NOISE = 1e-4; // pH; nobody reads better
  const GAP_SHARE = 0.05; // of the gap between points that it lies in
  const MODEL_SHARE = 1e-3; // of the volume: dilution and activity, which the smoothing leaves out

  /** The end points of a measured curve in the order of addition. Mirrors `end_points`.
   * Source: weighted least squares; the smoothing is the project's own (see above).
   * @param {Points} points @returns {EndPoint[]} */
  function endPoints(points) {
    const curve = turned(points);
    if (curve.volume.length <= FEWEST) return [];
    const places = slopesOf(curve, widthOf(curve));
    const mean = meanSlope(curve);
    return peaksOf(places, mean)
      .map((peak) => refined(curve, places.middles, peak))
      .filter((each) => each !== null && curve.sign * each.slope > mean)
      .sort((one, other) => one.volume - other.volume);
  }

  /** @param {Points} points @returns {Turned} */
  function turned(points) {
    const volume = [];
    const sums = [];
    const counts = [];
    points.volume.forEach((value, at) => {
      if (volume.length === 0 || value !== volume[volume.length - 1]) {
        volume.push(value);
        sums.push(0);
        counts.push(0);
      }
      sums[sums.length - 1] += points.pH[at];
      counts[counts.length - 1] += 1;
    });
    const pH = sums.map((sum, at) => sum / counts[at]);
    const sign = pH.length === 0 || pH[pH.length - 1] >= pH[0] ? 1 : -1;
    return { volume, pH: pH.map((each) => sign * each), sign, noise: noiseOf(volume, pH) };
  }

  /** The standard deviation of readings about a smooth curve. Mirrors `noise_of`.
   * @param {number[]} volume m3 @param {number[]} pH @returns {number} */
  function noiseOf(volume, pH) {
    const misses = [];
    for (let at = 2; at < volume.length - 2; at += 1) {
      const near = [at - 2, at - 1, at + 1, at + 2];
      let between = 0;
      let squares = 1;
      for (const one of near) {
        let weight = 1;
        for (const other of near) {
          if (other !== one) weight *= (volume[at] - volume[other]) / (volume[one] - volume[other]);
        }
        between += weight * pH[one];
        squares += weight * weight;
      }
      misses.push(Math.abs(pH[at] - between) / Math.sqrt(squares));
    }
    if (misses.length === 0) return 0;
    misses.sort((one, other) => one - other);
    const half = misses.length >> 1;
    return 1.4826 * (misses.length % 2 ? misses[half] : 0.5 * (misses[half - 1] + misses[half]));
  }

  /** Middles, slopes and their standard errors over windows of `width` points.
   * @param {Turned} curve @param {number} width
   * @returns {{middles: number[], slopes: number[], errors: number[]}} */
  function slopesOf(curve, width) {
    const result = { middles: [], slopes: [], errors: [] };
    for (let start = 0; start + width <= curve.volume.length; start += 1) {
      let [middle, level] = [0, 0];
      for (let k = start; k < start + width; k += 1) {
        middle += curve.volume[k] / width;
        level += curve.pH[k] / width;
      }
      let [squares, products] = [0, 0];
      for (let k = start; k < start + width; k += 1) {
        squares += (curve.volume[k] - middle) ** 2;
        products += (curve.volume[k] - middle) * (curve.pH[k] - level);
      }
      result.middles.push(middle);
      result.slopes.push(products / squares);
      result.errors.push(curve.noise / Math.sqrt(squares));
    }
    return result;
  }

  /** @param {Turned} curve @returns {number} */
  function meanSlope(curve) {
    return riseOf(curve) / (curve.volume[curve.volume.length - 1] - curve.volume[0]);
  }

  /** @param {Turned} curve @returns {number} */
  function riseOf(curve) {
    let [low, high] = [Infinity, -Infinity];
    for (const each of curve.pH) [low, high] = [Math.min(low, each), Math.max(high, each)];
    return high - low;
  }

  /** How many points a slope needs to be steady. @param {Turned} curve @returns {number} */
  function widthOf(curve) {
    const count = curve.volume.length;
    const rise = riseOf(curve);
    const wanted = rise > 0 ? (curve.noise * (count - 1)) / (STEADY * rise) : 0;
    let width = 2;
    while ((width * (width * width - 1)) / 12 < wanted * wanted && width < Math.floor(count / 4)) {
      width += 1;
    }
    return width;
  }

  /** The steep parts, steepest first, one between any two flat parts. Mirrors `_peaks`.
   * @param {{slopes: number[], errors: number[]}} places @param {number} mean
   * @returns {{at: number, low: number, high: number}[]} by position among the slopes */
  function peaksOf({ slopes, errors }, mean) {
    const order = slopes.map((_, at) => at).sort((one, other) => slopes[other] - slopes[one]);
    const found = [];
    for (const at of order) {
      if (!(slopes[at] > mean)) break;
      if (found.some((peak) => peak.low < at && at < peak.high)) continue;
      const low = flattest(slopes, errors, at, -1);
      const high = flattest(slopes, errors, at, 1);
      if (low >= 0 && high >= 0) found.push({ at, low, high });
    }
    return found;
  }

  /** The flattest place on one side before the curve is steep again; −1 where it does not fall to
   * half of the peak's slope, beyond doubt. Mirrors `_flattest`.
   * @param {number[]} slopes @param {number[]} errors @param {number} at @param {number} way
   * @returns {number} */
  function flattest(slopes, errors, at, way) {
    let found = -1;
    for (let other = at + way; other >= 0 && other < slopes.length; other += way) {
      const steep = found < 0 ? slopes[at] : CONTRAST * slopes[found] + STEEP * slopes[at];
      const doubt = CERTAIN * Math.hypot(errors[at], CONTRAST * errors[other]);
      if (slopes[other] - steep > doubt) break;
      const falls = slopes[at] - CONTRAST * slopes[other] > doubt;
      if (falls && (found < 0 || slopes[other] < slopes[found])) found = other;
    }
    return found;
  }

  /** The end point of a steep part, the window following it. Mirrors `_refined`.
   *
   * It begins half-way, in pH, between the flat parts: where slopes are largest may lie all of a
   * window's points on one side of the jump.
   * @param {Turned} curve @param {number[]} middles
   * @param {{at: number, low: number, high: number}} peak @returns {EndPoint | null} */
  function refined(curve, middles, peak) {
    const [start, stop] = [middles[peak.low], middles[peak.high]];
    const [low, high] = [readAt(curve, start), readAt(curve, stop)];
    let pH = 0.5 * (low + high);
    let about = crossing(curve, start, stop, pH);
    let found = null;
    for (let round = 0; round < ROUNDS; round += 1) {
      const ends = [pH + REACH * (low - pH), pH + REACH * (high - pH)];
      const following = through(curve, windowAbout(curve, about, ends), pH);
      if (following === null) break;
      found = following;
      const moved = Math.abs(following.volume - about);
      about = found.volume;
      pH = Math.min(Math.max(curve.sign * found.pH, low), high);
      if (moved < SETTLED * about) break;
    }
    return found;
  }

  /** The volume between two at which the readings first pass one. Mirrors `_crossing`.
   * @param {Turned} curve @param {number} start @param {number} stop @param {number} pH
   * @returns {number} */
  function crossing(curve, start, stop, pH) {
    const first = curve.volume.findIndex((each) => each >= start);
    for (let at = first; at < curve.volume.length && curve.volume[at] <= stop; at += 1) {
      if (!(curve.pH[at] > pH)) continue;
      if (at === first) break;
      const share = (pH - curve.pH[at - 1]) / (curve.pH[at] - curve.pH[at - 1]);
      return curve.volume[at - 1] + share * (curve.volume[at] - curve.volume[at - 1]);
    }
    return 0.5 * (start + stop);
  }

  /** The reading at a volume, between points by a straight line.
   * @param {Turned} curve @param {number} volume @returns {number} */
  function readAt(curve, volume) {
    const last = curve.volume.length - 1;
    if (volume <= curve.volume[0]) return curve.pH[0];
    if (volume >= curve.volume[last]) return curve.pH[last];
    const after = curve.volume.findIndex((each) => each > volume);
    const [x0, x1] = [curve.volume[after - 1], curve.volume[after]];
    const [y0, y1] = [curve.pH[after - 1], curve.pH[after]];
    return y0 + ((y1 - y0) / (x1 - x0)) * (volume - x0);
  }

  /** The points between two readings about a volume, at least a few.
   * Mirrors `_window`.
   * @param {Turned} curve @param {number} about @param {number[]} ends
   * @returns {[number, number]} the first and the last */
  function windowAbout(curve, about, [low, high]) {
    const inside = (/** @type {number} */ at) => curve.pH[at] > low && curve.pH[at] < high;
    const beyond = curve.volume.findIndex((each) => each >= about);
    const after = beyond < 0 ? curve.volume.length : beyond;
    // As many on either side: a smoothing of one side says nothing of the other.
    let start = Math.min(Math.max(after - (FEWEST >> 1), 0), curve.volume.length - FEWEST);
    let stop = start + FEWEST - 1;
    while (start > 0 && inside(start - 1)) start -= 1;
    while (stop < curve.volume.length - 1 && inside(stop + 1)) stop += 1;
    return [start, stop];
  }

  /** Where the smoothing of a window is steepest; null where it does not rise.
   * Mirrors `_through`.
   * @param {Turned} curve @param {[number, number]} window @param {number} about pH
   * @returns {EndPoint | null} */
  function through(curve, [start, stop], about) {
    const volume = curve.volume.slice(start, stop + 1);
    const pH = curve.pH.slice(start, stop + 1);
    const columns = pH.map((each) => [1, 10 ** (each - about), -(10 ** (about - each))]);
    const noise = Math.max(curve.noise, LEAST_NOISE);
    let weights = columns.map(() => 1);
    let [centre, a, b] = [NaN, NaN, NaN];
    for (let round = 0; round < ROUNDS; round += 1) {
      const spread = spreadOf(columns, weights);
      const right = [0, 1, 2].map((i) => columns.reduce(
        (sum, row, at) => sum + row[i] * volume[at] * weights[at] * weights[at], 0));
      [centre, a, b] = spread.map(
        (row) => row[0] * right[0] + row[1] * right[1] + row[2] * right[2]);
      if (!(a > 0 && b > 0)) return null;
      // Readings scatter, and a volume is the more uncertain the flatter the curve.
      weights = columns.map(([, up, down]) => 1 / (LN10 * noise * (a * up - b * down)));
    }
    let squares = 0;
    columns.forEach(([, up, down], at) => {
      squares += ((volume[at] - centre - a * up - b * down) * weights[at]) ** 2;
    });
    const scatter = Math.max(squares / (volume.length - 3), 1);
    const variance = spreadOf(columns, weights)[0][0] * scatter;
    const beyond = volume.findIndex((each) => each >= centre);
    const after = Math.min(Math.max(beyond < 0 ? volume.length : beyond, 1), volume.length - 1);
    const gap = GAP_SHARE * (volume[after] - volume[after - 1]);
    return {
      volume: centre,
      standard_error: Math.hypot(Math.sqrt(variance), MODEL_SHARE * centre, gap),
      pH: curve.sign * (about + 0.5 * Math.log10(b / a)),
      slope: curve.sign / (2 * LN10 * Math.sqrt(a * b)),
      window: volume.length,
    };
  }

  /** The inverse of the weighted normal matrix. @param {number[][]} columns one row a point
   * @param {number[]} weights @returns {number[][]} */
  function spreadOf(columns, weights) {
    const normal = [0, 1, 2].map((i) => [0, 1, 2].map((j) => columns.reduce(
      (sum, row, at) => sum + row[i] * row[j] * weights[at] * weights[at], 0)));
    return inverse(normal);
  }

  bf.end_points = { endPoints };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
