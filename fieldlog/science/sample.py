"""A sample on the circle that is analysed, and the directions in it that count as independent."""

from __future__ import annotations

import math
from collections.abc import Hashable, Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np

from fieldlog.science import bedforms as by_bedform
from fieldlog.science import uniformity
from fieldlog.science.angles import Angles, reduced, reduced_one
from fieldlog.science.concentration import kappa_corrected, kappa_of
from fieldlog.science.interval import OF_BEDFORMS, OF_READINGS, Interval, Rule, interval
from fieldlog.science.median import median_direction
from fieldlog.science.moments import angular_deviation, circular_sd, grouping_factor, mean_and_length

FEWEST_TO_SAY: Final = 5
"""Independent readings below which nothing is said about a direction."""


@dataclass(frozen=True)
class Description:
    """A sample described: degrees as shown (axes halved back), lengths and kappa as analysed."""

    n: int
    mean_direction_deg: float | None
    median_direction_deg: float | None
    resultant_length: float | None
    circular_variance: float | None
    circular_sd_deg: float | None
    angular_deviation_deg: float | None
    kappa: float | None
    kappa_corrected: float | None
    rayleigh_z: float | None
    rayleigh_p: float | None


class Sample:
    """The sample on the circle that is analysed, and the directions that count as independent."""

    def __init__(
        self, raw: Angles, names: Sequence[Hashable] | None, axial: bool, step_deg: float | None, fewest: int
    ) -> None:
        """`raw` in degrees; `names` per reading or None; `fewest` bedforms for a finding."""
        self.fold = 2 if axial else 1
        self.axial = axial
        self.step_deg = step_deg
        self.width_deg = None if step_deg is None else step_deg * self.fold
        self.beyond = int(np.count_nonzero((raw < 0) | (raw >= 360) & (raw != 360)))
        self.angles = reduced(raw * self.fold) if axial or self.beyond else np.where(raw == 360, 0.0, raw)
        self.groups = None if names is None else by_bedform.gather(self.angles, names)
        self.unnamed = 0 if names is None else sum(name is None for name in names)
        self.units = self.angles if self.groups is None else self.groups.means_deg
        self.fewest = FEWEST_TO_SAY if self.groups is None else max(fewest, 1)
        self.factor = 1.0 if self.width_deg is None else grouping_factor(self.width_deg)

    def shown(self, angle_deg: float | None) -> float | None:
        """A direction on the analysed circle as it is shown."""
        return None if angle_deg is None else reduced_one(angle_deg / self.fold, 360.0 / self.fold)

    def size(self, radians: float | None) -> float | None:
        """A spread in radians on the analysed circle as degrees shown."""
        return None if radians is None else math.degrees(radians) / self.fold

    def describe(self, angles: Angles, factor: float) -> Description:
        """Angles on the analysed circle described; `factor` corrects R for grouping, not the test."""
        n = len(angles)
        if n == 0:
            return Description(0, *([None] * 10))
        mean, r = mean_and_length(angles)
        corrected = min(1.0, factor * r)
        test = uniformity.rayleigh(r, n)
        kappa = kappa_of(corrected) if n > 1 else None
        return Description(
            n,
            self.shown(mean),
            self.shown(median_direction(angles, mean)),
            corrected,
            1 - corrected,
            self.size(circular_sd(corrected)) if n > 1 and corrected > 0 else None,
            self.size(angular_deviation(corrected)) if n > 1 else None,
            kappa,
            kappa_corrected(kappa, n) if n > 1 else None,
            test.statistic,
            test.p,
        )

    @property
    def rule(self) -> Rule:
        """How the interval is made."""
        return OF_READINGS if self.groups is None else OF_BEDFORMS

    def interval(self) -> Interval:
        """Of the units; rounding alone gives readings a least spread."""
        least = 0.0
        if self.groups is None and self.width_deg is not None:
            least = math.sin(math.radians(self.width_deg) / math.sqrt(12))
        lengths = None if self.groups is None else self.groups.weights()
        return interval(self.units, self.rule, lengths=lengths, least_spread=least)

