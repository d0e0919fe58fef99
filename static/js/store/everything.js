/** Reading all that a notebook's database holds, for the file. */

import {whenAll} from './open.js';

/** @typedef {import('./open.js').Connection} Connection */
/** @typedef {import('../ledger/replica.js').KeptEntry} KeptEntry */
/** @typedef {import('./load.js').PhotoKept} PhotoKept */
/** @typedef {{n: number, at: string}} Filed through which own entry a file was saved, and when (UTC) */

/**
 * @param {Connection} connection
 * @returns {Promise<{entries: KeptEntry[], photos: PhotoKept[]}>} entries by device and number
 */
export function everything(connection) {
  return connection.transact(['ledger', 'photos'], 'readonly', (transaction, done) => {
    const requests = ['ledger', 'photos'].map((name) => transaction.objectStore(name).getAll());
    whenAll(requests, ([entries, photos]) => done({entries, photos}));
  });
}

/**
 * @param {Connection} connection
 * @returns {Promise<Filed | null>}
 */
export function filed(connection) {
  return connection.transact(['meta'], 'readonly', (transaction, done) => {
    const found = transaction.objectStore('meta').get('filed');
    found.onsuccess = () => done(found.result ?? null);
  });
}

/**
 * @param {Connection} connection
 * @param {Filed} what
 * @returns {Promise<void>}
 */
export function keepFiled(connection, what) {
  return connection.transact(['meta'], 'readwrite', (transaction) => {
    transaction.objectStore('meta').put(what, 'filed');
  }, {strict: true});
}
