/** Readings gathered by bedform. The mirror of fieldlog/science/bedforms.py. */

import {radians} from './angles.js';
import {circularSD, directionDeg, lengthOf} from './moments.js';

/** @typedef {import('./angles.js').Angles} Angles */
/**
 * @typedef {object} Bedforms
 * @property {number[]} meansDeg
 * @property {number[]} lengths
 * @property {number[]} counts
 * @property {number} withoutMean
 * @property {number} spreadLeft
 * @property {number} readings
 * @property {number} groups
 */

const ENOUGH_FOR_LENGTHS = 5;

/**
 * @param {Angles} anglesDeg
 * @param {ArrayLike<unknown>} bedforms null for a reading without one
 * @returns {Bedforms}
 */
export function gather(anglesDeg, bedforms) {
  /** @type {Map<unknown, {c: number, s: number, count: number}>} */
  const held = new Map();
  for (let i = 0; i < anglesDeg.length; i += 1) {
    const name = bedforms[i] ?? null;
    let group = held.get(name);
    if (!group) {
      group = {c: 0, s: 0, count: 0};
      held.set(name, group);
    }
    group.c += Math.cos(radians(anglesDeg[i]));
    group.s += Math.sin(radians(anglesDeg[i]));
    group.count += 1;
  }
  /** @type {Bedforms} */
  const found = {
    meansDeg: [], lengths: [], counts: [], withoutMean: 0, spreadLeft: 0,
    readings: anglesDeg.length, groups: held.size,
  };
  for (const {c, s, count} of held.values()) {
    const r = lengthOf(c, s, count);
    found.spreadLeft += count * (1 - r);
    if (r > 0) {
      found.meansDeg.push(directionDeg(c, s));
      found.lengths.push(r);
      found.counts.push(count);
    } else found.withoutMean += 1;
  }
  return found;
}

/**
 * Lengths for the site's mean, or null for unit vectors.
 * @param {Bedforms} groups
 */
export function weights(groups) {
  return groups.counts.length && groups.counts.every((count) => count >= ENOUGH_FOR_LENGTHS) ? groups.lengths : null;
}

/**
 * @param {Bedforms} groups
 * @param {number} [factor]
 * @returns {number | null} radians
 */
export function withinSD(groups, factor = 1) {
  const freedom = groups.readings - groups.groups;
  if (freedom <= 0) return null;
  const r = Math.min(1, factor * (1 - groups.spreadLeft / freedom));
  return r > 0 ? circularSD(r) : null;
}

/**
 * @param {Bedforms} groups
 * @param {number | null} within
 * @returns {number | null} radians
 */
export function betweenSD(groups, within) {
  const m = groups.meansDeg.length;
  if (m < 2) return null;
  let c = 0;
  let s = 0;
  for (const mean of groups.meansDeg) {
    c += Math.cos(radians(mean));
    s += Math.sin(radians(mean));
  }
  const r = 1 - Math.max(m - Math.hypot(c, s), 0) / (m - 1);
  if (r <= 0) return null;
  const ofMeans = circularSD(r) ?? 0;
  const harmonic = m / groups.counts.reduce((total, count) => total + 1 / count, 0);
  return Math.sqrt(Math.max(ofMeans ** 2 - (within ?? 0) ** 2 / harmonic, 0));
}
