/** One observation on a line of a list, with what wants a decision said in words beneath it. */

import {label, shown} from '../sheet/shown.js';
import {el} from './element.js';
import {clockTime} from './figures.js';
import {OBSERVATION} from './sheet_in_hand.js';

/** @typedef {import('./parts.js').Parts} Parts */
/** @typedef {ReturnType<import('../handover/notebook.js').OpenNotebook['observations']>[number]} Observation */

/**
 * @param {Observation} row
 * @param {Parts} parts
 * @param {import('./questions_here.js').Question[]} questions
 */
export function observationLine(row, parts, questions) {
  const {notebook} = parts;
  const own = row.madeBy === notebook.info.crew;
  const maker = notebook.crew().find((member) => member.record === row.madeBy)?.name ?? 'another';
  const words = [
    row.twoVersions.length > 0 && el('b', {class: 'wants'}, 'two versions'),
    !row.atBase && el('span', {}, 'on this phone only'),
    row.crossed_out && el('span', {dir: 'auto'}, `crossed out: ${row.crossed_out}`),
    !own && el('span', {dir: 'auto'}, maker),
  ];
  return el(
    'li',
    {class: row.crossed_out ? 'observation crossed' : 'observation'},
    el(
      'button',
      {type: 'button', 'data-record': row.record, onclick: () => parts.go('observation', row.record)},
      el('time', {datetime: row.observed_at ?? ''}, row.observed_at ? clockTime(row.observed_at, notebook.survey()?.time_zone) : '–'),
      el('span', {class: 'dune'}, row.bedform ? `dune ${row.bedform}` : 'no dune'),
      el('span', {class: 'numbers'}, ...numbers(row)),
      el('span', {class: 'words'}, words),
    ),
    row.crossed_out ? null : questions.map((question) => questionLine(question, parts)),
  );
}

/**
 * A question, with its two answers.
 * @param {import('./questions_here.js').Question} question
 * @param {Parts} parts
 */
export function questionLine(question, parts) {
  const line = el(
    'div',
    {class: 'question'},
    el('p', {}, question.sentence),
    el('button', {type: 'button', onclick: () => parts.go('observation', question.record)}, 'Correct'),
    el('button', {type: 'button', onclick: () => void parts.questions.keep(question).then(() => line.remove())}, 'Keep'),
  );
  return line;
}

/**
 * The readings of one line: bearings as read, then words.
 * @param {Observation} row
 * @returns {Node[]}
 */
function numbers(row) {
  const values = /** @type {Record<string, any>} */ (row);
  const told = OBSERVATION.fields.filter((field) => field.measure && (values[field.name] !== null || values[`${field.name}_absent`]));
  const short = /** @type {Record<string, string>} */ ({crest_read_deg: 'crest', slip_face_read_deg: 'slip face', slip_face_dip_deg: 'dip'});
  return told.map((field) => {
    const reason = values[`${field.name}_absent`];
    const value = reason ? shown(field, {absent: reason}) : shown(field, values[field.name]);
    const name = short[field.name] ?? (field.type === 'choice' && !reason ? '' : field.label.toLowerCase());
    return el('span', {class: 'pair'}, name && `${name} `, el('b', {}, value));
  });
}

/**
 * @param {Observation[]} rows newest first
 * @param {Parts} parts
 * @returns {Node[]}
 */
export function lastReadings(rows, parts) {
  if (!rows.length) return [];
  const questions = parts.questions.at(rows[0].site);
  return [
    el('h2', {}, 'Your last readings here'),
    el('ul', {class: 'observations'}, rows.map((row) => observationLine(row, parts, questions.get(row.record) ?? []))),
    el('button', {type: 'button', class: 'wide', onclick: () => parts.go('today')}, 'All readings of today'),
  ];
}

/**
 * Which sample a set of readings is, in words.
 * @param {{order: string | null, face: string | null, dune_type: string | null}} sample
 */
export function sampleName(sample) {
  const parts = [
    sample.dune_type && label('dune_type', sample.dune_type),
    sample.order && sample.order !== sample.dune_type && label('bedform_order', sample.order),
    sample.face && `${label('face', sample.face)} face`,
  ].filter(Boolean);
  return parts.length ? parts.join(', ') : 'order, face and type not said';
}
