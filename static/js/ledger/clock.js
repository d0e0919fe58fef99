/**
 * A hybrid logical clock: it gives reading order, and decides nothing. Mirror of
 * fieldlog/ledger/clock.py. Stamps are texts that compare as the stamps do.
 */

/** How far beyond its own time a clock lets a received stamp pull it. */
export const LARGEST_LEAD_MS = 10 * 60 * 1000;

const FORM = /^[0-9a-f]{12}\.[0-9a-f]{4}$/;

/**
 * @param {number} millis whole, not negative
 * @param {number} counter 0 to 65535
 * @returns {string}
 */
export function stamp(millis, counter) {
  return `${millis.toString(16).padStart(12, '0')}.${counter.toString(16).padStart(4, '0')}`;
}

/**
 * Milliseconds and counter; RangeError where the text is no stamp.
 * @param {string} text
 * @returns {{millis: number, counter: number}}
 */
export function readStamp(text) {
  if (!FORM.test(text)) throw new RangeError(`not a clock stamp: ${text}`);
  return {millis: parseInt(text.slice(0, 12), 16), counter: parseInt(text.slice(13), 16)};
}

/**
 * The next stamp after `last` ('' for none), at wall time `nowMs`.
 * @param {string} last
 * @param {number} nowMs
 * @returns {string}
 */
export function tick(last, nowMs) {
  if (!last) return stamp(nowMs, 0);
  const {millis, counter} = readStamp(last);
  if (nowMs > millis) return stamp(nowMs, 0);
  return counter < 0xffff ? stamp(millis, counter + 1) : stamp(millis + 1, 0);
}

/**
 * The clock's state after seeing another device's stamp, never more than ten minutes ahead.
 * @param {string} last
 * @param {string} seen
 * @param {number} nowMs
 * @returns {string}
 */
export function receive(last, seen, nowMs) {
  const kept = readStamp(seen).millis > nowMs + LARGEST_LEAD_MS ? stamp(nowMs + LARGEST_LEAD_MS, 0) : seen;
  return kept > last ? kept : last;
}
