/** Concentration of a von Mises distribution. The mirror of fieldlog/science/concentration.py. */

import {besselIScaled} from './bessel.js';

const ALL_BUT_ONE = 1 - 1e-15;

/**
 * A(kappa) = I1(kappa) / I0(kappa).
 * @param {number} kappa
 */
export function besselRatio(kappa) {
  const [zero, one] = besselIScaled(kappa);
  return one / zero;
}

/** @param {number} kappa */
export function logBesselI0(kappa) {
  return Math.log(besselIScaled(kappa)[0]) + kappa;
}

/**
 * The maximum-likelihood kappa; null where R is 1 (unbounded), 0 below 1e-8.
 * @param {number} r mean resultant length
 * @returns {number | null}
 */
export function kappaOf(r) {
  if (r >= ALL_BUT_ONE) return null;
  if (r < 1e-8) return 0;
  let kappa = start(r);
  for (let i = 0; i < 40; i += 1) {
    const ratio = besselRatio(kappa);
    let slope = 1 - ratio / kappa - ratio * ratio;
    if (kappa > 1e4) slope = (1 + 1 / kappa) / (2 * kappa * kappa);
    const step = (ratio - r) / slope;
    kappa = Math.max(kappa - step, kappa / 2);
    if (Math.abs(step) <= 1e-13 * kappa) break;
  }
  return kappa;
}

/** @param {number} r */
function start(r) {
  if (r < 0.53) return 2 * r + r ** 3 + (5 * r ** 5) / 6;
  if (r < 0.85) return -0.4 + 1.39 * r + 0.43 / (1 - r);
  return 1 / (2 * (1 - r) - (1 - r) ** 2 - (1 - r) ** 3);
}

/**
 * Kappa with the small-sample correction, up to n = 15.
 * @param {number | null} kappa
 * @param {number} n
 * @returns {number | null}
 */
export function kappaCorrected(kappa, n) {
  if (kappa === null || n > 15) return kappa;
  if (kappa < 2) return kappa > 0 ? Math.max(kappa - 2 / (n * kappa), 0) : 0;
  return (kappa * (n - 1) ** 3) / (n ** 3 + n);
}
