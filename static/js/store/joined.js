/**
 * The surveys that this phone has joined. A small index beside the notebooks, for browsers that
 * do not list their databases; where they do, a notebook missing in the index is found all the same.
 */

import {Connection, notebookConnection} from './open.js';
import {load} from './load.js';
import {Problem, storeProblem} from './problem.js';

/** @typedef {import('./deps.js').Deps} Deps */
/** @typedef {{survey: string, name: string}} Joined */

/** @type {import('./open.js').Upgrade[]} */
const INDEX_UPGRADES = [
  (database) => {
    database.createObjectStore('surveys', {keyPath: 'survey'});
  },
];

const NOTEBOOK = /^ergbook-([0-9a-hjkmnp-tv-z]{10})$/;

/**
 * @param {Deps} deps
 * @param {Joined} joined
 * @returns {Promise<void>}
 */
export function noteJoined(deps, joined) {
  return withIndex(deps, (index) => index.transact(['surveys'], 'readwrite', (transaction) => {
    transaction.objectStore('surveys').put(joined);
  }, {strict: true}));
}

/**
 * @param {Deps} deps
 * @returns {Promise<Joined[]>} by name
 */
export async function listJoined(deps) {
  /** @type {Joined[]} */
  const noted = await withIndex(deps, (index) => index.transact(['surveys'], 'readonly', (transaction, done) => {
    const all = transaction.objectStore('surveys').getAll();
    all.onsuccess = () => done(all.result);
  }));
  const names = (await deps.indexedDB.databases?.())?.map((each) => NOTEBOOK.exec(each.name ?? '')?.[1]);
  const there = names && new Set(names);
  const found = there ? noted.filter(({survey}) => there.has(survey)) : noted;
  for (const survey of there ?? []) {
    if (!survey || found.some((each) => each.survey === survey)) continue;
    const connection = notebookConnection(deps, survey);
    const kept = await load(connection).finally(() => connection.close());
    if (kept?.info.isJoined) found.push({survey, name: kept.info.name});
  }
  return found.sort((a, b) => (a.name < b.name ? -1 : 1));
}

/**
 * Delete a survey's notebook for good.
 * @param {Deps} deps
 * @param {string} survey
 * @returns {Promise<void>} rejects with a Problem where another page holds it open
 */
export async function forgetNotebook(deps, survey) {
  await new Promise((/** @type {(value: void) => void} */ resolve, reject) => {
    const request = deps.indexedDB.deleteDatabase(`ergbook-${survey}`);
    request.onsuccess = () => resolve();
    request.onerror = () => reject(storeProblem(request.error));
    request.onblocked = () => reject(new Problem('This survey is open in another page of this phone', '', 'Close the other page, then leave again.'));
  });
  await withIndex(deps, (index) => index.transact(['surveys'], 'readwrite', (transaction) => {
    transaction.objectStore('surveys').delete(survey);
  }, {strict: true}));
}

/**
 * @template T
 * @param {Deps} deps
 * @param {(index: Connection) => Promise<T>} work
 * @returns {Promise<T>}
 */
async function withIndex(deps, work) {
  const index = new Connection(deps.indexedDB, 'ergbook-index', INDEX_UPGRADES);
  try {
    return await work(index);
  } finally {
    await index.close();
  }
}
