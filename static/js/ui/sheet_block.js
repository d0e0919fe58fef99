/** One block of the sheet: a line that says what it holds, and its fields when it is open. */

import {companionsOf, derivedFrom} from '../sheet/blocks.js';
import {derive} from '../sheet/derive.js';
import {problemWith} from '../sheet/limits.js';
import {shown} from '../sheet/shown.js';
import {VOCABULARIES} from '../sheet/declared.js';
import {chips, measuredChoice} from './choice.js';
import {dial} from './dial.js';
import {el, fill, say} from './element.js';
import {numberPad} from './number_pad.js';
import {plainField} from './plain_field.js';

/** @typedef {import('../sheet/blocks.js').Block} Block */
/** @typedef {import('../sheet/declared.js').FieldDeclaration} FieldDeclaration */
/** @typedef {import('../sheet/declared.js').SheetDeclaration} SheetDeclaration */
/** @typedef {import('./choice.js').Widget} Widget */

/**
 * What is being filled in: a new reading, or changes to an old one.
 * @typedef {object} Answers
 * @property {() => Record<string, unknown>} values
 * @property {(name: string, value: unknown) => void} set
 * @property {(name: string) => boolean} isCarried
 * @property {(listener: () => void, signal?: AbortSignal) => void} watch
 * @property {() => Record<string, unknown>} frame declination and convergence at the place
 */

/**
 * @typedef {object} BlockDeps
 * @property {SheetDeclaration} sheet
 * @property {Answers} answers
 * @property {(kind: string) => import('./choice.js').Option[]} referable
 * @property {number | null} stepDeg to which bearings are read
 * @property {(key: string) => void} toggle
 * @property {(key: string) => void} next
 */

/**
 * @param {Block} block
 * @param {BlockDeps} deps
 */
export function sheetBlock(block, deps) {
  const {answers, sheet} = deps;
  const said = el('span', {class: 'said', dir: 'auto'});
  const line = el(
    'button',
    {type: 'button', class: 'line', 'aria-expanded': 'false', onclick: () => deps.toggle(block.key)},
    el('span', {class: 'name'}, block.label),
    said,
  );
  const body = el('div', {class: 'body'});
  const problem = el('p', {class: 'problem', role: 'alert'});
  const element = el('section', {class: 'block', 'data-block': block.key}, line, body);
  /** @type {[FieldDeclaration, Widget][]} */
  let widgets = [];
  /** @type {Meaning | null} */
  let meaning = null;
  let refused = '';

  function build() {
    widgets = [];
    /** @type {Node[]} */
    const content = [];
    if (block.measure) {
      meaning = meaningOf(sheet, block.measure, answers);
      const widget = measureWidget(block.measure, deps, meaning, block.key);
      widgets.push([block.measure, widget]);
      content.push(widget.element);
      const figure = widget.element.querySelector('.number');
      if (figure) figure.append(...(meaning ? [meaning.sentence] : []), problem);
      else content.push(problem);
      for (const companion of block.companions) {
        const words = VOCABULARIES[companion.vocabulary ?? ''].map(({value, label}) => ({value, label}));
        const row = chips(companion.label, words, (value) => answers.set(companion.name, value));
        widgets.push([companion, row]);
        const captioned = el('div', {class: 'companion'}, el('span', {class: 'label', 'aria-hidden': 'true'}, companion.label), row.element);
        figure ? widget.element.insertBefore(captioned, widget.element.lastElementChild) : content.push(captioned);
      }
    }
    if (!block.measure) content.push(problem);
    for (const field of block.plain) {
      const widget = plainField(field, (value) => answers.set(field.name, value), deps.referable);
      widgets.push([field, widget]);
      content.push(widget.element);
    }
    fill(body, content);
  }

  /** @returns {FieldDeclaration[]} */
  const fields = () => [...(block.measure ? [block.measure] : []), ...block.companions, ...block.plain];

  function show() {
    const values = answers.values();
    for (const [field, widget] of widgets) widget.show(values[field.name]);
    meaning?.show();
    const wrong = fields().map((field) => problemWith(field, values[field.name])).find(Boolean) ?? '';
    say(problem, wrong || refused);
    problem.hidden = !problem.textContent;
    if (meaning) meaning.sentence.hidden = !problem.hidden;
    summarise(said, block, answers, deps.referable);
  }

  return {
    element,
    show,
    isEmpty: () => block.measure !== null && answers.values()[block.measure.name] === undefined,
    /** @param {boolean} open */
    open(open) {
      refused = '';
      line.setAttribute('aria-expanded', String(open));
      element.classList.toggle('open', open);
      if (open) build();
      else fill(body);
      if (!open) [widgets, meaning] = [[], null];
      show();
    },
    /** Something was answered: what was refused may be mended. */
    changed() {
      refused = '';
      show();
    },
    /** @param {string} text why the sheet could not be saved */
    refuse(text) {
      refused = text;
      show();
    },
  };
}

