"""The null distributions of the resultant of n random directions: a random walk with unit steps.

Kluyver (1905) gave the length's distribution as an integral of Bessel functions. The walk never
leaves the disc of radius n, so the integral equals a Fourier-Bessel series over the zeros of J0; its
terms fall as k^-(n+1)/2. It is summed for 5 <= n <= 1000; n = 2 has a closed form; n = 3 and 4 are
integrals over the pairs of steps. The component along a stated direction has a Fourier series.
"""

from __future__ import annotations

import itertools
import math
from functools import lru_cache
from typing import Final

import numpy as np
from numpy.typing import NDArray
from scipy import special

from fieldlog.science.concentration import bessel_ratio, kappa_of, log_bessel_i0

LARGEST_EXACT: Final = 1000
MOST_TERMS: Final = 3000
SMALLEST: Final = 2.2250738585072014e-308
"""No p value is printed as 0 because of underflow."""

Array = NDArray[np.float64]


def longer_than(r: float, n: int) -> float:
    """P(mean resultant length >= r) for n uniform directions, n >= 1, 0 <= r <= 1.

    Absolute error below 5e-8 at n = 5, 1e-9 at n = 6 and 1e-11 otherwise, up to n = 1000, beyond that the expansion of
    Zar 2010, eq. 27.4 (from memory). Values below 1e-8 (1e-6 for n < 8) come from a saddle point
    with a relative error of a few per cent. Never 0.

    >>> round(longer_than(0.95, 3), 4), round(longer_than(0.9, 2), 6)
    (0.0419, 0.287133)
    """
    if n == 1 or r <= 0:
        return 1.0
    if n == 2:
        p = 2 / math.pi * math.acos(min(r, 1.0))
    elif n == 3:
        p = _three(3 * r, np.array([1.0]), np.array([1.0]))
    elif n == 4:
        nodes, weights = _pair_lengths(4 * r)
        p = _three(4 * r, nodes, weights)
    elif n <= LARGEST_EXACT:
        zeros, factors = series(n)
        p = 1 - r * float(np.sum(factors * special.j1(zeros * r)))
    else:
        p = math.exp(math.sqrt(1 + 4 * n + 4 * n * n * (1 - r * r)) - (1 + 2 * n))
    if n > 4 and p < floor_of_series(n):
        p = _saddle(r, n)
    return min(max(p, SMALLEST), 1.0)


def longer_than_steps(r: float, steps: Array) -> float:
    """P(resultant >= r) for a walk with the given step lengths (3 or more) in random directions.

    The same series over the disc that the steps can reach; absolute error below 1e-4 for three
    steps, 1e-5 for four, 1e-7 from five up.
    """
    reach = float(steps.sum())
    count = 32
    while count < MOST_TERMS and _envelope(count * math.pi / reach, steps) > 1e-13:
        count = min(2 * count, MOST_TERMS)
    zeros = _zeros_of_j0(count)
    product = np.ones(count)
    for step in steps:
        product = product * special.j0(zeros * (step / reach))
    share = r / reach
    p = 1 - share * float(np.sum(2 * product / (zeros * special.j1(zeros) ** 2) * special.j1(zeros * share)))
    return min(max(p, 1e-9), 1.0)


def _envelope(t: float, steps: Array) -> float:
    """Bound of the product of J0(t step): |J0(x)| <= sqrt(2 / (pi x))."""
    return float(np.prod(np.minimum(1.0, np.sqrt(2 / (math.pi * t * steps)))))


@lru_cache(maxsize=256)
def threshold(n: int) -> float:
    """The mean resultant length that n >= 5 uniform directions exceed with probability 0.05.

    Secant steps from the inverse of Zar's expansion.

    >>> round(threshold(10), 4)
    0.5402
    """
    level = 0.05
    root = math.log(level) + 1 + 2 * n
    before = math.sqrt((4 * n * n + 4 * n + 1 - root * root) / (4 * n * n))
    now = before * 0.999
    p_before = longer_than(before, n) - level
    for _ in range(40):
        p = longer_than(now, n) - level
        if abs(p) < 1e-15 or p == p_before:
            break
        following = now - p * (now - before) / (p - p_before)
        before, p_before, now = now, p, min(max(following, 0.0), 1.0)
        if abs(now - before) < 1e-14:
            break
    return now


def further_than(v: float, n: int) -> float:
    """P(sum of the n components along a stated direction >= v), -n <= v <= n.

    Sine series of the density on [-n, n] for 2 <= n <= 1000 (absolute error below 1e-6 at n = 3 and
    1e-9 from 6 up), beyond that the normal tail with the kurtosis term. Small values by Lugannani
    and Rice 1980.

    >>> round(further_than(9.49761189405, 10) * 1e8, 2)
    3.03
    """
    if v < 0:
        return 1 - further_than(-v, n)
    if n == 1:
        return math.acos(min(v, 1.0)) / math.pi
    if n == 2:
        p = _two_along(v)
    elif n <= LARGEST_EXACT:
        k, powers = _sine_series(n)
        p = 0.5 - v / (2 * n) - float(np.sum(np.sin(k * (math.pi * v / n)) * powers)) / math.pi
    else:
        u = v * math.sqrt(2 / n)
        density = math.exp(-u * u / 2) / math.sqrt(2 * math.pi)
        p = 0.5 * math.erfc(u / math.sqrt(2)) - density * (1.5 / (24 * n)) * (u**3 - 3 * u)
    if n > 2 and p < floor_of_series(n):
        p = _lugannani_rice(v, n)
    return min(max(p, SMALLEST), 1.0)


