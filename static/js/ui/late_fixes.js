/** Fixes that come after a reading was saved: added to it by an edit, while they can still be its own. */

import {bearingFrame} from './bearing_frame.js';

/** @typedef {import('../handover/notebook.js').OpenNotebook} Notebook */
/** @typedef {import('../sensors/position.js').Position} Position */
/** @typedef {import('../sensors/average.js').AveragedFix} AveragedFix */

const FRESH_MS = 20_000;
const LATE_MS = 180_000; // later than this the reader has walked on

/**
 * The fix at hand, if it is young enough to be said of this moment.
 * @param {Position} position
 * @returns {AveragedFix | null}
 */
export function freshFix(position) {
  const age = position.age();
  return age !== null && age <= FRESH_MS ? position.state().fix : null;
}

/**
 * The fields of an observation that a fix fills.
 * @param {AveragedFix} fix
 * @returns {Record<string, number | string>}
 */
export function fixFields(fix) {
  /** @type {Record<string, number | string>} */
  const fields = {
    lat_deg: rounded(fix.lat_deg, 7),
    lon_deg: rounded(fix.lon_deg, 7),
    accuracy_m: rounded(fix.accuracy_m, 1),
    fix_method: fix.fixes_n > 1 ? 'averaged' : 'single',
  };
  if (fix.altitude_m !== null) fields.altitude_m = rounded(fix.altitude_m, 1);
  if (fix.fixes_n > 1) {
    fields.fixes_n = fix.fixes_n;
    fields.fixes_spread_m = rounded(fix.fixes_spread_m, 1);
  }
  return fields;
}

/**
 * @param {{notebook: Notebook, position: Position, clock: () => number}} deps
 */
export function createLateFixes({notebook, position, clock}) {
  /** @type {Map<string, number>} record -> when it was saved */
  const waiting = new Map();
  const ended = new AbortController();

  /** @param {string} record @param {AveragedFix} fix @param {number} when */
  async function add(record, fix, when) {
    const row = notebook.observations().find((other) => other.record === record);
    if (!row || row.lat_deg !== null || row.crossed_out) return;
    await notebook.save('observation', {...fixFields(fix), ...bearingFrame(fix, when, row.north)}, {record});
  }

  position.watch(() => {
    const fix = freshFix(position);
    for (const [record, when] of [...waiting]) {
      const late = clock() - when > LATE_MS;
      if (!late && (!fix || fix.at < when)) continue;
      waiting.delete(record);
      if (!late && fix) void add(record, fix, when).catch(() => waiting.set(record, when)); // the next fix tries again
    }
  }, ended.signal);

  return {
    /** @param {string} record @param {number} when milliseconds */
    wait: (record, when) => void waiting.set(record, when),
    close: () => ended.abort(),
  };
}

/** @param {number} value @param {number} decimals */
function rounded(value, decimals) {
  return Number(value.toFixed(decimals));
}
