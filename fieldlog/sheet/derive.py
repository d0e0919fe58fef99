"""True bearings from what was read: the fields that the projection computes.

true = magnetic + declination (east positive); true = grid + convergence.
Mirrored in static/js/sheet/derive.js; tests/vectors/derive.json holds both to the same answers.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

from fieldlog.sheet.fields import Sheet


def correction_deg(row: Mapping[str, Any]) -> float | None:
    """Degrees to add to a bearing as read to make it true; None where they are not known.

    `row` holds `north` and, as north asks for it, `declination_deg` or `convergence_deg`.
    """
    north = row.get("north")
    if north in ("true", "set"):
        return 0.0
    if north == "magnetic":
        return _number(row.get("declination_deg"))
    if north == "grid":
        return _number(row.get("convergence_deg"))
    return None


def derive(sheet: Sheet, row: Mapping[str, Any]) -> dict[str, float | None]:
    """The derived bearings of one record: degrees from true north, rounded to the sheet's decimals.

    A value is None where the bearing or its correction is missing.
    """
    derived: dict[str, float | None] = {}
    for field in sheet.fields:
        if not (field.is_derived and field.is_angle):
            continue
        read = _number(row.get(field.derived_from[0]))
        correction = correction_deg(row)
        if read is None or correction is None:
            derived[field.name] = None
            continue
        looking_up = "slip_face_looking" in field.derived_from and row.get("slip_face_looking") == "up"
        turned = read + correction + (180.0 if looking_up else 0.0)
        limit = field.limit or 360.0
        derived[field.name] = round_half_up(turned % limit, field.decimals or 0) % limit
    return derived


def round_half_up(value: float, decimals: int) -> float:
    """Round as JavaScript's Math.round does, so that phone and store write the same digits."""
    scale = float(10**decimals)
    return math.floor(value * scale + 0.5) / scale


def _number(value: object) -> float | None:
    return float(value) if isinstance(value, int | float) and not isinstance(value, bool) else None
