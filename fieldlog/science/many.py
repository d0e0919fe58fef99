"""Many samples at once, as arrays: a day's sites in one pass, and the trials of the bench."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import NDArray
from scipy import special

from fieldlog.science import walk
from fieldlog.science.angles import Angles, SampleError, checked
from fieldlog.science.concentration import kappas_of
from fieldlog.science.interval import FEWEST, Rule, student_t
from fieldlog.science.moments import NO_LENGTH

LARGEST_KAPPA: Final = 1e15


@dataclass(frozen=True)
class DescribedMany:
    """One entry per sample, NaN where a value does not exist; directions on the circle of the input."""

    n: NDArray[np.int64]
    mean_direction_deg: Angles
    resultant_length: Angles
    circular_variance: Angles
    circular_sd_deg: Angles
    angular_deviation_deg: Angles
    kappa: Angles
    rayleigh_z: Angles
    rayleigh_p: Angles


def describe_many(angles_deg: Angles, sizes: NDArray[np.int64]) -> DescribedMany:
    """Describe consecutive samples: `angles_deg` shape (sum of sizes,), `sizes` shape (samples,), each >= 1.

    The same values as `summarise` gives each sample (without step, of directions): the same sums and
    the same null distribution, per size at once. kappa is NaN where all readings are one. Raises
    SampleError for a size below 1 or sizes that do not add up.
    """
    angles = checked(angles_deg)
    sizes = np.asarray(sizes, dtype=np.int64)
    if (len(sizes) and sizes.min() < 1) or sizes.sum() != len(angles):
        raise SampleError("the sizes do not add up to the readings", "sizes", "Give each sample's size, at least 1.")
    starts = np.concatenate([[0], np.cumsum(sizes)[:-1]]).astype(np.intp)
    theta = np.deg2rad(angles)
    s = np.add.reduceat(np.sin(theta), starts)
    c = np.add.reduceat(np.cos(theta, out=theta), starts)
    r = np.hypot(c, s) / sizes
    r = np.where(r < NO_LENGTH, 0.0, np.where(r > 1 - 1e-15, 1.0, r))
    mean = np.degrees(np.arctan2(s, c)) % 360
    mean = np.where((360 - mean < 1e-11) | (mean < 1e-13), 0.0, mean)
    several = sizes > 1
    with np.errstate(divide="ignore"):
        sd = np.degrees(np.sqrt(-2 * np.log(r)))
    return DescribedMany(
        n=sizes,
        mean_direction_deg=np.where(r > 0, mean, np.nan),
        resultant_length=r,
        circular_variance=1 - r,
        circular_sd_deg=np.where(several & (r > 0), sd, np.nan),
        angular_deviation_deg=np.where(several, np.degrees(np.sqrt(2 * (1 - r))), np.nan),
        kappa=np.where(several & (r < 1), kappas_of(r, LARGEST_KAPPA), np.nan),
        rayleigh_z=np.where(several, sizes * r * r, np.nan),
        rayleigh_p=np.where(several, rayleigh_p(r, sizes), np.nan),
    )


def rayleigh_p(lengths: Angles, sizes: NDArray[np.int64]) -> Angles:
    """Rayleigh p of each length: walk.longer_than for arrays."""
    p = np.ones(len(lengths))
    for n in np.unique(sizes).tolist():
        rows = np.flatnonzero(sizes == n)
        r = lengths[rows]
        if n < 5 or n > walk.LARGEST_EXACT:
            p[rows] = [walk.longer_than(x, n) for x in r.tolist()]
            continue
        zeros, factors = walk.series(n)
        for part in np.array_split(np.arange(len(r)), max(1, len(r) * len(zeros) // 2_000_000)):
            p[rows[part]] = 1 - r[part] * (special.j1(r[part, None] * zeros) @ factors)
        small = rows[p[rows] < walk.floor_of_series(n)]
        p[small] = [walk.longer_than(x, n) for x in lengths[small].tolist()]
        p[rows] = np.where(r <= 0, 1.0, np.clip(p[rows], walk.SMALLEST, 1.0))
    return p


def intervals(angles_deg: Angles, rule: Rule, *, lengths: Angles | None = None) -> tuple[Angles, Angles]:
    """(means, half-widths) in degrees of each row of `angles_deg`, shape (samples, n); NaN where none exists.

    `interval.interval` for rows; `lengths` as there, the same shape.
    """
    n = angles_deg.shape[1]
    theta = np.deg2rad(angles_deg)
    along, across = np.cos(theta), np.sin(theta)
    if lengths is not None:
        along, across = lengths * along, lengths * across
    c, s = along.sum(axis=1), across.sum(axis=1)
    size = np.hypot(c, s)
    exists = size >= NO_LENGTH * n
    safe = np.where(exists, size, 1.0)
    sideways = (across * c[:, None] - along * s[:, None]) / safe[:, None]
    spread = np.sqrt((sideways**2).sum(axis=1) / max(n - 1, 1)) * n / safe
    mean = np.where(exists, np.degrees(np.arctan2(s, c)) % 360, np.nan)
    if n < FEWEST:
        return mean, np.full(len(mean), np.nan)
    freedom = n - rule.taken
    sine = rule.factor * student_t(freedom) * spread * math.sqrt((n - 1) / freedom / n)
    given = exists & (sine > 1e-9) & (sine < 1)
    return mean, np.where(given, np.degrees(np.arcsin(np.where(given, sine, 0.0))), np.nan)
