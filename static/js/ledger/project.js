/** From a merged record to the row that screens show; the mirror of fieldlog/ledger/project.py. */

import {CONSTANTS, SHEETS} from '../sheet/declared.js';
import {derive} from '../sheet/derive.js';

/** @typedef {import('./merge.js').Merged} Merged */

/**
 * The row of one record: the sheet's columns with wire values (times as text), derived columns,
 * and made_by, made_on, made_at of its creating entry, which must be there. Fields that the sheet
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
  Object.assign(row, derive(sheet, row));
  row.made_by = created.body.by;
  row.made_on = created.device;
  row.made_at = created.body.made_at;
  return row;
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
