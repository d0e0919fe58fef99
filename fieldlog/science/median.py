"""The median direction."""

from __future__ import annotations

import numpy as np

from fieldlog.science.angles import Angles, apart, reduced, reduced_one

SAME_DEG = 1e-9


def median_direction(angles_deg: Angles, mean_deg: float | None) -> float | None:
    """The direction from which the readings lie at the least mean arc distance.

    `angles_deg`: shape (n,), any turn. Returns degrees, 0 <= x < 360. A whole arc of such
    directions gives the mean of the readings at its ends, each as often as it occurs (as R's
    package circular does); of several arcs the one nearest to the mean direction counts; None
    where that leaves a choice, where there is no mean, or for an empty sample.

    The sum of arc distances is piecewise linear and bends upwards only at readings, so the search
    is over the readings; sorted once, O(n log n). Source: Fisher 1993, section 2.3.2 (from memory).

    >>> import numpy as np
    >>> median_direction(np.array([350.0, 10, 20]), 6.8)
    10.0
    >>> median_direction(np.array([350.0, 10]), 0.0)
    0.0
    """
    if len(angles_deg) == 0 or mean_deg is None:
        return None
    x = np.sort(reduced(angles_deg))
    places, counts = np.unique(x, return_counts=True)
    sums = _distances(places, x)
    least = float(sums.min()) + SAME_DEG * len(x)
    chosen = sums <= least
    found = _centres(places[chosen], counts[chosen].tolist(), x, least)
    nearest = sorted((apart(centre, mean_deg), centre) for centre in found)
    if not nearest or (len(nearest) > 1 and nearest[1][0] - nearest[0][0] < SAME_DEG):
        return None
    return nearest[0][1]


def _distances(points: Angles, x: Angles) -> Angles:
    """Sum of arc distances from each point (0 <= p < 360) to the sorted readings x."""
    n = len(x)
    twice = np.concatenate([x, x + 360.0])
    running = np.concatenate([[0.0], np.cumsum(twice)])
    first = np.searchsorted(x, points, side="left")
    beyond = np.searchsorted(twice, points + 180.0, side="right")
    ahead = beyond - first
    clockwise = running[beyond] - running[first] - ahead * points
    anticlockwise = (n - ahead) * (points + 360.0) - (running[first + n] - running[beyond])
    return np.asarray(clockwise + anticlockwise)


def _centres(best: Angles, counts: list[int], x: Angles, least: float) -> list[float]:
    """Mean of each arc of best readings: neighbours are one arc where the way between is as good."""
    m = len(best)
    if m == 1:
        return [float(best[0])]
    following = np.concatenate([best[1:], best[:1] + 360.0])
    joined = _distances(reduced(best + (following - best) / 2), x) <= least
    centres = []
    for i in range(m):
        if joined[i - 1]:
            continue
        total, weight, k = 0.0, counts[i], i
        while joined[k % m]:
            k += 1
            share = counts[k % m]
            total += share * (float(best[k % m]) + 360.0 * (k // m) - float(best[i]))
            weight += share
        centres.append(reduced_one(float(best[i]) + total / weight))
    return centres
