/** Photos on the phone: named by the SHA-256 of their bytes, as ArrayBuffers, never as files. */

import {hashOf} from '../ledger/entry.js';
import {Problem} from './problem.js';

/** @typedef {import('./open.js').Connection} Connection */
/** @typedef {import('./deps.js').Deps} Deps */
/** @typedef {import('./load.js').PhotoKept} PhotoKept */

/**
 * Keep a photo's bytes, durably, and read them back: some browsers have stored pictures broken.
 * This goes before the save of the entry that names it, so that "saved" holds for both.
 * @param {Connection} connection
 * @param {Deps} deps
 * @param {ArrayBuffer} bytes
 * @param {ArrayBuffer} thumbnail
 * @returns {Promise<PhotoKept>}
 */
export async function keepPhoto(connection, deps, bytes, thumbnail) {
  const sha256 = await hashOf(deps.crypto.subtle, bytes);
  /** @type {PhotoKept} */
  const photo = await connection.transact(['photos', 'photo_bytes'], 'readwrite', (transaction, done) => {
    const photos = transaction.objectStore('photos');
    const known = photos.get(sha256);
    known.onsuccess = () => {
      const row = {...(known.result ?? {sha256, size: bytes.byteLength, thumbnail, isSent: false, problem: ''}), isFreed: false};
      photos.put(row);
      transaction.objectStore('photo_bytes').put(bytes, sha256);
      done(row);
    };
  }, {strict: true});
  const back = await photoBytes(connection, sha256);
  if (back && (await hashOf(deps.crypto.subtle, back)) === sha256) return photo;
  throw new Problem('Not saved: the photo came back damaged from the phone\'s store', '', 'Take the photo again.');
}

/**
 * @param {Connection} connection
 * @param {string} sha256
 * @returns {Promise<ArrayBuffer | undefined>}
 */
export function photoBytes(connection, sha256) {
  return connection.transact(['photo_bytes'], 'readonly', (transaction, done) => {
    const found = transaction.objectStore('photo_bytes').get(sha256);
    found.onsuccess = () => done(found.result);
  });
}

/**
 * Take the full size of photos off the phone that base has confirmed; their thumbnails stay.
 * @param {Connection} connection
 * @returns {Promise<PhotoKept[]>} those that were freed
 */
export function freePhotos(connection) {
  return connection.transact(['photos', 'photo_bytes'], 'readwrite', (transaction, done) => {
    const photos = transaction.objectStore('photos');
    const all = photos.getAll();
    all.onsuccess = () => {
      const freed = all.result.filter((photo) => photo.isSent && !photo.isFreed).map((photo) => ({...photo, isFreed: true}));
      for (const photo of freed) {
        photos.put(photo);
        transaction.objectStore('photo_bytes').delete(photo.sha256);
      }
      done(freed);
    };
  }, {strict: true});
}

/**
 * Keep what base said about a photo. The picture stays on the phone.
 * @param {Connection} connection
 * @param {string} sha256
 * @param {Partial<PhotoKept>} changes
 * @returns {Promise<void>}
 */
export function markPhoto(connection, sha256, changes) {
  return connection.transact(['photos'], 'readwrite', (transaction) => {
    const photos = transaction.objectStore('photos');
    const found = photos.get(sha256);
    found.onsuccess = () => {
      if (found.result) photos.put({...found.result, ...changes});
    };
  });
}
