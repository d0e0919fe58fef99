/** What base says, kept: answers to own entries, changes with their cursor, a new epoch. */

import {receive} from '../ledger/clock.js';
import {entryName} from '../ledger/names.js';
import {whenAll} from './open.js';

/** @typedef {import('./open.js').Connection} Connection */
/** @typedef {import('./load.js').Kept} Kept */
/** @typedef {import('../ledger/replica.js').KeptEntry} KeptEntry */
/** @typedef {{n: number, status: 'stored' | 'already' | 'set_aside' | 'forked', seq?: number, problem?: string}} Result */
/** @typedef {{seq: number, device: string, n: number, text?: string}} Change */

/**
 * Keep base's answers. What it stored or set aside leaves the queue; set aside, an entry stays in
 * the ledger with what is wrong. Nothing is deleted from the ledger, ever.
 * @param {Connection} connection
 * @param {string} device
 * @param {Result[]} results forked ones are left out by the caller
 * @returns {Promise<KeptEntry[]>} the entries as they stand now
 */
export function keepAnswers(connection, device, results) {
  return connection.transact(['ledger', 'queue'], 'readwrite', (transaction, done) => {
    const ledger = transaction.objectStore('ledger');
    whenAll(results.map(({n}) => ledger.get([device, n])), (rows) => {
      const answered = rows.map((row, index) => {
        const {status, seq, problem} = results[index];
        const isAside = status === 'set_aside';
        return {...row, seq: isAside ? null : (seq ?? row.seq), problem: isAside ? problem || 'set aside' : null};
      });
      for (const row of answered) {
        ledger.put(row);
        transaction.objectStore('queue').delete(row.n);
      }
      done(answered);
    });
  });
}

/**
 * Keep a page of changes and the cursor after it, both or neither.
 * @param {Connection} connection
 * @param {Kept} kept
 * @param {object} page
 * @param {number} page.after the cursor that it was asked for with
 * @param {number} page.storeTimeMs
 * @param {(Change & {sha256: string})[]} page.changes
 * @returns {Promise<{entries: KeptEntry[], cursor: number, counter: import('./load.js').Counter, foreign: string, changed: string}>}
 * `foreign`: an own entry that base holds and this phone never wrote; `changed`: one of another device whose text is
 * not the one kept here. With either, nothing of the page is kept
 */
export function keepChanges(connection, kept, {after, storeTimeMs, changes}) {
  const {device} = kept.info;
  return connection.transact(['meta', 'ledger'], 'readwrite', (transaction, done) => {
    const meta = transaction.objectStore('meta');
    const ledger = transaction.objectStore('ledger');
    const asked = [meta.get('cursor'), meta.get('counter'), ...changes.map((each) => ledger.get([each.device, each.n]))];
    whenAll(asked, ([cursor, counter, ...rows]) => {
      // Another page has been here meanwhile: its answer counts.
      if ((cursor ?? 0) !== after) return done({entries: [], cursor, counter, foreign: '', changed: ''});
      const unknown = changes.find((each, index) => !rows[index] && each.text === undefined);
      const other = changes.find((each, index) => rows[index] && each.text !== undefined && rows[index].sha256 !== each.sha256);
      if (unknown || other) {
        /** @param {Change | undefined} change */
        const nameOf = (change) => (change ? entryName(change.device, change.n) : '');
        return done({entries: [], cursor: after, counter, foreign: nameOf(unknown), changed: nameOf(other)});
      }
      const entries = changes.flatMap((each, index) => {
        const {device: of, n, seq, sha256} = each;
        if (!rows[index]) return [{device: of, n, text: each.text ?? '', sha256, seq, problem: null}];
        // An own entry comes without its text. One that still waits stays in the queue: only the
        // answer to its own text says that base holds that text, and not a copied phone's.
        return of === device && rows[index].seq === null ? [] : [{...rows[index], seq, problem: null}];
      });
      let {hlc} = counter;
      for (const entry of entries) {
        ledger.put(entry);
        if (entry.device !== device) hlc = advance(hlc, entry.text, storeTimeMs);
      }
      const through = after + changes.length;
      meta.put(through, 'cursor');
      meta.put({...counter, hlc}, 'counter');
      done({entries, cursor: through, counter: {...counter, hlc}, foreign: '', changed: ''});
    });
  });
}

/**
 * @param {string} hlc
 * @param {string} text
 * @param {number} storeTimeMs
 */
function advance(hlc, text, storeTimeMs) {
  try {
    return receive(hlc, JSON.parse(text).hlc, storeTimeMs);
  } catch {
    return hlc; // a newer protocol's stamp: kept as it is, and no reason to stop
  }
}

/**
 * The store has gone back in time: the cursor falls to 0, and every own entry is offered again.
 * @param {Connection} connection
 * @param {string} epoch
 * @returns {Promise<void>}
 */
export function beginEpoch(connection, epoch) {
  return connection.transact(['meta', 'ledger', 'queue', 'photos'], 'readwrite', (transaction) => {
    const meta = transaction.objectStore('meta');
    const ledger = transaction.objectStore('ledger');
    whenAll([meta.get('info'), ledger.getAll(), transaction.objectStore('photos').getAll()], ([info, rows, photos]) => {
      meta.put({...info, epoch}, 'info');
      meta.put(0, 'cursor');
      for (const row of rows) ledger.put({...row, seq: null, problem: null});
      for (const photo of photos) transaction.objectStore('photos').put({...photo, isSent: false, problem: ''});
      offerAgain(transaction, rows.filter((/** @type {KeptEntry} */ row) => row.device === info.device));
    });
  }, {strict: true});
}

/**
 * Base lacks own entries that it had acknowledged: offer them again.
 * @param {Connection} connection
 * @param {string} device
 * @param {number} from the first n that is missing
 * @returns {Promise<void>}
 */
export function requeueFrom(connection, device, from) {
  return connection.transact(['ledger', 'queue'], 'readwrite', (transaction) => {
    const own = transaction.objectStore('ledger').getAll(IDBKeyRange.bound([device, from], [device, Infinity]));
    own.onsuccess = () => offerAgain(transaction, own.result);
  });
}

/**
 * @param {IDBTransaction} transaction
 * @param {KeptEntry[]} rows
 */
function offerAgain(transaction, rows) {
  const queue = transaction.objectStore('queue');
  for (const {n, text} of rows) queue.put({n, madeAt: Date.parse(JSON.parse(text).made_at)});
}

/**
 * The next own entries to send: consecutive, and no more than one batch may hold.
 * @param {Connection} connection
 * @param {string} device
 * @param {{entries: number, bytes: number}} limits
 * @returns {Promise<KeptEntry[]>}
 */
export function nextBatch(connection, device, limits) {
  return connection.transact(['ledger', 'queue'], 'readonly', (transaction, done) => {
    const waiting = transaction.objectStore('queue').getAll(null, limits.entries);
    waiting.onsuccess = () => {
      const first = waiting.result[0]?.n ?? 0;
      const run = waiting.result.filter((row, index) => row.n === first + index);
      const ledger = transaction.objectStore('ledger');
      whenAll(run.map(({n}) => ledger.get([device, n])), (rows) => done(withinBytes(rows, limits.bytes)));
    };
  });
}

/**
 * @param {KeptEntry[]} rows
 * @param {number} bytes
 */
function withinBytes(rows, bytes) {
  let left = bytes;
  // The first always goes: an entry larger than a batch would otherwise hold up the rest for ever.
  return rows.filter((row, index) => {
    left -= new TextEncoder().encode(row.text).length;
    return index === 0 || left >= 0;
  });
}
