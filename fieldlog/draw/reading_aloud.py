"""The rose in words, for screen readers and for copying. Mirrored in static/js/draw/reading_aloud.js."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any, Final

from fieldlog.draw.stack import turn

Petals = list[tuple[float, float]]
"""(middle bearing, count)"""

MOST_LISTED: Final = 40
"""Above this many, readings are told by petal."""


def whole(angle_deg: float, limit_deg: int) -> int:
    """Whole degrees, 0 <= x < limit: 359.7 reads 0."""
    return math.floor(turn(angle_deg, limit_deg) + 0.5) % limit_deg


def title(n: int, summary: Any, axial: bool) -> str:
    """What the rose shows, in one sentence."""
    if n == 0:
        return "Rose without readings."
    return summary.finding or f"Rose of {n} {_readings(n, axial)}."


def spoken(
    readings_deg: Sequence[float],
    summary: Any,
    petals: Petals,
    axial: bool,
    *,
    crossed_out_deg: Sequence[float],
    expected_deg: float | None,
) -> str:
    """Everything the rose draws, as sentences; degrees from true north."""
    n = len(readings_deg)
    said = [f"{n} {_readings(n, axial)}." if n else "No readings.", *_mean(summary, axial)]
    limit = 180 if axial else 360
    if summary.ci95_low_deg is not None and summary.ci95_high_deg is not None:
        low, high = whole(summary.ci95_low_deg, limit), whole(summary.ci95_high_deg, limit)
        said.append(f"95 % interval from {low} clockwise to {high} deg.")
    modes = [m["direction_deg"] if isinstance(m, dict) else m.direction_deg for m in summary.modes or ()]
    if modes:
        said.append(f"{'Mode' if len(modes) == 1 else 'Modes'} at {_join([str(whole(m, limit)) for m in modes])} deg.")
    if expected_deg is not None:
        said.append(f"Expected to face towards {whole(expected_deg, 360)} deg, "
                    f"with wind from {whole(expected_deg + 180, 360)} deg.")
    if n > MOST_LISTED:
        told = [f"around {whole(bearing, limit)} deg {_figure(count)}" for bearing, count in petals if count]
        said.append(f"Readings by 20 deg: {'; '.join(told)}.")
    elif n:
        said.append(f"Readings: {_list(readings_deg, limit)} deg.")
    if len(crossed_out_deg):
        said.append(f"Crossed out: {_list(crossed_out_deg, limit)} deg.")
    return " ".join(said)


def _mean(summary: Any, axial: bool) -> list[str]:
    direction, length, threshold = summary.mean_direction_deg, summary.resultant_length, summary.threshold_resultant
    if direction is None or length is None:
        return []
    pointer = "Bar along" if axial else "Arrow towards"
    head = f"{pointer} {whole(direction, 180 if axial else 360)} deg, length {_hundredths(length)}"
    if threshold is None:
        return [f"{head}; too few to show a direction at any length."]
    if length >= threshold:
        return [f"{head}, at or above the {_hundredths(threshold)} that shows a direction."]
    return [f"{head}, below the {_hundredths(threshold)} that would show a direction: hollow."]


def _readings(n: int, axial: bool) -> str:
    return ("axis" if n == 1 else "axes") if axial else ("direction" if n == 1 else "directions")


def _list(angles_deg: Sequence[float], limit: int) -> str:
    tenths = [math.floor(turn(a, limit) * 10 + 0.5) / 10 for a in angles_deg]
    return _join([_figure(0.0 if t >= limit else t) for t in tenths])


def _figure(value: float) -> str:
    return str(int(value)) if value == int(value) else f"{value:.1f}"


def _hundredths(value: float) -> str:
    return f"{math.floor(value * 100 + 0.5) / 100:.2f}"


def _join(parts: Sequence[str]) -> str:
    return parts[0] if len(parts) == 1 else f"{', '.join(parts[:-1])} and {parts[-1]}"
