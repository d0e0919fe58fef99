/** Tests of uniformity. The mirror of fieldlog/science/uniformity.py. */

import {radians, reduced} from './angles.js';
import {meanAndLength} from './moments.js';
import {SMALLEST, furtherThan, longerThan} from './walk.js';

/** @typedef {import('./angles.js').Angles} Angles */
/** @typedef {{statistic: number | null, p: number | null}} Test */

export const FEWEST_FOR_OMNIBUS = 5;

/** @type {Test} */
export const NOT_GIVEN = Object.freeze({statistic: null, p: null});

/**
 * @param {number} r
 * @param {number} n
 * @returns {Test}
 */
export function rayleigh(r, n) {
  return n < 2 ? NOT_GIVEN : {statistic: n * r ** 2, p: longerThan(r, n)};
}

/**
 * @param {Angles} anglesDeg
 * @param {number} againstDeg
 * @returns {Test}
 */
export function vTest(anglesDeg, againstDeg) {
  const n = anglesDeg.length;
  if (n < 2) return NOT_GIVEN;
  let along = 0;
  for (let i = 0; i < n; i += 1) along += Math.cos(radians(anglesDeg[i] - againstDeg));
  along = Math.min(Math.max(along, -n), n);
  return {statistic: along * Math.sqrt(2 / n), p: furtherThan(along, n)};
}

/**
 * @param {Float64Array} sorted reduced and sorted degrees
 * @returns {Test}
 */
export function kuiper(sorted) {
  const n = sorted.length;
  if (n === 0) return NOT_GIVEN;
  let above = -Infinity;
  let below = -Infinity;
  for (let i = 0; i < n; i += 1) {
    const f = sorted[i] / 360;
    const step = (i + 1) / n;
    above = Math.max(above, step - f);
    below = Math.max(below, f - step);
  }
  const statistic = above + below + 1 / n;
  return {statistic, p: n < FEWEST_FOR_OMNIBUS ? null : kuiperTail(kuiperModified(statistic, n))};
}

/**
 * @param {number} statistic
 * @param {number} n
 */
export function kuiperModified(statistic, n) {
  return statistic * (Math.sqrt(n) + 0.155 + 0.24 / Math.sqrt(n));
}

/** @param {number} modified */
export function kuiperTail(modified) {
  if (modified < 0.4) return 1;
  let p = 0;
  for (let j = 1; j <= 12; j += 1) {
    const s = 2 * j * j * modified * modified;
    p += 2 * (2 * s - 1) * Math.exp(-s);
  }
  return Math.min(Math.max(p, SMALLEST), 1);
}

/**
 * @param {Float64Array} sorted reduced and sorted degrees
 * @returns {Test}
 */
export function watson(sorted) {
  const n = sorted.length;
  if (n === 0) return NOT_GIVEN;
  const off = sorted.map((value, i) => value / 360 - (i + 0.5) / n);
  const mean = off.reduce((total, value) => total + value, 0) / n;
  let statistic = 1 / (12 * n);
  for (const value of off) statistic += (value - mean) ** 2;
  return {statistic, p: n < FEWEST_FOR_OMNIBUS ? null : watsonTail(watsonModified(statistic, n))};
}

/**
 * @param {number} statistic
 * @param {number} n
 */
export function watsonModified(statistic, n) {
  return (statistic - 0.1 / n + 0.1 / (n * n)) * (1 + 0.8 / n);
}

/** @param {number} modified */
export function watsonTail(modified) {
  if (modified < 0.01) return 1;
  let p = 0;
  for (let j = 1; j <= 30; j += 1) p += 2 * (-1) ** (j - 1) * Math.exp(-2 * (j * Math.PI) ** 2 * modified);
  return Math.min(Math.max(p, SMALLEST), 1);
}

/**
 * Rayleigh test of the angles multiplied by `order`; the statistic is their resultant length.
 * @param {Angles} anglesDeg
 * @param {number} order
 * @returns {Test}
 */
export function harmonic(anglesDeg, order) {
  const n = anglesDeg.length;
  if (n < 2) return NOT_GIVEN;
  const {r} = meanAndLength(anglesDeg, order);
  return {statistic: r, p: longerThan(r, n)};
}

/** @param {Angles} anglesDeg */
export function sortedTurn(anglesDeg) {
  return reduced(anglesDeg).sort();
}
