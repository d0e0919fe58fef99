"""Places on WGS 84: distance, bearing, UTM, and where on a track one was at a time.

Geodesics and transverse Mercator are PROJ's (through pyproj): Karney, C.F.F. (2013), Algorithms for
geodesics, J. Geodesy 87, 43-55; Karney (2011), Transverse Mercator with an accuracy of a few
nanometers, J. Geodesy 85, 475-485. The phone's smaller versions are in static/js/science/.
"""

from __future__ import annotations

import math
from bisect import bisect_left
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime
from functools import cache
from typing import Any, Final

from fieldlog.errors import Refusal

UTM_SOUTHMOST, UTM_NORTHMOST = -80.0, 84.0
"""Latitudes between which UTM is defined."""

EASTINGS_M: Final = (100_000.0, 900_000.0)
NORTHINGS_M: Final = (0.0, 10_000_000.0)


class PlaceError(Refusal, ValueError):
    """Coordinates that are none, or a time at which a track has no place."""


@dataclass(frozen=True)
class Place:
    """Degrees on WGS 84, north and east positive."""

    lat_deg: float
    lon_deg: float


@dataclass(frozen=True)
class UTM:
    """A place on the UTM grid of WGS 84; `hemisphere` is "N" or "S", `convergence_deg` the grid
    convergence: true bearing = grid bearing + convergence."""

    zone: int
    hemisphere: str
    easting_m: float
    northing_m: float
    convergence_deg: float


@dataclass(frozen=True)
class TrackPlace:
    """A place between two points of a track; `gap_s` is the time between those two."""

    lat_deg: float
    lon_deg: float
    altitude_m: float | None
    gap_s: float


def distance_m(lat1_deg: float, lon1_deg: float, lat2_deg: float, lon2_deg: float) -> float:
    """Length of the geodesic between two places, metres, as good as the coordinates. Raises
    PlaceError for a place that is none."""
    return float(_inverse(lat1_deg, lon1_deg, lat2_deg, lon2_deg)[2])


def bearing_deg(lat1_deg: float, lon1_deg: float, lat2_deg: float, lon2_deg: float) -> float:
    """True bearing of the geodesic at the first place, 0 <= x < 360; 0 for two equal places.
    Raises PlaceError for a place that is none.

    >>> round(bearing_deg(-24.7297, 15.342, -24.731, 15.3455), 4)
    112.1309
    """
    if (lat1_deg, lon1_deg) == (lat2_deg, lon2_deg):
        return 0.0
    azimuth = _inverse(lat1_deg, lon1_deg, lat2_deg, lon2_deg)[0] % 360.0
    return 0.0 if azimuth >= 360.0 else float(azimuth)


def destination(lat_deg: float, lon_deg: float, bearing_deg: float, distance_m: float) -> Place:
    """The place at a true bearing and a distance along the geodesic; longitude in -180 <= x <= 180.
    Raises PlaceError for a place that is none."""
    check_place(lat_deg, lon_deg)
    lon, lat, _ = _geod().fwd(lon_deg, lat_deg, bearing_deg, distance_m)
    return Place(float(lat), float(lon))


def utm_zone(lat_deg: float, lon_deg: float) -> int:
    """The UTM zone of a place, 1 to 60; a meridian between two zones belongs to the eastern one.

    South-west Norway and Svalbard have zones of their own shape. Raises PlaceError outside
    80 S to 84 N, where UTM is not defined.
    """
    check_place(lat_deg, lon_deg)
    if not UTM_SOUTHMOST <= lat_deg <= UTM_NORTHMOST:
        raise PlaceError(f"latitude {lat_deg:g} has no UTM zone", "UTM", "UTM reaches from 80 S to 84 N.")
    if 56 <= lat_deg < 64 and 3 <= lon_deg < 12:
        return 32
    if lat_deg >= 72 and 0 <= lon_deg < 42:
        return next(zone for zone, east in ((31, 9), (33, 21), (35, 33), (37, 42)) if lon_deg < east)
    return math.floor((lon_deg + 180.0) / 6.0) % 60 + 1


