/** Photos to base: after the entries that name them, smallest first, one at a time. */

import {markPhoto, photoBytes} from '../store/photos.js';
import {problemIn} from './api.js';
import {NoConnection} from './failures.js';

/** @typedef {import('./runner.js').Desk} Desk */

const FIRST_MS = 60_000;
const SLOWEST_BYTES_PER_S = 1000;

/**
 * Send what base does not hold yet.
 * @param {Desk} desk
 * @returns {Promise<void>}
 */
export async function sendPhotos(desk) {
  for (const {sha256, size} of desk.photosToSend()) {
    const problem = (await desk.api.hasPhoto(sha256)) ? '' : await put(desk, sha256, size);
    const changes = {isSent: !problem, problem};
    await markPhoto(desk.connection, sha256, changes);
    desk.photoMarked(sha256, changes);
  }
}

/**
 * @param {Desk} desk
 * @param {string} sha256
 * @param {number} size
 * @returns {Promise<string>} why base refuses it, '' where it is kept
 */
async function put(desk, sha256, size) {
  const bytes = await photoBytes(desk.connection, sha256);
  if (!bytes) return 'The picture is no longer on this phone.';
  const timeoutMs = FIRST_MS + (size / SLOWEST_BYTES_PER_S) * 1000;
  const answer = await desk.api.ask('PUT', `photos/${sha256}`, {bytes, timeoutMs});
  if (answer.status < 400) {
    if (answer.body.sha256 !== sha256) throw new NoConnection('the answer speaks of another photo');
    return '';
  }
  const {message, mend} = problemIn(answer);
  return [message, mend].filter(Boolean).join('. ');
}
