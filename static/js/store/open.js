/**
 * The phone's database: one per joined survey, holding all that must live and die together.
 * Upgrades are numbered and additive; one that has been released is never edited.
 */

import {Problem, storeProblem} from './problem.js';

/** @typedef {import('./deps.js').Deps} Deps */
/** @typedef {(database: IDBDatabase) => void} Upgrade */

/** @type {Upgrade[]} from version 0 to 1, from 1 to 2 ... */
export const NOTEBOOK_UPGRADES = [
  (database) => {
    database.createObjectStore('meta'); // info, token, counter, cursor, offset
    database.createObjectStore('ledger', {keyPath: ['device', 'n']});
    database.createObjectStore('queue', {keyPath: 'n'}); // own entries that base has not answered
    database.createObjectStore('photos', {keyPath: 'sha256'}); // with thumbnail, without the picture
    database.createObjectStore('photo_bytes'); // sha256 -> ArrayBuffer
    database.createObjectStore('drafts');
  },
];

/** Errors after which the handle is dead though the database may live: seen after a page slept. */
const LOST = new Set(['UnknownError', 'InvalidStateError', 'AbortError']);

/**
 * @typedef {(transaction: IDBTransaction, done: (value: any) => void) => void} Work asks its requests in
 * callbacks only, awaiting nothing else: a transaction that is idle commits itself
 */

/** One handle to one database, opened when first needed, opened again when it was lost. */
export class Connection {
  /**
   * @param {IDBFactory} factory
   * @param {string} name
   * @param {Upgrade[]} upgrades
   */
  constructor(factory, name, upgrades) {
    this.factory = factory;
    this.name = name;
    this.upgrades = upgrades;
    /** @type {Promise<IDBDatabase> | null} */
    this.opening = null;
    this.isClosed = false;
  }

  /**
   * Run one transaction; resolves with what `work` gave to `done`, on `complete` and not before;
   * rejects with a Problem on `error` and on `abort`. Work must bear being run twice: where the
   * handle is lost, the database is opened again and the work tried once more.
   * @param {string[]} stores
   * @param {IDBTransactionMode} mode
   * @param {Work} work
   * @param {{strict?: boolean}} [options] strict: written through to the disk before it counts as done
   * @returns {Promise<any>}
   */
  async transact(stores, mode, work, {strict = false} = {}) {
    const durability = strict ? 'strict' : 'relaxed';
    try {
      return await this.#once(stores, mode, work, durability);
    } catch (error) {
      const name = error instanceof DOMException ? error.name : '';
      if (!LOST.has(name) || this.isClosed) throw storeProblem(error);
    }
    await this.#drop();
    try {
      return await this.#once(stores, mode, work, durability);
    } catch (error) {
      throw storeProblem(error);
    }
  }

  /** Close the handle; nothing opens it again. */
  async close() {
    this.isClosed = true;
    await this.#drop();
  }

  async #drop() {
    const opening = this.opening;
    this.opening = null;
    const database = await opening?.catch(() => null);
    database?.close();
  }

  /**
   * @param {string[]} stores
   * @param {IDBTransactionMode} mode
   * @param {Work} work
   * @param {IDBTransactionDurability} durability
   */
  async #once(stores, mode, work, durability) {
    if (this.isClosed) throw new Problem('This notebook has been closed', '', 'Open it again.');
    const database = await this.#database();
    return new Promise((resolve, reject) => {
      const transaction = database.transaction(stores, mode, {durability});
      /** @type {unknown} */
      let result;
      /** @type {unknown} */
      let cause = null;
      transaction.oncomplete = () => resolve(result);
      transaction.onerror = (event) => {
        cause ??= /** @type {IDBRequest} */ (event.target).error;
      };
      transaction.onabort = () => reject(transaction.error ?? cause ?? new DOMException('the transaction was aborted', 'AbortError'));
      work(transaction, (value) => {
        result = value;
      });
    });
  }

  #database() {
    this.opening ??= openDatabase(this.factory, this.name, this.upgrades, () => {
      this.opening = null;
    }).catch((error) => {
      this.opening = null;
      throw error;
    });
    return this.opening;
  }
}

/**
 * Open a database and bring it up to date. Rejects instead of hanging where another page blocks it.
 * @param {IDBFactory} factory
 * @param {string} name
 * @param {Upgrade[]} upgrades
 * @param {() => void} onLost called once the handle must not be used any more
 * @returns {Promise<IDBDatabase>}
 */
export function openDatabase(factory, name, upgrades, onLost) {
  return new Promise((resolve, reject) => {
    const request = factory.open(name, upgrades.length);
    let isBlocked = false;
    request.onupgradeneeded = (event) => {
      for (const upgrade of upgrades.slice(event.oldVersion)) upgrade(request.result);
    };
    request.onblocked = () => {
      isBlocked = true;
      reject(new Problem('Another page holds an older notebook open', '', 'Close all other Ergbook pages, then reload this one.'));
    };
    request.onerror = () => reject(request.error);
    request.onsuccess = () => {
      const database = request.result;
      // Opened after all, but nobody waits any longer: a forgotten handle would block the next upgrade.
      if (isBlocked) return database.close();
      database.onversionchange = () => {
        database.close();
        onLost();
      };
      database.onclose = onLost;
      resolve(database);
    };
  });
}

/**
 * Run `work` with the results of several requests once all have succeeded.
 * @param {IDBRequest[]} requests
 * @param {(results: any[]) => void} work
 */
export function whenAll(requests, work) {
  let left = requests.length;
  if (!left) work([]);
  for (const request of requests) {
    request.addEventListener('success', () => {
      left -= 1;
      if (!left) work(requests.map((each) => each.result));
    });
  }
}

/**
 * The connection to the notebook of one survey.
 * @param {Deps} deps
 * @param {string} survey
 * @returns {Connection}
 */
export function notebookConnection(deps, survey) {
  return new Connection(deps.indexedDB, `ergbook-${survey}`, NOTEBOOK_UPGRADES);
}
