/**
 * Magnetic declination by the World Magnetic Model in force; the mirror of fieldlog/science/magnetic.py.
 *
 * Source: Chulliat, A., et al. (2025), The US/UK World Magnetic Model for 2025-2030: Technical Report,
 * NOAA and British Geological Survey, section 1.2, equations 4 to 19.
 */

import { COEFFICIENTS, FIRST, LAST, MODEL } from './wmm.js';

export { MODEL };

const DEGREE = 12;
const RADIUS_KM = 6371.2;
const WGS84_A_KM = 6378.137;
const WGS84_F = 1 / 298.257223563;
const RADIANS = Math.PI / 180;

/** @typedef {{declination_deg: number, inclination_deg: number, horizontal_nt: number}} Field */

/**
 * `declination_deg`: east positive, true = magnetic + declination, rounded to two decimals;
 * `uncertainty_deg`: the model's own error (one standard deviation), which more readings never shrink.
 * @typedef {{declination_deg: number, model: string, uncertainty_deg: number}} Declination
 */

/**
 * Declination in degrees, east positive, rounded to two decimals; null where the model does not
 * serve the date or the place is none.
 * @param {number} latDeg
 * @param {number} lonDeg
 * @param {number | null} altitudeM above the WGS 84 ellipsoid, null is taken as 0
 * @param {number | Date} when
 * @returns {number | null}
 */
export function declination(latDeg, lonDeg, altitudeM, when) {
  return declinationAt(latDeg, lonDeg, altitudeM, when)?.declination_deg ?? null;
}

/**
 * The same with the model's name and error.
 * @param {number} latDeg
 * @param {number} lonDeg
 * @param {number | null} altitudeM
 * @param {number | Date} when
 * @returns {Declination | null}
 */
export function declinationAt(latDeg, lonDeg, altitudeM, when) {
  const year = decimalYear(when);
  if (!(Math.abs(latDeg) <= 90) || !Number.isFinite(lonDeg) || !(year >= FIRST && year < LAST)) return null;
  const field = magneticField(latDeg, lonDeg, (altitudeM ?? 0) / 1000, year);
  return {
    declination_deg: rounded(field.declination_deg),
    model: MODEL,
    uncertainty_deg: rounded(Math.min(Math.hypot(0.26, 5417 / field.horizontal_nt), 180)),
  };
}

/**
 * The year with its elapsed share, UTC: the start of 1 January is .0.
 * @param {number | Date} when milliseconds or a Date
 * @returns {number}
 */
export function decimalYear(when) {
  const date = new Date(when);
  const year = date.getUTCFullYear();
  const start = Date.UTC(year, 0, 1);
  return year + (date.getTime() - start) / (Date.UTC(year + 1, 0, 1) - start);
}

/**
 * The main field at a geodetic place: spherical harmonics to degree 12, secular change linear in time.
 * @param {number} latDeg
 * @param {number} lonDeg
 * @param {number} heightKm above the WGS 84 ellipsoid
 * @param {number} year decimal
 * @returns {Field}
 */
export function magneticField(latDeg, lonDeg, heightKm, year) {
  // At the very pole east has no meaning; the smallest step off it keeps the sums finite.
  const lat = Math.max(-89.99999, Math.min(89.99999, latDeg)) * RADIANS;
  const lon = lonDeg * RADIANS;
  const { radius, geocentric } = spherical(lat, heightKm);
  const { p, slope } = legendre(Math.PI / 2 - geocentric);
  let north = 0;
  let east = 0;
  let down = 0;
  for (const [n, m, g0, h0, dg, dh] of COEFFICIENTS) {
    const g = g0 + (year - FIRST) * dg;
    const h = h0 + (year - FIRST) * dh;
    const reach = (RADIUS_KM / radius) ** (n + 2);
    const cosine = Math.cos(m * lon);
    const sine = Math.sin(m * lon);
    north += reach * (g * cosine + h * sine) * slope[n][m];
    east += (reach * m * (g * sine - h * cosine) * p[n][m]) / Math.cos(geocentric);
    down -= reach * (n + 1) * (g * cosine + h * sine) * p[n][m];
  }
  const turn = geocentric - lat;
  const x = north * Math.cos(turn) - down * Math.sin(turn);
  const z = north * Math.sin(turn) + down * Math.cos(turn);
  const horizontal = Math.hypot(x, east);
  return {
    declination_deg: Math.atan2(east, x) / RADIANS,
    inclination_deg: Math.atan2(z, horizontal) / RADIANS,
    horizontal_nt: horizontal,
  };
}

/**
 * Geocentric radius (km) and latitude of a geodetic place.
 * @param {number} lat radians
 * @param {number} heightKm
 */
function spherical(lat, heightKm) {
  const e2 = WGS84_F * (2 - WGS84_F);
  const prime = WGS84_A_KM / Math.sqrt(1 - e2 * Math.sin(lat) ** 2);
  const out = (prime + heightKm) * Math.cos(lat);
  const up = (prime * (1 - e2) + heightKm) * Math.sin(lat);
  return { radius: Math.hypot(out, up), geocentric: Math.atan2(up, out) };
}

/**
 * Schmidt semi-normalised associated Legendre functions of the colatitude and their derivatives by it.
 * @param {number} colatitude radians
 * @returns {{p: number[][], slope: number[][]}}
 */
function legendre(colatitude) {
  const c = Math.cos(colatitude);
  const s = Math.sin(colatitude);
  const p = [[1], [c, s]];
  const slope = [[0], [-s, c]];
  for (let n = 2; n <= DEGREE; n += 1) {
    p[n] = [];
    slope[n] = [];
    for (let m = 0; m < n; m += 1) {
      const before = Math.sqrt((n - 1) ** 2 - m ** 2);
      const scale = Math.sqrt(n ** 2 - m ** 2);
      const p2 = m < n - 1 ? p[n - 2][m] : 0;
      const slope2 = m < n - 1 ? slope[n - 2][m] : 0;
      p[n][m] = ((2 * n - 1) * c * p[n - 1][m] - before * p2) / scale;
      slope[n][m] = ((2 * n - 1) * (c * slope[n - 1][m] - s * p[n - 1][m]) - before * slope2) / scale;
    }
    const scale = Math.sqrt((2 * n - 1) / (2 * n));
    p[n][n] = scale * s * p[n - 1][n - 1];
    slope[n][n] = scale * (s * slope[n - 1][n - 1] + c * p[n - 1][n - 1]);
  }
  return { p, slope };
}

/**
 * The value as it is recorded; never -0.
 * @param {number} deg
 * @returns {number}
 */
function rounded(deg) {
  return Math.floor(deg * 100 + 0.5) / 100 + 0;
}
