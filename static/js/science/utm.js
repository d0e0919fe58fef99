/**
 * UTM on WGS 84 by the Krueger series to the fourth order in the third flattening n; good to a
 * millimetre within a zone.
 *
 * Source: Krueger, L. (1912), Konforme Abbildung des Erdellipsoids in der Ebene; in the form of
 * Karney, C.F.F. (2011), J. Geodesy 85, 475-485, equations 7 to 12, 35 and 36; the coefficients were
 * written from memory and are held to PROJ by the tests.
 */

const A_M = 6378137;
const F = 1 / 298.257223563;
const N = F / (2 - F);
const E = Math.sqrt(F * (2 - F));
const SCALE = 0.9996;
const FALSE_EASTING_M = 500000;
const FALSE_NORTHING_SOUTH_M = 10000000;
const RADIANS = Math.PI / 180;
const RECTIFYING_M = (A_M / (1 + N)) * (1 + N ** 2 / 4 + N ** 4 / 64);

const ALPHA = [
  N / 2 - (2 / 3) * N ** 2 + (5 / 16) * N ** 3 + (41 / 180) * N ** 4,
  (13 / 48) * N ** 2 - (3 / 5) * N ** 3 + (557 / 1440) * N ** 4,
  (61 / 240) * N ** 3 - (103 / 140) * N ** 4,
  (49561 / 161280) * N ** 4,
];
const BETA = [
  N / 2 - (2 / 3) * N ** 2 + (37 / 96) * N ** 3 - (1 / 360) * N ** 4,
  (1 / 48) * N ** 2 + (1 / 15) * N ** 3 - (437 / 1440) * N ** 4,
  (17 / 480) * N ** 3 - (37 / 840) * N ** 4,
  (4397 / 161280) * N ** 4,
];

/**
 * `convergence_deg`: true bearing = grid bearing + convergence.
 * @typedef {{zone: number, hemisphere: 'N' | 'S', easting_m: number, northing_m: number, convergence_deg: number}} Utm
 */

/**
 * The UTM zone of a place, 1 to 60; a meridian between two zones belongs to the eastern one.
 * South-west Norway and Svalbard have zones of their own shape.
 * @param {number} latDeg
 * @param {number} lonDeg
 * @returns {number}
 * @throws {RangeError} outside 80 S to 84 N, where UTM is not defined
 */
export function utmZone(latDeg, lonDeg) {
  if (!(latDeg >= -80 && latDeg <= 84)) {
    throw new RangeError(`UTM: latitude ${latDeg} has no UTM zone. UTM reaches from 80 S to 84 N.`);
  }
  if (latDeg >= 56 && latDeg < 64 && lonDeg >= 3 && lonDeg < 12) return 32;
  if (latDeg >= 72 && lonDeg >= 0 && lonDeg < 42) {
    if (lonDeg < 9) return 31;
    if (lonDeg < 21) return 33;
    return lonDeg < 33 ? 35 : 37;
  }
  return (Math.floor((lonDeg + 180) / 6) % 60) + 1;
}

/**
 * A place on the UTM grid, in its own zone where none is named.
 * @param {number} latDeg
 * @param {number} lonDeg
 * @param {number} [zone]
 * @returns {Utm}
 * @throws {RangeError} outside 80 S to 84 N
 */
