"""Magnetic declination by the World Magnetic Model. Mirrored for today's model in
static/js/science/magnetic.js.

Source: Chulliat, A., et al. (2025), The US/UK World Magnetic Model for 2025-2030: Technical Report,
NOAA National Centers for Environmental Information and British Geological Survey; the coefficients
and the evaluation are pygeomag's.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from datetime import UTC, datetime
from functools import cache
from typing import Any, Final

from fieldlog.errors import Refusal

MODELS: Final = (
    ("WMM2025", "wmm/WMM_2025.COF", 2025.0, 2030.0),
    ("WMM2020", "wmm/WMM_2020.COF", 2020.0, 2025.0),
    ("WMM2015v2", "wmm/WMM_2015v2.COF", 2015.0, 2020.0),
)
"""Name, pygeomag's coefficient file, first and last decimal year."""

DECIMALS: Final = 2
"""What is recorded: finer than the model is true."""


class MagneticError(Refusal, ValueError):
    """No declination can be given."""


@dataclass(frozen=True)
class Declination:
    """Magnetic declination in degrees, east positive (true = magnetic + declination), rounded to two
    decimals; the model's name; and the model's own error (one standard deviation, degrees), which
    more readings never shrink."""

    declination_deg: float
    model: str
    uncertainty_deg: float


def declination(lat_deg: float, lon_deg: float, altitude_m: float | None, when: datetime) -> Declination:
    """The declination at a place and time.

    `lat_deg` -90..90 and `lon_deg` -180..360 on WGS 84; `altitude_m` above its ellipsoid, None is
    taken as 0 (a kilometre changes the declination by less than 0.01 deg at desert latitudes);
    `when` an aware datetime from 2015 up to the end of 2029. Returns `Declination`. Raises
    MagneticError for a date that no model serves or a place that is none.

    The error is sqrt(0.26^2 + (5417/H)^2) deg for WMM2025 with H the horizontal field in nT (report,
    error model); rocks and iron nearby come on top and are in no model.

    >>> from datetime import UTC, datetime
    >>> declination(-24.73, 15.34, 600, datetime(2026, 7, 1, tzinfo=UTC))
    Declination(declination_deg=-15.13, model='WMM2025', uncertainty_deg=0.54)
    """
    if not (math.isfinite(lat_deg) and -90 <= lat_deg <= 90):
        raise MagneticError(f"latitude {lat_deg} is not a latitude", "declination", "Give -90 to 90 degrees.")
    if not (math.isfinite(lon_deg) and -180 <= lon_deg <= 360):
        raise MagneticError(f"longitude {lon_deg} is not a longitude", "declination", "Give -180 to 180 degrees.")
    height_km = (altitude_m or 0.0) / 1000
    if not -1 <= height_km <= 850:
        raise MagneticError(f"altitude {altitude_m} m is outside the model", "declination", "Give metres.")
    year = decimal_year(when)
    for name, file, first, last in MODELS:
        if first <= year < last:
            result = _model(file)(glat=lat_deg, glon=lon_deg, alt=height_km, time=year)
            uncertainty = result.calculate_uncertainty().d
            return Declination(rounded(result.d), name, round(min(uncertainty, 180.0), DECIMALS))
    raise MagneticError(
        f"no magnetic model for {when.astimezone(UTC).date().isoformat()}",
        "declination",
        f"Models reach from {MODELS[-1][2]:.0f} up to the end of {MODELS[0][3] - 1:.0f}; "
        "check the date, or type the declination.",
    )


def decimal_year(when: datetime) -> float:
    """The year with its elapsed share, UTC: the start of 1 January is .0."""
    if when.tzinfo is None:
        raise MagneticError("the time has no zone", "declination", "Give an aware datetime.")
    utc = when.astimezone(UTC)
    start, end = datetime(utc.year, 1, 1, tzinfo=UTC), datetime(utc.year + 1, 1, 1, tzinfo=UTC)
    return utc.year + (utc - start) / (end - start)


def rounded(declination_deg: float) -> float:
    """The value as it is recorded; never -0."""
    scale = 10.0**DECIMALS
    return math.floor(declination_deg * scale + 0.5) / scale + 0.0


@cache
def _model(file: str) -> Callable[..., Any]:
    from pygeomag import GeoMag

    calculate: Callable[..., Any] = GeoMag(coefficients_file=file).calculate
    return calculate