def floor_of_series(n: int) -> float:
    """Below this a p value comes from a saddle point, because the series has lost its digits."""
    return 1e-6 if n < 8 else 1e-8


def _terms(n: int) -> int:
    """Terms until (2 / (pi t))^(n/2) is below 1e-12 at t = k pi / n."""
    reach = 2 / math.pi * math.pow(1e-12, -2 / n)
    return min(MOST_TERMS, math.ceil(n / math.pi * reach) + 8)


@lru_cache(maxsize=64)
def series(n: int) -> tuple[Array, Array]:
    """Zeros j_k of J0 and factors f_k: P(R >= r) = 1 - r sum f_k J1(j_k r), for 5 <= n <= 1000."""
    zeros = _zeros_of_j0(_terms(n))
    return zeros, 2 * special.j0(zeros / n) ** n / (zeros * special.j1(zeros) ** 2)


@lru_cache(maxsize=64)
def _sine_series(n: int) -> tuple[Array, Array]:
    k = np.arange(1.0, _terms(n) + 1)
    return k, special.j0(k * (math.pi / n)) ** n / k


@lru_cache(maxsize=64)
def _zeros_of_j0(count: int) -> Array:
    """The first zeros of J0: McMahon's expansion, then Newton."""
    b = (np.arange(1, count + 1) - 0.25) * math.pi
    x = b + 1 / (8 * b) - 31 / (384 * b**3)
    for _ in range(3):
        x = x + special.j0(x) / special.j1(x)
    return np.asarray(x)


@lru_cache(maxsize=1)
def _tanh_sinh() -> tuple[Array, Array]:
    """Nodes in (0, 1), as distances from the nearer end for accuracy, and weights."""
    t = np.arange(-54, 55) * 0.0625
    s = math.pi / 2 * np.sinh(t)
    nodes = 1 / (1 + np.exp(-2 * s))
    weights = 0.0625 * math.pi / 4 * np.cosh(t) / np.cosh(s) ** 2
    return nodes, weights


def _pieces(edges: list[float]) -> tuple[Array, Array]:
    """Tanh-sinh nodes and weights over the intervals between the sorted edges."""
    nodes, weights = _tanh_sinh()
    spans = [(a, b) for a, b in itertools.pairwise(edges) if b - a > 1e-15]
    x = np.concatenate([a + (b - a) * nodes for a, b in spans])
    return x, np.concatenate([(b - a) * weights for a, b in spans])


def _angle_of(s: float) -> float:
    """The angle between two unit steps whose sum has length s, 0 where s > 2, pi where s < 0."""
    return 2 * math.acos(min(max(s / 2, 0.0), 1.0))


def _pair_lengths(r: float) -> tuple[Array, Array]:
    """Lengths of a pair of steps at nodes over their angle, with weights summing to 1."""
    edges = sorted({0.0, math.pi, _angle_of(abs(2 - r)), _angle_of(r), _angle_of(r - 2)})
    angle, weight = _pieces(edges)
    return 2 * np.cos(angle / 2), weight / math.pi


def _three(r: float, lengths: Array, weights: Array) -> float:
    """P(|a + a pair of unit steps| >= r), a of the given lengths in random direction, averaged."""
    total = 0.0
    for a, weight in zip(lengths.tolist(), weights.tolist(), strict=True):
        edges = sorted({0.0, math.pi, _angle_of(abs(r - a)), _angle_of(r + a)})
        angle, share = _pieces(edges)
        s = 2 * np.cos(angle / 2)
        with np.errstate(divide="ignore", invalid="ignore"):
            cosine = (r * r - s * s - a * a) / (2 * s * a)
        cosine = np.where(s * a > 0, cosine, np.where(s + a >= r, -1.0, 1.0))
        total += weight * float(np.sum(share * np.arccos(np.clip(cosine, -1, 1)))) / math.pi**2
    return total


def _two_along(v: float) -> float:
    """P(cos a + cos b >= v) for v >= 0."""
    angle, weight = _pieces([0.0, math.acos(min(max(v - 1, -1.0), 1.0))]) if v < 2 else (np.zeros(1), np.zeros(1))
    return float(np.sum(weight * np.arccos(np.clip(v - np.cos(angle), -1, 1)))) / math.pi**2


def _saddle(r: float, n: int) -> float:
    """Tail of the length by exponential tilting to the von Mises distribution with A(kappa) = r."""
    kappa = kappa_of(r)
    if kappa is None:
        return SMALLEST
    across = bessel_ratio(kappa) / kappa
    along = 1 - across - bessel_ratio(kappa) ** 2 if kappa < 1e4 else 1 / (2 * kappa * kappa)
    log_p = n * (log_bessel_i0(kappa) - kappa * r) + math.log(r / (kappa * math.sqrt(along * across)))
    return math.exp(log_p) if log_p > -708 else SMALLEST


def _lugannani_rice(v: float, n: int) -> float:
    """Tail of the component along a direction; kappa solves n A(kappa) = v."""
    kappa = kappa_of(v / n)
    if kappa is None:
        return SMALLEST
    across = bessel_ratio(kappa) / kappa
    along = 1 - across - bessel_ratio(kappa) ** 2 if kappa < 1e4 else 1 / (2 * kappa * kappa)
    half = kappa * v - n * log_bessel_i0(kappa)
    w, u = math.sqrt(2 * half), kappa * math.sqrt(n * along)
    if half > 700:
        return SMALLEST
    density = math.exp(-half) / math.sqrt(2 * math.pi)
    return 0.5 * math.erfc(w / math.sqrt(2)) + density * (1 / u - 1 / w)