export function toUtm(latDeg, lonDeg, zone) {
  const own = utmZone(latDeg, lonDeg);
  const used = zone ?? own;
  const sine = Math.sin(latDeg * RADIANS);
  const turn = (((lonDeg - centralMeridian(used) + 540) % 360) - 180) * RADIANS;
  const t = Math.sinh(Math.atanh(sine) - E * Math.atanh(E * sine));
  const xi = Math.atan2(t, Math.cos(turn));
  const eta = Math.atanh(Math.sin(turn) / Math.hypot(1, t));
  let [x, y, sigma, tau] = [eta, xi, 1, 0];
  ALPHA.forEach((a, i) => {
    const j = 2 * (i + 1);
    x += a * Math.cos(j * xi) * Math.sinh(j * eta);
    y += a * Math.sin(j * xi) * Math.cosh(j * eta);
    sigma += j * a * Math.cos(j * xi) * Math.cosh(j * eta);
    tau += j * a * Math.sin(j * xi) * Math.sinh(j * eta);
  });
  const root = Math.hypot(1, t);
  const slope = t * Math.tan(turn);
  return {
    zone: used,
    hemisphere: latDeg < 0 ? 'S' : 'N',
    easting_m: FALSE_EASTING_M + SCALE * RECTIFYING_M * x,
    northing_m: (latDeg < 0 ? FALSE_NORTHING_SOUTH_M : 0) + SCALE * RECTIFYING_M * y,
    convergence_deg: Math.atan((tau * root + sigma * slope) / (sigma * root - tau * slope)) / RADIANS,
  };
}

/**
 * The place of UTM coordinates on WGS 84.
 * @param {number} zone 1 to 60
 * @param {string} hemisphere "N" or "S", not the band letter of a grid reference
 * @param {number} eastingM
 * @param {number} northingM
 * @returns {{lat_deg: number, lon_deg: number}}
 * @throws {RangeError} naming the one that is not
 */
export function fromUtm(zone, hemisphere, eastingM, northingM) {
  check(zone, hemisphere, eastingM, northingM);
  const southing = hemisphere === 'S' ? FALSE_NORTHING_SOUTH_M : 0;
  const y = (northingM - southing) / (SCALE * RECTIFYING_M);
  const x = (eastingM - FALSE_EASTING_M) / (SCALE * RECTIFYING_M);
  let [xi, eta] = [y, x];
  BETA.forEach((b, i) => {
    const j = 2 * (i + 1);
    xi -= b * Math.sin(j * y) * Math.cosh(j * x);
    eta -= b * Math.cos(j * y) * Math.sinh(j * x);
  });
  const isometric = Math.asinh(Math.sin(xi) / Math.hypot(Math.sinh(eta), Math.cos(xi)));
  let sine = Math.tanh(isometric);
  // Each round divides the error by about 150.
  for (let round = 0; round < 8; round += 1) sine = Math.tanh(isometric + E * Math.atanh(E * sine));
  const lon = centralMeridian(zone) + Math.atan2(Math.sinh(eta), Math.cos(xi)) / RADIANS;
  return { lat_deg: Math.asin(sine) / RADIANS, lon_deg: ((((lon + 180) % 360) + 360) % 360) - 180 };
}

/**
 * Grid convergence of a place's own zone, degrees: true = grid + convergence.
 * @param {number} latDeg
 * @param {number} lonDeg
 * @returns {number}
 * @throws {RangeError} outside 80 S to 84 N
 */
export function gridConvergenceDeg(latDeg, lonDeg) {
  return toUtm(latDeg, lonDeg).convergence_deg;
}

/** @param {number} zone */
function centralMeridian(zone) {
  return zone * 6 - 183;
}

/**
 * @param {number} zone
 * @param {string} hemisphere
 * @param {number} eastingM
 * @param {number} northingM
 */
function check(zone, hemisphere, eastingM, northingM) {
  if (!(Number.isInteger(zone) && zone >= 1 && zone <= 60)) {
    throw new RangeError(`UTM: zone ${zone} does not exist. Zones run from 1 to 60.`);
  }
  if (hemisphere !== 'N' && hemisphere !== 'S') {
    throw new RangeError(`UTM: hemisphere ${hemisphere} is neither N nor S. N is north of the equator.`);
  }
  if (!(eastingM >= 100000 && eastingM <= 900000)) {
    throw new RangeError(`UTM: easting ${eastingM} m is outside the zone. It lies between 100000 and 900000.`);
  }
  if (!(northingM >= 0 && northingM <= 10000000)) {
    throw new RangeError(`UTM: northing ${northingM} m is outside the zone. It lies between 0 and 10000000.`);
  }
}
