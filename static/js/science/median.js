/** The median direction. The mirror of fieldlog/science/median.py. */

import {apart, reduced, reducedOne} from './angles.js';

/** @typedef {import('./angles.js').Angles} Angles */

const SAME_DEG = 1e-9;

/**
 * @param {Angles} anglesDeg
 * @param {number | null} meanDeg
 * @returns {number | null} degrees
 */
export function medianDirection(anglesDeg, meanDeg) {
  const n = anglesDeg.length;
  if (n === 0 || meanDeg === null) return null;
  const x = reduced(anglesDeg).sort();
  const distance = distances(x);
  /** @type {number[]} */
  const places = [];
  /** @type {number[]} */
  const counts = [];
  for (const value of x) {
    if (places.length && places[places.length - 1] === value) counts[counts.length - 1] += 1;
    else {
      places.push(value);
      counts.push(1);
    }
  }
  const sums = places.map(distance);
  let least = Infinity;
  for (const value of sums) least = Math.min(least, value);
  least += SAME_DEG * n;
  const best = places.filter((_, i) => sums[i] <= least);
  const held = counts.filter((_, i) => sums[i] <= least);
  const nearest = centres(best, held, distance, least)
    .map((centre) => ({off: apart(centre, meanDeg), centre}))
    .sort((a, b) => a.off - b.off || a.centre - b.centre);
  if (!nearest.length || (nearest.length > 1 && nearest[1].off - nearest[0].off < SAME_DEG)) return null;
  return nearest[0].centre;
}

/**
 * @param {Float64Array} x sorted readings
 * @returns {(point: number) => number} sum of arc distances from a point to all
 */
function distances(x) {
  const n = x.length;
  const twice = new Float64Array(2 * n);
  twice.set(x);
  for (let i = 0; i < n; i += 1) twice[n + i] = x[i] + 360;
  const running = new Float64Array(2 * n + 1);
  for (let i = 0; i < 2 * n; i += 1) running[i + 1] = running[i] + twice[i];
  return (point) => {
    const first = search(x, point, false);
    const beyond = search(twice, point + 180, true);
    const ahead = beyond - first;
    const clockwise = running[beyond] - running[first] - ahead * point;
    return clockwise + (n - ahead) * (point + 360) - (running[first + n] - running[beyond]);
  };
}

/**
 * Where a value would go among sorted ones, before or after its equals.
 * @param {Float64Array} sorted
 * @param {number} value
 * @param {boolean} after
 */
function search(sorted, value, after) {
  let low = 0;
  let high = sorted.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (after ? sorted[middle] <= value : sorted[middle] < value) low = middle + 1;
    else high = middle;
  }
  return low;
}

/**
 * @param {number[]} best
 * @param {number[]} counts
 * @param {(point: number) => number} distance
 * @param {number} least
 */
function centres(best, counts, distance, least) {
  const m = best.length;
  if (m === 1) return [best[0]];
  const joined = best.map((place, i) => {
    const following = i + 1 < m ? best[i + 1] : best[0] + 360;
    return distance(reducedOne(place + (following - place) / 2)) <= least;
  });
  /** @type {number[]} */
  const found = [];
  for (let i = 0; i < m; i += 1) {
    if (joined[(i + m - 1) % m]) continue;
    let total = 0;
    let weight = counts[i];
    for (let k = i; joined[k % m]; ) {
      k += 1;
      total += counts[k % m] * (best[k % m] + 360 * Math.floor(k / m) - best[i]);
      weight += counts[k % m];
    }
    found.push(reducedOne(best[i] + total / weight));
  }
  return found;
}
