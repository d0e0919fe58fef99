/** Open forms, copied at every change, so that a killed browser gives them back. */

/** @typedef {import('./open.js').Connection} Connection */

/**
 * @param {Connection} connection
 */
export function draftsOf(connection) {
  return {
    /**
     * @param {string} key
     * @returns {Promise<any>} undefined where there is none
     */
    get: (key) => connection.transact(['drafts'], 'readonly', (transaction, done) => {
      const found = transaction.objectStore('drafts').get(key);
      found.onsuccess = () => done(found.result);
    }),
    /**
     * @param {string} key
     * @param {unknown} value anything that can be cloned: plain values, ArrayBuffers
     * @returns {Promise<void>}
     */
    put: (key, value) => connection.transact(['drafts'], 'readwrite', (transaction) => {
      transaction.objectStore('drafts').put(value, key);
    }),
    /**
     * @param {string} key
     * @returns {Promise<void>}
     */
    delete: (key) => connection.transact(['drafts'], 'readwrite', (transaction) => {
      transaction.objectStore('drafts').delete(key);
    }),
  };
}
