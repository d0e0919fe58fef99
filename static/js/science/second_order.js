/** Second-order tests of the bedforms' mean vectors. The mirror of fieldlog/science/second_order.py. */

import {radians} from './angles.js';
import {NOT_GIVEN} from './uniformity.js';
import {longerThanSteps} from './walk.js';

/** @typedef {import('./uniformity.js').Test} Test */

/**
 * @param {number[]} meansDeg
 * @param {number[]} lengths
 * @returns {Test}
 */
export function hotelling(meansDeg, lengths) {
  const k = meansDeg.length;
  if (k < 3) return NOT_GIVEN;
  const x = meansDeg.map((mean, i) => lengths[i] * Math.cos(radians(mean)));
  const y = meansDeg.map((mean, i) => lengths[i] * Math.sin(radians(mean)));
  const xm = x.reduce((total, value) => total + value, 0) / k;
  const ym = y.reduce((total, value) => total + value, 0) / k;
  let sx = 0;
  let sy = 0;
  let sxy = 0;
  for (let i = 0; i < k; i += 1) {
    sx += (x[i] - xm) ** 2;
    sy += (y[i] - ym) ** 2;
    sxy += (x[i] - xm) * (y[i] - ym);
  }
  const below = sx * sy - sxy * sxy;
  if (below <= 1e-14 * Math.max(sx * sy, 1e-300)) return NOT_GIVEN;
  const f = (((k * (k - 2)) / 2) * (xm * xm * sy - 2 * xm * ym * sxy + ym * ym * sx)) / below;
  return {statistic: f, p: Math.exp((-(k - 2) / 2) * Math.log1p((2 * f) / (k - 2)))};
}

/**
 * @param {number[]} meansDeg
 * @param {number[]} lengths
 * @returns {Test}
 */
export function moore(meansDeg, lengths) {
  const k = meansDeg.length;
  if (k < 3) return NOT_GIVEN;
  const steps = ranks(lengths);
  let c = 0;
  let s = 0;
  meansDeg.forEach((mean, i) => {
    c += steps[i] * Math.cos(radians(mean));
    s += steps[i] * Math.sin(radians(mean));
  });
  const size = Math.hypot(c, s);
  return {statistic: size / k ** 1.5, p: longerThanSteps(size, steps)};
}

/** @param {number[]} values */
function ranks(values) {
  const order = values.map((_, i) => i).sort((a, b) => values[a] - values[b] || a - b);
  const found = values.slice();
  for (let i = 0; i < values.length; ) {
    let j = i;
    while (j + 1 < values.length && values[order[j + 1]] - values[order[j]] < 1e-9) j += 1;
    for (let k = i; k <= j; k += 1) found[order[k]] = (i + j) / 2 + 1;
    i = j + 1;
  }
  return found;
}
