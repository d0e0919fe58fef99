/**
 * The null distributions of the resultant of n random directions. The mirror of
 * fieldlog/science/walk.py, where the method and its accuracy are told.
 */

import {besselJ0, besselJ01, besselJ1} from './bessel.js';
import {besselRatio, kappaOf, logBesselI0} from './concentration.js';
import {erfc} from './distributions.js';

const LARGEST_EXACT = 1000;
const MOST_TERMS = 3000;
export const SMALLEST = 2.2250738585072014e-308;

/** @param {number} p */
function proper(p) {
  return Math.min(Math.max(p, SMALLEST), 1);
}

/**
 * P(mean resultant length >= r) for n uniform directions.
 * @param {number} r
 * @param {number} n
 * @returns {number}
 */
export function longerThan(r, n) {
  if (n === 1 || r <= 0) return 1;
  let p = 0;
  if (n === 2) p = (2 / Math.PI) * Math.acos(Math.min(r, 1));
  else if (n === 3) p = three(3 * r, [1], [1]);
  else if (n === 4) {
    const [angles, weights] = pieces(edges(angleOf(Math.abs(2 - 4 * r)), angleOf(4 * r), angleOf(4 * r - 2)));
    p = three(4 * r, angles.map((angle) => 2 * Math.cos(angle / 2)), weights.map((weight) => weight / Math.PI));
  } else if (n <= LARGEST_EXACT) {
    const {zeros, factors} = series(n);
    let total = 0;
    for (let k = 0; k < factors.length; k += 1) total += factors[k] * besselJ1(zeros[k] * r);
    p = 1 - r * total;
  } else p = Math.exp(Math.sqrt(1 + 4 * n + 4 * n * n * (1 - r * r)) - (1 + 2 * n));
  if (n > 4 && p < (n < 8 ? 1e-6 : 1e-8)) p = saddle(r, n);
  return proper(p);
}

/**
 * P(resultant >= r) for a walk with the given step lengths in random directions.
 * @param {number} r
 * @param {number[]} steps
 */
export function longerThanSteps(r, steps) {
  const reach = steps.reduce((total, step) => total + step, 0);
  const share = r / reach;
  let total = 0;
  let count = 32;
  while (count < MOST_TERMS && envelope((count * Math.PI) / reach, steps) > 1e-13) count = Math.min(2 * count, MOST_TERMS);
  for (const zero of zerosOfJ0(count)) {
    let product = 1;
    for (const step of steps) product *= besselJ0(zero * (step / reach));
    total += ((2 * product) / (zero * besselJ1(zero) ** 2)) * besselJ1(zero * share);
  }
  return Math.min(Math.max(1 - share * total, 1e-9), 1);
}

/**
 * Bound of the product of J0(t step).
 * @param {number} t
 * @param {number[]} steps
 */
function envelope(t, steps) {
  return steps.reduce((product, step) => product * Math.min(1, Math.sqrt(2 / (Math.PI * t * step))), 1);
}

/** @type {Map<number, number>} */
const thresholds = new Map();

/**
 * The mean resultant length that n >= 5 uniform directions exceed with probability 0.05.
 * @param {number} n
 */
export function threshold(n) {
  const known = thresholds.get(n);
  if (known !== undefined) return known;
  const level = 0.05;
  const root = Math.log(level) + 1 + 2 * n;
  let before = Math.sqrt((4 * n * n + 4 * n + 1 - root * root) / (4 * n * n));
  let now = before * 0.999;
  let pBefore = longerThan(before, n) - level;
  for (let i = 0; i < 40; i += 1) {
    const p = longerThan(now, n) - level;
    if (Math.abs(p) < 1e-15 || p === pBefore) break;
    const following = now - (p * (now - before)) / (p - pBefore);
    before = now;
    pBefore = p;
    now = Math.min(Math.max(following, 0), 1);
    if (Math.abs(now - before) < 1e-14) break;
  }
  thresholds.set(n, now);
  return now;
}

/**
 * P(sum of the n components along a stated direction >= v).
 * @param {number} v
 * @param {number} n
 * @returns {number}
 */
export function furtherThan(v, n) {
  if (v < 0) return 1 - furtherThan(-v, n);
  if (n === 1) return Math.acos(Math.min(v, 1)) / Math.PI;
  let p = 0;
  if (n === 2) p = twoAlong(v);
  else if (n <= LARGEST_EXACT) {
    let total = 0;
    const powers = sineSeries(n);
    for (let k = 1; k <= powers.length; k += 1) total += Math.sin(k * ((Math.PI * v) / n)) * powers[k - 1];
    p = 0.5 - v / (2 * n) - total / Math.PI;
  } else {
    const u = v * Math.sqrt(2 / n);
    const density = Math.exp((-u * u) / 2) / Math.sqrt(2 * Math.PI);
    p = 0.5 * erfc(u / Math.SQRT2) - density * (1.5 / (24 * n)) * (u ** 3 - 3 * u);
  }
  if (n > 2 && p < (n < 8 ? 1e-6 : 1e-8)) p = lugannaniRice(v, n);
  return proper(p);
}

/** @param {number} n */
function terms(n) {
  const reach = (2 / Math.PI) * 1e-12 ** (-2 / n);
  return Math.min(MOST_TERMS, Math.ceil((n / Math.PI) * reach) + 8);
}

