/** True bearings from what was read; the mirror of fieldlog/sheet/derive.py. */

/** @typedef {import('./declared.js').SheetDeclaration} SheetDeclaration */

/**
 * Degrees to add to a bearing as read to make it true; null where they are not known.
 * @param {Record<string, unknown>} row
 * @returns {number | null}
 */
export function correctionDeg(row) {
  if (row.north === 'true' || row.north === 'set') return 0;
  if (row.north === 'magnetic') return number(row.declination_deg);
  if (row.north === 'grid') return number(row.convergence_deg);
  return null;
}

/**
 * The derived bearings of one record, degrees from true north, rounded to the sheet's decimals.
 * @param {SheetDeclaration} sheet
 * @param {Record<string, unknown>} row
 * @returns {Record<string, number | null>}
 */
export function derive(sheet, row) {
  /** @type {Record<string, number | null>} */
  const derived = {};
  for (const field of sheet.fields) {
    if (!field.derived_from.length || field.type === 'time') continue;
    const read = number(row[field.derived_from[0]]);
    const correction = correctionDeg(row);
    if (read === null || correction === null) {
      derived[field.name] = null;
      continue;
    }
    const lookingUp = field.derived_from.includes('slip_face_looking') && row.slip_face_looking === 'up';
    const limit = field.type === 'orientation' ? 180 : 360;
    const turned = (((read + correction + (lookingUp ? 180 : 0)) % limit) + limit) % limit;
    derived[field.name] = roundHalfUp(turned, field.decimals ?? 0) % limit;
  }
  return derived;
}

/**
 * @param {number} value
 * @param {number} decimals
 * @returns {number}
 */
export function roundHalfUp(value, decimals) {
  const scale = 10 ** decimals;
  return Math.floor(value * scale + 0.5) / scale;
}

/** @param {unknown} value */
function number(value) {
  return typeof value === 'number' ? value : null;
}
