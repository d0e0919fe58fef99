"""Dots that would coincide, stacked inward. Mirrored in static/js/draw/stack.js."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

DEEPEST: Final = 0.5
"""Share of the rim's radius that stacks may fill, measured from the rim inward."""

PITCH: Final = 2.12
"""Distance between the middles of two stacked dots, in radii of a dot."""


@dataclass(frozen=True)
class Stack:
    """Where the dots lie: the level of each angle (0 on the rim), the radius of a dot and the
    distance from level to level, in the unit of the rim's radius."""

    levels: tuple[int, ...]
    dot: float
    step: float


def turn(angle_deg: float, period_deg: float) -> float:
    """`angle_deg` reduced to 0 <= x < period."""
    reduced = math.fmod(angle_deg, period_deg)
    if reduced < 0:
        reduced += period_deg
    return 0.0 if reduced >= period_deg else reduced


def stack(angles_deg: Sequence[float], period_deg: float, rim: float, dots: Sequence[float]) -> Stack:
    """Give every angle a level so that no two dots of one level overlap.

    `dots` are the radii to try, largest first: the first whose stacks stay within DEEPEST of the
    rim is taken; where even the last does not fit, its levels are pressed together.
    """
    reduced = [turn(angle, period_deg) for angle in angles_deg]
    room = DEEPEST * rim
    levels: tuple[int, ...] = ()
    dot = step = 0.0
    for dot in dots:
        step = PITCH * dot
        levels = _levels(reduced, period_deg, rim, dot)
        if max(levels, default=0) * step <= room:
            return Stack(levels, dot, step)
    return Stack(levels, dot, room / max(levels))


def _levels(angles: Sequence[float], period: float, rim: float, dot: float) -> tuple[int, ...]:
    """Lowest free level of each angle, swept clockwise from the widest gap, which keeps a cluster
    across north in one piece."""
    order = sorted(range(len(angles)), key=lambda i: angles[i])
    start = _after_widest_gap([angles[i] for i in order], period)
    levels = [0] * len(angles)
    ends: list[tuple[float, float]] = []  # first and last angle on each level, as swept
    for i in order[start:] + order[:start]:
        swept = turn(angles[i] - angles[order[start]], period)
        level = 0
        while level < len(ends):
            radius = max(rim - level * PITCH * dot, (1 - DEEPEST) * rim)
            width = PITCH * dot / radius * 180 / math.pi
            first, last = ends[level]
            if swept - last >= width and first + period - swept >= width:
                break
            level += 1
        if level == len(ends):
            ends.append((swept, swept))
        else:
            ends[level] = (ends[level][0], swept)
        levels[i] = level
    return tuple(levels)


def _after_widest_gap(ordered: Sequence[float], period: float) -> int:
    start, widest = 0, -1.0
    for i, angle in enumerate(ordered):
        before = ordered[i - 1] if i else ordered[-1] - period
        if angle - before > widest:
            start, widest = i, angle - before
    return start
