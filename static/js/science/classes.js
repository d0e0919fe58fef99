/** Uniformity of readings in classes. The mirror of fieldlog/science/classes.py. */

import {degrees, radians, reducedOne} from './angles.js';
import {kuiperModified, kuiperTail, watsonModified} from './uniformity.js';
import {SMALLEST} from './walk.js';

/** @typedef {import('./angles.js').Angles} Angles */

export const FEWEST_CLASSES = 9;
const ON_ONE_GRID = 0.9;

/**
 * Readings per class round the circle; null where they are not on one grid of 9 or more classes.
 * @param {Angles} anglesDeg
 * @param {number} widthDeg
 * @returns {Float64Array | null}
 */
export function classCounts(anglesDeg, widthDeg) {
  const n = anglesDeg.length;
  const m = Math.round(360 / widthDeg);
  if (m < FEWEST_CLASSES || Math.abs(m * widthDeg - 360) > 1e-9 || n === 0) return null;
  let c = 0;
  let s = 0;
  for (let i = 0; i < n; i += 1) {
    c += Math.cos(radians(anglesDeg[i]) * m);
    s += Math.sin(radians(anglesDeg[i]) * m);
  }
  if (Math.hypot(c, s) / n < ON_ONE_GRID) return null;
  const offset = degrees(Math.atan2(s, c)) / m;
  const counts = new Float64Array(m);
  for (let i = 0; i < n; i += 1) {
    counts[Math.floor((reducedOne(anglesDeg[i] - offset) + widthDeg / 2) / widthDeg) % m] += 1;
  }
  return counts;
}

/** @param {Float64Array} counts */
function runningDifferences(counts) {
  const m = counts.length;
  const n = counts.reduce((total, count) => total + count, 0);
  let running = 0;
  const z = counts.map((count) => (running += count - n / m));
  return {m, n, z};
}

/**
 * p of Watson's U2 for equal classes.
 * @param {Float64Array} counts
 */
export function watsonP(counts) {
  const {m, n, z} = runningDifferences(counts);
  const mean = z.reduce((total, value) => total + value, 0) / m;
  let squares = 0;
  for (const value of z) squares += (value - mean) ** 2;
  const x = watsonModified(squares / (n * m), n);
  if (x < 0.02) return 1;
  const sines = Array.from({length: Math.floor((m - 1) / 2)}, (_, k) => Math.sin((Math.PI * (k + 1)) / m) ** 2);
  let p = 0;
  sines.slice(0, 12).forEach((sine, k) => {
    let weight = 1;
    sines.forEach((other, j) => {
      if (j !== k) weight /= 1 - sine / other;
    });
    p += weight * Math.exp(-2 * m * m * sine * x);
  });
  return Math.min(Math.max(p, SMALLEST), 1);
}

/**
 * p of Kuiper's V at class borders.
 * @param {Float64Array} counts
 */
export function kuiperP(counts) {
  const {m, n, z} = runningDifferences(counts);
  let high = -Infinity;
  let low = Infinity;
  for (const value of z) {
    high = Math.max(high, value);
    low = Math.min(low, value);
  }
  const unseen = ((2 * 0.5826) / Math.sqrt(m)) * Math.sqrt(n / (n + m));
  return kuiperTail(kuiperModified((high - low) / n, n) + unseen);
}
