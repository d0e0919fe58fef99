"""Times as ratios of two sides measured in one run."""

from __future__ import annotations

import statistics
import time
from collections.abc import Callable

from tests.bench.trials import Numbers


def ratio(name: str, top: Callable[[], object], bottom: Callable[[], object], *, rounds: int = 7, tops: int = 1, bottoms: int = 1) -> Numbers:
    """Median seconds of each side, taken in turn, and their ratio.

    `tops`, `bottoms`: how many calls make one round, where one alone is too short to time.
    """
    seen: tuple[list[float], list[float]] = ([], [])
    top()
    bottom()
    for _ in range(rounds):
        for side, (call, calls) in enumerate(((top, tops), (bottom, bottoms))):
            begun = time.perf_counter()
            for _ in range(calls):
                call()
            seen[side].append((time.perf_counter() - begun) / calls)
    above, below = (statistics.median(side) for side in seen)
    return {name: above / below, f"{name}.top": above, f"{name}.bottom": below}
