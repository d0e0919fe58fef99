"""How many readings, or bedforms, the target half-width needs."""

from __future__ import annotations

import math
from typing import Final

from fieldlog.science.interval import FEWEST, Rule, sine_of_half_width

SURE: Final = 0.8416212335729143
"""Standard normal point of 0.8: of the surveys that take the number asked for, 4 in 5 reach the target."""

MOST: Final = 100_000


def needed(spread: float, n: int, target_deg: float, rule: Rule) -> int | None:
    """Total number (those taken included) that gives `target_deg` with a probability of about 0.8.

    `spread` as in Interval, from n directions; `target_deg` on the circle that is analysed. The
    spread of a small sample is itself uncertain, so the count is made for its upper 80 % bound
    (chi-square with n - 1 by Wilson & Hilferty 1931). None where more than 100,000 are needed.
    """
    target = math.sin(math.radians(min(target_deg, 90.0)))
    upper = spread * upper_bound(n)
    low, high = FEWEST - 1, FEWEST
    while sine_of_half_width(upper, high, rule) > target:
        low, high = high, high * 2
        if low > MOST:
            return None
    while high - low > 1:
        middle = (low + high) // 2
        if sine_of_half_width(upper, middle, rule) > target:
            low = middle
        else:
            high = middle
    return high if high <= MOST else None


def upper_bound(n: int) -> float:
    """Factor from a standard deviation of n values to its upper 80 % bound; n >= 5."""
    v = 2 / (9 * (n - 1))
    return float((1 - v - SURE * math.sqrt(v)) ** -1.5)
