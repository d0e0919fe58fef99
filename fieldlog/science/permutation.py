"""Permutation p values, seeded, for statistics of labels on a circle."""

from __future__ import annotations

from collections.abc import Callable
from typing import Final

import numpy as np
from numpy.typing import NDArray

DRAWS: Final = 9_999
SEED: Final = 20260301
LARGEST: Final = 2_000
"""Above this many units the asymptotic p is as good and far cheaper."""

Labels = NDArray[np.int64]
Statistic = Callable[[Labels], NDArray[np.float64]]


def permutation_p(statistic: Statistic, labels: Labels) -> float:
    """Share of relabellings whose statistic is as large as that of `labels`, the sample's own included.

    `statistic` takes labels of shape (draws, n) and gives shape (draws,). 9,999 draws, fixed seed:
    the same sample always has the same p.
    """
    rng = np.random.default_rng([SEED, len(labels)])
    observed = float(statistic(labels[None, :])[0])
    as_large = 0
    for part in np.array_split(np.arange(DRAWS), max(1, DRAWS * len(labels) // 2_000_000)):
        shuffled = rng.permuted(np.broadcast_to(labels, (len(part), len(labels))), axis=1)
        as_large += int(np.count_nonzero(statistic(shuffled) >= observed - 1e-9))
    return (as_large + 1) / (DRAWS + 1)