/**
 * @param {FieldDeclaration} field
 * @param {BlockDeps} deps
 * @param {Meaning | null} meaning
 * @param {string} key
 * @returns {Widget}
 */
function measureWidget(field, deps, meaning, key) {
  /** @param {unknown} value */
  const change = (value) => deps.answers.set(field.name, value);
  if (field.type === 'choice') return measuredChoice(field, change);
  if (['number', 'integer', 'direction', 'orientation'].includes(field.type)) {
    const isWhole = field.type !== 'number' && (deps.stepDeg ?? 1) >= 1;
    return numberPad(field, {change, decimals: isWhole ? 0 : field.decimals ?? 0, next: () => deps.next(key), drawing: meaning?.drawing ?? null});
  }
  return plainField(field, change, deps.referable);
}

/** @typedef {{drawing: HTMLElement, sentence: HTMLElement, show: () => void}} Meaning */

/**
 * What a bearing as read means on the ground: drawn, and said from true north.
 * @param {SheetDeclaration} sheet
 * @param {FieldDeclaration} field
 * @param {Answers} answers
 * @returns {Meaning | null} null where nothing is derived from the field
 */
function meaningOf(sheet, field, answers) {
  const derived = derivedFrom(sheet, field);
  if (!derived) return null;
  const {element, show} = dial();
  const sentence = el('p', {class: 'meaning'});
  return {
    drawing: element,
    sentence,
    show() {
      const row = {...answers.values(), ...answers.frame()};
      const fits = !problemWith(field, answers.values()[field.name]);
      const said = companionsOf(sheet, field).every((other) => row[/** @type {keyof row} */ (other.name)] !== undefined);
      const trueDeg = fits && said ? derive(sheet, row)[derived.name] : null;
      show(trueDeg, derived.type === 'orientation');
      say(sentence, trueDeg === null ? field.help : `${derived.label} ${shown(derived, trueDeg)}${correction(row)}`);
    },
  };
}

/** @param {Record<string, unknown>} row */
function correction(row) {
  const [name, deg] = row.north === 'magnetic' ? ['declination', row.declination_deg] : ['convergence', row.convergence_deg];
  if (typeof deg !== 'number' || (row.north !== 'magnetic' && row.north !== 'grid')) return '';
  return ` (${name} ${deg < 0 ? '−' : '+'}${Math.abs(deg).toFixed(1)}°)`;
}

/**
 * The block's one line: what it holds; what carries over is underlined with dots and named so.
 * @param {HTMLElement} said
 * @param {Block} block
 * @param {Answers} answers
 * @param {BlockDeps['referable']} referable
 */
function summarise(said, block, answers, referable) {
  const values = answers.values();
  const fields = [...(block.measure ? [block.measure] : []), ...block.plain, ...block.companions];
  const held = fields.filter((field) => values[field.name] !== undefined);
  const parts = held.map((field) => {
    const nameOf = (/** @type {string} */ record) => referable(field.refers_to ?? '').find((row) => row.value === record)?.label ?? record;
    const text = shown(field, values[field.name], nameOf);
    return el('span', {class: answers.isCarried(field.name) ? 'carried' : 'fresh'}, field.type === 'integer' ? `${field.label} ${text}` : text);
  });
  const carried = held.some((field) => answers.isCarried(field.name));
  fill(said, parts.flatMap((part, i) => (i ? [' · ', part] : [part])), carried && el('small', {class: 'mark'}, ' carried'));
}
