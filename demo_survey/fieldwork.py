"""What the crew reads: dunes with their facings, and readings with their errors, all seeded."""

from __future__ import annotations

import zlib
from dataclasses import dataclass
from datetime import datetime, timedelta
from functools import cache
from typing import Any

import numpy as np
from country import LOCAL, NOTES, SEEDED, WITHOUT_FIX, Person, Site
from walks import moved

from fieldlog.science.magnetic import Declination, declination
from fieldlog.sheet.times import wire_time

Key = tuple[str, int, int]
"""Site, dune (or place, on the pavement) and reading on it, counted from 0."""
Values = dict[str, Any]

SET_BY_DEG = -16.5
"""What the compass that is set for declination is set to."""
NO_DUNES = "hesk"


@dataclass(frozen=True)
class Dune:
    """One dune: where its middle is, and the true direction that each of its faces faces."""

    lat: float
    lon: float
    altitude_m: float
    facing_deg: tuple[float, ...]
    height_m: float


def random_for(*what: object) -> np.random.RandomState:
    """Numbers of their own for each subject, so that one may change without changing the others."""
    return np.random.RandomState(zlib.crc32("/".join(map(str, what)).encode()))


@cache
def dune(site: Site, number: int) -> Dune:
    """Dunes stand along the site's transect, a little to its left and right."""
    random = random_for("dune", site.key, site.seed, number)
    radius = float(str(site.values["radius_m"]))
    along = radius * (-0.72 + 1.44 * (number - 1) / (site.places - 1) + random.normal(0, 0.02))
    across = radius * random.uniform(-0.12, 0.12)
    bearing = np.radians(site.transect_deg)
    lat, lon = moved(
        float(str(site.values["lat_deg"])), float(str(site.values["lon_deg"])),
        along * np.sin(bearing) + across * np.cos(bearing), along * np.cos(bearing) - across * np.sin(bearing),
    )
    facing: tuple[float, ...] = ()
    if site.dune_type == "star":
        turn = random.uniform(0, 360)
        facing = tuple(face + turn + random.normal(0, 12) for face in site.facing_deg)
    elif site.facing_deg:
        main = site.facing_deg[number % len(site.facing_deg)] + random.normal(0, site.between_deg)
        facing = (main, main + 180 + random.normal(0, 7)) if site.dune_type == "reversing" else (main,)
    tall = {"star": 62, "linear": 24, "barchan": 6}.get(site.dune_type, 11)
    return Dune(lat, lon, 212 + random.normal(0, 3), facing, round(tall * random.uniform(0.75, 1.3), 1))


def face_of(site: Site, reading: int) -> tuple[str, int]:
    """Which face is read, as the sheet names it and as the dune numbers it."""
    if site.dune_type == "star":
        return "main", reading % 3
    if site.dune_type == "reversing" and reading >= 3:
        return "reversed_cap", 1
    return "main", 0


def observe(person: Person, site: Site, key: Key, when: datetime, random: np.random.RandomState) -> Values:
    """The values of one observation but for its site's record."""
    _, number, reading = key
    place = dune(site, number)
    lat, lon = moved(place.lat, place.lon, random.uniform(-22, 22), random.uniform(-22, 22))
    values: Values = {"observed_at": wire_time(when)}
    if SEEDED.get(key) == "far_from_site":
        lat += 0.05
    if key not in WITHOUT_FIX:
        values |= _fix(lat, lon, place.altitude_m, random)
    if site.key == NO_DUNES:
        values |= _pavement(number, random)
    else:
        values |= _bearings(person, site, key, random, declination(lat, lon, place.altitude_m, when))
        values |= _sand(site, place, reading, random)
    if key in NOTES:
        values["note"] = NOTES[key]
    return values


