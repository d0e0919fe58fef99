/** Photos to base: after the entries that name them, smallest first, one at a time. */

import {markPhoto, photoBytes} from '../store/photos.js';
import {problemIn} from './api.js';
import {NoConnection} from './failures.js';

/** @typedef {import('./runner.js').Desk} Desk */

const PART = {first: 256 * 1024, least: 32 * 1024, most: 1024 * 1024}; // bytes
const PART_MS = 10_000; // how long a part may take before the next is smaller
const TIMEOUT_MS = 60_000;

/** How much of a photo goes into one request: by what passed in ten seconds. */
export class PartSize {
  constructor() {
    this.bytes = PART.first;
  }

  /** @param {number} millis that a part took */
  took(millis) {
    if (millis > PART_MS) this.shrink();
    else if (millis < PART_MS / 4) this.bytes = Math.min(PART.most, this.bytes * 2);
  }

  shrink() {
    this.bytes = Math.max(PART.least, Math.floor(this.bytes / 2));
  }
}

/**
 * Send what base does not hold yet, each from where it was broken off.
 * @param {Desk} desk
 * @param {PartSize} size kept from one hand-over to the next
 * @returns {Promise<void>}
 */
export async function sendPhotos(desk, size) {
  for (const {sha256} of desk.photosToSend()) {
    const there = await desk.api.photoAt(sha256);
    const problem = there.isComplete ? '' : await sendParts(desk, size, sha256, there.offset);
    const changes = {isSent: !problem, problem};
    await markPhoto(desk.connection, sha256, changes);
    desk.photoMarked(sha256, changes);
  }
}

/**
 * @param {Desk} desk
 * @param {PartSize} size
 * @param {string} sha256
 * @param {number} offset bytes that base holds already
 * @returns {Promise<string>} why base refuses it, '' where it is kept
 */
async function sendParts(desk, size, sha256, offset) {
  const bytes = await photoBytes(desk.connection, sha256);
  if (!bytes) return 'The picture is no longer on this phone.';
  let at = Math.min(offset, bytes.byteLength);
  for (let corrected = 0; ; ) {
    const part = bytes.slice(at, at + size.bytes);
    const answer = await sendPart(desk, size, sha256, {part, at, whole: bytes.byteLength});
    if (answer.status === 409 && Number.isInteger(answer.body.offset) && corrected < 3) {
      at = Math.min(answer.body.offset, bytes.byteLength);
      corrected += 1;
      continue;
    }
    if (answer.status === 422 && offset > 0) {
      // What lay at base from before may have been spoilt: it is gone now, so once more from the start.
      [at, offset] = [0, 0];
      continue;
    }
    if (answer.status >= 400) {
      const {message, mend} = problemIn(answer);
      return [message, mend].filter(Boolean).join('. ');
    }
    if (answer.body.sha256 !== sha256) throw new NoConnection('the answer speaks of another photo');
    if (answer.body.complete === true) return '';
    if (!(answer.body.offset > at)) throw new NoConnection('the photo does not get on');
    at = answer.body.offset;
  }
}

/**
 * @param {Desk} desk
 * @param {PartSize} size
 * @param {string} sha256
 * @param {{part: ArrayBuffer, at: number, whole: number}} what
 */
async function sendPart(desk, size, sha256, {part, at, whole}) {
  const headers = {'Upload-Offset': String(at), 'Upload-Length': String(whole)};
  try {
    const answer = await desk.api.ask('PATCH', `photos/${sha256}`, {bytes: part, headers, timeoutMs: TIMEOUT_MS});
    size.took(answer.gotAtMs - answer.sentAtMs);
    return answer;
  } catch (error) {
    if (error instanceof NoConnection) size.shrink();
    throw error;
  }
}
