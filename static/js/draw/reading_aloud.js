/** The rose in words, for screen readers and for copying; the mirror of fieldlog/draw/reading_aloud.py. */

import { turn } from './stack.js';

/** @typedef {[number, number][]} Petals [middle bearing, count] */
/** @typedef {import('./rose.js').RoseSummary} RoseSummary */

/** Above this many, readings are told by petal. */
const MOST_LISTED = 40;

/**
 * Whole degrees, 0 <= x < limit: 359.7 reads 0.
 * @param {number} angleDeg
 * @param {number} limitDeg
 * @returns {number}
 */
export function whole(angleDeg, limitDeg) {
  return Math.floor(turn(angleDeg, limitDeg) + 0.5) % limitDeg;
}

/**
 * What the rose shows, in one sentence.
 * @param {number} n
 * @param {RoseSummary} summary
 * @param {boolean} axial
 * @returns {string}
 */
export function title(n, summary, axial) {
  if (n === 0) return 'Rose without readings.';
  return summary.finding || `Rose of ${n} ${readings(n, axial)}.`;
}

/**
 * Everything the rose draws, as sentences; degrees from true north.
 * @param {readonly number[]} readingsDeg
 * @param {RoseSummary} summary
 * @param {Petals} petals
 * @param {boolean} axial
 * @param {readonly number[]} crossedOutDeg
 * @param {number | null} expectedDeg
 * @returns {string}
 */
export function spoken(readingsDeg, summary, petals, axial, crossedOutDeg, expectedDeg) {
  const n = readingsDeg.length;
  const said = [n ? `${n} ${readings(n, axial)}.` : 'No readings.', ...mean(summary, axial)];
  const limit = axial ? 180 : 360;
  if (summary.ci95_low_deg !== null && summary.ci95_high_deg !== null) {
    const [low, high] = [whole(summary.ci95_low_deg, limit), whole(summary.ci95_high_deg, limit)];
    said.push(`95 % interval from ${low} clockwise to ${high} deg.`);
  }
  const modes = (summary.modes ?? []).map((mode) => String(whole(mode.direction_deg, limit)));
  if (modes.length) said.push(`${modes.length === 1 ? 'Mode' : 'Modes'} at ${join(modes)} deg.`);
  if (expectedDeg !== null) {
    said.push(`Expected to face towards ${whole(expectedDeg, 360)} deg, `
      + `with wind from ${whole(expectedDeg + 180, 360)} deg.`);
  }
  if (n > MOST_LISTED) {
    const told = petals.filter(([, count]) => count)
      .map(([bearing, count]) => `around ${whole(bearing, limit)} deg ${figure(count)}`);
    said.push(`Readings by 20 deg: ${told.join('; ')}.`);
  } else if (n) {
    said.push(`Readings: ${list(readingsDeg, limit)} deg.`);
  }
  if (crossedOutDeg.length) said.push(`Crossed out: ${list(crossedOutDeg, limit)} deg.`);
  return said.join(' ');
}

/**
 * @param {RoseSummary} summary
 * @param {boolean} axial
 * @returns {string[]}
 */
function mean(summary, axial) {
  const { mean_direction_deg: direction, resultant_length: length, threshold_resultant: threshold } = summary;
  if (direction === null || length === null) return [];
  const pointer = axial ? 'Bar along' : 'Arrow towards';
  const head = `${pointer} ${whole(direction, axial ? 180 : 360)} deg, length ${hundredths(length)}`;
  if (threshold === null) return [`${head}; too few to show a direction at any length.`];
  if (length >= threshold) return [`${head}, at or above the ${hundredths(threshold)} that shows a direction.`];
  return [`${head}, below the ${hundredths(threshold)} that would show a direction: hollow.`];
}

/**
 * @param {number} n
 * @param {boolean} axial
 */
function readings(n, axial) {
  if (axial) return n === 1 ? 'axis' : 'axes';
  return n === 1 ? 'direction' : 'directions';
}

/**
 * @param {readonly number[]} anglesDeg
 * @param {number} limit
 */
function list(anglesDeg, limit) {
  const tenths = anglesDeg.map((angle) => Math.floor(turn(angle, limit) * 10 + 0.5) / 10);
  return join(tenths.map((t) => figure(t >= limit ? 0 : t)));
}

/** @param {number} value */
function figure(value) {
  return Number.isInteger(value) ? String(value) : value.toFixed(1);
}

/** @param {number} value */
function hundredths(value) {
  return (Math.floor(value * 100 + 0.5) / 100).toFixed(2);
}

/** @param {string[]} parts */
function join(parts) {
  return parts.length === 1 ? parts[0] : `${parts.slice(0, -1).join(', ')} and ${parts[parts.length - 1]}`;
}
