/** Finding: what the readings of a site show, for slip faces and for crests. */

import {samples} from '../sheet/sample.js';
import {shown} from '../sheet/shown.js';
import {chips, list} from './choice.js';
import {el, fill} from './element.js';
import {count} from './figures.js';
import {observationLine, sampleName} from './observation_line.js';
import {referable} from './parts.js';
import {sampleView} from './sample_view.js';
import {OBSERVATION} from './sheet_in_hand.js';

/** @typedef {import('./parts.js').Parts} Parts */
/** @typedef {{field: string, label: string, subject: string, axial: boolean}} Measure */

/** @type {Measure[]} */
const MEASURES = [
  {field: 'slip_face_deg', label: 'Slip faces', subject: 'Slip faces', axial: false},
  {field: 'crest_deg', label: 'Crests', subject: 'Crests', axial: true},
];
const MIXED = ['grain_class', 'surface_type'];

/** @type {import('./parts.js').Mount} */
export function mountFinding({main}, parts) {
  const {notebook, hand} = parts;
  let site = /** @type {string | undefined} */ (hand.values().site ?? referable(notebook)('site')[0]?.value);
  let measure = mostRead(parts, site);
  let chosen = 0;
  const sites = list('Site', referable(notebook)('site'), (value) => show(value, mostRead(parts, value)), 'no site');
  const which = chips('Measure', MEASURES.map(({field, label}) => ({value: field, label})), (value) => show(site, MEASURES.find((one) => one.field === value) ?? measure));
  const body = el('div', {class: 'finding'});
  fill(main, el('h1', {class: 'unseen'}, 'Finding'), el('label', {class: 'field'}, el('span', {class: 'label', 'aria-hidden': 'true'}, 'Site'), sites.element), which.element, body);

  /**
   * @param {string | undefined} nextSite
   * @param {Measure} nextMeasure
   * @param {number} [sample]
   */
  function show(nextSite, nextMeasure, sample = 0) {
    [site, measure, chosen] = [nextSite, nextMeasure, sample];
    sites.show(site);
    which.show(measure.field);
    if (!site) return fill(body, el('p', {class: 'empty'}, 'Choose a site to see what its readings show.'));
    const rows = notebook.observations({site});
    const found = samples(/** @type {any[]} */ (rows), measure.field, notebook.sameDunes(site));
    const drawn = found[Math.min(chosen, found.length - 1)];
    fill(
      body,
      sampleView(drawn ?? null, measure, site, parts),
      found.length > 1 && otherSamples(found, chosen),
      mixes(rows),
      questionsHere(site, rows, parts),
    );
  }

  /** @param {import('../sheet/sample.js').Sample[]} found @param {number} shownSample */
  function otherSamples(found, shownSample) {
    return el(
      'section',
      {},
      el('h2', {}, 'Samples at this site'),
      el('p', {class: 'help'}, 'Orders, faces and dune types are never put together in one result.'),
      el(
        'ul',
        {class: 'samples'},
        found.map((sample, i) =>
          el('li', {}, el('button', {type: 'button', 'aria-pressed': String(i === shownSample), onclick: () => show(site, measure, i)}, el('span', {}, sampleName(sample)), el('span', {class: 'count'}, count(sample.angles.length, 'reading')))),
        ),
      ),
    );
  }

  const update = () => show(site, measure, chosen);
  update();
  return {update, remove: () => undefined};
}

/**
 * The measure with most readings at a site.
 * @param {Parts} parts
 * @param {string | undefined} site
 */
function mostRead({notebook}, site) {
  const rows = /** @type {Record<string, unknown>[]} */ (/** @type {any} */ (site ? notebook.observations({site}) : []));
  const counted = MEASURES.map((measure) => rows.filter((row) => typeof row[measure.field] === 'number' && !row.crossed_out).length);
  return MEASURES[counted.indexOf(Math.max(...counted))];
}

/**
 * How often each grain size and surface was found.
 * @param {ReturnType<import('./parts.js').Notebook['observations']>} rows
 */
function mixes(rows) {
  const standing = /** @type {any[]} */ (rows.filter((row) => !row.crossed_out));
  return OBSERVATION.fields
    .filter((field) => MIXED.includes(field.name))
    .map((field) => {
      /** @type {Map<string, number>} */
      const tally = new Map();
      for (const row of standing) {
        const value = row[field.name];
        if (value) tally.set(value, (tally.get(value) ?? 0) + 1);
      }
      const n = [...tally.values()].reduce((a, b) => a + b, 0);
      if (!n) return null;
      const most = [...tally].sort((a, b) => b[1] - a[1]);
      return el('section', {class: 'mix'}, el('h2', {}, field.label), el('ul', {}, most.map(([value, times]) => el('li', {}, el('span', {}, shown(field, value)), el('span', {class: 'count'}, `${times} of ${n}`)))));
    });
}

/**
 * @param {string} site
 * @param {ReturnType<import('./parts.js').Notebook['observations']>} rows
 * @param {Parts} parts
 */
function questionsHere(site, rows, parts) {
  const asked = parts.questions.at(site);
  const questioned = rows.filter((row) => asked.has(row.record) || row.twoVersions.length);
  if (!questioned.length) return null;
  return el(
    'section',
    {},
    el('h2', {}, count(questioned.length, 'reading wants a look', 'readings want a look')),
    el('ul', {class: 'observations'}, questioned.map((row) => observationLine(row, parts, asked.get(row.record) ?? []))),
  );
}
