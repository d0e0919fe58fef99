"""Rao's spacing test (store and command line only; the phone does not show it)."""

from __future__ import annotations

import math
from functools import lru_cache
from typing import Final

import numpy as np
from scipy import special

from fieldlog.science.angles import Angles, reduced
from fieldlog.science.uniformity import FEWEST_FOR_OMNIBUS, NOT_GIVEN, Test
from fieldlog.science.walk import SMALLEST

DRAWS: Final = 20_000
SEED: Final = 20260301
LARGEST_SIMULATED: Final = 500


def rao_spacing(angles_deg: Angles, *, classes: int | None = None) -> Test:
    """Rao spacing test: U = 0.5 sum |gap - 360/n| in degrees; p by 20,000 seeded uniform samples.

    `classes`: the number of equal classes that the readings were rounded to; the null samples are
    rounded alike. No p where fewer than two classes per reading exist (the gaps are then all ties),
    nor below 5 readings. Above n = 500 the normal limit, mean 360/e, variance
    360^2 (2/e - 5/e^2) / n: Rao 1969 (from memory).

    >>> import numpy as np
    >>> rao_spacing(np.array([45, 55, 81, 96, 110, 117, 132, 154.])).statistic
    206.0
    """
    n = len(angles_deg)
    if n < 2:
        return NOT_GIVEN
    statistic = float(_spacing(np.sort(reduced(angles_deg))[None, :])[0])
    if n < FEWEST_FOR_OMNIBUS or (classes is not None and classes < 2 * n):
        return Test(statistic, None)
    if n > LARGEST_SIMULATED:
        mean, variance = 360 / math.e, 360**2 * (2 / math.e - 5 / math.e**2) / n
        return Test(statistic, max(float(special.ndtr((mean - statistic) / math.sqrt(variance))), SMALLEST))
    null = _null(n, classes)
    beyond = DRAWS - int(np.searchsorted(null, statistic - 1e-9, side="left"))
    return Test(statistic, (beyond + 1) / (DRAWS + 1))


def _spacing(sorted_deg: Angles) -> Angles:
    """U of each row."""
    n = sorted_deg.shape[1]
    gaps = np.diff(sorted_deg, axis=1, append=sorted_deg[:, :1] + 360.0)
    return np.asarray(np.abs(gaps - 360.0 / n).sum(axis=1) / 2)


@lru_cache(maxsize=32)
def _null(n: int, classes: int | None) -> Angles:
    rng = np.random.default_rng([SEED, n, classes or 0])
    parts = []
    for _ in range(10):
        turns = rng.random((DRAWS // 10, n))
        if classes is not None:
            turns = np.floor(turns * classes) / classes
        turns.sort(axis=1)
        parts.append(_spacing(turns * 360.0))
    return np.sort(np.concatenate(parts))
