/**
 * The sheet being filled in: its values, what carries over, its draft, and saving it.
 * Everything shown of it is asked of it anew; it alone keeps it.
 */

import {SHEETS} from '../sheet/declared.js';
import {askedFields, companionsOf} from '../sheet/blocks.js';
import {carriedOver, endedBy, valuesOf} from '../sheet/carry.js';
import {asKept, problemWith, reasonAbsent} from '../sheet/limits.js';
import {bearingFrame} from './bearing_frame.js';
import {day} from './figures.js';
import {createLateFixes, fixFields, freshFix} from './late_fixes.js';

/** @typedef {import('../handover/notebook.js').OpenNotebook} Notebook */
/** @typedef {import('../sensors/position.js').Position} Position */
/** @typedef {import('../sensors/camera.js').Taken} Taken */
/** @typedef {import('../sheet/carry.js').Values} Values */
/** @typedef {{field: string, label: string, text: string}} Problem `field` is '' where it is none's */
/** @typedef {{values: Values, carried: string[], day: string}} Draft */
/** @typedef {Awaited<ReturnType<typeof openSheet>>} SheetInHand */

export const OBSERVATION = SHEETS.observation;
export const DRAFT = 'reading';
export const PHOTO_DRAFT = 'reading photos';
const BY_PHONE = ['lat_deg', 'lon_deg', 'fix_method'];

/**
 * @param {{notebook: Notebook, position: Position, clock: () => number}} deps
 */
export async function openSheet({notebook, position, clock}) {
  const lateFixes = createLateFixes({notebook, position, clock});
  const today = () => day(clock() + notebook.clockOffMs(), notebook.survey()?.time_zone);
  const draft = /** @type {Draft | undefined} */ (await notebook.draft.get(DRAFT));
  let state = draft?.values ? draft : firstOfVisit(notebook, today());
  let photos = /** @type {Taken[]} */ ((await notebook.draft.get(PHOTO_DRAFT)) ?? []);
  /** @type {Set<() => void>} */
  const listeners = new Set();
  let saving = false;
  /** @type {Promise<unknown>} */
  let writing = Promise.resolve();
  let stale = false;

  /** Copy the open sheet to the draft; changes made while one copy is written go with the next. */
  function copy() {
    if (stale) return;
    stale = true;
    writing = writing.then(() => {
      stale = false;
      return notebook.draft.put(DRAFT, {...state, values: {...state.values}});
    });
  }

  function tell() {
    for (const listener of [...listeners]) listener();
  }

  /** @param {Draft} next */
  function become(next) {
    state = next;
    copy();
    tell();
  }

  /** On a new day nothing is carried on; what was answered for this reading stays. */
  function keepDay() {
    if (state.day === today()) return;
    state = {...dropCarried(state, endedBy(OBSERVATION, 'day')), day: today()};
  }

  keepDay();
  if (!state.values.how_read) state = withDefault(state, 'how_read', 'hand_compass');

  const sheet = {
    values: () => state.values,
    /** @param {string} name */
    isCarried: (name) => state.carried.includes(name),
    photos: () => photos,
    spot: () => spotOf(notebook, state.values, position),
    /** @param {() => void} listener @param {AbortSignal} [signal] */
    watch(listener, signal) {
      listeners.add(listener);
      signal?.addEventListener('abort', () => listeners.delete(listener), {once: true});
    },
    /** Whether anything was answered that a new sheet would not hold. */
    isBegun: () => photos.length > 0 || Object.keys(state.values).some((name) => !state.carried.includes(name)),
    /**
     * @param {string} name
     * @param {unknown} value undefined: not looked at
     */
    set(name, value) {
      keepDay();
      const changed = state.values[name] !== value;
      const next = changed ? dropCarried(state, endedBy(OBSERVATION, name)) : state;
      const values = {...next.values, [name]: value};
      if (value === undefined || value === null || value === '') delete values[name];
      become({...next, values, carried: next.carried.filter((other) => other !== name)});
    },
    nextDune() {
      // Dunes are numbered phone by phone: another phone's dune 4 is another dune.
      const own = standing(notebook, state.values.site).filter((row) => row.madeOn === notebook.info.device);
      const used = Number(state.values.bedform ?? Math.max(0, ...own.map((row) => row.bedform ?? 0)));
      sheet.set('bedform', used + 1);
    },
    /** @param {Taken[]} next */
    async setPhotos(next) {
      photos = next;
      tell();
      await notebook.draft.put(PHOTO_DRAFT, next);
    },
    problems: () => problemsOf(notebook, state.values, photos),
    /** Save; resolves only when the notebook has it on disk. */
    async save() {
      if (saving) throw new Error('This reading is being saved.');
      saving = true;
      const taken = photos;
      const before = state;
      const when = clock();
      const set = asObservation(notebook, state.values, position, when);
      try {
        await writing;
        const {record} = await notebook.save('observation', set, {photos: taken, draft: DRAFT});
        if (taken.length) await notebook.draft.delete(PHOTO_DRAFT);
        if (set.lat_deg === undefined) lateFixes.wait(record, when);
        photos = photos.filter((photo) => !taken.includes(photo));
        const since = changedSince(before.values, state.values);
        state = followOn(set, today());
        if (Object.keys(since).length) become({...state, values: {...state.values, ...since}});
        tell();
        return {record, set, photos: taken.length};
      } finally {
        saving = false;
      }
    },
    /** @param {string} record */
    undo: (record) => notebook.save('observation', {crossed_out: 'undone at once'}, {record}),
    close: () => lateFixes.close(),
  };
  return sheet;
}

