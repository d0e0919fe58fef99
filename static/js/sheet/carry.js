/**
 * What stays in the form from one reading to the next. A value carries until the dune, the site or
 * the day changes, as the sheet says; what was answered for this reading itself is never dropped.
 */

import {absent} from './limits.js';

/** @typedef {import('./declared.js').SheetDeclaration} SheetDeclaration */
/** @typedef {Record<string, unknown>} Values field name -> wire value; not looked at: no key */

/** @type {Record<string, string[]>} a change of the key ends what carries until ... */
const ENDS = {bedform: ['dune'], site: ['dune', 'site'], day: ['dune', 'site', 'day']};

/**
 * The values that the next reading starts with.
 * @param {SheetDeclaration} sheet
 * @param {Values} values
 * @returns {Values}
 */
export function carriedOver(sheet, values) {
  const kept = sheet.fields.filter((field) => field.carries && field.asked && isSaid(values[field.name]));
  return Object.fromEntries(kept.map((field) => [field.name, values[field.name]]));
}

/**
 * The names of the carried fields that end when `changed` ("bedform", "site" or "day") does.
 * @param {SheetDeclaration} sheet
 * @param {string} changed
 * @returns {string[]}
 */
export function endedBy(sheet, changed) {
  const ended = ENDS[changed] ?? [];
  return sheet.fields.filter((field) => ended.includes(field.carries) && field.name !== changed).map((field) => field.name);
}

/**
 * The wire values that a projected row stands for.
 * @param {SheetDeclaration} sheet
 * @param {Record<string, unknown>} row
 * @returns {Values}
 */
export function valuesOf(sheet, row) {
  /** @type {Values} */
  const values = {};
  for (const field of sheet.fields) {
    if (field.derived_from.length) continue;
    const reason = field.measure ? row[`${field.name}_absent`] : null;
    if (typeof reason === 'string' && reason) values[field.name] = absent(reason);
    else if (isSaid(row[field.name])) values[field.name] = row[field.name];
  }
  return values;
}

/** @param {unknown} value */
function isSaid(value) {
  return value !== null && value !== undefined;
}
