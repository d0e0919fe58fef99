/** 95 % intervals of the mean direction. The mirror of fieldlog/science/interval.py. */

import {degrees, radians} from './angles.js';
import {studentT} from './distributions.js';
import {NO_LENGTH, directionDeg} from './moments.js';

/** @typedef {import('./angles.js').Angles} Angles */
/** @typedef {{method: string, taken: number, factor: number}} Rule */
/** @typedef {{meanDeg: number | null, halfWidthDeg: number | null, spread: number | null}} Interval */

export const FEWEST = 5;

/** @type {Rule} */
export const OF_READINGS = {method: "circular dispersion with Student's t, readings", taken: 1, factor: 1};

/** @type {Rule} */
export const OF_BEDFORMS = {
  method: "circular dispersion of bedform means with Student's t",
  taken: 1.5,
  factor: 1.02,
};

/**
 * @param {Angles} anglesDeg
 * @param {Rule} rule
 * @param {{lengths?: Angles | null, leastSpread?: number}} [options]
 * @returns {Interval}
 */
export function interval(anglesDeg, rule, {lengths = null, leastSpread = 0} = {}) {
  const n = anglesDeg.length;
  let c = 0;
  let s = 0;
  const along = new Float64Array(n);
  const across = new Float64Array(n);
  for (let i = 0; i < n; i += 1) {
    const size = lengths ? lengths[i] : 1;
    along[i] = size * Math.cos(radians(anglesDeg[i]));
    across[i] = size * Math.sin(radians(anglesDeg[i]));
    c += along[i];
    s += across[i];
  }
  const size = Math.hypot(c, s);
  if (n === 0 || size < NO_LENGTH * n) return {meanDeg: null, halfWidthDeg: null, spread: null};
  const meanDeg = directionDeg(c, s);
  if (n < FEWEST) return {meanDeg, halfWidthDeg: null, spread: null};
  let squares = 0;
  for (let i = 0; i < n; i += 1) squares += ((across[i] * c - along[i] * s) / size) ** 2;
  const spread = Math.max((Math.sqrt(squares / (n - 1)) * n) / size, leastSpread);
  return {meanDeg, halfWidthDeg: halfWidth(spread, n, rule), spread};
}

/**
 * @param {number} spread
 * @param {number} n
 * @param {Rule} rule
 * @returns {number | null}
 */
export function halfWidth(spread, n, rule) {
  const sine = sineOfHalfWidth(spread, n, rule);
  return sine > 1e-9 && sine < 1 ? degrees(Math.asin(sine)) : null;
}

/**
 * @param {number} spread
 * @param {number} n
 * @param {Rule} rule
 */
export function sineOfHalfWidth(spread, n, rule) {
  const freedom = n - rule.taken;
  return rule.factor * studentT(freedom) * spread * Math.sqrt((n - 1) / freedom / n);
}
