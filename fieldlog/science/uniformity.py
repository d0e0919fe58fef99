"""Tests of uniformity: do the readings point anywhere at all?

All take degrees on the circle that is analysed (axes doubled beforehand) and are unchanged by
rotation. Rayleigh and V have exact null distributions (see walk.py); Kuiper and Watson use the
modified statistics of Stephens 1970 for continuous readings; readings in classes have tests of
their own in classes.py.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from fieldlog.science.angles import Angles, reduced
from fieldlog.science.moments import mean_and_length
from fieldlog.science.walk import SMALLEST, further_than, longer_than

FEWEST_FOR_OMNIBUS = 5
"""Stephens's modification holds from about five readings up."""


@dataclass(frozen=True)
class Test:
    """A statistic and its p value, 0 < p <= 1; None where the sample cannot bear it."""

    statistic: float | None
    p: float | None


NOT_GIVEN = Test(None, None)


def rayleigh(resultant_length: float, n: int) -> Test:
    """Rayleigh test: z = n R^2, with the exact p for every n >= 2. R is the uncorrected length.

    Kluyver 1905 for the null distribution; see walk.longer_than for its accuracy.

    >>> t = rayleigh(0.82521774482, 8)
    >>> round(t.statistic, 3), round(t.p, 6)
    (5.448, 0.001655)
    """
    if n < 2:
        return NOT_GIVEN
    return Test(n * resultant_length**2, longer_than(resultant_length, n))


def v_test(angles_deg: Angles, against_deg: float) -> Test:
    """V test against a stated direction: u = V sqrt(2/n), V the sum of components along it; exact p.

    One-sided: small p says the readings point that way. Zar 2010, section 27.1 for u (from
    memory); null distribution in walk.further_than.
    """
    n = len(angles_deg)
    if n < 2:
        return NOT_GIVEN
    along = float(np.cos(np.deg2rad(angles_deg - against_deg)).sum())
    along = min(max(along, -float(n)), float(n))
    return Test(along * math.sqrt(2 / n), further_than(along, n))


def kuiper(angles_deg: Angles) -> Test:
    """Kuiper test: V = D+ + D-, p from V* = V (sqrt n + 0.155 + 0.24 / sqrt n), Stephens 1970.

    >>> import numpy as np
    >>> t = kuiper(np.array([45, 55, 81, 96, 110, 117, 132, 154.]))
    >>> round(t.statistic, 6), round(t.p, 4)
    (0.697222, 0.0037)
    """
    n = len(angles_deg)
    if n == 0:
        return NOT_GIVEN
    f = np.sort(reduced(angles_deg)) / 360.0
    steps = np.arange(1, n + 1) / n
    statistic = float((steps - f).max() + (f - steps).max() + 1 / n)
    if n < FEWEST_FOR_OMNIBUS:
        return Test(statistic, None)
    return Test(statistic, kuiper_tail(kuiper_modified(statistic, n)))


def kuiper_modified(statistic: float, n: int) -> float:
    """V* of Stephens 1970."""
    return statistic * (math.sqrt(n) + 0.155 + 0.24 / math.sqrt(n))


def kuiper_tail(modified: float) -> float:
    """P(V* >= x) = 2 sum (4 j^2 x^2 - 1) exp(-2 j^2 x^2), asymptotic."""
    if modified < 0.4:
        return 1.0
    squares = [2 * j * j * modified * modified for j in range(1, 13)]
    p = math.fsum(2 * (2 * s - 1) * math.exp(-s) for s in squares)
    return min(max(p, SMALLEST), 1.0)


def watson(angles_deg: Angles) -> Test:
    """Watson test: the plain U2, p from U2* = (U2 - 0.1/n + 0.1/n^2)(1 + 0.8/n), Stephens 1970.

    >>> import numpy as np
    >>> t = watson(np.array([45, 55, 81, 96, 110, 117, 132, 154.]))
    >>> round(t.statistic, 6)
    0.300876
    """
    n = len(angles_deg)
    if n == 0:
        return NOT_GIVEN
    f = np.sort(reduced(angles_deg)) / 360.0
    off = f - (np.arange(1, n + 1) - 0.5) / n
    statistic = float(((off - off.mean()) ** 2).sum() + 1 / (12 * n))
    if n < FEWEST_FOR_OMNIBUS:
        return Test(statistic, None)
    return Test(statistic, watson_tail(watson_modified(statistic, n)))


def watson_modified(statistic: float, n: int) -> float:
    """U2* of Stephens 1970; negative for very even samples."""
    return (statistic - 0.1 / n + 0.1 / (n * n)) * (1 + 0.8 / n)


def watson_tail(modified: float) -> float:
    """P(U2* >= x) = 2 sum (-1)^(j-1) exp(-2 j^2 pi^2 x), asymptotic."""
    if modified < 0.01:
        return 1.0
    p = math.fsum(2 * (-1) ** (j - 1) * math.exp(-2 * (j * math.pi) ** 2 * modified) for j in range(1, 31))
    return min(max(p, SMALLEST), 1.0)


def hodges_ajne(angles_deg: Angles) -> Test:
    """Hodges-Ajne test: m, the fewest readings on one side of a diameter, and its exact p.

    p = (n - 2m) C(n, m) / 2^(n-1), Zar 2010, eq. 27.7 (from memory), 1 where the bound exceeds 1.
    """
    n = len(angles_deg)
    if n < 2:
        return NOT_GIVEN
    x = np.sort(reduced(angles_deg))
    twice = np.concatenate([x, x + 360.0])
    ahead = np.searchsorted(twice, x + 180.0, side="left") - np.arange(n)
    behind = np.searchsorted(twice, x + 180.0, side="right") - np.searchsorted(twice, x, side="left")
    m = int(min(ahead.min(), (n - ahead).min(), (n - behind).min()))
    log_p = math.log(max(n - 2 * m, 1)) + _log_choose(n, m) - (n - 1) * math.log(2)
    return Test(float(m), min(1.0, math.exp(log_p)))


def _log_choose(n: int, m: int) -> float:
    return math.lgamma(n + 1) - math.lgamma(m + 1) - math.lgamma(n - m + 1)


def harmonic(angles_deg: Angles, order: int) -> Test:
    """Rayleigh test of the angles multiplied by `order`: 2 finds balanced opposed faces, 3 three arms.

    The statistic is the resultant length of the multiplied angles.
    """
    n = len(angles_deg)
    if n < 2:
        return NOT_GIVEN
    _, r = mean_and_length(order * angles_deg)
    return Test(r, longer_than(r, n))
