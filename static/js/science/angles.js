/** Angles at the door: checked, reduced to one turn. The mirror of fieldlog/science/angles.py. */

/** @typedef {ArrayLike<number>} Angles degrees, or radians where the name says theta */

/** A sample that no statistic can be computed from. */
export class SampleError extends RangeError {}

/**
 * @param {Iterable<unknown>} anglesDeg
 * @returns {Float64Array} finite numbers
 * @throws {SampleError} naming the first that is not
 */
export function checked(anglesDeg) {
  const values = Array.from(anglesDeg);
  values.forEach((value, i) => {
    if (typeof value !== 'number' || !Number.isFinite(value)) {
      throw new SampleError(`reading ${i + 1}: ${String(value)} is not a finite number. Give degrees as numbers.`);
    }
  });
  return Float64Array.from(/** @type {number[]} */ (values));
}

/**
 * One angle brought to 0 <= x < period.
 * @param {number} angleDeg
 * @param {number} [periodDeg]
 */
export function reducedOne(angleDeg, periodDeg = 360) {
  let turned = angleDeg % periodDeg;
  if (turned < 0) turned += periodDeg;
  return turned >= periodDeg ? 0 : turned + 0;
}

/**
 * @param {Angles} anglesDeg
 * @param {number} [periodDeg]
 */
export function reduced(anglesDeg, periodDeg = 360) {
  return Float64Array.from(anglesDeg, (angle) => reducedOne(angle, periodDeg));
}

/**
 * The unsigned angle between two directions (or, with period 180, two axes).
 * @param {number} aDeg
 * @param {number} bDeg
 * @param {number} [periodDeg]
 */
export function apart(aDeg, bDeg, periodDeg = 360) {
  const difference = Math.abs(reducedOne(aDeg - bDeg, periodDeg));
  return Math.min(difference, periodDeg - difference);
}

/** @param {number} angleDeg */
export function radians(angleDeg) {
  return (angleDeg * Math.PI) / 180;
}

/** @param {number} angle */
export function degrees(angle) {
  return (angle * 180) / Math.PI;
}

/** @param {Angles} values */
export function sum(values) {
  let total = 0;
  for (let i = 0; i < values.length; i += 1) total += values[i];
  return total;
}
