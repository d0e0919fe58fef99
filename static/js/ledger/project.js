/** From a merged record to the row that screens show; the mirror of fieldlog/ledger/project.py. */

import {CONSTANTS, SHEETS} from '../sheet/declared.js';
import {derive} from '../sheet/derive.js';

/** @typedef {import('./merge.js').Merged} Merged */

/**
 * The row of one record: the sheet's columns with wire values (times as text, those of a device's
 * clock corrected by its offset), derived columns, and made_by, made_on, made_at of its creating entry, which must be there. Fields that the sheet
 * does not know stay in the ledger and out of the row.
 * @param {Merged} merged
 * @returns {Record<string, unknown>}
 */
export function project(merged) {
  const {created} = merged;
  if (!created) throw new RangeError('a record without its creating entry has no row yet');
  const sheet = SHEETS[created.body.kind];
  const values = new Map(Object.entries(merged.values));
  /** @type {Record<string, unknown>} */
  const row = {record: created.name};
  for (const field of sheet.fields) {
    if (field.derived_from.length) {
      if (field.measure) row[`${field.name}_absent`] = null;
      continue;
    }
    const value = values.get(field.name) ?? null;
    const reason = reasonIn(value);
    row[field.name] = reason === undefined ? value : null;
    if (field.measure) row[`${field.name}_absent`] = reason ?? null;
  }
  for (const field of sheet.fields) {
    if (field.type === 'time' && field.derived_from.length) row[field.name] = row[field.derived_from[0]];
  }
  for (const field of sheet.fields) {
    if (field.clocked) row[field.name] = corrected(row[field.name], merged.offsetsMs[field.name] ?? null);
  }
  Object.assign(row, derive(sheet, row));
  row.made_by = created.body.by;
  row.made_on = created.device;
  row.made_at = created.body.made_at;
  return row;
}

/**
 * A wire time of a device's clock by base's clock; the mirror of corrected in fieldlog/sheet/times.py.
 * @param {unknown} when
 * @param {number | null} offsetMs base's clock less the device's
 * @returns {unknown}
 */
function corrected(when, offsetMs) {
  if (typeof when !== 'string' || !clockOffMs(offsetMs)) return when;
  const moved = new Date(Date.parse(when) + clockOffMs(offsetMs));
  const year = moved.getUTCFullYear();
  return year >= 1 && year <= 9999 ? moved.toISOString().replace('.000Z', 'Z') : when;
}

/**
 * How far a device's clock is taken to be off: nothing below what a slow line alone makes.
 * @param {number | null} offsetMs
 * @returns {number}
 */
export function clockOffMs(offsetMs) {
  return offsetMs !== null && Math.abs(offsetMs) > CONSTANTS.clock_off_ms ? offsetMs : 0;
}

/**
 * The reason in {"absent": reason}; null where the object holds no known reason, undefined for a plain value.
 * @param {unknown} value
 * @returns {string | null | undefined}
 */
function reasonIn(value) {
  if (typeof value !== 'object' || value === null || Array.isArray(value)) return undefined;
  const reason = 'absent' in value ? value.absent : null;
  return typeof reason === 'string' && Object.hasOwn(CONSTANTS.absences, reason) ? reason : null;
}
