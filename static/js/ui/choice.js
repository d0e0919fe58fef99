/** Choosing one word: chips, a list with definitions, or the platform's own list when there are many. */

import {CONSTANTS, VOCABULARIES} from '../sheet/declared.js';
import {absent, reasonAbsent} from '../sheet/limits.js';
import {el, say} from './element.js';

/** @typedef {import('../sheet/declared.js').FieldDeclaration} FieldDeclaration */
/** @typedef {{value: string, label: string, definition?: string}} Option */
/** @typedef {{element: HTMLElement, show: (value: unknown) => void}} Widget */

const FEW = 5;

/** @param {FieldDeclaration} field @returns {Option[]} */
function options(field) {
  return (VOCABULARIES[field.vocabulary ?? ''] ?? []).filter((word) => !word.retired);
}

/**
 * One of a few, as buttons; touching the chosen one takes the choice away.
 * @param {string} label
 * @param {Option[]} choices
 * @param {(value: string | undefined) => void} choose
 * @param {string} [shape] class
 * @returns {Widget}
 */
export function chips(label, choices, choose, shape = 'chips') {
  /** @type {string | undefined} */
  let chosen;
  const buttons = choices.map(({value, label: text, definition}) =>
    el(
      'button',
      {
        type: 'button',
        'aria-pressed': 'false',
        'data-value': value,
        onclick: () => choose(chosen === value ? undefined : value),
      },
      el('span', {class: 'word'}, text),
      definition && el('small', {}, definition),
    ),
  );
  return {
    element: el('div', {class: shape, role: 'group', 'aria-label': label}, buttons),
    show(value) {
      chosen = typeof value === 'string' ? value : undefined;
      buttons.forEach((button, i) => button.setAttribute('aria-pressed', String(choices[i].value === chosen)));
    },
  };
}

/**
 * A choice among few (chips, the chosen word's definition beneath) or many (a list).
 * @param {FieldDeclaration} field
 * @param {(value: string | undefined) => void} choose
 * @returns {Widget}
 */
export function plainChoice(field, choose) {
  const words = options(field);
  const meaning = el('p', {class: 'help'}, field.help);
  const few = words.length <= FEW;
  const widget = few ? chips(field.label, words.map(({value, label}) => ({value, label})), choose) : list(field.label, words, choose);
  return {
    element: el('div', {class: 'field'}, el('span', {class: 'label', 'aria-hidden': 'true'}, field.label), widget.element, meaning),
    show(value) {
      widget.show(value);
      say(meaning, words.find((word) => word.value === value)?.definition ?? field.help);
    },
  };
}

/**
 * The platform's list.
 * @param {string} label
 * @param {Option[]} choices
 * @param {(value: string | undefined) => void} choose
 * @param {string} [none] what "no answer" is called
 * @returns {Widget}
 */
export function list(label, choices, choose, none = 'not looked') {
  const select = el(
    'select',
    {'aria-label': label, onchange: () => choose(select.value || undefined)},
    el('option', {value: ''}, none),
    choices.map((choice) => el('option', {value: choice.value}, choice.label)),
  );
  return {
    element: select,
    show: (value) => void (select.value = typeof value === 'string' ? value : ''),
  };
}

/**
 * A measure that is a word: every word with its definition, then the two answers that are no value.
 * @param {FieldDeclaration} field
 * @param {(value: unknown) => void} choose
 * @returns {Widget}
 */
export function measuredChoice(field, choose) {
  const words = chips(field.label, options(field), choose, 'words');
  const reasons = absences(field, choose);
  return {
    element: el('div', {class: 'measure'}, words.element, reasons.element),
    show(value) {
      words.show(value);
      reasons.show(value);
    },
  };
}

/**
 * "none here" and "could not be measured".
 * @param {FieldDeclaration} field
 * @param {(value: unknown) => void} choose
 * @returns {Widget}
 */
export function absences(field, choose) {
  const choices = Object.entries(CONSTANTS.absences).map(([value, label]) => ({value, label}));
  const widget = chips(`${field.label}: no value`, choices, (reason) => choose(reason && absent(reason)));
  return {element: widget.element, show: (value) => widget.show(reasonAbsent(value) ?? undefined)};
}
