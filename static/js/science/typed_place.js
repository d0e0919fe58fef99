/** A place as people type it on one line: degrees in any of the usual forms, or UTM. WGS 84 throughout. */

import { parseDegrees } from './coordinates.js';
import { fromUtm } from './utm.js';

/** @typedef {{lat_deg: number, lon_deg: number}} Place north and east positive */

const UTM = /^(?:ZONE\s*)?(\d{1,2})\s*([A-Z]+)[\s,]+(\d+(?:\.\d+)?)\s*M?\s*E?[\s,]+(\d+(?:\.\d+)?)\s*M?\s*N?$/;

/**
 * "-24.7297, 15.3420", "24 43 46.9 S 15 20 31.2 E", "E 15.342 S 24.7297", "33 S 534586 7264938".
 * @param {string} text
 * @returns {Place}
 * @throws {RangeError} with a sentence for the person who typed
 */
export function typedPlace(text) {
  const written = text.trim().toUpperCase().replace(/[−–]/g, '-');
  const utm = UTM.exec(written);
  if (utm) return fromUtm(Number(utm[1]), hemisphere(utm[2]), Number(utm[3]), Number(utm[4]));
  const [first, second] = halves(written);
  return /[EW]/.test(first) || /[NS]/.test(second)
    ? { lat_deg: parseDegrees(second, 'lat'), lon_deg: parseDegrees(first, 'lon') }
    : { lat_deg: parseDegrees(first, 'lat'), lon_deg: parseDegrees(second, 'lon') };
}

/**
 * @param {string} written
 * @returns {[string, string]}
 */
function halves(written) {
  const patterns = [
    /^([NSEW][^NSEW]+?)[\s,;]*([NSEW][^NSEW]+)$/, // letters in front
    /^([^NSEW]+[NSEW])[\s,;]*([^NSEW]+[NSEW])$/, // letters behind
    /^([^;]+);([^;]+)$/,
    /^(.+?),\s+(.+)$/,
    /^([^,\s]+),([^,\s]+)$/,
    /^([^\s]+)\s+([^\s]+)$/,
  ];
  for (const pattern of patterns) {
    const found = pattern.exec(written);
    if (found) return [found[1].trim(), found[2].trim()];
  }
  throw new RangeError(
    'Place: write latitude and longitude as -24.7297, 15.3420, or UTM as zone, N or S, easting, northing: 33 S 534586 7264938.',
  );
}

/** @param {string} letter */
function hemisphere(letter) {
  if (letter === 'N' || letter === 'NORTH') return 'N';
  if (letter === 'S' || letter === 'SOUTH') return 'S';
  throw new RangeError(`UTM: ${letter} is a band letter. Write N or S: north or south of the equator.`);
}
