"""Whether the number of readings asked for is enough, and not far too many."""

from __future__ import annotations

import numpy as np

from fieldlog.science.interval import OF_READINGS
from fieldlog.science.many import intervals
from fieldlog.science.summary import summarise
from tests.bench.trials import Numbers, generator, spread_over

TRIALS = 2000
CELLS = [(10, 3.0, 10.0), (10, 10.0, 7.5), (15, 5.0, 10.0), (10, 2.0, 15.0)]
"""Readings so far, kappa, target half-width in degrees."""
SHARE = 0.8


def measure() -> Numbers:
    """Share of samples that reach the target with what was asked for, and asked over truly needed."""
    found = spread_over(asked_and_reached, CELLS)
    for (n, kappa, target), (reached, asked, truly) in zip(CELLS, found, strict=True):
        print(f"  after {n}, kappa {kappa:g}, target {target:g}: reached {reached:.4f}, asked {asked:.0f}, needed {truly}")
    return {
        "circular.needed_reached": min(reached for reached, _, _ in found),
        "circular.needed_excess": max(asked / truly for _, asked, truly in found),
    }


def asked_and_reached(cell: tuple[int, float, float]) -> tuple[float, float, int]:
    """(share that reaches the target, median number asked for, number truly needed).

    A crew takes n readings, is told how many are needed in all, and takes the rest. Only samples
    that are not enough already and that show one direction are told a number.
    """
    n, kappa, target = cell
    random = generator("needed", n, kappa, target)
    asked, reached = [], []
    while len(asked) < TRIALS:
        first = np.degrees(random.vonmises(0, kappa, n))
        told = summarise(first, target_deg=target, spacing=False)
        if told.enough or told.readings_needed is None:
            continue
        whole = np.concatenate([first, np.degrees(random.vonmises(0, kappa, told.readings_needed - n))])
        _, half = intervals(whole[None, :], OF_READINGS)
        asked.append(told.readings_needed)
        reached.append(bool(half[0] <= target))
    return float(np.mean(reached)), float(np.median(asked)), truly_needed(random, kappa, target)


def truly_needed(random: np.random.Generator, kappa: float, target: float) -> int:
    """The fewest readings with which 4 samples in 5 reach the target."""
    n = 5
    while True:
        _, halves = intervals(np.degrees(random.vonmises(0, kappa, (4000, n))), OF_READINGS)
        if (halves <= target).mean() >= SHARE:
            return n
        n += 1
