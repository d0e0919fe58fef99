/** Coordinates as people write them. */

/** @typedef {'lat' | 'lon'} Which */

const LETTERS = {lat: 'NS', lon: 'EW'};
const LIMIT = {lat: 90, lon: 180};
const NAMES = {lat: 'Latitude', lon: 'Longitude'};

/**
 * Degrees from decimal degrees, degrees and minutes, or degrees, minutes and seconds, with a sign or
 * a hemisphere letter: "-24.5123", "24.5123 S", "24 30 44.3 S", 24°30'44"S.
 * @param {string} text
 * @param {Which} which
 * @returns {number} north and east positive
 * @throws {RangeError} with a sentence for the person who typed
 */
export function parseDegrees(text, which) {
  const name = NAMES[which];
  const written = text.trim().toUpperCase().replace(/(\d),(\d)/g, '$1.$2').replace(/[−–]/g, '-');
  const letters = written.match(/[NSEW]/g) ?? [];
  if (letters.length > 1 || (letters.length && !LETTERS[which].includes(String(letters[0])))) {
    throw new RangeError(`${name}: write one of ${[...LETTERS[which]].join(' or ')} after the number.`);
  }
  if (!/^[-+]?[NSEW]?\s*\d[\d.\s°º'’′"”″:]*[NSEW]?$/.test(written)) {
    throw new RangeError(`${name}: write it as 24.5123, 24 30.738 or 24 30 44.3.`);
  }
  const numbers = (written.match(/\d+(?:\.\d+)?/g) ?? []).map(Number);
  const whole = numbers.slice(0, -1).every(Number.isInteger);
  if (numbers.length > 3 || !whole || numbers.slice(1).some((part) => part >= 60)) {
    throw new RangeError(`${name}: minutes and seconds are below 60, and only the last number has decimals.`);
  }
  if (written.startsWith('-') && letters.length) {
    throw new RangeError(`${name}: give the sign or the letter, not both.`);
  }
  const size = numbers.reduce((total, part, i) => total + part / 60 ** i, 0);
  if (size > LIMIT[which]) throw new RangeError(`${name}: at most ${LIMIT[which]} degrees.`);
  return written.startsWith('-') || letters[0] === 'S' || letters[0] === 'W' ? -size : size;
}
