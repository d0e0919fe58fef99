/** The normal and Student distributions, as far as the phone needs them. */

/**
 * Complementary error function, relative accuracy 1e-14: Abramowitz & Stegun 1964, 7.1.6 and 7.1.14
 * (from memory).
 * @param {number} x
 * @returns {number}
 */
export function erfc(x) {
  if (x < 0) return 2 - erfc(-x);
  if (x < 2) {
    let term = x;
    let total = x;
    for (let k = 1; k < 200; k += 1) {
      term *= (2 * x * x) / (2 * k + 1);
      total += term;
      if (term < total * 1e-17) break;
    }
    return 1 - (2 / Math.sqrt(Math.PI)) * Math.exp(-x * x) * total;
  }
  let fraction = 0;
  for (let k = 120; k > 0; k -= 1) fraction = k / 2 / (x + fraction);
  return Math.exp(-x * x) / Math.sqrt(Math.PI) / (x + fraction);
}

/**
 * ln Gamma(x) for x > 0: Stirling's series after shifting to 15 or more.
 * @param {number} x
 */
export function logGamma(x) {
  let shift = 0;
  let at = x;
  while (at < 15) {
    shift += Math.log(at);
    at += 1;
  }
  const s = 1 / (at * at);
  const series = (1 / 12 - s * (1 / 360 - s * (1 / 1260 - s * (1 / 1680 - s / 1188)))) / at;
  return (at - 0.5) * Math.log(at) - at + 0.5 * Math.log(2 * Math.PI) + series - shift;
}

/** @type {Map<number, number>} */
const known = new Map();

/**
 * Two-sided 95 % point of Student's t; any freedom above 0.
 * @param {number} freedom
 */
export function studentT(freedom) {
  let found = known.get(freedom);
  if (found === undefined) {
    found = freedom > 2000 ? expanded(freedom) : solved(freedom);
    known.set(freedom, found);
  }
  return found;
}

/**
 * Fisher's expansion in 1/freedom, Abramowitz & Stegun 1964, 26.7.5 (from memory).
 * @param {number} v
 */
function expanded(v) {
  const x = 1.959963984540054;
  const y = x * x;
  const g1 = (x * (y + 1)) / 4;
  const g2 = (x * ((5 * y + 16) * y + 3)) / 96;
  const g3 = (x * (((3 * y + 19) * y + 17) * y - 15)) / 384;
  return x + g1 / v + g2 / (v * v) + g3 / (v * v * v);
}

/**
 * Newton on the upper tail, which is half the regularised incomplete beta I_x(v/2, 1/2).
 * @param {number} v
 */
function solved(v) {
  const logScale = logGamma((v + 1) / 2) - logGamma(v / 2) - 0.5 * Math.log(v * Math.PI);
  let t = expanded(Math.max(v, 2));
  for (let i = 0; i < 60; i += 1) {
    const density = Math.exp(logScale - ((v + 1) / 2) * Math.log1p((t * t) / v));
    const step = (upperTail(t, v) - 0.025) / density;
    t = Math.max(t + step, t / 2);
    if (Math.abs(step) < 1e-14 * t) break;
  }
  return t;
}

/**
 * @param {number} t
 * @param {number} v
 */
function upperTail(t, v) {
  const x = v / (v + t * t);
  const a = v / 2;
  const b = 0.5;
  const front = Math.exp(
    a * Math.log(x) + b * Math.log1p(-x) + logGamma(a + b) - logGamma(a) - logGamma(b),
  );
  const half = x < (a + 1) / (a + b + 2) ? (front * fraction(x, a, b)) / a : 1 - (front * fraction(1 - x, b, a)) / b;
  return half / 2;
}

/**
 * Continued fraction of the incomplete beta function, Abramowitz & Stegun 1964, 26.5.8 (from memory),
 * from the tail forward.
 * @param {number} x
 * @param {number} a
 * @param {number} b
 */
function fraction(x, a, b) {
  let value = 1;
  for (let m = 200; m > 0; m -= 1) {
    const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
    const odd = (-(a + m - 1) * (a + b + m - 1) * x) / ((a + 2 * m - 2) * (a + 2 * m - 1));
    value = 1 + odd / (1 + even / value);
  }
  return 1 / value;
}
