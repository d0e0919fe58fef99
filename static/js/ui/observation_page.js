/** One observation: what it says, changing it, crossing it out and taking that back. */

import {valuesOf} from '../sheet/carry.js';
import {asKept, problemWith} from '../sheet/limits.js';
import {shown} from '../sheet/shown.js';
import {bearingFrame} from './bearing_frame.js';
import {crossOut} from './cross_out.js';
import {el, fill, say} from './element.js';
import {clockTime, day, latLon, metres} from './figures.js';
import {referable} from './parts.js';
import {photoGallery} from './photo_gallery.js';
import {sheetForm} from './sheet_form.js';
import {OBSERVATION} from './sheet_in_hand.js';

/** @typedef {import('./observation_line.js').Observation} Observation */

/** @type {import('./parts.js').Mount} */
export function mountObservation({main, dock, signal, detail}, parts) {
  const {notebook} = parts;
  const find = () => notebook.observations().find((row) => row.record === detail);
  const first = find();
  if (!first) {
    fill(main, el('p', {class: 'empty'}, 'This observation is not on this phone.'));
    return {remove: () => undefined};
  }
  const answers = changesTo(first, parts);
  const heading = el('h1');
  const facts = el('div', {class: 'facts'});
  const status = el('p', {class: 'status', role: 'status'});
  const save = el('button', {type: 'button', class: 'save', onclick: () => void keep()}, 'Save changes');
  const form = sheetForm({
    sheet: OBSERVATION,
    answers,
    switchedOn: [...(notebook.survey()?.optional_fields ?? []), ...said(first)],
    stepDeg: notebook.survey()?.reading_step_deg ?? null,
    referable: referable(notebook),
    scroller: main,
    signal,
  });
  const crossing = crossOut({reason: () => find()?.crossed_out ?? null, say: (reason) => notebook.save('observation', {crossed_out: reason}, {record: detail})});
  const back = el('button', {type: 'button', class: 'wide', onclick: () => parts.go('today')}, 'Back to today');
  fill(main, heading, facts, form.element, photoGallery(notebook, detail, signal), crossing.element, back);
  fill(dock, el('div', {class: 'save_bar'}, el('div', {class: 'status_line'}, status), save));

  async function keep() {
    const wrong = OBSERVATION.fields.find((field) => problemWith(field, answers.values()[field.name]));
    if (wrong) {
      form.refuse(wrong.name, problemWith(wrong, answers.values()[wrong.name]));
      return say(status, `${wrong.label}: ${problemWith(wrong, answers.values()[wrong.name])}`);
    }
    const changes = answers.changes();
    if (!Object.keys(changes).length) return say(status, 'Nothing was changed.');
    save.disabled = true;
    try {
      await notebook.save('observation', changes, {record: detail});
      parts.vibrate(60);
      answers.settle();
      say(status, 'Changes saved.');
    } catch (error) {
      say(status, `Not saved. ${error instanceof Error ? error.message : ''} Your changes stand here: try again.`);
    } finally {
      save.disabled = false;
    }
  }

  function update() {
    const row = find();
    if (!row) return;
    fill(heading, title(row, parts));
    fill(facts, factLines(row, parts));
    crossing.show();
  }

  update();
  return {update, remove: () => undefined};
}

/**
 * Changes to an observation: only what differs is said.
 * @param {Observation} row
 * @param {import('./parts.js').Parts} parts
 */
function changesTo(row, {notebook}) {
  let original = valuesOf(OBSERVATION, /** @type {any} */ (row));
  let values = {...original};
  /** @type {Set<() => void>} */
  const listeners = new Set();
  const when = Date.parse(row.observed_at ?? row.madeAt);
  const site = notebook.sites().find((other) => other.record === row.site);
  const spot = /** @type {import('./bearing_frame.js').Spot | null} */ ([row, site].find((place) => place?.lat_deg != null && place.lon_deg != null) ?? null);
  const frame = () => {
    const known = values.north === 'grid' ? values.convergence_deg : values.declination_deg;
    return known === undefined ? bearingFrame(spot, when, values.north) : {};
  };
  return {
    values: () => values,
    isCarried: () => false,
    frame: () => ({...frame()}),
    /** @param {() => void} listener @param {AbortSignal} [signal] */
    watch(listener, signal) {
      listeners.add(listener);
      signal?.addEventListener('abort', () => listeners.delete(listener), {once: true});
    },
    /** @param {string} name @param {unknown} value */
    set(name, value) {
      values = {...values, [name]: value};
      if (value === undefined) delete values[name];
      listeners.forEach((listener) => listener());
    },
    /** @returns {Record<string, unknown>} null takes a value away */
    changes() {
      const full = {...values, ...(values.north !== original.north ? frame() : {})};
      const names = [...new Set([...Object.keys(full), ...Object.keys(original)])];
      const fields = new Map(OBSERVATION.fields.map((field) => [field.name, field]));
      return Object.fromEntries(
        names
          .filter((name) => JSON.stringify(full[name]) !== JSON.stringify(original[name]))
          .map((name) => [name, asKept(/** @type {any} */ (fields.get(name)), full[name]) ?? null]),
      );
    },
    settle() {
      original = {...values};
    },
  };
}

/** Names of the optional fields that this observation holds though the survey has switched them off. @param {Observation} row */
function said(row) {
  return Object.keys(valuesOf(OBSERVATION, /** @type {any} */ (row)));
}

/** @param {Observation} row @param {import('./parts.js').Parts} parts */
function title(row, {notebook}) {
  const zone = notebook.survey()?.time_zone;
  const when = row.observed_at ? `${day(row.observed_at, zone)} ${clockTime(row.observed_at, zone)}` : 'time unknown';
  return `${row.bedform ? `Dune ${row.bedform}, ` : ''}${when}`;
}

/** @param {Observation} row @param {import('./parts.js').Parts} parts */
function factLines(row, parts) {
  const {notebook} = parts;
  const maker = notebook.crew().find((member) => member.record === row.madeBy)?.name ?? 'another';
  const place = row.lat_deg !== null && row.lon_deg !== null ? `${latLon(row.lat_deg, row.lon_deg)}${row.accuracy_m === null ? '' : ` ±${metres(row.accuracy_m)}`}` : 'no place';
  const questions = parts.questions.at(row.site).get(row.record) ?? [];
  return [
    el('p', {}, `${maker} · ${row.atBase ? 'at base' : 'on this phone only'} · ${place}`),
    row.twoVersions.map((field) => el('p', {class: 'question'}, versions(field, row))),
    row.crossed_out ? [] : questions.map((question) => el('p', {class: 'question'}, question.sentence)),
  ].flat();
}

/**
 * @param {Observation['twoVersions'][number]} two
 * @param {Observation} row
 */
function versions(two, row) {
  const field = OBSERVATION.fields.find((other) => other.name === two.field);
  const values = two.versions.map((version) => (field && version.value !== null && shown(field, version.value)) || 'nothing');
  if (two.field === 'crossed_out') return `Two versions: one crossed this out${row.crossed_out ? ` ("${row.crossed_out}")` : ''}, one changed it, neither had seen the other. The lead chooses.`;
  return `Two versions of ${field?.label ?? two.field}: ${values.join(' or ')}. Two people changed it without seeing each other; the first stands until the lead chooses.`;
}
