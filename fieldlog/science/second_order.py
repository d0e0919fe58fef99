"""Second-order tests: do the mean vectors of the bedforms agree on a direction?"""

from __future__ import annotations

import math

import numpy as np

from fieldlog.science.angles import Angles
from fieldlog.science.uniformity import NOT_GIVEN, Test
from fieldlog.science.walk import longer_than_steps


def hotelling(means_deg: Angles, lengths: Angles) -> Test:
    """Hotelling's one-sample test that the mean vectors centre on nothing: F with 2 and k - 2 degrees.

    `means_deg`, `lengths`: shape (k,), k >= 3 bedforms. Assumes that the vectors' components are
    jointly normal. F = k (k-2) / 2 times (Xm^2 Sy - 2 Xm Ym Sxy + Ym^2 Sx) / (Sx Sy - Sxy^2):
    Batschelet 1981, section 11.1, and Zar 2010, section 27.15 (from memory); p has a closed form.

    >>> t = hotelling(np.array([10.0, 350, 30, 5]), np.array([0.9, 0.8, 0.95, 0.9]))
    >>> round(t.p, 4)
    0.0028
    """
    k = len(means_deg)
    if k < 3:
        return NOT_GIVEN
    theta = np.deg2rad(means_deg)
    x, y = lengths * np.cos(theta), lengths * np.sin(theta)
    xm, ym = float(x.mean()), float(y.mean())
    sx, sy = float(((x - xm) ** 2).sum()), float(((y - ym) ** 2).sum())
    sxy = float(((x - xm) * (y - ym)).sum())
    below = sx * sy - sxy * sxy
    if below <= 1e-14 * max(sx * sy, 1e-300):
        return NOT_GIVEN
    f = k * (k - 2) / 2 * (xm * xm * sy - 2 * xm * ym * sxy + ym * ym * sx) / below
    return Test(f, math.exp(-(k - 2) / 2 * math.log1p(2 * f / (k - 2))))


def moore(means_deg: Angles, lengths: Angles) -> Test:
    """Moore's modified Rayleigh test: the vectors are weighted by the rank of their length.

    Statistic R* = sqrt((sum i cos)^2 + (sum i sin)^2) / k^(3/2), i the rank, equal lengths sharing
    the mean rank. No distribution of the lengths is assumed: Moore 1980, Biometrika 67, 175-180.
    Under the null the sum is a random walk with steps 1 to k, so p is exact as in Rayleigh's test.
    """
    k = len(means_deg)
    if k < 3:
        return NOT_GIVEN
    ranks = _ranks(lengths)
    theta = np.deg2rad(means_deg)
    size = math.hypot(float((ranks * np.cos(theta)).sum()), float((ranks * np.sin(theta)).sum()))
    return Test(size / k**1.5, longer_than_steps(size, ranks))


def _ranks(values: Angles) -> Angles:
    """Ranks from 1, ties sharing their mean; lengths within 1e-9 are ties."""
    order = np.argsort(values, kind="stable")
    ranks = np.empty(len(values))
    i = 0
    while i < len(values):
        j = i
        while j + 1 < len(values) and values[order[j + 1]] - values[order[j]] < 1e-9:
            j += 1
        ranks[order[i : j + 1]] = (i + j) / 2 + 1
        i = j + 1
    return ranks