def _fix(lat: float, lon: float, altitude_m: float, random: np.random.RandomState) -> Values:
    values: Values = {
        "lat_deg": round(lat, 7), "lon_deg": round(lon, 7), "altitude_m": round(altitude_m + random.normal(0, 2), 1),
        "accuracy_m": round(random.uniform(3, 8), 1), "fix_method": "averaged",
    }
    if random.uniform() < 0.12:
        return values | {"fix_method": "single", "fixes_n": 1}
    return values | {"fixes_n": int(random.randint(8, 26)), "fixes_spread_m": round(random.uniform(0.6, 2.9), 1)}


def _bearings(
    person: Person, site: Site, key: Key, random: np.random.RandomState, here: Declination
) -> Values:
    _, number, reading = key
    slip = SEEDED.get(key, "")
    face, which = face_of(site, reading)
    facing = dune(site, number).facing_deg[which] + random.normal(0, site.within_deg)
    crest = facing + random.choice((-90, 90)) + random.normal(0, 6) + (52 if slip == "not_square" else 0)
    facing += 180 if slip == "opposed" else 0
    looking_up = random.uniform() < 0.15
    values: Values = {
        "bedform": number, "bedform_order": "dune", "face": face, "dune_type": site.dune_type,
        "instrument": person.instrument, "north": person.north, "how_read": "hand_compass",
        "reading_step_deg": person.step_deg, "declination_deg": here.declination_deg, "declination_model": here.model,
    }
    if slip == "wrong_north":
        values["north"] = "true"
    # What the card shows is off true north by this much.
    off = here.declination_deg - SET_BY_DEG if person.north == "set" else here.declination_deg
    return values | {
        "crest_read_deg": _read(crest - off, person.step_deg),
        "crest_place": "arm" if site.dune_type == "star" else "middle",
        "crest_chord_m": int(random.randint(3, 13) * 5),
        "slip_face_read_deg": _read(facing - off + (180 if looking_up else 0), person.step_deg),
        "slip_face_looking": "up" if looking_up else "down",
        "slip_face_dip_deg": 41 if slip == "dip" else _dip(random),
        "slip_face_state": "degraded" if random.uniform() < 0.1 else "active",
    }


def _read(angle_deg: float, step_deg: int) -> int:
    """A bearing as someone reads it off a card with marks every `step_deg`."""
    return int(round(angle_deg / step_deg) * step_deg) % 360


def _dip(random: np.random.RandomState) -> Any:
    if random.uniform() < 0.06:
        return {"absent": "not_measurable"}
    return int(np.clip(round(random.normal(32, 1)), 29, 35))


def _sand(site: Site, place: Dune, reading: int, random: np.random.RandomState) -> Values:
    values: Values = {
        "grain_class": str(random.choice(site.grains)), "surface_type": "loose_sand", "landform": "dune_field",
        "dune_position": str(random.choice(("brink", "crest", "slip_face"))), "activity": "active",
    }
    if random.uniform() < 0.5:
        values["sorting"] = str(random.choice(("very_well", "well", "well", "moderate")))
    if reading == 0:
        values["height_m"] = place.height_m
    return values


def _pavement(number: int, random: np.random.RandomState) -> Values:
    absent = {"absent": "none_here"}
    in_wash = number in (10, 11)
    surface = "boulder_strewn" if in_wash else ("stone_pavement", "stone_pavement", "gravel_plain")[number % 3]
    return {
        "dune_type": "none", "crest_read_deg": absent, "slip_face_read_deg": absent, "slip_face_dip_deg": absent,
        "grain_class": "cobble" if in_wash else "pebble", "grain_class_second": "silt_clay",
        "surface_type": surface, "stone_cover_percent": int(random.randint(8, 20) * 5),
        "landform": "wash_channel" if in_wash else "hamada",
    }


def pause(random: np.random.RandomState) -> timedelta:
    """Between two readings on one dune."""
    return timedelta(seconds=int(random.randint(95, 171)))


def stroll(random: np.random.RandomState) -> timedelta:
    """From one dune to the next."""
    return timedelta(seconds=int(random.randint(240, 481)))


def day_of(when: datetime) -> int:
    """Day of July 2026 on the crew's watches."""
    return when.astimezone(LOCAL).day
