"""Declination against the World Magnetic Model's official test values, in both languages.

Source: WMM2025 report table and WMM2025_TEST_VALUES.txt (NOAA NCEI and British Geological Survey,
17 Dec 2024), copied with their own notes into tests/published/world_magnetic_model.json.
"""

from __future__ import annotations

import json
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import Any

import pytest
from pygeomag import GeoMag

from fieldlog.errors import Refusal
from fieldlog.science import wmm_module
from fieldlog.science.magnetic import MODELS, declination
from tests.mirror import javascript

CASES = {
    case["id"]: case
    for case in json.loads(
        (Path(__file__).parents[1] / "published" / "world_magnetic_model.json").read_text(encoding="utf-8")
    )
}
OFFICIAL = [
    (point, value)
    for name in ("wmm-01", "wmm-02", "wmm-03")
    for point, value in zip(CASES[name]["inputs"]["points"], CASES[name]["expected"]["values"], strict=True)
]
DESERTS = list(zip(CASES["wmm-04"]["inputs"]["points"], CASES["wmm-04"]["expected"]["values"], strict=True))
HALF = 0.005 + 1e-6
"""Half of the last printed digit, and what rounding a half adds."""


def at_year(year: float) -> datetime:
    start = datetime(int(year), 1, 1, tzinfo=UTC)
    return start + (year - int(year)) * (start.replace(year=start.year + 1) - start)


def millis(when: datetime) -> int:
    return round(when.timestamp() * 1000)


@pytest.mark.parametrize(("point", "value"), OFFICIAL, ids=lambda part: str(part.get("lat", "")))
def test_official_values(point: dict[str, Any], value: dict[str, Any]) -> None:
    lon = (point["lon"] + 180) % 360 - 180
    when = at_year(point["year"])
    got = declination(point["lat"], lon, point["height_km"] * 1000, when)
    assert got.model == "WMM2025"
    assert got.declination_deg == pytest.approx(value["declination_deg"], abs=0.01 + 1e-9)


def test_the_phone_gives_the_official_values() -> None:
    calls = [["magneticField", p["lat"], p["lon"], p["height_km"], p["year"]] for p, _ in OFFICIAL]
    for (_, value), got in zip(OFFICIAL, javascript("science/magnetic.js", *calls), strict=True):
        assert got["declination_deg"] == pytest.approx(value["declination_deg"], abs=HALF)
        assert got["inclination_deg"] == pytest.approx(value["inclination_deg"], abs=HALF)
        assert got["horizontal_nt"] == pytest.approx(value["h_nT"], abs=0.06)


@pytest.mark.parametrize(("point", "value"), DESERTS, ids=lambda part: str(part["place"]))
def test_deserts(point: dict[str, Any], value: dict[str, Any]) -> None:
    when = datetime.fromisoformat(point["date"]).replace(tzinfo=UTC)
    got = declination(point["lat"], point["lon"], point["altitude_m"], when)
    assert got.declination_deg == pytest.approx(value["declination_deg"], abs=0.01)
    assert got.uncertainty_deg == pytest.approx(value["declination_uncertainty_deg"], abs=HALF)


def test_the_phone_records_what_the_desk_records() -> None:
    places = [(lat, lon, alt) for lat in (-75.0, -33.3, 0.0, 25.4, 61.0) for lon in (-170.0, -20.5, 53.2, 179.9)
              for alt in (0.0, 1234.5)]
    whens = [datetime(2025, 1, 1, tzinfo=UTC), datetime(2026, 3, 4, 5, 6, 7, tzinfo=UTC),
             datetime(2029, 12, 31, 23, 59, 59, tzinfo=UTC)]
    given = [(*place, when) for place in places for when in whens]
    calls = [["declinationAt", lat, lon, alt, millis(when)] for lat, lon, alt, when in given]
    for (lat, lon, alt, when), got in zip(given, javascript("science/magnetic.js", *calls), strict=True):
        here = declination(lat, lon, alt, when)
        # The last digit may round the other way where the value lies on a half.
        assert got["declination_deg"] == pytest.approx(here.declination_deg, abs=0.0101), (lat, lon, when)
        assert got["uncertainty_deg"] == pytest.approx(here.uncertainty_deg, abs=0.0101)
        assert got["model"] == here.model


def test_phone_and_desk_agree_to_a_billionth_before_rounding() -> None:
    given = [(-24.73, 15.34, 0.6, 2026.5), (20.0, 50.5, 0.15, 2026.9), (89.0, -121.0, 28.0, 2025.0)]
    model = GeoMag(coefficients_file=MODELS[0][1])
    answers = javascript("science/magnetic.js", *[["magneticField", *one] for one in given])
    for (lat, lon, height, year), got in zip(given, answers, strict=True):
        expected = model.calculate(glat=lat, glon=lon, alt=height, time=year)
        assert got["declination_deg"] == pytest.approx(expected.d, rel=1e-9)
        assert got["horizontal_nt"] == pytest.approx(expected.h, rel=1e-9)


def test_older_observations_take_the_model_of_their_time() -> None:
    # Which file serves which date: the models' own life spans (WMM reports 2015 to 2025).
    assert declination(-24.73, 15.34, 0, datetime(2019, 12, 31, tzinfo=UTC)).model == "WMM2015v2"
    assert declination(-24.73, 15.34, 0, datetime(2020, 1, 1, tzinfo=UTC)).model == "WMM2020"
    assert declination(-24.73, 15.34, 0, datetime(2024, 12, 31, 23, 59, tzinfo=UTC)).model == "WMM2020"
    assert declination(-24.73, 15.34, 0, datetime(2025, 1, 1, tzinfo=UTC)).model == "WMM2025"


@pytest.mark.parametrize("when", [datetime(2014, 12, 31, tzinfo=UTC), datetime(2030, 1, 1, tzinfo=UTC)])
def test_a_date_that_no_model_serves_is_refused(when: datetime) -> None:
    with pytest.raises(Refusal, match=rf"no magnetic model for {when.date()}.*type the declination"):
        declination(20, 50, 0, when)
    assert javascript("science/magnetic.js", ["declination", 20, 50, 0, millis(when)]) == [None]


def test_a_place_that_is_none_is_refused() -> None:
    when = datetime(2026, 1, 1, tzinfo=UTC)
    for lat, lon, alt in ((91, 0, 0), (0, 400, 0), (float("nan"), 0, 0), (0, 0, 1e7)):
        with pytest.raises(Refusal):
            declination(lat, lon, alt, when)
    with pytest.raises(Refusal, match="no zone"):
        declination(0, 0, 0, when.replace(tzinfo=None))
    assert declination(0, 0, None, when) == declination(0, 0, 0, when + timedelta(0))


def test_the_phones_coefficients_are_fresh() -> None:
    assert wmm_module.main(["--check"]) == 0
