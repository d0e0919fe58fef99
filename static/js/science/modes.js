/**
 * Up to three modes: a mixture of von Mises distributions, chosen by BIC. The mirror of
 * fieldlog/science/modes.py. Takes tens of milliseconds for large samples: see modes_worker.js.
 */

import {apart, radians, reduced} from './angles.js';
import {besselIScaled} from './bessel.js';
import {kappaOf} from './concentration.js';
import {directionDeg, meanAndLength} from './moments.js';

/** @typedef {import('./angles.js').Angles} Angles */
/** @typedef {{direction_deg: number, kappa: number, weight: number}} Mode */
/** @typedef {{modes: Mode[], logLikelihood: number}} Mixture */
/** @typedef {{mu: number, kappa: number, weight: number}[]} State */

export const FEWEST = 20;
const FEWEST_IN_A_MODE = 5;
const MOST_PLACES = 1440;
const LARGEST_KAPPA = 500;
const SMALLEST_KAPPA = 1;
const LEAST_APART_DEG = 30;
const SETTLED = [1e-9, 1e-12];

/**
 * @param {Angles} anglesDeg
 * @returns {Mode[] | null} by falling weight, empty for uniform; null below 20 readings
 */
export function findModes(anglesDeg) {
  const n = anglesDeg.length;
  if (n < FEWEST) return null;
  /** @type {Mixture} */
  let best = {modes: [], logLikelihood: -n * Math.log(2 * Math.PI)};
  let lowest = bic(best, n);
  for (const count of [1, 2, 3]) {
    // The log-likelihood that this many modes must have to be chosen.
    const least = ((3 * count - 1) * Math.log(n) - lowest) / 2;
    const found = fit(anglesDeg, count, least);
    if ((count === 1 || distinct(found.modes, n)) && bic(found, n) < lowest) {
      best = found;
      lowest = bic(found, n);
    }
  }
  return best.modes;
}

/**
 * @param {Mixture} mixture
 * @param {number} n
 */
export function bic(mixture, n) {
  const k = mixture.modes.length ? 3 * mixture.modes.length - 1 : 0;
  return k * Math.log(n) - 2 * mixture.logLikelihood;
}

/**
 * @param {Angles} anglesDeg
 * @param {number} count 1 to 3
 * @param {number} [least] a fit that 10 steps leave more than 3 below this, or 50 more than 1, is left there
 * @returns {Mixture}
 */
export function fit(anglesDeg, count, least = -Infinity) {
  if (count === 1) return single(anglesDeg);
  const {x, weight} = places(anglesDeg);
  const theta = x.map(radians);
  const quantiles = sixQuantiles(x, weight).map(radians);
  const ranked = choices(quantiles, count)
    .map((means, i) => {
      const start = means.map((mu) => ({mu, kappa: 4, weight: 1 / count}));
      const tried = run(theta, weight, start, 10, SETTLED[0]);
      return {...tried, i, rank: Math.floor(tried.logLikelihood * 1e6 + 0.5)};
    })
    .sort((a, b) => b.rank - a.rank || a.i - b.i)
    .slice(0, 2);
  /** @type {{state: State, logLikelihood: number}[]} */
  let runs = ranked;
  for (const [steps, hope, settled] of [[40, 3, SETTLED[0]], [450, 1, SETTLED[1]]]) {
    if (Math.max(...runs.map((tried) => tried.logLikelihood)) + hope < least) break;
    runs = runs.map((tried) => run(theta, weight, tried.state, steps, settled));
  }
  const best = runs[1].logLikelihood > runs[0].logLikelihood ? runs[1] : runs[0];
  const modes = best.state.map((part) => ({
    direction_deg: directionDeg(Math.cos(part.mu), Math.sin(part.mu)), kappa: part.kappa, weight: part.weight,
  }));
  return {modes: modes.sort((a, b) => b.weight - a.weight), logLikelihood: best.logLikelihood};
}

/** @param {number | null} kappa */
function capped(kappa) {
  return kappa === null ? LARGEST_KAPPA : Math.min(kappa, LARGEST_KAPPA);
}

/**
 * @param {Angles} anglesDeg
 * @returns {Mixture}
 */
function single(anglesDeg) {
  const n = anglesDeg.length;
  const {mean, r} = meanAndLength(anglesDeg);
  const kappa = capped(kappaOf(r));
  const logLikelihood = n * (kappa * (r - 1) - Math.log(2 * Math.PI * besselIScaled(kappa)[0]));
  return {modes: [{direction_deg: mean ?? 0, kappa, weight: 1}], logLikelihood};
}

/**
 * Different values, ascending, and how often each occurs.
 * @param {Angles} anglesDeg
 */
