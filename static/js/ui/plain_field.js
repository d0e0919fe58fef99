/** The fields beside the measures: whatever type the sheet gives them. */

import {el, fill} from './element.js';
import {list, plainChoice} from './choice.js';
import {unitText} from './number_pad.js';

/** @typedef {import('../sheet/declared.js').FieldDeclaration} FieldDeclaration */
/** @typedef {import('./choice.js').Widget} Widget */
/** @typedef {import('./choice.js').Option} Option */

const LONG_TEXT = 200;

/**
 * @param {FieldDeclaration} field
 * @param {(value: unknown) => void} change undefined: taken away
 * @param {(kind: string) => Option[]} referable the records that a reference may name
 * @returns {Widget}
 */
export function plainField(field, change, referable) {
  switch (field.type) {
    case 'choice': return plainChoice(field, change);
    case 'flag': return flag(field, change);
    case 'reference': return labelled(field, list(field.label, referable(field.refers_to ?? ''), change, 'none chosen'));
    case 'time': return labelled(field, time(field, change));
    case 'names': return labelled(field, names(field, change));
    case 'text': return labelled(field, text(field, change));
    default: return labelled(field, number(field, change));
  }
}

/** @param {FieldDeclaration} field @param {Widget} widget @returns {Widget} */
function labelled(field, widget) {
  const unit = unitText(field.unit);
  const label = el('span', {class: 'label', 'aria-hidden': 'true'}, field.label, unit && ` (${unit})`);
  return {element: el('label', {class: 'field'}, label, widget.element, el('small', {class: 'help'}, field.help)), show: widget.show};
}

/** @param {FieldDeclaration} field @param {(value: unknown) => void} change @returns {Widget} */
function number(field, change) {
  const input = el('input', {
    type: 'text',
    inputmode: field.decimals || field.type === 'integer' ? 'decimal' : 'numeric',
    autocomplete: 'off',
    'aria-label': field.label,
    oninput: () => {
      const written = input.value.trim().replace(',', '.');
      change(written === '' ? undefined : Number(written));
    },
  });
  return {
    element: input,
    show(value) {
      const shown = typeof value === 'number' ? value : undefined;
      const written = input.value.trim().replace(',', '.');
      const same = shown === undefined ? written === '' : written !== '' && Object.is(Number(written), shown);
      if (!same) input.value = shown === undefined ? '' : String(shown);
    },
  };
}

/** @param {FieldDeclaration} field @param {(value: unknown) => void} change @returns {Widget} */
function text(field, change) {
  const attributes = {
    dir: 'auto',
    maxlength: field.max_length,
    autocomplete: 'off',
    'aria-label': field.label,
    oninput: () => change(input.value.trim() === '' ? undefined : input.value),
  };
  const input = field.max_length > LONG_TEXT ? el('textarea', {...attributes, rows: 3}) : el('input', {...attributes, type: 'text'});
  return {element: input, show: (value) => setText(input, typeof value === 'string' ? value : '')};
}

/** @param {FieldDeclaration} field @param {(value: unknown) => void} change @returns {Widget} */
function names(field, change) {
  const input = el('input', {
    type: 'text',
    dir: 'auto',
    autocomplete: 'off',
    'aria-label': field.label,
    oninput: () => {
      const listed = input.value.split(',').map((name) => name.trim()).filter(Boolean);
      change(listed.length ? listed : undefined);
    },
  });
  return {
    element: input,
    show(value) {
      const written = input.value.split(',').map((name) => name.trim()).filter(Boolean).join(', ');
      const shown = Array.isArray(value) ? value.join(', ') : '';
      if (written !== shown) input.value = shown;
    },
  };
}

/** @param {FieldDeclaration} field @param {(value: unknown) => void} change @returns {Widget} */
function time(field, change) {
  const input = el('input', {
    type: 'datetime-local',
    step: 1,
    'aria-label': `${field.label}, UTC`,
    onchange: () => change(input.value ? new Date(`${input.value}Z`).toISOString().replace('.000Z', 'Z') : undefined),
  });
  return {element: input, show: (value) => setText(input, typeof value === 'string' ? value.slice(0, 19) : '')};
}

/** @param {FieldDeclaration} field @param {(value: unknown) => void} change @returns {Widget} */
function flag(field, change) {
  const box = el('input', {type: 'checkbox', 'aria-label': field.label, onchange: () => change(box.checked ? true : undefined)});
  const element = el('label', {class: 'flag'});
  fill(element, box, el('span', {}, field.label), el('small', {class: 'help'}, field.help));
  return {element, show: (value) => void (box.checked = value === true)};
}

/** @param {HTMLInputElement | HTMLTextAreaElement} input @param {string} shown */
function setText(input, shown) {
  if (input.value.trim() !== shown.trim()) input.value = shown;
}
