"""Angles at the door: checked, reduced to one turn, doubled for axes and halved back."""

from __future__ import annotations

import math
from collections.abc import Iterable
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from fieldlog.errors import Refusal

Angles = NDArray[np.float64]

FULL_TURN_DEG: Final = 360.0


class SampleError(Refusal, ValueError):
    """A sample that no statistic can be computed from."""


def checked(angles_deg: Iterable[float] | Angles, *, what: str = "reading") -> Angles:
    """A one-dimensional float array of finite numbers; raises SampleError naming the first that is not.

    Positions in the message count from 1. An empty input gives an empty array.
    """
    try:
        array = np.asarray(angles_deg if isinstance(angles_deg, np.ndarray) else list(angles_deg), dtype=np.float64)
    except (TypeError, ValueError):
        values: list[Any] = list(angles_deg)
        for i, value in enumerate(values):
            if isinstance(value, bool) or not isinstance(value, (int, float, np.number)):
                raise SampleError(f"{value!r} is not a number", f"{what} {i + 1}", "Give degrees as numbers.") from None
        raise
    if array.ndim != 1:
        raise SampleError(f"the sample has {array.ndim} dimensions", what, "Give one list of degrees.")
    if not math.isfinite(float(array.sum())) and not np.isfinite(array).all():
        i = int(np.flatnonzero(~np.isfinite(array))[0])
        raise SampleError(f"{array[i]} is not a finite number", f"{what} {i + 1}", "Give degrees as numbers.")
    return array


def reduced(angles_deg: Angles, period_deg: float = FULL_TURN_DEG) -> Angles:
    """Angles brought to 0 <= x < period; the result never holds the period itself."""
    turned = np.mod(angles_deg, period_deg)
    return np.where(turned >= period_deg, 0.0, turned)


def reduced_one(angle_deg: float, period_deg: float = FULL_TURN_DEG) -> float:
    """One angle brought to 0 <= x < period."""
    turned = math.fmod(angle_deg, period_deg)
    if turned < 0:
        turned += period_deg
    return 0.0 if turned >= period_deg else turned + 0.0


def apart(a_deg: float, b_deg: float, period_deg: float = FULL_TURN_DEG) -> float:
    """The unsigned angle between two directions (or, with period 180, two axes), at most half a period.

    >>> apart(350, 10)
    20.0
    >>> apart(175, 5, 180)
    10.0
    """
    difference = abs(reduced_one(a_deg - b_deg, period_deg))
    return float(min(difference, period_deg - difference))
