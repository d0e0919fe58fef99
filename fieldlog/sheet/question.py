"""A question, and the thresholds at which checks ask one. Mirrored in static/js/sheet/question.js."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, fields
from typing import Any

from fieldlog.sheet.subjects import ASKS


@dataclass(frozen=True)
class Question:
    """What a check asks about one observation; `other_records` are those it is compared with or, for
    questions about an instrument's day, the others that it concerns."""

    code: str
    record: str
    other_records: tuple[str, ...]
    sentence: str


@dataclass(frozen=True)
class Thresholds:
    """When a check asks."""

    square_deg: float = 30.0
    """Slip face off square to its brink or crest by more."""
    steepest_deg: float = 36.0
    gentlest_deg: float = 28.0
    """Dip of a slip face beyond these."""
    accuracies: float = 2.0
    """Place farther from its site than the radius and so many accuracies."""
    opposed_deg: float = 30.0
    opposed_others: int = 5
    opposed_resultant: float = 0.7
    """Slip face within so much of 180 deg off so many others with at least that resultant length."""
    outlier_readings: int = 8
    outlier_spreads: float = 4.0
    """From so many readings on, one farther than so many standard deviations from the nearest crowd."""
    repeat_s: float = 60.0
    """The same value on the same dune within so many seconds."""
    back_s: float = 60.0
    """Observed earlier than the one saved before it by more."""
    declination_deg: float = 5.0
    declination_steps: float = 2.0
    """True and magnetic are told apart where the declination is at least this, and so many steps."""
    north_readings: int = 5
    north_errors: float = 2.5
    """So many readings of an instrument's day, off by so many standard errors."""


def thresholds_of(survey: Mapping[str, Any]) -> Thresholds:
    """The thresholds that a survey's row sets; the defaults for those it does not."""
    names = (field.name for field in fields(Thresholds))
    return Thresholds(**{name: value for name in names if (value := survey.get(f"{ASKS}{name}")) is not None})


def whole(angle_deg: float, limit_deg: int = 360) -> int:
    """Whole degrees, 0 <= x < limit: 359.7 reads 0."""
    return math.floor(angle_deg + 0.5) % limit_deg
