/**
 * Distance and bearing over a few kilometres, and UTM; the mirror of fieldlog/science/nearby.py.
 * Within 0.1 % and 0.1 degree of the geodesic up to 100 km and 80 degrees of latitude.
 */

export { fromUtm, gridConvergenceDeg, toUtm, utmZone } from './utm.js';

const A_M = 6378137;
const F = 1 / 298.257223563;
const E2 = F * (2 - F);
const RADIANS = Math.PI / 180;

/** @typedef {{distance_m: number, bearing_deg: number}} Way the bearing is true, 0 <= x < 360, at the first place */
/** @typedef {{lat_deg: number, lon_deg: number}} Place degrees on WGS 84, north and east positive */

/**
 * The way between two places on WGS 84, also across the 180th meridian (mid-latitude formula).
 * @param {number} lat1Deg
 * @param {number} lon1Deg
 * @param {number} lat2Deg
 * @param {number} lon2Deg
 * @returns {Way}
 */
export function way(lat1Deg, lon1Deg, lat2Deg, lon2Deg) {
  const middle = ((lat1Deg + lat2Deg) / 2) * RADIANS;
  const [meridian, vertical] = radii(middle);
  const eastTurn = (((lon2Deg - lon1Deg + 540) % 360) - 180) * RADIANS;
  const north = meridian * (lat2Deg - lat1Deg) * RADIANS;
  const east = vertical * Math.cos(middle) * eastTurn;
  let bearing = (Math.atan2(east, north) - (eastTurn * Math.sin(middle)) / 2) / RADIANS;
  if (bearing < 0) bearing += 360;
  return { distance_m: Math.sqrt(north * north + east * east), bearing_deg: bearing >= 360 ? 0 : bearing };
}

/**
 * @param {number} lat1Deg
 * @param {number} lon1Deg
 * @param {number} lat2Deg
 * @param {number} lon2Deg
 * @returns {number}
 */
export function distanceM(lat1Deg, lon1Deg, lat2Deg, lon2Deg) {
  return way(lat1Deg, lon1Deg, lat2Deg, lon2Deg).distance_m;
}

/**
 * @param {number} lat1Deg
 * @param {number} lon1Deg
 * @param {number} lat2Deg
 * @param {number} lon2Deg
 * @returns {number}
 */
export function bearingDeg(lat1Deg, lon1Deg, lat2Deg, lon2Deg) {
  return way(lat1Deg, lon1Deg, lat2Deg, lon2Deg).bearing_deg;
}

/**
 * Latitude and longitude after a short way along a true bearing.
 * @param {number} latDeg
 * @param {number} lonDeg
 * @param {number} bearingDeg
 * @param {number} distanceM
 * @returns {Place}
 */
export function moved(latDeg, lonDeg, bearingDeg, distanceM) {
  const [meridian, vertical] = radii(latDeg * RADIANS);
  const north = distanceM * Math.cos(bearingDeg * RADIANS);
  const east = distanceM * Math.sin(bearingDeg * RADIANS);
  return {
    lat_deg: latDeg + north / meridian / RADIANS,
    lon_deg: lonDeg + east / (vertical * Math.cos(latDeg * RADIANS)) / RADIANS,
  };
}

/**
 * Radii of curvature along the meridian and across it, metres.
 * @param {number} lat radians
 * @returns {[number, number]}
 */
function radii(lat) {
  const w = 1 - E2 * Math.sin(lat) ** 2;
  return [(A_M * (1 - E2)) / (w * Math.sqrt(w)), A_M / Math.sqrt(w)];
}
