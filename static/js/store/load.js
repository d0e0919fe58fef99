/** Everything of a notebook that is held in memory while it is open. */

import {Problem} from './problem.js';
import {whenAll} from './open.js';

/** @typedef {import('./open.js').Connection} Connection */
/** @typedef {import('../ledger/replica.js').KeptEntry} KeptEntry */

/**
 * @typedef {object} Info who this notebook is
 * @property {string} survey id
 * @property {string} name of the survey
 * @property {string} crew record of whoever carries the phone
 * @property {string} device
 * @property {string} store id of the store that it joined
 * @property {string} epoch of the store, as last seen
 * @property {string} token
 * @property {boolean} isJoined the whole survey has been received
 * @property {string} stopped why hand-over must not go on until the phone joins again; '' for nothing
 */

/** @typedef {{device: string, n: number, hlc: string}} Counter the last entry's number, and the clock */
/** @typedef {{n: number, madeAt: number}} Waiting an own entry that base has not answered */

/**
 * @typedef {object} PhotoKept
 * @property {string} sha256
 * @property {number} size bytes
 * @property {ArrayBuffer} thumbnail
 * @property {boolean} isSent base has confirmed its hash
 * @property {string} problem why base refused it
 * @property {boolean} [isFreed] base holds it, the phone only its thumbnail
 */

/**
 * @typedef {object} Kept
 * @property {Info} info
 * @property {Counter} counter
 * @property {number} cursor the last seq received without a gap
 * @property {number | null} offsetMs store time minus phone time, as last learnt
 * @property {string | null} lastAt UTC, when a hand-over last ended with nothing left
 * @property {KeptEntry[]} entries
 * @property {Waiting[]} queue
 * @property {PhotoKept[]} photos
 */

/**
 * @param {Connection} connection
 * @returns {Promise<Kept | null>} null where nobody ever joined with this database
 */
export function load(connection) {
  return connection.transact(['meta', 'ledger', 'queue', 'photos'], 'readonly', (transaction, done) => {
    const meta = transaction.objectStore('meta');
    const requests = [
      ...['info', 'counter', 'cursor', 'offset', 'lastAt'].map((key) => meta.get(key)),
      ...['ledger', 'queue', 'photos'].map((name) => transaction.objectStore(name).getAll()),
    ];
    whenAll(requests, ([info, counter, cursor, offsetMs, lastAt, entries, queue, photos]) => {
      const learnt = {cursor: cursor ?? 0, offsetMs: offsetMs ?? null, lastAt: lastAt ?? null};
      done(info ? {info, counter, ...learnt, entries, queue, photos} : null);
    });
  });
}

/**
 * Keep who this notebook is: the joining transaction. An earlier joining's entries, counter and
 * cursor stay.
 * @param {Connection} connection
 * @param {Info} info
 * @returns {Promise<void>}
 */
export function keepInfo(connection, info) {
  return connection.transact(['meta'], 'readwrite', (transaction) => {
    const meta = transaction.objectStore('meta');
    meta.put(info, 'info');
    const counter = meta.get('counter');
    counter.onsuccess = () => {
      if (!counter.result) meta.put({device: info.device, n: 0, hlc: ''}, 'counter');
    };
  }, {strict: true});
}

/**
 * Change parts of what is known of this notebook.
 * @param {Connection} connection
 * @param {Partial<Info>} changes
 * @returns {Promise<Info>}
 */
export function changeInfo(connection, changes) {
  return connection.transact(['meta'], 'readwrite', (transaction, done) => {
    const meta = transaction.objectStore('meta');
    const info = meta.get('info');
    info.onsuccess = () => {
      const changed = {...info.result, ...changes};
      meta.put(changed, 'info');
      done(changed);
    };
  }, {strict: true});
}

/**
 * What hand-over learnt by the way.
 * @param {Connection} connection
 * @param {'offset' | 'lastAt'} key
 * @param {number | string} value
 * @returns {Promise<void>}
 */
export function keepLearnt(connection, key, value) {
  return connection.transact(['meta'], 'readwrite', (transaction) => {
    transaction.objectStore('meta').put(value, key);
  });
}

/**
 * What is kept, or a Problem where the phone has not joined.
 * @param {Connection} connection
 * @returns {Promise<Kept>}
 */
export async function loadJoined(connection) {
  const kept = await load(connection);
  if (kept?.info.isJoined) return kept;
  throw new Problem('This phone has not joined that survey', '', 'Join with a code from the lead.');
}