/**
 * @param {Draft} state
 * @param {string} name
 * @param {unknown} value stands there as if it had been carried over
 * @returns {Draft}
 */
function withDefault(state, name, value) {
  return {...state, values: {...state.values, [name]: value}, carried: [...state.carried, name]};
}

/**
 * What was answered while the sheet was being saved: it belongs to the next one.
 * @param {Values} before
 * @param {Values} after
 * @returns {Values}
 */
function changedSince(before, after) {
  return Object.fromEntries(Object.entries(after).filter(([name, value]) => before[name] !== value));
}

/**
 * @param {Draft} state
 * @param {string[]} ended
 * @returns {Draft}
 */
function dropCarried(state, ended) {
  const dropped = ended.filter((name) => state.carried.includes(name));
  const values = Object.fromEntries(Object.entries(state.values).filter(([name]) => !dropped.includes(name)));
  return {...state, values, carried: state.carried.filter((name) => !dropped.includes(name))};
}

/**
 * The sheet that follows a saved one.
 * @param {Values} values
 * @param {string} today
 * @returns {Draft}
 */
function followOn(values, today) {
  const kept = carriedOver(OBSERVATION, values);
  return {values: kept, carried: Object.keys(kept), day: today};
}

/**
 * Without a draft: what the last own reading of today carries over, else an empty sheet.
 * @param {Notebook} notebook
 * @param {string} today
 * @returns {Draft}
 */
function firstOfVisit(notebook, today) {
  const zone = notebook.survey()?.time_zone;
  const own = notebook.observations().filter((row) => row.madeBy === notebook.info.crew && !row.crossed_out);
  const last = own.at(-1);
  if (!last?.observed_at || day(last.observed_at, zone) !== today) return {values: {}, carried: [], day: today};
  return followOn(valuesOf(OBSERVATION, /** @type {any} */ (last)), today);
}

/**
 * @param {Notebook} notebook
 * @param {unknown} site
 */
function standing(notebook, site) {
  return typeof site === 'string' ? notebook.observations({site}).filter((row) => !row.crossed_out) : [];
}

/**
 * Where the reading is taken: typed, else the fix, else the site's own point.
 * @param {Notebook} notebook
 * @param {Values} values
 * @param {Position} position
 */
function spotOf(notebook, values, position) {
  if (typeof values.lat_deg === 'number' && typeof values.lon_deg === 'number') {
    return {lat_deg: values.lat_deg, lon_deg: values.lon_deg};
  }
  const fix = freshFix(position);
  if (fix) return fix;
  const site = notebook.sites().find((row) => row.record === values.site);
  if (site?.lat_deg == null || site.lon_deg == null) return null;
  return {lat_deg: site.lat_deg, lon_deg: site.lon_deg};
}

/**
 * The values of the entry: what was answered and what the phone adds.
 * @param {Notebook} notebook
 * @param {Values} values
 * @param {Position} position
 * @param {number} when
 * @returns {Values}
 */
function asObservation(notebook, values, position, when) {
  const survey = notebook.survey();
  const asked = [...askedFields(OBSERVATION, survey?.optional_fields ?? []).map((field) => field.name), ...BY_PHONE];
  /** @type {Values} */
  const set = {};
  for (const field of OBSERVATION.fields) {
    const value = asKept(field, values[field.name]);
    if (asked.includes(field.name) && value !== undefined && value !== null && value !== '') set[field.name] = value;
  }
  const fix = freshFix(position);
  if (set.lat_deg === undefined && fix) Object.assign(set, fixFields(fix));
  set.observed_at = new Date(when).toISOString().replace('.000Z', 'Z');
  if (survey?.reading_step_deg) set.reading_step_deg = survey.reading_step_deg;
  return {...set, ...bearingFrame(spotOf(notebook, values, position), when + notebook.clockOffMs(), values.north)};
}

/**
 * What keeps the sheet from being saved.
 * @param {Notebook} notebook
 * @param {Values} values
 * @param {Taken[]} photos
 * @returns {Problem[]}
 */
function problemsOf(notebook, values, photos) {
  /** @type {Problem[]} */
  const found = [];
  const asked = askedFields(OBSERVATION, notebook.survey()?.optional_fields ?? []);
  for (const field of asked) {
    const text = problemWith(field, values[field.name]);
    if (text) found.push({field: field.name, label: field.label, text});
    if (field.required && !values[field.name]) found.push({field: field.name, label: field.label, text: 'Choose it first.'});
    if (!field.measure || values[field.name] === undefined || reasonAbsent(values[field.name])) continue;
    const unsaid = companionsOf(OBSERVATION, field).find((other) => !values[other.name]);
    if (unsaid) found.push({field: field.name, label: field.label, text: `Choose "${unsaid.label}" too.`});
  }
  const answers = asked.filter((field) => (field.measure || !field.carries) && values[field.name] !== undefined);
  if (!answers.length && !photos.length) found.push({field: '', label: 'Not saved', text: 'Nothing read yet: answer one measure, or write a note.'});
  return found;
}
