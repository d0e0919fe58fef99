/** The photos of an open notebook: their rows, thumbnails, and which are still to be sent. */

import {photoBytes} from '../store/photos.js';

/** @typedef {import('../store/load.js').PhotoKept} PhotoKept */
/** @typedef {import('../ledger/replica.js').Marks} Marks */

/**
 * @typedef {object} PhotoMarks
 * @property {boolean} isSent base holds the picture itself
 * @property {string} problem why base refused the picture
 * @property {() => Promise<string>} thumbnailUrl a blob: address, for whoever asks to revoke; from base where the phone has no picture
 * @property {() => Promise<string>} fullUrl likewise, the whole picture
 */

/** @typedef {import('../sheet/declared.js').PhotoRow & Marks & PhotoMarks} PhotoShown */

export class PhotoShelf {
  /** @param {Pick<import('./opened.js').Notebook, 'replica' | 'connection' | 'api'>} notebook */
  constructor(notebook) {
    this.notebook = notebook;
    /** @type {Map<string, PhotoKept>} */
    this.bySha256 = new Map();
  }

  clear() {
    this.bySha256.clear();
  }

  /** @param {PhotoKept[]} photos */
  add(photos) {
    for (const photo of photos) this.bySha256.set(photo.sha256, photo);
  }

  /**
   * @param {string} sha256
   * @param {Partial<PhotoKept>} changes
   */
  mark(sha256, changes) {
    const photo = this.bySha256.get(sha256);
    if (photo) this.bySha256.set(sha256, {...photo, ...changes});
  }

  /**
   * Photos that base lacks, smallest first. Not those that base refused, nor bytes whose save
   * never came to an end.
   * @returns {PhotoKept[]}
   */
  toSend() {
    const named = new Set(this.notebook.replica.rows('photo').map((row) => row.sha256));
    return [...this.bySha256.values()]
      .filter((photo) => !photo.isSent && !photo.problem && named.has(photo.sha256))
      .sort((a, b) => a.size - b.size);
  }

  /** Bytes of photos that base holds too. */
  get freeable() {
    return [...this.bySha256.values()].filter((photo) => photo.isSent && !photo.isFreed).reduce((sum, photo) => sum + photo.size, 0);
  }

  /**
   * @param {string} observation
   * @returns {PhotoShown[]}
   */
  of(observation) {
    const rows = /** @type {any[]} */ (this.notebook.replica.rows('photo').filter((row) => row.observation === observation));
    return rows.map((row) => {
      const kept = this.bySha256.get(row.sha256);
      return {
        ...row,
        isSent: kept?.isSent ?? true,
        problem: kept?.problem ?? '',
        thumbnailUrl: async () => urlOf(kept?.thumbnail ?? (await this.notebook.api.photo(row.sha256, true))),
        fullUrl: async () => urlOf(await this.#whole(row.sha256)),
      };
    });
  }

  /** @param {string} sha256 */
  async #whole(sha256) {
    const {connection, api} = this.notebook;
    return (await photoBytes(connection, sha256)) ?? api.photo(sha256);
  }
}

/** @param {ArrayBuffer | Blob} picture */
function urlOf(picture) {
  return URL.createObjectURL(picture instanceof Blob ? picture : new Blob([picture], {type: 'image/jpeg'}));
}
