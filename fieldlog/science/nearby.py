"""Distance and bearing over a few kilometres, in closed form, the same at the desk and on the phone.

Mirrored in static/js/science/geodesy.js; for longer ways and for coordinates to keep use
fieldlog/science/geodesy.py. The formula is the mid-latitude one (Gauss): the differences of latitude
and longitude times the meridian's and the prime vertical's radius of curvature at the middle
latitude; common practice of geodesy, written from memory and held to PROJ by the tests: within 0.1 %
and 0.1 degree up to 100 km and 80 degrees of latitude.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Final

A_M: Final = 6378137.0
F: Final = 1 / 298.257223563
E2: Final = F * (2 - F)


@dataclass(frozen=True)
class Way:
    """From one place to another: metres, and the true bearing at the first, 0 <= x < 360."""

    distance_m: float
    bearing_deg: float


def way(lat1_deg: float, lon1_deg: float, lat2_deg: float, lon2_deg: float) -> Way:
    """The way between two places on WGS 84 (degrees), also across the 180th meridian."""
    middle = math.radians((lat1_deg + lat2_deg) / 2)
    meridian, vertical = _radii(middle)
    east_turn = math.radians(math.fmod(lon2_deg - lon1_deg + 540.0, 360.0) - 180.0)
    north = meridian * math.radians(lat2_deg - lat1_deg)
    east = vertical * math.cos(middle) * east_turn
    bearing = math.degrees(math.atan2(east, north) - east_turn * math.sin(middle) / 2)
    if bearing < 0:
        bearing += 360.0
    return Way(math.sqrt(north * north + east * east), 0.0 if bearing >= 360.0 else bearing)


def moved(lat_deg: float, lon_deg: float, bearing_deg: float, distance_m: float) -> tuple[float, float]:
    """Latitude and longitude (degrees) after a short way along a true bearing."""
    lat, bearing = math.radians(lat_deg), math.radians(bearing_deg)
    meridian, vertical = _radii(lat)
    north, east = distance_m * math.cos(bearing), distance_m * math.sin(bearing)
    return lat_deg + math.degrees(north / meridian), lon_deg + math.degrees(east / (vertical * math.cos(lat)))


def _radii(lat: float) -> tuple[float, float]:
    """Radii of curvature along the meridian and across it, metres; Snyder (1987), Map Projections - A
    Working Manual, USGS Professional Paper 1395, equations 4-18 and 4-20 (cited from memory)."""
    w = 1 - E2 * math.sin(lat) ** 2
    return A_M * (1 - E2) / (w * math.sqrt(w)), A_M / math.sqrt(w)