def to_utm(lat_deg: float, lon_deg: float, *, zone: int | None = None) -> UTM:
    """A place on the UTM grid; in its own zone where none is named. Raises PlaceError as utm_zone."""
    own = utm_zone(lat_deg, lon_deg)
    zone = own if zone is None else zone
    projection = _utm(zone, south=lat_deg < 0)
    easting, northing = projection(lon_deg, lat_deg)
    convergence = projection.get_factors(lon_deg, lat_deg).meridian_convergence
    return UTM(zone, "S" if lat_deg < 0 else "N", float(easting), float(northing), float(convergence))


def from_utm(zone: int, hemisphere: str, easting_m: float, northing_m: float) -> Place:
    """The place of UTM coordinates on WGS 84.

    `zone` 1 to 60, `hemisphere` "N" or "S" (not the band letter of a grid reference), easting 100 000
    to 900 000 m, northing 0 to 10 000 000 m. Raises PlaceError naming the one that is not.
    """
    if not 1 <= zone <= 60:
        raise PlaceError(f"zone {zone} does not exist", "UTM", "Zones run from 1 to 60.")
    if hemisphere not in ("N", "S"):
        raise PlaceError(f"hemisphere {hemisphere!r} is neither N nor S", "UTM", "N is north of the equator.")
    for what, value, (low, high) in (("easting", easting_m, EASTINGS_M), ("northing", northing_m, NORTHINGS_M)):
        if not low <= value <= high:
            span = f"It lies between {low:.0f} and {high:.0f}."
            raise PlaceError(f"{what} {value:g} m is outside the zone", "UTM", span)
    lon, lat = _utm(zone, south=hemisphere == "S")(easting_m, northing_m, inverse=True)
    return Place(float(lat), float(lon))


def grid_convergence_deg(lat_deg: float, lon_deg: float) -> float:
    """Grid convergence of a place's own UTM zone, degrees: true = grid + convergence. Raises
    PlaceError outside 80 S to 84 N."""
    return to_utm(lat_deg, lon_deg).convergence_deg


def along_track(
    points: Sequence[tuple[float, float, float | None, datetime | None]], when: datetime
) -> TrackPlace:
    """Where a track was at a time, on the geodesic between the points before and after it, at
    unchanging speed.

    `points`: latitude, longitude, altitude (m) and time; points without a time are passed over, the
    rest may stand in any order. Raises PlaceError where the time lies outside the track.
    """
    timed = sorted((p for p in points if p[3] is not None), key=lambda p: p[3])  # type: ignore[arg-type, return-value]
    times: list[datetime] = [p[3] for p in timed if p[3] is not None]
    if not times or not times[0] <= when <= times[-1]:
        span = f"It runs from {times[0].isoformat()} to {times[-1].isoformat()}." if times else "It has no times."
        raise PlaceError(f"the track has no place at {when.isoformat()}", "track", span)
    after = max(bisect_left(times, when), 1) if len(times) > 1 else 0
    before = max(after - 1, 0)
    (lat1, lon1, up1, _), (lat2, lon2, up2, _) = timed[before], timed[after]
    gap = (times[after] - times[before]).total_seconds()
    share = (when - times[before]).total_seconds() / gap if gap else 0.0
    forward, _, length = _inverse(lat1, lon1, lat2, lon2)
    place = destination(lat1, lon1, forward, length * share)
    altitude = None if up1 is None or up2 is None else up1 + share * (up2 - up1)
    return TrackPlace(place.lat_deg, place.lon_deg, altitude, gap)


def check_place(lat_deg: float, lon_deg: float) -> None:
    """Raises PlaceError where the degrees are no place on Earth."""
    if not (math.isfinite(lat_deg) and -90 <= lat_deg <= 90):
        raise PlaceError(f"{lat_deg} is not a latitude", "latitude", "Give -90 to 90 degrees, south negative.")
    if not (math.isfinite(lon_deg) and -180 <= lon_deg <= 180):
        raise PlaceError(f"{lon_deg} is not a longitude", "longitude", "Give -180 to 180 degrees, west negative.")


def _inverse(lat1: float, lon1: float, lat2: float, lon2: float) -> tuple[float, float, float]:
    check_place(lat1, lon1)
    check_place(lat2, lon2)
    result: tuple[float, float, float] = _geod().inv(lon1, lat1, lon2, lat2)
    return result


@cache
def _geod() -> Any:
    from pyproj import Geod

    return Geod(ellps="WGS84")


@cache
def _utm(zone: int, *, south: bool) -> Any:
    from pyproj import Proj

    return Proj(proj="utm", zone=zone, south=south, ellps="WGS84")
