/** Where readings crowd together, for checks only; the mirror of fieldlog/sheet/crowd.py. */

const MOST_CROWDS = 3;
const LEAST_MEMBERS = 3;
const LEAST_SHARE = 0.2;
const LEAST_COVERED = 0.75;

/** Standard deviations in a median absolute deviation, for a normal distribution. */
export const MAD_TO_SD = 1.4826;

/** @typedef {{mean: number, length: number}} MeanAndLength */

/** @typedef {{position: number, crowd_deg: number}} Stray a reading far from its nearest crowd */

/**
 * The turn from one angle to another, -period/2 <= x < period/2.
 * @param {number} fromDeg
 * @param {number} toDeg
 * @param {number} periodDeg
 * @returns {number}
 */
export function signedTurn(fromDeg, toDeg, periodDeg) {
  const half = periodDeg / 2;
  const turned = (toDeg - fromDeg + half) % periodDeg;
  return (turned < 0 ? turned + periodDeg : turned) - half;
}

/**
 * Circular mean, 0 <= x < period, and mean resultant length of at least one angle.
 * @param {readonly number[]} anglesDeg
 * @param {number} periodDeg
 * @returns {MeanAndLength}
 */
export function meanAndLength(anglesDeg, periodDeg) {
  const k = (2 * Math.PI) / periodDeg;
  let c = 0;
  let s = 0;
  for (const angle of anglesDeg) {
    c += Math.cos(angle * k);
    s += Math.sin(angle * k);
  }
  return polar(c, s, anglesDeg.length, periodDeg);
}

/**
 * For each of at least two angles, mean and mean resultant length of all the others.
 * @param {readonly number[]} anglesDeg
 * @param {number} periodDeg
 * @returns {MeanAndLength[]}
 */
export function meansOfOthers(anglesDeg, periodDeg) {
  const k = (2 * Math.PI) / periodDeg;
  const cosines = anglesDeg.map((angle) => Math.cos(angle * k));
  const sines = anglesDeg.map((angle) => Math.sin(angle * k));
  const add = (/** @type {number} */ total, /** @type {number} */ one) => total + one;
  const c = cosines.reduce(add, 0);
  const s = sines.reduce(add, 0);
  return anglesDeg.map((_, i) => polar(c - cosines[i], s - sines[i], anglesDeg.length - 1, periodDeg));
}

/**
 * @param {number} c
 * @param {number} s
 * @param {number} n
 * @param {number} periodDeg
 * @returns {MeanAndLength}
 */
function polar(c, s, n, periodDeg) {
  const mean = (Math.atan2(s, c) * periodDeg) / (2 * Math.PI);
  return { mean: mean < 0 ? mean + periodDeg : mean, length: Math.sqrt(c * c + s * s) / n };
}

/**
 * Median of at least one value.
 * @param {readonly number[]} values
 * @returns {number}
 */
export function median(values) {
  const ordered = [...values].sort((a, b) => a - b);
  const half = Math.floor(values.length / 2);
  return ordered.length % 2 ? ordered[half] : (ordered[half - 1] + ordered[half]) / 2;
}

/**
 * Readings farther than `spreads` standard deviations of their nearest crowd from it, and farther
 * than an eighth of the turn. None where the readings are spread all round.
 * @param {readonly number[]} anglesDeg
 * @param {number} periodDeg
 * @param {number} spreads
 * @returns {Stray[]}
 */
export function strays(anglesDeg, periodDeg, spreads) {
  const crowds = findCrowds(anglesDeg, periodDeg);
  if (!crowds.length) return [];
  const nearest = anglesDeg.map((angle) => {
    const turns = crowds.map((crowd) => Math.abs(signedTurn(crowd, angle, periodDeg)));
    return turns.indexOf(Math.min(...turns));
  });
  const off = anglesDeg.map((angle, i) => Math.abs(signedTurn(crowds[nearest[i]], angle, periodDeg)));
  const spread = crowds.map((_, k) => {
    const own = off.filter((__, i) => nearest[i] === k);
    return own.length ? MAD_TO_SD * median(own) : 0;
  });
  return off.flatMap((distance, i) => {
    const stray = distance > Math.max(spreads * spread[nearest[i]], periodDeg / 8);
    return stray ? [{ position: i, crowd_deg: crowds[nearest[i]] }] : [];
  });
}

/**
 * Directions of the crowds, the largest first; empty where they hold too few of the readings.
 * @param {readonly number[]} anglesDeg
 * @param {number} periodDeg
 * @returns {number[]}
 */
export function findCrowds(anglesDeg, periodDeg) {
  const least = Math.max(LEAST_MEMBERS, LEAST_SHARE * anglesDeg.length);
  let left = [...anglesDeg];
  /** @type {number[]} */
  const crowds = [];
  while (left.length && crowds.length < MOST_CROWDS) {
    const members = densest(left, periodDeg / 8, periodDeg);
    if (members.length < least) break;
    crowds.push(meanAndLength(members, periodDeg).mean);
    const taken = new Set(members);
    left = left.filter((angle) => !taken.has(angle));
  }
  return anglesDeg.length - left.length >= LEAST_COVERED * anglesDeg.length ? crowds : [];
}

/**
 * The readings around the one with most neighbours, the closest neighbours where several have as many.
 * @param {readonly number[]} angles
 * @param {number} window
 * @param {number} period
 * @returns {number[]}
 */
function densest(angles, window, period) {
  /** @type {number[]} */
  let best = [];
  let leastTotal = Infinity;
  for (const middle of angles) {
    /** @type {number[]} */
    const members = [];
    let total = 0;
    for (const angle of angles) {
      const turn = Math.abs(signedTurn(middle, angle, period));
      if (turn > window) continue;
      members.push(angle);
      total += turn;
    }
    if (members.length > best.length || (members.length === best.length && total < leastTotal)) {
      best = members;
      leastTotal = total;
    }
  }
  return best;
}
