/** Averaging successive fixes of a phone that stands still. */

const METRES_PER_DEG = 111195; // on a sphere of mean radius; only differences of metres are taken here
const SECONDS_KEPT = 60;
const FLOOR_M = 1; // a stated accuracy below this is not believed as a weight
const JUMP_FLOOR_M = 10;
const JUMP_ACCURACIES = 2.5;
const DRIFT_FLOOR_M = 5;

/**
 * @typedef {object} Fix one fix as the device gives it
 * @property {number} lat_deg
 * @property {number} lon_deg
 * @property {number} accuracy_m
 * @property {number | null} altitude_m
 * @property {number} at milliseconds
 */

/**
 * @typedef {object} AveragedFix
 * @property {number} lat_deg
 * @property {number} lon_deg
 * @property {number} accuracy_m never better than the median of the fixes: their errors go together
 * @property {number | null} altitude_m
 * @property {number} fixes_n
 * @property {number} fixes_spread_m root mean square distance of the fixes from their mean
 * @property {number} at of the newest fix, milliseconds
 */

/**
 * Mean of the fixes, weighted by 1 / accuracy squared.
 * @param {Fix[]} fixes at least one, oldest first
 * @returns {AveragedFix}
 */
export function average(fixes) {
  const weights = fixes.map((fix) => Math.max(fix.accuracy_m, FLOOR_M) ** -2);
  const total = sum(weights);
  const origin = fixes[0];
  const lat = origin.lat_deg + sum(fixes.map((fix, i) => weights[i] * (fix.lat_deg - origin.lat_deg))) / total;
  const turned = fixes.map((fix) => aroundZero(fix.lon_deg - origin.lon_deg));
  const lon = aroundZero(origin.lon_deg + sum(turned.map((lon, i) => weights[i] * lon)) / total);
  const mean = {lat_deg: lat, lon_deg: lon};
  const high = fixes.filter((fix) => fix.altitude_m !== null);
  return {
    ...mean,
    accuracy_m: median(fixes.map((fix) => fix.accuracy_m)),
    altitude_m: high.length ? sum(high.map((fix) => Number(fix.altitude_m))) / high.length : null,
    fixes_n: fixes.length,
    fixes_spread_m: Math.sqrt(sum(fixes.map((fix) => metresApart(fix, mean) ** 2)) / fixes.length),
    at: fixes[fixes.length - 1].at,
  };
}

/**
 * The fixes that still belong to this stand: of the last minute, and none from before the phone
 * moved. It has moved when the newest lies off the others by more than noise makes likely, or the
 * last three together off the mean of all by more than the accuracy.
 * @param {Fix[]} fixes
 * @param {Fix} next
 * @returns {Fix[]}
 */
export function ofThisStand(fixes, next) {
  const earlier = fixes.filter((fix) => next.at - fix.at <= SECONDS_KEPT * 1000);
  if (!earlier.length) return [next];
  const accuracy = Math.max(next.accuracy_m, median(earlier.map((fix) => fix.accuracy_m)));
  if (metresApart(next, average(earlier)) > Math.max(JUMP_FLOOR_M, JUMP_ACCURACIES * accuracy)) return [next];
  const kept = [...earlier, next];
  const last = kept.slice(-3);
  return metresApart(average(last), average(kept)) > Math.max(DRIFT_FLOOR_M, accuracy) ? last : kept;
}

/**
 * @param {{lat_deg: number, lon_deg: number}} a
 * @param {{lat_deg: number, lon_deg: number}} b
 */
function metresApart(a, b) {
  const north = (a.lat_deg - b.lat_deg) * METRES_PER_DEG;
  const east = aroundZero(a.lon_deg - b.lon_deg) * METRES_PER_DEG * Math.cos((a.lat_deg * Math.PI) / 180);
  return Math.hypot(north, east);
}

/** @param {number} deg */
function aroundZero(deg) {
  return ((((deg + 180) % 360) + 360) % 360) - 180;
}

/** @param {number[]} numbers */
function sum(numbers) {
  return numbers.reduce((total, number) => total + number, 0);
}

/** @param {number[]} numbers */
function median(numbers) {
  const sorted = [...numbers].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
}
