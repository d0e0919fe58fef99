/** True and magnetic mixed up, by instrument and day; the mirror of fieldlog/sheet/north_check.py. */

import { MAD_TO_SD, meanAndLength, median, signedTurn } from './crowd.js';
import { groupBy, number, whole } from './question.js';
import { counts, device, samples } from './sample.js';

/** @typedef {import('./question.js').Question} Question */
/** @typedef {import('./question.js').Thresholds} Thresholds */
/** @typedef {import('./sample.js').Row} Row */

const TRUE_NORTHS = ['true', 'set'];

/** Standard error of a median in those of a mean, for a normal distribution: sqrt(pi/2). */
const MEDIAN_ERROR = 1.2533;

/**
 * Questions about each instrument's day; one question names all the observations that it concerns.
 * @param {readonly Row[]} rows
 * @param {Thresholds} thresholds
 * @param {string} timeZone IANA name
 * @returns {Question[]}
 */
export function northQuestions(rows, thresholds, timeZone) {
  const read = rows.filter((row) => counts(row) && [...TRUE_NORTHS, 'magnetic'].includes(String(row.north)));
  const dated = read.filter((row) => typeof row.observed_at === 'string');
  const dayOf = (/** @type {Row} */ row) => localDay(String(row.observed_at), timeZone);
  return groupBy(dated, (row) => JSON.stringify([instrument(row), dayOf(row)]))
    .flatMap((members) => ofOneDay(members, read, dayOf(members[0]), thresholds));
}

/**
 * @param {Row[]} members
 * @param {Row[]} read
 * @param {string} day
 * @param {Thresholds} thresholds
 * @returns {Question[]}
 */
function ofOneDay(members, read, day, thresholds) {
  const known = members.flatMap((row) => number(row, 'declination_deg') ?? []);
  const declination = known.length ? median(known) : null;
  const step = Math.max(...members.map((row) => number(row, 'reading_step_deg') || 1));
  const least = Math.max(thresholds.declination_deg, thresholds.declination_steps * step);
  if (declination === null || Math.abs(declination) < least) return [];
  const magnetic = members.filter((row) => row.north === 'magnetic');
  const truly = members.filter((row) => row.north !== 'magnetic');
  const name = members[0].instrument ? `Instrument ${members[0].instrument}` : "This phone's instrument";
  if (magnetic.length && truly.length) {
    const fewer = truly.length <= magnetic.length ? truly : magnetic;
    return [about(fewer, 'mixed_north',
      `${name} is marked magnetic ${times(magnetic.length)} and true ${times(truly.length)} on ${day}; the declination `
      + `is ${signed(declination)} deg. Which is right?`)];
  }
  const found = offset(members, read, thresholds);
  if (!found || !explains(magnetic.length ? declination : -declination, found, thresholds)) return [];
  const [marked, other] = magnetic.length ? ['magnetic', 'true'] : ['true', 'magnetic'];
  return [about(found.rows, 'wrong_north',
    `${name} on ${day}: ${found.rows.length} readings lie ${signed(found.middle)} deg off the others of their sites, `
    + `about the declination (${signed(declination)} deg). Was it read from ${other} north though marked ${marked}?`)];
}

/** @typedef {{middle: number, error: number, rows: Row[]}} Offset */

/**
 * Median offset of an instrument's day from the others at its sites, its standard error, and the
 * rows that show it; null where there is too little to compare.
 * @param {Row[]} members
 * @param {Row[]} read
 * @param {Thresholds} thresholds
 * @returns {Offset | null}
 */
function offset(members, read, thresholds) {
  const own = new Map(members.map((row) => [String(row.record), row]));
  const sites = [...new Set(members.map((row) => row.site ?? null))];
  /** @type {number[]} */
  const offsets = [];
  /** @type {Map<string, Row>} */
  const shown = new Map();
  let othersN = 0;
  for (const [measure, period] of /** @type {[string, number][]} */ ([['slip_face_deg', 360], ['crest_deg', 180]])) {
    for (const site of sites) {
      for (const { angles, records } of samples(read.filter((row) => (row.site ?? null) === site), measure)) {
        const others = angles.filter((_, i) => !own.has(records[i]));
        if (others.length < thresholds.opposed_others) continue;
        const { mean, length } = meanAndLength(others, period);
        if (length < thresholds.opposed_resultant) continue;
        let any = false;
        records.forEach((record, i) => {
          const row = own.get(record);
          if (!row) return;
          any = true;
          offsets.push(signedTurn(mean, angles[i], period));
          shown.set(record, row);
        });
        if (any) othersN += others.length;
      }
    }
  }
  if (offsets.length < thresholds.north_readings) return null;
  const middle = median(offsets);
  const sd = MAD_TO_SD * median(offsets.map((one) => Math.abs(one - middle)));
  return { middle, error: MEDIAN_ERROR * sd * Math.sqrt(1 / offsets.length + 1 / othersN), rows: [...shown.values()] };
}

/**
 * @param {number} expected
 * @param {Offset} found
 * @param {Thresholds} thresholds
 */
function explains(expected, { middle, error }, thresholds) {
  return Math.abs(middle - expected) <= Math.abs(expected) / 3 && Math.abs(middle) >= thresholds.north_errors * error;
}

/**
 * @param {Row[]} rows
 * @param {string} code
 * @param {string} sentence
 * @returns {Question}
 */
function about(rows, code, sentence) {
  const [record, ...others] = rows.map((row) => String(row.record));
  return { code, record, other_records: others, sentence };
}

/** @param {Row} row */
function instrument(row) {
  return String(row.instrument || device(row));
}

/** @param {number} n */
function times(n) {
  return n === 1 ? 'once' : `${n} times`;
}

/** @param {number} angleDeg */
function signed(angleDeg) {
  return `${angleDeg < 0 ? '-' : '+'}${whole(Math.abs(angleDeg))}`;
}

/**
 * The date at a time in a zone, as 2026-03-04.
 * @param {string} when as the wire writes it
 * @param {string} timeZone
 * @returns {string}
 */
export function localDay(when, timeZone) {
  const parts = new Intl.DateTimeFormat('en-CA', { timeZone, year: 'numeric', month: '2-digit', day: '2-digit' });
  const found = Object.fromEntries(parts.formatToParts(new Date(when)).map(({ type, value }) => [type, value]));
  return `${found.year}-${found.month}-${found.day}`;
}
