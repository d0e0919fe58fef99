/** A question, and the thresholds at which checks ask one; the mirror of fieldlog/sheet/question.py. */

/**
 * What a check asks about one observation; `other_records` are those it is compared with or, for
 * questions about an instrument's day, the others that it concerns.
 * @typedef {{code: string, record: string, other_records: string[], sentence: string}} Question
 */

/** @typedef {typeof THRESHOLDS} Thresholds */

/** When a check asks; what each means stands in fieldlog/sheet/question.py. */
export const THRESHOLDS = {
  square_deg: 30,
  steepest_deg: 36,
  gentlest_deg: 28,
  accuracies: 2,
  opposed_deg: 30,
  opposed_others: 5,
  opposed_resultant: 0.7,
  outlier_readings: 8,
  outlier_spreads: 4,
  repeat_s: 60,
  back_s: 60,
  declination_deg: 5,
  declination_steps: 2,
  north_readings: 5,
  north_errors: 2.5,
};

/**
 * The thresholds that a survey's row sets; the defaults for those it does not.
 * @param {Readonly<Record<string, unknown>>} survey
 * @returns {Thresholds}
 */
export function thresholdsOf(survey) {
  const set = Object.keys(THRESHOLDS).map((name) => [name, survey[`ask_${name}`]]);
  return {...THRESHOLDS, ...Object.fromEntries(set.filter(([, value]) => typeof value === 'number'))};
}

/**
 * Whole degrees, 0 <= x < limit: 359.7 reads 0.
 * @param {number} angleDeg
 * @param {number} [limitDeg]
 * @returns {number}
 */
export function whole(angleDeg, limitDeg = 360) {
  return Math.floor(angleDeg + 0.5) % limitDeg;
}

/**
 * A field of a row as a number, null where it holds none.
 * @param {Readonly<Record<string, unknown>>} row
 * @param {string} name
 * @returns {number | null}
 */
export function number(row, name) {
  const value = row[name];
  return typeof value === 'number' ? value : null;
}

/**
 * Rows under one key together, in the order in which keys first appear.
 * @template T
 * @param {Iterable<T>} rows
 * @param {(row: T) => string} key
 * @returns {T[][]}
 */
export function groupBy(rows, key) {
  /** @type {Map<string, T[]>} */
  const groups = new Map();
  for (const row of rows) {
    const name = key(row);
    const group = groups.get(name);
    if (group) group.push(row);
    else groups.set(name, [row]);
  }
  return [...groups.values()];
}
