"""Readings gathered by bedform: readings on one dune are not independent."""

from __future__ import annotations

import math
from collections.abc import Hashable, Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np

from fieldlog.science.angles import Angles
from fieldlog.science.moments import circular_sd, direction_deg, length

ENOUGH_FOR_LENGTHS: Final = 5
"""From this many readings on every bedform, the mean vectors' lengths are used too."""


@dataclass(frozen=True)
class Bedforms:
    """Mean vectors of the bedforms, in order of first reading, on the circle that is analysed.

    Bedforms whose mean does not exist (two opposite readings) are counted in `without_mean` only.
    `spread_left` is the sum over bedforms of (n_j - R_j) and `readings`, `groups` what it rests on.
    """

    means_deg: Angles
    lengths: Angles
    counts: list[int]
    without_mean: int
    spread_left: float
    readings: int

    @property
    def groups(self) -> int:
        return len(self.means_deg) + self.without_mean

    def weights(self) -> Angles | None:
        """Lengths for the site's mean, or None for unit vectors: design of the second-order analysis."""
        if len(self.counts) and min(self.counts) >= ENOUGH_FOR_LENGTHS:
            return self.lengths
        return None


def gather(angles_deg: Angles, bedforms: Sequence[Hashable]) -> Bedforms:
    """Group degrees by bedform, shape (n,) both; readings without a bedform (None) count as one.

    Batschelet 1981, chapter 11 (second-order analysis; from memory).
    """
    places: dict[Hashable, int] = {}
    index = np.array([places.setdefault(name, len(places)) for name in bedforms], dtype=np.intp)
    theta = np.deg2rad(angles_deg)
    m = len(places)
    c = np.bincount(index, weights=np.cos(theta), minlength=m)
    s = np.bincount(index, weights=np.sin(theta), minlength=m)
    counts = np.bincount(index, minlength=m)
    means, lengths, kept = [], [], []
    left = 0.0
    for cosines, sines, count in zip(c.tolist(), s.tolist(), counts.tolist(), strict=True):
        r = length(cosines, sines, count)
        left += count * (1 - r)
        if r > 0:
            means.append(direction_deg(cosines, sines))
            lengths.append(r)
            kept.append(count)
    return Bedforms(np.array(means), np.array(lengths), kept, m - len(means), left, len(angles_deg))


def within_sd(groups: Bedforms, factor: float = 1.0) -> float | None:
    """Circular SD of readings about their own bedform's mean, radians; None without a repeated bedform.

    1 - R is estimated by sum (n_j - R_j) / (N - m), the small-sample form of the pooled resultant.
    `factor` is the grouped-data correction of R.
    """
    freedom = groups.readings - groups.groups
    if freedom <= 0:
        return None
    r = min(1.0, factor * (1 - groups.spread_left / freedom))
    return circular_sd(r) if r > 0 else None


def between_sd(groups: Bedforms, within: float | None) -> float | None:
    """Circular SD of the bedforms' own directions, radians, without what few readings add to their means.

    From the spread of the m means, (m - R) / (m - 1), less the within-bedform variance over the
    harmonic mean of the counts; 0 where nothing is left, None below two bedforms.
    """
    m = len(groups.means_deg)
    if m < 2:
        return None
    theta = np.deg2rad(groups.means_deg)
    size = math.hypot(float(np.cos(theta).sum()), float(np.sin(theta).sum()))
    r = 1 - max(m - size, 0.0) / (m - 1)
    of_means = circular_sd(r) if r > 0 else None
    if of_means is None:
        return None
    harmonic = m / sum(1 / count for count in groups.counts)
    return math.sqrt(max(of_means**2 - (within or 0.0) ** 2 / harmonic, 0.0))
