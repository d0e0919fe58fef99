/** One sample: the finding in a sentence, its rose, and the numbers under it. */

import {rose} from '../draw/rose.js';
import {svg} from '../draw/svg.js';
import {el, fill} from './element.js';
import {bearing, compassPoint, count} from './figures.js';
import {sampleName} from './observation_line.js';

const SIZE = 320;
const WIDEST_DEG = 60;

/** @typedef {import('../sheet/sample.js').Sample} Sample */
/** @typedef {import('../science/summary.js').Summary} Summary */

/**
 * @param {Sample | null} sample
 * @param {import('./finding.js').Measure} measure
 * @param {string} siteRecord
 * @param {import('./parts.js').Parts} parts
 * @returns {HTMLElement}
 */
export function sampleView(sample, measure, siteRecord, {notebook, summaries}) {
  const element = el('section', {class: 'sample'});
  if (!sample) {
    fill(element, el('p', {class: 'empty'}, `No ${measure.label.toLowerCase()} read at this site yet.`));
    return element;
  }
  const survey = notebook.survey();
  const site = notebook.sites().find((row) => row.record === siteRecord);
  const expected = measure.axial ? null : site?.expected_facing_deg ?? null;
  const target = site?.target_half_width_deg ?? survey?.target_half_width_deg ?? null;
  const options = {
    bedforms: sample.bedforms.some((dune) => dune !== null) ? sample.bedforms : null,
    axial: measure.axial,
    stepDeg: survey?.reading_step_deg ?? null,
    againstDeg: expected,
    targetDeg: target,
    fewestBedforms: survey?.fewest_dunes ?? 5,
    subject: measure.subject,
  };
  summaries.of(sample.angles, options, draw, (error) => element.append(el('p', {class: 'problem', role: 'alert'}, error.message)));
  return element;

  /** @param {Summary} summary */
  function draw(summary) {
    const angles = /** @type {Sample} */ (sample).angles;
    const drawing = rose(angles, summary, {axial: measure.axial, size: SIZE, expectedDeg: expected});
    fill(
      element,
      el('p', {class: 'sentence'}, summary.finding || 'Looking for directions.'),
      needed(summary, target),
      svg(drawing, {identifier: 'finding-rose'}),
      half(summary, target),
      el('p', {class: 'help'}, `${sampleName(/** @type {Sample} */ (sample))}: ${count(angles.length, 'reading')}${summary.bedforms ? ` on ${count(summary.bedforms, 'dune')}` : ''}.`),
      numbers(summary, measure, expected),
      summary.notes.length > 0 && el('ul', {class: 'notes'}, summary.notes.map((note) => el('li', {}, note))),
    );
  }
}

/**
 * How many more dunes or readings the target asks for.
 * @param {Summary} summary
 * @param {number | null} target
 */
function needed(summary, target) {
  if (target === null || summary.enough) return null;
  const dunes = summary.bedforms_needed;
  const readings = summary.readings_needed;
  if (typeof dunes === 'number' && dunes > 0) return el('p', {class: 'needed'}, el('b', {}, `${dunes} more`), ` ${dunes === 1 ? 'dune' : 'dunes'} for ±${target}°`);
  if (typeof readings === 'number' && readings > 0) return el('p', {class: 'needed'}, el('b', {}, `${readings} more`), ` ${readings === 1 ? 'reading' : 'readings'} for ±${target}°`);
  return null;
}

/**
 * The half-width of the interval as a plain bar against the target.
 * @param {Summary} summary
 * @param {number | null} target
 */
function half(summary, target) {
  if (summary.ci95_half_width_deg === null) return null;
  const halfWidth = Math.ceil(summary.ci95_half_width_deg - 1e-9); // as the finding says it: never narrower than it is
  const width = Math.round(Math.min(1, halfWidth / WIDEST_DEG) * 20);
  const mark = target === null ? '' : ` t${Math.round(Math.min(1, target / WIDEST_DEG) * 20)}`;
  return el(
    'div',
    {class: 'half'},
    el('span', {}, `±${halfWidth}°`),
    el('div', {class: `bar${mark}`, role: 'img', 'aria-label': `Half-width of the 95 % interval ${halfWidth} degrees${target === null ? '' : `, target ${target}`}`}, el('span', {class: `bar_fill w${width}`})),
    target !== null && el('span', {class: 'help'}, `target ±${target}°`),
  );
}

/**
 * @param {Summary} summary
 * @param {import('./finding.js').Measure} measure
 * @param {number | null} expected
 */
function numbers(summary, measure, expected) {
  const {mean_direction_deg: mean, resultant_length: length, ci95_low_deg: low, ci95_high_deg: high} = summary;
  const limit = measure.axial ? 180 : 360;
  /** @param {number} deg */
  const said = (deg) => bearing(Math.round(deg) % limit, 0);
  /** @type {[string, string][]} */
  const rows = [];
  if (typeof mean === 'number' && summary.outcome === 'one') rows.push([measure.axial ? 'Mean axis' : 'Mean, faces towards', said(mean)]);
  if (typeof low === 'number' && typeof high === 'number') rows.push(['95 % interval', `${said(low)} to ${said(high)}`]);
  if (typeof length === 'number') rows.push(['Mean resultant length', length.toFixed(2)]);
  if (typeof summary.circular_sd_deg === 'number') rows.push(['Circular standard deviation', `${summary.circular_sd_deg.toFixed(0)}°`]);
  if (typeof summary.rayleigh_p === 'number') rows.push(['Rayleigh p', summary.rayleigh_p < 0.001 ? 'below 0.001' : summary.rayleigh_p.toFixed(3)]);
  if (expected !== null) rows.push(['Expected to face towards', `${said(expected)} (wind from ${said((expected + 180) % 360)}, ${compassPoint(expected + 180)})`]);
  return el('dl', {}, rows.flatMap(([name, value]) => [el('dt', {}, name), el('dd', {}, value)]));
}
