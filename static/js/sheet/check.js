/** What the checks ask about observations; the mirror of fieldlog/sheet/check.py. They never block. */

import { moved, way } from '../science/geodesy.js';
import { meanAndLength, meansOfOthers, signedTurn, strays } from './crowd.js';
import { northQuestions } from './north_check.js';
import { groupBy, number, THRESHOLDS, whole } from './question.js';
import { counts, device, dune, samples } from './sample.js';

export { THRESHOLDS };

/** @typedef {import('./question.js').Question} Question */
/** @typedef {import('./question.js').Thresholds} Thresholds */
/** @typedef {import('./sample.js').Row} Row */

/** Faces that are declared to look another way. */
const TURNED_FACES = ['secondary', 'reversed_cap'];

/** @type {[string, string, number][]} */
const MEASURES = [['slip_face_deg', 'Slip face', 360], ['crest_deg', 'Crest', 180]];

/**
 * All questions about `rows`, by the order of their records in `rows`.
 * @param {Iterable<Row>} rows a survey's observations; crossed-out ones are passed over
 * @param {{sites?: Iterable<Row>, thresholds?: Partial<Thresholds>, timeZone?: string}} [options] `sites`: the sites'
 *   rows, for the check of places; `timeZone`: the survey's, an IANA name
 * @returns {Question[]}
 */
export function questions(rows, { sites = [], thresholds: changed = {}, timeZone = 'UTC' } = {}) {
  const thresholds = { ...THRESHOLDS, ...changed };
  const standing = [...rows].filter((row) => !row.crossed_out);
  const bySite = new Map([...sites].map((site) => [String(site.record), site]));
  const found = [
    ...standing.flatMap((row) => ofOne(row, bySite.get(String(row.site)), thresholds)),
    ...groupBy(standing, (row) => String(row.site)).flatMap((members) => againstOthers(members, thresholds)),
    ...repeats(standing, thresholds),
    ...northQuestions(standing, thresholds, timeZone),
    ...outOfOrder(standing, thresholds),
  ];
  const place = new Map(standing.map((row, i) => [String(row.record), i]));
  return found.sort((a, b) => (place.get(a.record) ?? 0) - (place.get(b.record) ?? 0));
}

/**
 * @param {string} code
 * @param {Row} row
 * @param {string} sentence
 * @param {string[]} [others]
 * @returns {Question}
 */
function question(code, row, sentence, others = []) {
  return { code, record: String(row.record), other_records: others, sentence };
}

/**
 * What one observation asks by itself.
 * @param {Row} row
 * @param {Row | undefined} site
 * @param {Thresholds} thresholds
 * @returns {Question[]}
 */
function ofOne(row, site, thresholds) {
  /** @type {Question[]} */
  const asked = [];
  const face = number(row, 'slip_face_deg');
  const edge = number(row, 'brink_deg') !== null ? 'brink' : 'crest';
  const axis = number(row, `${edge}_deg`);
  if (face !== null && axis !== null && row.dune_type !== 'star') {
    const off = Math.abs(Math.abs(signedTurn(axis, face, 180)) - 90);
    if (off > thresholds.square_deg) {
      asked.push(question('not_square', row,
        `The slip face (${whole(face)} deg) is ${whole(off)} deg off square to its ${edge} `
        + `(${whole(axis, 180)} deg). Is one of the two misread?`));
    }
  }
  const dip = number(row, 'slip_face_dip_deg');
  if (dip !== null && dip > thresholds.steepest_deg) {
    asked.push(question('dip', row,
      `A dip of ${dip} deg is steeper than dry sand rests (${thresholds.steepest_deg} deg). Misread?`));
  }
  if (dip !== null && dip < thresholds.gentlest_deg) {
    asked.push(question('dip', row,
      `A dip of ${dip} deg is gentle for a slip face (${thresholds.gentlest_deg} deg). Is it one?`));
  }
  return site ? [...asked, ...far(row, site, thresholds)] : asked;
}

/**
 * @param {Row} row
 * @param {Row} site
 * @param {Thresholds} thresholds
 * @returns {Question[]}
 */
function far(row, site, thresholds) {
  let [lat, lon] = [number(row, 'lat_deg'), number(row, 'lon_deg')];
  const [siteLat, siteLon, radius] = [number(site, 'lat_deg'), number(site, 'lon_deg'), number(site, 'radius_m')];
  if (lat === null || lon === null || siteLat === null || siteLon === null || radius === null) return [];
  const [bearing, length] = [number(row, 'sighted_bearing_deg'), number(row, 'sighted_distance_m')];
  if (bearing !== null && length !== null) ({ lat_deg: lat, lon_deg: lon } = moved(lat, lon, bearing, length));
  const distance = way(lat, lon, siteLat, siteLon).distance_m;
  if (distance <= radius + thresholds.accuracies * (number(row, 'accuracy_m') ?? 0)) return [];
  return [question('far_from_site', row,
    `This place is ${Math.floor(distance + 0.5)} m from the middle of ${site.name || 'the site'}, `
    + `which reaches ${Math.floor(radius + 0.5)} m. Is it another site?`)];
}

