/**
 * Saving: numbers are taken, texts kept, the queue filled and the draft deleted in one strict
 * transaction. "Saved" is said on its `complete`.
 */

import {tick} from '../ledger/clock.js';
import {hashOf, writeText} from '../ledger/entry.js';
import {entryName} from '../ledger/names.js';
import {whenAll} from './open.js';
import {Problem} from './problem.js';

/** @typedef {import('./open.js').Connection} Connection */
/** @typedef {import('./deps.js').Deps} Deps */
/** @typedef {import('./load.js').Kept} Kept */
/** @typedef {import('./load.js').Counter} Counter */
/** @typedef {import('../ledger/edit.js').Said} Said */
/** @typedef {import('../ledger/replica.js').KeptEntry} KeptEntry */

const TRIES = 50;

/**
 * Save what is said, in order; resolves with the entries once they are durable.
 *
 * Hashing waits, and a transaction must not: so the texts are written for the numbers that should
 * come next, and the transaction takes these only if they still do. Where another page was faster
 * nothing is written, and the texts are made anew.
 * @param {Connection} connection
 * @param {Deps} deps
 * @param {Kept} kept its counter moves on
 * @param {Said[]} said
 * @param {{draft?: string}} [options] key of the draft that this save makes good
 * @returns {Promise<KeptEntry[]>}
 */
export async function saveEntries(connection, deps, kept, said, {draft} = {}) {
  const madeAtMs = Math.floor(deps.now());
  for (let tries = 0; tries < TRIES; tries += 1) {
    const before = kept.counter;
    const {entries, counter} = await write(deps, kept, said, madeAtMs);
    /** @type {Counter} */
    const now = await connection.transact(['meta', 'ledger', 'queue', 'drafts'], 'readwrite', (transaction, done) => {
      const meta = transaction.objectStore('meta');
      const ledger = transaction.objectStore('ledger');
      whenAll([meta.get('counter'), ledger.get([before.device, before.n + 1])], ([current, next]) => {
        const isNext = current.device === before.device && current.n === before.n && current.hlc === before.hlc;
        // The same text under the same number: an earlier try was committed, only its answer was lost.
        const isThere = !isNext && entries.length > 0 && next?.sha256 === entries[0].sha256;
        done(isNext || isThere ? counter : current);
        if (isNext) {
          for (const entry of entries) {
            ledger.add(entry);
            transaction.objectStore('queue').add({n: entry.n, madeAt: madeAtMs});
          }
          meta.put(counter, 'counter');
        }
        if ((isNext || isThere) && draft) transaction.objectStore('drafts').delete(draft);
      });
    }, {strict: true});
    kept.counter = now;
    if (now === counter) {
      kept.queue.push(...entries.map(({n}) => ({n, madeAt: madeAtMs})));
      return entries;
    }
  }
  throw new Problem('Not saved: another page keeps saving', '', 'Close the other Ergbook pages, then save again.');
}

/**
 * The texts of the next entries, and the counter after them.
 * @param {Deps} deps
 * @param {Kept} kept
 * @param {Said[]} said
 * @param {number} madeAtMs
 * @returns {Promise<{entries: KeptEntry[], counter: Counter}>}
 */
async function write(deps, kept, said, madeAtMs) {
  const {info, counter, offsetMs} = kept;
  let {hlc} = counter;
  const entries = [];
  for (const [index, one] of said.entries()) {
    const set = {...one.set};
    for (const [field, target] of Object.entries(one.refers ?? {})) {
      set[field] = said[target].record ?? entryName(counter.device, counter.n + 1 + target);
    }
    hlc = tick(hlc, madeAtMs);
    const text = writeText({...one, set, app: deps.app, by: info.crew, survey: info.survey, hlc, madeAtMs, offsetMs});
    const n = counter.n + 1 + index;
    entries.push({device: counter.device, n, text, sha256: await hashOf(deps.crypto.subtle, text), seq: null, problem: null});
  }
  return {entries, counter: {device: counter.device, n: counter.n + said.length, hlc}};
}
