"""Seeded trials, spread over the machine's cores."""

from __future__ import annotations

import os
from collections.abc import Callable, Iterable
from concurrent.futures import ProcessPoolExecutor
from typing import Any

import numpy as np

SEED = 20261201

Numbers = dict[str, float]


def generator(*names: str | float) -> np.random.Generator:
    """A generator of its own for one cell of trials: the same whatever else runs."""
    return np.random.default_rng([SEED, *(int.from_bytes(str(name).encode(), "big") % 2**32 for name in names)])


def spread_over(function: Callable[[Any], Any], cells: Iterable[Any]) -> list[Any]:
    """`function` of every cell, on all cores, in the order of the cells."""
    with ProcessPoolExecutor(os.cpu_count()) as workers:
        return list(workers.map(function, cells))
