/** What turns a bearing as read into a true one, at a place and time; set by the phone, never asked. */

import {declination, MODEL} from '../science/magnetic.js';
import {gridConvergenceDeg} from '../science/geodesy.js';
import {roundHalfUp} from '../sheet/derive.js';

/** @typedef {{lat_deg: number, lon_deg: number, altitude_m?: number | null}} Spot */

/**
 * The fields of an observation that say how its bearings are corrected; empty without a place.
 * @param {Spot | null} spot where it was read
 * @param {number} when milliseconds
 * @param {unknown} north the north that was read from
 * @returns {Record<string, number | string>}
 */
export function bearingFrame(spot, when, north) {
  if (!spot) return {};
  /** @type {Record<string, number | string>} */
  const frame = {};
  const model = declination(spot.lat_deg, spot.lon_deg, spot.altitude_m ?? 0, when);
  if (model !== null) {
    frame.declination_deg = roundHalfUp(model, 2);
    frame.declination_model = MODEL;
  }
  const hasGrid = spot.lat_deg >= -80 && spot.lat_deg <= 84; // UTM reaches no farther
  if (north === 'grid' && hasGrid) frame.convergence_deg = roundHalfUp(gridConvergenceDeg(spot.lat_deg, spot.lon_deg), 2);
  return frame;
}
