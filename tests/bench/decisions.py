"""How often the outcome and the number of modes are right."""

from __future__ import annotations

import numpy as np

from fieldlog.science.modes import find_modes
from fieldlog.science.summary import summarise
from tests.bench.trials import Numbers, generator, spread_over

TRIALS = 2000
KAPPA = 8.0
OUTCOMES = {
    "one": (0.0,), "two_opposed": (0.0, 180.0), "two": (0.0, 90.0), "three_or_more": (0.0, 120.0, 240.0), "spread": (),
}
"""Where the 30 readings point: equal shares round each direction, or anywhere."""
ONE_MODE = [(40, kappa) for kappa in (1.0, 3.0, 10.0)] + [(100, 3.0)]


def measure() -> Numbers:
    """Shares right and wrong."""
    right = dict(zip(OUTCOMES, spread_over(outcome_right, OUTCOMES), strict=True))
    false = dict(zip(ONE_MODE, spread_over(more_than_one, ONE_MODE), strict=True))
    (found,) = spread_over(two_found, [20])
    for name, share in right.items():
        print(f"  30 readings, {name}: right {share:.4f}")
    for (n, kappa), share in false.items():
        print(f"  one mode, n = {n}, kappa {kappa:g}: more than one found {share:.4f}")
    print(f"  two modes 90 deg apart, kappa 8, 20 readings each: found {found:.4f}")
    return {
        "circular.outcome_right_min": min(right.values()),
        "circular.two_modes_found": found,
        "circular.two_modes_false": max(false.values()),
    }


def _sample(random: np.random.Generator, directions: tuple[float, ...], each: int, kappa: float) -> np.ndarray:
    turn = random.uniform(0, 360)
    parts = [turn + d + np.degrees(random.vonmises(0, kappa, each)) for d in directions]
    return np.concatenate(parts)


def outcome_right(outcome: str) -> float:
    """Share of 30-reading samples whose outcome is the one they were made with."""
    random = generator("outcome", outcome)
    directions = OUTCOMES[outcome]
    right = 0
    for _ in range(TRIALS):
        angles = _sample(random, directions, 30 // len(directions), KAPPA) if directions else random.uniform(0, 360, 30)
        right += summarise(angles, spacing=False).outcome == outcome
    return right / TRIALS


def two_found(each: int) -> float:
    """Share of clear two-mode samples in which exactly two modes are found."""
    random = generator("two modes", each)
    return sum(len(find_modes(_sample(random, (0.0, 90.0), each, KAPPA)) or []) == 2 for _ in range(TRIALS)) / TRIALS


def more_than_one(cell: tuple[int, float]) -> float:
    """Share of one-mode samples in which more are found."""
    n, kappa = cell
    random = generator("one mode", n, kappa)
    return sum(len(find_modes(_sample(random, (0.0,), n, kappa)) or []) > 1 for _ in range(TRIALS)) / TRIALS
