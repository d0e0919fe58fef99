"""Where readings crowd together, for checks only: the finding's modes need more readings than a check
has, and a mixture is bent by the very reading that a check looks for.

A crowd is a direction with at least a fifth of the readings, and three, within an eighth of the turn
to either side; there are up to three. Our own rule, chosen so that samples without a stray reading
stay quiet (tests/sheet/test_questions.py counts). Mirrored in static/js/sheet/crowd.js.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

MOST_CROWDS: Final = 3
LEAST_MEMBERS: Final = 3
LEAST_SHARE: Final = 0.2
LEAST_COVERED: Final = 0.75
"""Where the crowds hold less than this share of the readings, nothing is stray: all is spread."""

MAD_TO_SD: Final = 1.4826
"""Standard deviations in a median absolute deviation, for a normal distribution."""


@dataclass(frozen=True)
class Stray:
    """A reading far from its nearest crowd: its position, and the crowd's direction (degrees)."""

    position: int
    crowd_deg: float


def signed_turn(from_deg: float, to_deg: float, period_deg: float) -> float:
    """The turn from one angle to another, -period/2 <= x < period/2."""
    half = period_deg / 2
    turned = math.fmod(to_deg - from_deg + half, period_deg)
    return (turned + period_deg if turned < 0 else turned) - half


def mean_and_length(angles_deg: Sequence[float], period_deg: float) -> tuple[float, float]:
    """Circular mean, 0 <= x < period, and mean resultant length of at least one angle."""
    k = 2 * math.pi / period_deg
    c, s = 0.0, 0.0
    for angle in angles_deg:
        c += math.cos(angle * k)
        s += math.sin(angle * k)
    return _polar(c, s, len(angles_deg), period_deg)


def means_of_others(angles_deg: Sequence[float], period_deg: float) -> list[tuple[float, float]]:
    """For each of at least two angles, mean and mean resultant length of all the others."""
    k = 2 * math.pi / period_deg
    cosines = [math.cos(angle * k) for angle in angles_deg]
    sines = [math.sin(angle * k) for angle in angles_deg]
    c, s = sum(cosines), sum(sines)
    others = len(angles_deg) - 1
    return [_polar(c - x, s - y, others, period_deg) for x, y in zip(cosines, sines, strict=True)]


def _polar(c: float, s: float, n: int, period_deg: float) -> tuple[float, float]:
    mean = math.atan2(s, c) * period_deg / (2 * math.pi)
    return mean + period_deg if mean < 0 else mean, math.sqrt(c * c + s * s) / n


def median(values: Sequence[float]) -> float:
    """Median of at least one value."""
    ordered, half = sorted(values), len(values) // 2
    return ordered[half] if len(ordered) % 2 else (ordered[half - 1] + ordered[half]) / 2


def strays(angles_deg: Sequence[float], period_deg: float, spreads: float) -> list[Stray]:
    """Readings farther than `spreads` standard deviations of their nearest crowd from it, and farther
    than an eighth of the turn; the deviation is the crowd's own, by its median absolute deviation.
    None where the readings are spread all round."""
    crowds = find_crowds(angles_deg, period_deg)
    if not crowds:
        return []
    nearest = [min(crowds, key=lambda crowd: abs(signed_turn(crowd, angle, period_deg))) for angle in angles_deg]
    off = [abs(signed_turn(crowd, angle, period_deg)) for crowd, angle in zip(nearest, angles_deg, strict=True)]
    spread = {
        crowd: MAD_TO_SD * median([o for o, c in zip(off, nearest, strict=True) if c == crowd])
        for crowd in set(nearest)
    }
    return [
        Stray(i, crowd)
        for i, (crowd, distance) in enumerate(zip(nearest, off, strict=True))
        if distance > max(spreads * spread[crowd], period_deg / 8)
    ]


def find_crowds(angles_deg: Sequence[float], period_deg: float) -> list[float]:
    """Directions of the crowds, the largest first; empty where they hold too few of the readings."""
    window = period_deg / 8
    least = max(LEAST_MEMBERS, LEAST_SHARE * len(angles_deg))
    left = list(angles_deg)
    crowds: list[float] = []
    while left and len(crowds) < MOST_CROWDS:
        members = _densest(left, window, period_deg)
        if len(members) < least:
            break
        crowds.append(mean_and_length(members, period_deg)[0])
        left = [angle for angle in left if angle not in members]
    return crowds if len(angles_deg) - len(left) >= LEAST_COVERED * len(angles_deg) else []


def _densest(angles: Sequence[float], window: float, period: float) -> list[float]:
    """The readings around the one with most neighbours, the closest neighbours where several have as many."""
    best: list[float] = []
    least_total = math.inf
    for middle in angles:
        turns = [abs(signed_turn(middle, angle, period)) for angle in angles]
        members = [angle for angle, turn in zip(angles, turns, strict=True) if turn <= window]
        total = sum(turn for turn in turns if turn <= window)
        if len(members) > len(best) or (len(members) == len(best) and total < least_total):
            best, least_total = members, total
    return best
