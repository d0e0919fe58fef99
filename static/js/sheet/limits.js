/** Whether a value can stand in a field, and if not, why, in words. */

/** @typedef {import('./declared.js').FieldDeclaration} FieldDeclaration */
/** @typedef {{absent: string}} Absent */

/**
 * @param {string} reason a key of CONSTANTS.absences
 * @returns {Absent}
 */
export function absent(reason) {
  return {absent: reason};
}

/**
 * Why a measure has no value, or null.
 * @param {unknown} value
 * @returns {string | null}
 */
export function reasonAbsent(value) {
  if (typeof value !== 'object' || value === null || !('absent' in value)) return null;
  return String(value.absent);
}

/**
 * The value as it is kept: a compass's 360 is 0.
 * @param {FieldDeclaration} field
 * @param {unknown} value
 */
export function asKept(field, value) {
  return field.type === 'direction' && value === 360 ? 0 : value;
}

/**
 * What is wrong with `value` in `field`, to stand beside its label; '' where nothing is.
 * @param {FieldDeclaration} field
 * @param {unknown} value
 * @returns {string}
 */
export function problemWith(field, value) {
  if (value === undefined || value === null || reasonAbsent(value)) return '';
  if (typeof value === 'number') return problemWithNumber(field, value);
  if (typeof value === 'string' && [...value].length > field.max_length) {
    return `At most ${field.max_length} characters.`;
  }
  return '';
}

/**
 * @param {FieldDeclaration} field
 * @param {number} value
 */
function problemWithNumber(field, value) {
  if (!Number.isFinite(value)) return 'This is not a number.';
  if (field.type === 'direction' && (value < 0 || value > 360)) {
    return `${value} is no bearing: they run from 0 to 359.`;
  }
  if (field.type === 'orientation' && (value < 0 || value >= 180)) {
    return `${value} is no axis: they run from 0 to 179.`;
  }
  if (field.type === 'integer' && !Number.isInteger(value)) return 'Only whole numbers.';
  const unit = field.unit && field.unit !== 'deg' ? ` ${field.unit}` : '';
  if (field.minimum !== null && value < field.minimum) return `At least ${field.minimum}${unit}.`;
  if (field.maximum !== null && value > field.maximum) return `At most ${field.maximum}${unit}.`;
  return '';
}
