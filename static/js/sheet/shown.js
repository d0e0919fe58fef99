/** A value in words, as the one-line summaries show it. */

import {CONSTANTS, VOCABULARIES} from './declared.js';
import {reasonAbsent} from './limits.js';

/** @typedef {import('./declared.js').FieldDeclaration} FieldDeclaration */

/**
 * What a vocabulary calls `value`; the value itself where the word is not known.
 * @param {string | null} vocabulary
 * @param {unknown} value
 * @returns {string}
 */
export function label(vocabulary, value) {
  const word = VOCABULARIES[vocabulary ?? '']?.find((other) => other.value === value);
  return word?.label ?? String(value);
}

/**
 * @param {FieldDeclaration} field
 * @param {unknown} value wire value
 * @param {(record: string) => string} [nameOf] what a referred record is called
 * @returns {string} '' where nothing was said
 */
export function shown(field, value, nameOf = (record) => record) {
  if (value === null || value === undefined || value === '') return '';
  const reason = reasonAbsent(value);
  if (reason) return CONSTANTS.absences[reason] ?? reason;
  switch (field.type) {
    case 'choice': return label(field.vocabulary, value);
    case 'flag': return value ? 'yes' : 'no';
    case 'reference': return nameOf(String(value));
    case 'names': return /** @type {string[]} */ (value).join(', ');
    case 'points': return `${/** @type {unknown[]} */ (value).length} points`;
    case 'direction':
    case 'orientation': return angle(Number(value));
    case 'number':
    case 'integer': return `${value}${unit(field.unit)}`;
    default: return String(value);
  }
}

/** @param {number} deg */
function angle(deg) {
  const [whole, rest] = String(Math.round(deg * 10) / 10).split('.');
  return `${whole.padStart(3, '0')}${rest ? `.${rest}` : ''}°`;
}

/** @param {string} unit */
function unit(unit) {
  if (!unit) return '';
  return unit === 'deg' ? '°' : ` ${unit}`;
}
