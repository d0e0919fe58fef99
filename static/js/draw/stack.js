/** Dots that would coincide, stacked inward; the mirror of fieldlog/draw/stack.py. */

/** Share of the rim's radius that stacks may fill, measured from the rim inward. */
export const DEEPEST = 0.5;

/** Distance between the middles of two stacked dots, in radii of a dot. */
export const PITCH = 2.12;

/**
 * Where the dots lie: the level of each angle (0 on the rim), the radius of a dot and the
 * distance from level to level, in the unit of the rim's radius.
 * @typedef {{levels: number[], dot: number, step: number}} Stack
 */

/**
 * `angleDeg` reduced to 0 <= x < period.
 * @param {number} angleDeg
 * @param {number} periodDeg
 * @returns {number}
 */
export function turn(angleDeg, periodDeg) {
  let reduced = angleDeg % periodDeg;
  if (reduced < 0) reduced += periodDeg;
  return reduced >= periodDeg || reduced === 0 ? 0 : reduced;
}

/**
 * Give every angle a level so that no two dots of one level overlap.
 * @param {readonly number[]} anglesDeg
 * @param {number} periodDeg
 * @param {number} rim
 * @param {readonly number[]} dots radii to try, largest first; the last is pressed together where it does not fit
 * @returns {Stack}
 */
export function stack(anglesDeg, periodDeg, rim, dots) {
  const reduced = anglesDeg.map((angle) => turn(angle, periodDeg));
  const room = DEEPEST * rim;
  /** @type {number[]} */
  let levels = [];
  let dot = 0;
  for (dot of dots) {
    const step = PITCH * dot;
    levels = levelsOf(reduced, periodDeg, rim, dot);
    if (Math.max(0, ...levels) * step <= room) return { levels, dot, step };
  }
  return { levels, dot, step: room / Math.max(...levels) };
}

/**
 * Lowest free level of each angle, swept clockwise from the widest gap, which keeps a cluster
 * across north in one piece.
 * @param {number[]} angles
 * @param {number} period
 * @param {number} rim
 * @param {number} dot
 * @returns {number[]}
 */
function levelsOf(angles, period, rim, dot) {
  const order = angles.map((_, i) => i).sort((a, b) => angles[a] - angles[b]);
  const start = afterWidestGap(order.map((i) => angles[i]), period);
  const levels = angles.map(() => 0);
  /** @type {[number, number][]} first and last angle on each level, as swept */
  const ends = [];
  for (const i of [...order.slice(start), ...order.slice(0, start)]) {
    const swept = turn(angles[i] - angles[order[start]], period);
    let level = 0;
    for (; level < ends.length; level += 1) {
      const radius = Math.max(rim - level * PITCH * dot, (1 - DEEPEST) * rim);
      const width = (PITCH * dot / radius) * 180 / Math.PI;
      const [first, last] = ends[level];
      if (swept - last >= width && first + period - swept >= width) break;
    }
    if (level === ends.length) ends.push([swept, swept]);
    else ends[level] = [ends[level][0], swept];
    levels[i] = level;
  }
  return levels;
}

/**
 * @param {number[]} ordered
 * @param {number} period
 */
function afterWidestGap(ordered, period) {
  let start = 0;
  let widest = -1;
  ordered.forEach((angle, i) => {
    const before = i ? ordered[i - 1] : ordered[ordered.length - 1] - period;
    if (angle - before > widest) {
      start = i;
      widest = angle - before;
    }
  });
  return start;
}
