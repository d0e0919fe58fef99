/** How many readings, or bedforms, the target needs. The mirror of fieldlog/science/needed.py. */

import {radians} from './angles.js';
import {FEWEST, sineOfHalfWidth} from './interval.js';

const SURE = 0.8416212335729143;
const MOST = 100000;

/**
 * Total number that gives `targetDeg`, null where more than 100,000 are needed.
 * @param {number} spread
 * @param {number} n
 * @param {number} targetDeg
 * @param {import('./interval.js').Rule} rule
 * @returns {number | null}
 */
export function needed(spread, n, targetDeg, rule) {
  const target = Math.sin(radians(Math.min(targetDeg, 90)));
  const upper = spread * upperBound(n);
  let low = FEWEST - 1;
  let high = FEWEST;
  while (sineOfHalfWidth(upper, high, rule) > target) {
    low = high;
    high *= 2;
    if (low > MOST) return null;
  }
  while (high - low > 1) {
    const middle = Math.floor((low + high) / 2);
    if (sineOfHalfWidth(upper, middle, rule) > target) low = middle;
    else high = middle;
  }
  return high <= MOST ? high : null;
}

/** @param {number} n */
export function upperBound(n) {
  const v = 2 / (9 * (n - 1));
  return (1 - v - SURE * Math.sqrt(v)) ** -1.5;
}
