/**
 * Bessel functions to double precision, from their defining series and recurrences.
 *
 * J0 and J1: Miller's backward recurrence below 25, Hankel's asymptotic expansion above. I0 and I1:
 * power series below 30, asymptotic expansion above. Abramowitz & Stegun 1964, 9.2.5-9.2.10, 9.6.10,
 * 9.7.1 and 9.12 (from memory); the shared vectors hold them to SciPy's.
 */

/**
 * @param {number} x at least 0
 * @returns {[number, number]} J0(x) and J1(x)
 */
export function besselJ01(x) {
  return x < 25 ? byRecurrence(x) : byExpansion(x);
}

/** @param {number} x */
export function besselJ0(x) {
  return besselJ01(x)[0];
}

/** @param {number} x */
export function besselJ1(x) {
  return besselJ01(x)[1];
}

/**
 * @param {number} x
 * @returns {[number, number]}
 */
function byRecurrence(x) {
  if (x < 1e-8) return [1 - (x * x) / 4, x / 2];
  const start = 2 * Math.ceil((x + 24 + 2 * Math.sqrt(x)) / 2);
  let above = 0;
  let at = 1e-290;
  let norm = 0;
  for (let k = start; k > 0; k -= 1) {
    const below = (2 * k * at) / x - above;
    above = at;
    at = below;
    if (k % 2 === 1) norm += k === 1 ? at : 2 * at;
    if (Math.abs(at) > 1e200) {
      at *= 1e-200;
      above *= 1e-200;
      norm *= 1e-200;
    }
  }
  return [at / norm, above / norm];
}

/**
 * @param {number} x
 * @returns {[number, number]}
 */
function byExpansion(x) {
  const amplitude = Math.sqrt(1 / (Math.PI * x));
  const cosine = Math.cos(x);
  const sine = Math.sin(x);
  const [p0, q0] = hankel(x, 0);
  const [p1, q1] = hankel(x, 4);
  // cos(x - pi/4) = (cos + sin)/sqrt 2, sin(x - pi/4) = (sin - cos)/sqrt 2, and a quarter turn on for order 1
  return [
    amplitude * (p0 * (cosine + sine) - q0 * (sine - cosine)),
    amplitude * (p1 * (sine - cosine) + q1 * (sine + cosine)),
  ];
}

/**
 * The sums P and Q of Hankel's expansion; mu is 4 times the order squared.
 * @param {number} x
 * @param {number} mu
 * @returns {[number, number]}
 */
function hankel(x, mu) {
  let p = 1;
  let q = 0;
  let term = 1;
  for (let k = 1; k < 60; k += 1) {
    const next = (term * (mu - (2 * k - 1) ** 2)) / (k * 8 * x);
    if (Math.abs(next) > Math.abs(term) && k > 2) break;
    term = next;
    const turn = k % 4;
    if (turn === 1) q += term;
    else if (turn === 2) p -= term;
    else if (turn === 3) q -= term;
    else p += term;
    if (Math.abs(term) < 1e-17) break;
  }
  return [p, q];
}

/**
 * exp(-x) I0(x) and exp(-x) I1(x), x at least 0.
 * @param {number} x
 * @returns {[number, number]}
 */
export function besselIScaled(x) {
  if (x < 30) {
    const quarter = (x * x) / 4;
    let zero = 1;
    let one = 1;
    let a = 1;
    let b = 1;
    for (let k = 1; k < 200; k += 1) {
      a *= quarter / (k * k);
      b *= quarter / (k * (k + 1));
      zero += a;
      one += b;
      if (a < zero * 1e-18) break;
    }
    const scale = Math.exp(-x);
    return [zero * scale, (x / 2) * one * scale];
  }
  const scale = 1 / Math.sqrt(2 * Math.PI * x);
  return [scale * falling(x, 0), scale * falling(x, 4)];
}

/**
 * @param {number} x
 * @param {number} mu
 */
function falling(x, mu) {
  let total = 1;
  let term = 1;
  for (let k = 1; k < 60; k += 1) {
    const next = (-term * (mu - (2 * k - 1) ** 2)) / (k * 8 * x);
    if (Math.abs(next) > Math.abs(term) && k > 2) break;
    term = next;
    total += term;
    if (Math.abs(term) < 1e-18) break;
  }
  return total;
}
