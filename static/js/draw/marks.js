/**
 * The few forms that a rose is made of, in the plane of the page: x to the right, y down, bearings
 * clockwise from the top. The mirror of fieldlog/draw/marks.py.
 */

/** @typedef {[string, ...number[]]} Command ["M", x, y], ["L", x, y], ["A", rx, ry, 0, large, sweep, x, y], ["Z"] */
/** @typedef {[number, number]} Point */
/** @typedef {{kind: 'circle', role: string, cx: number, cy: number, r: number}} Circle */
/** @typedef {{kind: 'line', role: string, x1: number, y1: number, x2: number, y2: number}} Line */
/** @typedef {{kind: 'text', role: string, x: number, y: number, size: number, text: string}} Lettering */
/** @typedef {{kind: 'path', role: string, commands: Command[]}} Path */
/** One mark: `role` is its class. @typedef {Circle | Line | Lettering | Path} Shape */

/** Half-widths and length of the arrow, in radii of the rim. */
const SHAFT = 0.017;
const HEAD = 0.075;
const HEAD_LENGTH = 0.14;

/**
 * The point at `radius` along a bearing and `aside` to the right of it.
 * @param {number} middle
 * @param {number} bearingDeg
 * @param {number} radius
 * @param {number} [aside]
 * @returns {Point}
 */
export function at(middle, bearingDeg, radius, aside = 0) {
  const angle = (bearingDeg * Math.PI) / 180;
  const sine = Math.sin(angle);
  const cosine = Math.cos(angle);
  return [middle + radius * sine + aside * cosine, middle - radius * cosine + aside * sine];
}

/**
 * @param {string} role
 * @param {Point} centre
 * @param {number} radius
 * @returns {Circle}
 */
export function circle(role, centre, radius) {
  return { kind: 'circle', role, cx: centre[0], cy: centre[1], r: radius };
}

/**
 * @param {string} role
 * @param {number} middle
 * @param {number} bearingDeg
 * @param {number} inner
 * @param {number} outer
 * @returns {Line}
 */
export function spoke(role, middle, bearingDeg, inner, outer) {
  const [x1, y1] = at(middle, bearingDeg, inner);
  const [x2, y2] = at(middle, bearingDeg, outer);
  return { kind: 'line', role, x1, y1, x2, y2 };
}

/**
 * @param {string} role
 * @param {Point} point
 * @param {number} size
 * @param {string} text
 * @returns {Lettering}
 */
export function lettering(role, point, size, text) {
  return { kind: 'text', role, x: point[0], y: point[1], size, text };
}

/**
 * @param {string} role
 * @param {Point[]} points
 * @returns {Path}
 */
export function polygon(role, points) {
  /** @type {Command[]} */
  const commands = points.map(([x, y], i) => [i ? 'L' : 'M', x, y]);
  return { kind: 'path', role, commands: [...commands, ['Z']] };
}

/**
 * A sector around a bearing.
 * @param {string} role
 * @param {number} middle
 * @param {number} bearingDeg
 * @param {number} halfWidthDeg
 * @param {number} radius
 * @returns {Path}
 */
export function petal(role, middle, bearingDeg, halfWidthDeg, radius) {
  const start = at(middle, bearingDeg - halfWidthDeg, radius);
  const end = at(middle, bearingDeg + halfWidthDeg, radius);
  return {
    kind: 'path',
    role,
    commands: [['M', middle, middle], ['L', ...start], ['A', radius, radius, 0, 0, 1, ...end], ['Z']],
  };
}

/**
 * An arc clockwise from `lowDeg`, a short cap across each end.
 * @param {string} role
 * @param {number} middle
 * @param {number} lowDeg
 * @param {number} spanDeg
 * @param {number} radius
 * @param {number} cap
 * @returns {Path}
 */
export function arc(role, middle, lowDeg, spanDeg, radius, cap) {
  const high = lowDeg + spanDeg;
  return {
    kind: 'path',
    role,
    commands: [
      ['M', ...at(middle, lowDeg, radius - cap)],
      ['L', ...at(middle, lowDeg, radius + cap)],
      ['M', ...at(middle, lowDeg, radius)],
      ['A', radius, radius, 0, spanDeg > 180 ? 1 : 0, 1, ...at(middle, high, radius)],
      ['M', ...at(middle, high, radius - cap)],
      ['L', ...at(middle, high, radius + cap)],
    ],
  };
}

/**
 * An arrow from the centre; a short one is all head.
 * @param {string} role
 * @param {number} middle
 * @param {number} bearingDeg
 * @param {number} length
 * @param {number} rim
 * @returns {Path}
 */
export function arrow(role, middle, bearingDeg, length, rim) {
  const head = Math.min(HEAD_LENGTH * rim, length);
  const half = (HEAD * rim * head) / (HEAD_LENGTH * rim);
  const shaft = Math.min(SHAFT * rim, half);
  const outline = [
    [0, -shaft], [length - head, -shaft], [length - head, -half], [length, 0],
    [length - head, half], [length - head, shaft], [0, shaft],
  ];
  return polygon(role, outline.map(([along, aside]) => at(middle, bearingDeg, along, aside)));
}

/**
 * A bar through the centre, as long to either side, a crosspiece at both ends.
 * @param {string} role
 * @param {number} middle
 * @param {number} bearingDeg
 * @param {number} length
 * @param {number} rim
 * @returns {Path}
 */
export function bar(role, middle, bearingDeg, length, rim) {
  const piece = Math.min(SHAFT * rim * 1.6, length);
  const shaft = Math.min(SHAFT * rim, length);
  const half = Math.min(HEAD * rim, length);
  const right = [
    [-length, half], [-length + piece, half], [-length + piece, shaft],
    [length - piece, shaft], [length - piece, half], [length, half],
  ];
  const left = [...right].reverse().map(([along, aside]) => [along, -aside]);
  return polygon(role, [...right, ...left].map(([along, aside]) => at(middle, bearingDeg, along, aside)));
}

/**
 * @param {string} role
 * @param {Point} centre
 * @param {number} reach
 * @returns {Path}
 */
export function cross(role, [x, y], reach) {
  return {
    kind: 'path',
    role,
    commands: [
      ['M', x - reach, y - reach], ['L', x + reach, y + reach],
      ['M', x - reach, y + reach], ['L', x + reach, y - reach],
    ],
  };
}

/**
 * A triangle that points outward.
 * @param {string} role
 * @param {number} middle
 * @param {number} bearingDeg
 * @param {number} inner
 * @param {number} outer
 * @returns {Path}
 */
export function triangle(role, middle, bearingDeg, inner, outer) {
  const half = (outer - inner) * 0.6;
  return polygon(role, [
    at(middle, bearingDeg, outer),
    at(middle, bearingDeg, inner, half),
    at(middle, bearingDeg, inner, -half),
  ]);
}

/**
 * An upright flag whose staff is centred between `inner` and `outer` along a bearing.
 * @param {string} role
 * @param {number} middle
 * @param {number} bearingDeg
 * @param {number} inner
 * @param {number} outer
 * @returns {Path}
 */
export function flag(role, middle, bearingDeg, inner, outer) {
  const [x, y] = at(middle, bearingDeg, (inner + outer) / 2);
  const half = (outer - inner) / 2;
  return {
    kind: 'path',
    role,
    commands: [['M', x, y + half], ['L', x, y - half], ['L', x + 1.3 * half, y - 0.5 * half], ['L', x, y]],
  };
}
