/** A measure that is a number: the number large, its meaning beside it, and a pad for the thumb. */

import {CONSTANTS} from '../sheet/declared.js';
import {absent, reasonAbsent} from '../sheet/limits.js';
import {el, say} from './element.js';

/** @typedef {import('../sheet/declared.js').FieldDeclaration} FieldDeclaration */

const KEYS = ['1', '2', '3', '4', '5', '6', '7', '8', '9', '.', '0'];
const DELETE = '⌫';

/**
 * @param {FieldDeclaration} field
 * @param {object} deps
 * @param {(value: unknown) => void} deps.change undefined: taken away
 * @param {number} deps.decimals 0: no point on the pad
 * @param {() => void} deps.next go on to the next measure
 * @param {HTMLElement | null} deps.drawing stands beside the number
 * @returns {import('./choice.js').Widget}
 */
export function numberPad(field, {change, decimals, next, drawing}) {
  let text = '';
  let fresh = true; // the next digit begins a new number
  const digits = field.type === 'direction' || field.type === 'orientation' ? 3 : 6;
  const input = el('input', {
    class: 'figure',
    type: 'text',
    inputmode: 'none',
    autocomplete: 'off',
    'aria-label': field.label,
    'aria-description': field.help,
    placeholder: '–',
    oninput: () => typed(input.value),
    onkeydown: (/** @type {KeyboardEvent} */ event) => event.key === 'Enter' && next(),
  });
  const unit = el('span', {class: 'unit', 'aria-hidden': 'true'}, unitText(field.unit));

  /** @param {string} value */
  function typed(value) {
    text = value.replace(',', '.').replace(/[^\d.]/g, '');
    fresh = false;
    const number = text === '' ? undefined : Number(text);
    change(number);
  }

  /** @param {string} key */
  function press(key) {
    if (key === DELETE) return typed(text.slice(0, -1));
    const started = fresh || isFull(text, digits) ? '' : text;
    if (key === '.' && started.includes('.')) return;
    typed(started + key);
  }

  const reasons = Object.entries(CONSTANTS.absences).map(([reason, label]) =>
    el('button', {type: 'button', class: 'reason', 'aria-pressed': 'false', 'data-value': reason, onclick: () => give(reason)}, label),
  );
  /** @type {string | null} */
  let given = null;
  /** @param {string} reason */
  function give(reason) {
    fresh = true;
    change(given === reason ? undefined : absent(reason));
  }

  const keys = KEYS.map((key) => {
    if (key === '.' && !decimals) return el('span');
    return el('button', {type: 'button', class: 'key', onclick: () => press(key)}, key);
  });
  const erase = el('button', {type: 'button', class: 'key', 'aria-label': 'Delete digit', onclick: () => press(DELETE)}, DELETE);
  const go = el('button', {type: 'button', class: 'next', onclick: next}, 'Next');
  const right = [erase, ...reasons];
  const cells = [];
  for (let row = 0; row < 4; row++) {
    cells.push(...keys.slice(3 * row, 3 * row + 3));
    if (row < 3) cells.push(right[row] ?? el('span'));
  }
  cells.push(go);
  return {
    element: el(
      'div',
      {class: 'measure'},
      el('div', {class: 'number'}, el('div', {class: 'read'}, input, unit), drawing),
      el('div', {class: 'pad', role: 'group', 'aria-label': `Number pad for ${field.label}`}, cells),
    ),
    show(value) {
      given = reasonAbsent(value);
      const number = typeof value === 'number' ? value : undefined;
      if (number === undefined ? text !== '' : Number(text) !== number || text === '') {
        text = number === undefined ? '' : String(number);
        fresh = true;
      }
      if (input.value !== text) input.value = text;
      input.placeholder = given ? '×' : '–';
      unit.hidden = text === '';
      reasons.forEach((button) => button.setAttribute('aria-pressed', String(button.dataset.value === given)));
      say(go, 'Next');
    },
  };
}

/** @param {string} text @param {number} digits */
function isFull(text, digits) {
  const [whole, decimals] = text.split('.');
  return decimals === undefined ? whole.length >= digits : decimals.length >= 1;
}

/** @param {string} unit */
export function unitText(unit) {
  return unit === 'deg' ? '°' : unit;
}