function places(anglesDeg) {
  const sorted = reduced(anglesDeg).sort();
  /** @type {number[]} */
  let x = [];
  /** @type {number[]} */
  let weight = [];
  for (const value of sorted) {
    if (x.length && x[x.length - 1] === value) weight[weight.length - 1] += 1;
    else {
      x.push(value);
      weight.push(1);
    }
  }
  if (x.length > MOST_PLACES) {
    const held = new Float64Array(MOST_PLACES);
    x.forEach((value, i) => {
      held[Math.floor(value * (MOST_PLACES / 360))] += weight[i];
    });
    const filled = [...held.keys()].filter((i) => held[i] > 0);
    x = filled.map((i) => (i + 0.5) * (360 / MOST_PLACES));
    weight = filled.map((i) => held[i]);
  }
  return {x, weight};
}

/**
 * @param {number[]} x
 * @param {number[]} weight
 */
function sixQuantiles(x, weight) {
  const m = x.length;
  const gaps = x.map((value, i) => value - (i ? x[i - 1] : x[m - 1] - 360));
  const widest = gaps.reduce((most, gap) => Math.max(most, gap), 0);
  const cut = gaps.findIndex((gap) => gap >= widest - 1e-9);
  const total = weight.reduce((sum, w) => sum + w, 0);
  let running = 0;
  const shares = Array.from({length: m}, (_, i) => {
    const w = weight[(cut + i) % m];
    running += w;
    return (running - 0.5 * w) / total;
  });
  return [1, 3, 5, 7, 9, 11].map((twelfth) => {
    const at = shares.findIndex((share) => share >= twelfth / 12);
    return x[(cut + (at < 0 ? m - 1 : at)) % m];
  });
}

/**
 * All choices of `count` values, in order.
 * @param {number[]} values
 * @param {number} count
 * @returns {number[][]}
 */
function choices(values, count) {
  if (count === 0) return [[]];
  return values.flatMap((value, i) => choices(values.slice(i + 1), count - 1).map((rest) => [value, ...rest]));
}

/**
 * EM from a state until it moves less than `settled`.
 * @param {number[]} theta
 * @param {number[]} weight
 * @param {State} start
 * @param {number} steps
 * @param {number} settled
 * @returns {{state: State, logLikelihood: number}}
 */
function run(theta, weight, start, steps, settled) {
  let state = start;
  const total = weight.reduce((sum, w) => sum + w, 0);
  const cosines = theta.map(Math.cos);
  const sines = theta.map(Math.sin);
  const density = new Float64Array(state.length);
  for (let step = 0; step < steps; step += 1) {
    const scales = state.map(scaleOf);
    const held = state.map(() => ({w: 0, c: 0, s: 0}));
    for (let i = 0; i < theta.length; i += 1) {
      const all = densities(theta[i], state, scales, density);
      for (let j = 0; j < state.length; j += 1) {
        const share = (density[j] / all) * weight[i];
        held[j].w += share;
        held[j].c += share * cosines[i];
        held[j].s += share * sines[i];
      }
    }
    const following = held.map(({w, c, s}) => ({
      mu: Math.atan2(s, c),
      kappa: capped(kappaOf(Math.min(Math.hypot(c, s) / Math.max(w, 1e-300), 1))),
      weight: w / total,
    }));
    const before = state;
    let moved = 0;
    following.forEach((part, j) => {
      moved = Math.max(
        moved, Math.abs(part.mu - before[j].mu), Math.abs(part.kappa - before[j].kappa) / Math.max(1, part.kappa),
        Math.abs(part.weight - before[j].weight),
      );
    });
    state = following;
    if (moved < settled) break;
  }
  const scales = state.map(scaleOf);
  let logLikelihood = 0;
  theta.forEach((angle, i) => {
    logLikelihood += weight[i] * Math.log(densities(angle, state, scales, density));
  });
  return {state, logLikelihood};
}

/** @param {State[number]} part */
function scaleOf(part) {
  return part.weight / (2 * Math.PI * besselIScaled(part.kappa)[0]);
}

/**
 * @param {number} theta
 * @param {State} state
 * @param {number[]} scales
 * @param {Float64Array} density filled with each part's
 */
function densities(theta, state, scales, density) {
  let all = 0;
  for (let j = 0; j < state.length; j += 1) {
    density[j] = scales[j] * Math.exp(state[j].kappa * (Math.cos(theta - state[j].mu) - 1));
    all += density[j];
  }
  return all;
}

/**
 * @param {Mode[]} modes
 * @param {number} n
 */
function distinct(modes, n) {
  return modes.every(
    (mode, i) =>
      mode.weight * n >= FEWEST_IN_A_MODE &&
      mode.kappa >= SMALLEST_KAPPA &&
      modes.slice(0, i).every((other) => apart(mode.direction_deg, other.direction_deg) >= LEAST_APART_DEG),
  );
}
