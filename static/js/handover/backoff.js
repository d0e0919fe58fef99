/** How long to wait before trying again. Pure. */

const FIRST_MS = 2_000;
const LONGEST_MS = 300_000;

/**
 * Full jitter: anything up to 2 s, 4 s, 8 s ... 5 min, so that phones that lost the store together
 * do not come back together.
 * @param {number} failures in a row, 1 or more
 * @param {() => number} random 0 to below 1
 * @returns {number} milliseconds, at least a tenth of a second
 */
export function waitMillis(failures, random) {
  return Math.max(100, Math.round(random() * longestWaitMillis(failures)));
}

/**
 * @param {number} failures
 * @returns {number} milliseconds
 */
export function longestWaitMillis(failures) {
  return Math.min(LONGEST_MS, FIRST_MS * 2 ** Math.min(failures - 1, 30));
}