/**
 * What the readings of one site ask of each other, sample by sample.
 * @param {Row[]} rows
 * @param {Thresholds} thresholds
 * @returns {Question[]}
 */
function againstOthers(rows, thresholds) {
  /** @type {Question[]} */
  const asked = [];
  const byRecord = new Map(rows.map((row) => [String(row.record), row]));
  for (const [measure, label, period] of MEASURES) {
    for (const { face, dune_type: type, angles, records } of samples(rows, measure)) {
      const row = (/** @type {number} */ i) => /** @type {Row} */ (byRecord.get(records[i]));
      /** @type {Set<number>} */
      const turnedRound = new Set();
      if (period === 360 && !TURNED_FACES.includes(face ?? '') && type !== 'reversing') {
        for (const i of positionsTurnedRound(angles, thresholds)) {
          turnedRound.add(i);
          const others = records.filter((_, j) => j !== i);
          const { mean } = meanAndLength(angles.filter((_, j) => j !== i), period);
          asked.push(question('opposed', row(i),
            `Slip face ${whole(angles[i])} deg looks the other way than ${others.length} others of this site `
            + `(mean ${whole(mean)} deg). Read up the face, or a reversed face?`, others));
        }
      }
      if (angles.length < thresholds.outlier_readings) continue;
      for (const { position, crowd_deg: crowd } of strays(angles, period, thresholds.outlier_spreads)) {
        if (turnedRound.has(position)) continue;
        const off = Math.abs(signedTurn(crowd, angles[position], period));
        asked.push(question('outlier', row(position),
          `${label} ${whole(angles[position], period)} deg is ${whole(off)} deg from where the nearest others of `
          + `this site lie (${whole(crowd, period)} deg). Misread, or another face?`));
      }
    }
  }
  return asked;
}

/**
 * Positions of slip faces that look the other way than enough others that agree.
 * @param {number[]} angles
 * @param {Thresholds} thresholds
 * @returns {number[]}
 */
function positionsTurnedRound(angles, thresholds) {
  if (angles.length <= thresholds.opposed_others) return [];
  return meansOfOthers(angles, 360).flatMap(({ mean, length }, i) => {
    const off = 180 - Math.abs(signedTurn(mean, angles[i], 360));
    return length >= thresholds.opposed_resultant && off <= thresholds.opposed_deg ? [i] : [];
  });
}

/**
 * The same value on the same dune within a minute: saved twice?
 * @param {Row[]} rows
 * @param {Thresholds} thresholds
 * @returns {Question[]}
 */
function repeats(rows, thresholds) {
  /** @type {Question[]} */
  const asked = [];
  const timed = rows.filter((row) => row.observed_at && counts(row) && !row.transcribed);
  for (const members of groupBy(timed, (row) => JSON.stringify([row.site ?? null, device(row), dune(row)]))) {
    const ordered = [...members].sort((a, b) => time(a) - time(b) || entryNumber(a) - entryNumber(b));
    ordered.forEach((row, i) => {
      for (const before of ordered.slice(0, i).reverse()) {
        if (time(row) - time(before) > thresholds.repeat_s * 1000) break;
        const same = sameValue(row, before);
        if (same === null) continue;
        asked.push(question('repeated', row,
          `${same} again on the same dune within ${thresholds.repeat_s} s. Saved twice?`, [String(before.record)]));
        break;
      }
    });
  }
  return asked;
}

/**
 * @param {Row} row
 * @param {Row} before
 * @returns {string | null}
 */
function sameValue(row, before) {
  for (const [name, label] of [['slip_face_read_deg', 'Slip face'], ['crest_read_deg', 'Crest']]) {
    const value = number(row, name);
    if (value !== null && value === before[name]) return `${label} ${value} deg`;
  }
  return null;
}

/**
 * Saved later but observed earlier, on one device: a clock or a typed time that is wrong.
 * @param {Row[]} rows
 * @param {Thresholds} thresholds
 * @returns {Question[]}
 */
function outOfOrder(rows, thresholds) {
  /** @type {Question[]} */
  const asked = [];
  for (const members of groupBy(rows.filter((row) => row.observed_at && !row.transcribed), device)) {
    const ordered = [...members].sort((a, b) => entryNumber(a) - entryNumber(b));
    for (let i = 1; i < ordered.length; i += 1) {
      const back = (time(ordered[i - 1]) - time(ordered[i])) / 1000;
      if (back <= thresholds.back_s) continue;
      asked.push(question('out_of_order', ordered[i],
        `Observed ${Math.floor(back / 60 + 0.5)} min before the observation that was saved just ahead of it. `
        + 'Is the time right?', [String(ordered[i - 1].record)]));
    }
  }
  return asked;
}

/**
 * The number of the entry that made the record: its place in what the device said.
 * @param {Row} row
 * @returns {number}
 */
export function entryNumber(row) {
  const record = String(row.record);
  const number = record.slice(record.lastIndexOf('-') + 1);
  return /^\d+$/.test(number) ? Number(number) : 0;
}

/** @param {Row} row */
function time(row) {
  return Date.parse(String(row.observed_at));
}
