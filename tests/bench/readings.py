"""Observations as phones make them: the fields of a usual reading, with values that differ as in the field."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta
from typing import Any

import numpy as np

from fieldlog.sheet.times import wire_time

BEGIN = datetime(2026, 7, 7, 3, 0, tzinfo=UTC)


def readings(random: np.random.Generator, count: int, site: str) -> list[dict[str, Any]]:
    """`count` readings, ten on each dune, a minute or two apart, walked along at walking pace."""
    when, lat, lon = BEGIN, -19.9462, 66.0318
    made = []
    for i in range(count):
        when += timedelta(seconds=int(random.integers(40, 160)))
        lat, lon = lat + random.normal(0, 4e-5), lon + random.normal(0, 4e-5)
        crest = int(random.normal(52, 9)) % 360
        made.append({
            "site": site, "observed_at": wire_time(when), "lat_deg": round(lat, 7), "lon_deg": round(lon, 7),
            "altitude_m": round(210 + random.normal(0, 6), 1), "accuracy_m": round(float(random.uniform(3, 9)), 1),
            "fix_method": "averaged", "fixes_n": int(random.integers(5, 40)), "fixes_spread_m": round(float(random.uniform(0.5, 3)), 1),
            "bedform": i // 10 + 1, "bedform_order": "dune", "face": "main", "dune_type": "barchanoid", "instrument": "K-2",
            "north": "magnetic", "how_read": "hand_compass", "reading_step_deg": 1, "declination_deg": -16.41,
            "declination_model": "WMM2025", "crest_read_deg": crest, "slip_face_read_deg": int(crest + 270 + random.normal(0, 5)) % 360,
            "slip_face_looking": "down", "slip_face_dip_deg": int(random.integers(29, 35)), "grain_class": "fine_sand",
            "surface_type": "loose_sand", "dune_position": "brink",
        })
    return made
