/** Mean direction, mean resultant length and the spreads. The mirror of fieldlog/science/moments.py. */

import {degrees, radians, reducedOne} from './angles.js';

/** @typedef {import('./angles.js').Angles} Angles */

export const NO_LENGTH = 1e-8;

/**
 * @param {number} cosines
 * @param {number} sines
 * @param {number} n
 */
export function lengthOf(cosines, sines, n) {
  const r = Math.hypot(cosines, sines) / n;
  if (r < NO_LENGTH) return 0;
  return r > 1 - 1e-15 ? 1 : r;
}

/**
 * @param {Angles} anglesDeg
 * @param {number} [times] multiplies the angles first
 * @returns {{mean: number | null, r: number}} mean direction in degrees, null where R < 1e-8
 */
export function meanAndLength(anglesDeg, times = 1) {
  let cosines = 0;
  let sines = 0;
  for (let i = 0; i < anglesDeg.length; i += 1) {
    const theta = radians(times * anglesDeg[i]);
    cosines += Math.cos(theta);
    sines += Math.sin(theta);
  }
  const r = anglesDeg.length ? lengthOf(cosines, sines, anglesDeg.length) : 0;
  return {mean: r > 0 ? directionDeg(cosines, sines) : null, r};
}

/**
 * @param {number} cosines
 * @param {number} sines
 */
export function directionDeg(cosines, sines) {
  const turned = reducedOne(degrees(Math.atan2(sines, cosines)));
  return 360 - turned < 1e-11 || turned < 1e-13 ? 0 : turned;
}

/**
 * sqrt(-2 ln R) in radians, null where R is 0.
 * @param {number} r
 * @returns {number | null}
 */
export function circularSD(r) {
  return r > 0 ? Math.sqrt(-2 * Math.log(r)) : null;
}

/** @param {number} r */
export function angularDeviation(r) {
  return Math.sqrt(2 * (1 - r));
}

/** @param {number} stepDeg class width on the circle that is analysed */
export function groupingFactor(stepDeg) {
  const half = radians(stepDeg) / 2;
  return half / Math.sin(half);
}