/** @type {Map<number, {zeros: number[], factors: Float64Array}>} */
const allSeries = new Map();

/** @param {number} n */
function series(n) {
  let found = allSeries.get(n);
  if (!found) {
    const count = terms(n);
    const zeros = zerosOfJ0(count);
    const factors = new Float64Array(count);
    for (let k = 0; k < count; k += 1) {
      factors[k] = (2 * besselJ0(zeros[k] / n) ** n) / (zeros[k] * besselJ1(zeros[k]) ** 2);
    }
    found = {zeros, factors};
    allSeries.set(n, found);
  }
  return found;
}

/** @param {number} n */
function sineSeries(n) {
  return Array.from({length: terms(n)}, (_, i) => besselJ0((i + 1) * (Math.PI / n)) ** n / (i + 1));
}

/** @type {number[]} */
const zerosFound = [];

/**
 * At least the first `count` zeros of J0: McMahon's expansion, then Newton.
 * @param {number} count
 */
function zerosOfJ0(count) {
  for (let k = zerosFound.length + 1; k <= count; k += 1) {
    const b = (k - 0.25) * Math.PI;
    let x = b + 1 / (8 * b) - 31 / (384 * b ** 3);
    for (let i = 0; i < 3; i += 1) {
      const [zero, one] = besselJ01(x);
      x += zero / one;
    }
    zerosFound.push(x);
  }
  return zerosFound.length === count ? zerosFound : zerosFound.slice(0, count);
}

const TANH_SINH = Array.from({length: 109}, (_, i) => {
  const t = (i - 54) * 0.0625;
  const s = (Math.PI / 2) * Math.sinh(t);
  return [1 / (1 + Math.exp(-2 * s)), (((0.0625 * Math.PI) / 4) * Math.cosh(t)) / Math.cosh(s) ** 2];
});

/** @param {number[]} found */
function edges(...found) {
  return [...new Set([0, Math.PI, ...found])].sort((a, b) => a - b);
}

/**
 * Tanh-sinh nodes and weights over the intervals between the sorted edges.
 * @param {number[]} sorted
 * @returns {[number[], number[]]}
 */
function pieces(sorted) {
  /** @type {number[]} */
  const x = [];
  /** @type {number[]} */
  const weights = [];
  for (let i = 0; i + 1 < sorted.length; i += 1) {
    const width = sorted[i + 1] - sorted[i];
    if (width <= 1e-15) continue;
    for (const [node, weight] of TANH_SINH) {
      x.push(sorted[i] + width * node);
      weights.push(width * weight);
    }
  }
  return [x, weights];
}

/** @param {number} s length of the sum of two unit steps */
function angleOf(s) {
  return 2 * Math.acos(Math.min(Math.max(s / 2, 0), 1));
}

/**
 * P(|a + a pair of unit steps| >= r), averaged over lengths a.
 * @param {number} r
 * @param {number[]} lengths
 * @param {number[]} weights
 */
function three(r, lengths, weights) {
  let total = 0;
  lengths.forEach((a, i) => {
    const [angles, shares] = pieces(edges(angleOf(Math.abs(r - a)), angleOf(r + a)));
    let inner = 0;
    angles.forEach((angle, k) => {
      const s = 2 * Math.cos(angle / 2);
      let cosine = s + a >= r ? -1 : 1;
      if (s * a > 0) cosine = (r * r - s * s - a * a) / (2 * s * a);
      inner += shares[k] * Math.acos(Math.min(Math.max(cosine, -1), 1));
    });
    total += (weights[i] * inner) / Math.PI ** 2;
  });
  return total;
}

/** @param {number} v */
function twoAlong(v) {
  if (v >= 2) return 0;
  const [angles, weights] = pieces([0, Math.acos(Math.min(Math.max(v - 1, -1), 1))]);
  let total = 0;
  angles.forEach((angle, k) => {
    total += weights[k] * Math.acos(Math.min(Math.max(v - Math.cos(angle), -1), 1));
  });
  return total / Math.PI ** 2;
}

/**
 * Variances of the components along and across the mean of a von Mises distribution.
 * @param {number} kappa
 */
function variances(kappa) {
  const ratio = besselRatio(kappa);
  const across = ratio / kappa;
  const along = kappa < 1e4 ? 1 - across - ratio ** 2 : 1 / (2 * kappa * kappa);
  return {along, across};
}

/**
 * @param {number} r
 * @param {number} n
 */
function saddle(r, n) {
  const kappa = kappaOf(r);
  if (kappa === null) return SMALLEST;
  const {along, across} = variances(kappa);
  const logP = n * (logBesselI0(kappa) - kappa * r) + Math.log(r / (kappa * Math.sqrt(along * across)));
  return logP > -708 ? Math.exp(logP) : SMALLEST;
}

/**
 * @param {number} v
 * @param {number} n
 */
function lugannaniRice(v, n) {
  const kappa = kappaOf(v / n);
  if (kappa === null) return SMALLEST;
  const {along} = variances(kappa);
  const half = kappa * v - n * logBesselI0(kappa);
  if (half > 700) return SMALLEST;
  const w = Math.sqrt(2 * half);
  const u = kappa * Math.sqrt(n * along);
  const density = Math.exp(-half) / Math.sqrt(2 * Math.PI);
  return 0.5 * erfc(w / Math.SQRT2) + density * (1 / u - 1 / w);
}
