"""Places against geodesics and projections made by others, at the desk and on the phone.

tests/published/geodesy.json: made with geographiclib 2.1 (Karney 2013) and PROJ 9.5.1 (Karney 2011),
as each case says.
"""

from __future__ import annotations

import json
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.errors import Refusal
from fieldlog.science import geodesy, nearby
from tests.mirror import assert_same, javascript

CASES = {
    case["id"]: case
    for case in json.loads((Path(__file__).parents[1] / "published" / "geodesy.json").read_text(encoding="utf-8"))
}


def pairs(name: str, key: str) -> list[tuple[dict[str, Any], dict[str, Any]]]:
    return list(zip(CASES[name]["inputs"][key], CASES[name]["expected"]["values"], strict=True))


@pytest.mark.parametrize(("point", "value"), pairs("geo-01", "points"), ids=lambda part: part["place"])
def test_utm(point: dict[str, Any], value: dict[str, Any]) -> None:
    got = geodesy.to_utm(point["lat"], point["lon"])
    assert (got.zone, got.hemisphere) == (value["zone"], value["hemisphere"])
    assert got.easting_m == pytest.approx(value["easting_m"], abs=0.001)
    assert got.northing_m == pytest.approx(value["northing_m"], abs=0.001)
    assert got.convergence_deg == pytest.approx(value["grid_convergence_deg"], abs=1e-5)
    back = geodesy.from_utm(got.zone, got.hemisphere, got.easting_m, got.northing_m)
    assert (back.lat_deg, back.lon_deg) == pytest.approx((point["lat"], point["lon"]), abs=1e-9)


def test_the_phone_does_utm_to_a_millimetre() -> None:
    points = pairs("geo-01", "points")
    there = javascript("science/utm.js", *[["toUtm", p["lat"], p["lon"]] for p, _ in points])
    back = javascript("science/utm.js", *[
        ["fromUtm", u["zone"], u["hemisphere"], u["easting_m"], u["northing_m"]] for u in there
    ])
    for (point, value), utm, place in zip(points, there, back, strict=True):
        assert (utm["zone"], utm["hemisphere"]) == (value["zone"], value["hemisphere"])
        assert utm["easting_m"] == pytest.approx(value["easting_m"], abs=0.001)
        assert utm["northing_m"] == pytest.approx(value["northing_m"], abs=0.001)
        assert utm["convergence_deg"] == pytest.approx(value["grid_convergence_deg"], abs=1e-5)
        assert (place["lat_deg"], place["lon_deg"]) == pytest.approx((point["lat"], point["lon"]), abs=1e-9)


def test_phone_and_desk_agree_on_utm_all_over_the_world() -> None:
    places = [(lat, lon) for lat in (-79.5, -41.2, -0.001, 0.0, 23.4, 60.5, 73.0, 83.9)
              for lon in (-180.0, -177.3, -66.0, 0.0, 4.5, 11.99, 24.0, 41.9, 179.999)]
    answers = javascript("science/geodesy.js", *[["toUtm", *place] for place in places])
    for place, got in zip(places, answers, strict=True):
        here = geodesy.to_utm(*place)
        expected = {"zone": here.zone, "hemisphere": here.hemisphere, "easting_m": here.easting_m,
                    "northing_m": here.northing_m, "convergence_deg": here.convergence_deg}
        assert_same(got, expected, absolute=0.001, at=str(place))
        assert got["convergence_deg"] == pytest.approx(here.convergence_deg, abs=1e-6)


@pytest.mark.parametrize(("pair", "value"), pairs("geo-02", "pairs"))
def test_geodesics(pair: dict[str, float], value: dict[str, float]) -> None:
    ends = pair["lat1"], pair["lon1"], pair["lat2"], pair["lon2"]
    assert geodesy.distance_m(*ends) == pytest.approx(value["distance_m"], abs=0.001)
    assert geodesy.bearing_deg(*ends) == pytest.approx(value["azimuth_start_deg"], abs=1e-6)


@pytest.mark.parametrize(("start", "value"), pairs("geo-03", "starts"))
def test_destinations(start: dict[str, float], value: dict[str, float]) -> None:
    got = geodesy.destination(start["lat"], start["lon"], start["azimuth_deg"], start["distance_m"])
    assert (got.lat_deg, got.lon_deg) == pytest.approx((value["lat2"], value["lon2"]), abs=1e-9)


def test_the_near_formula_is_good_at_the_size_of_a_site() -> None:
    for pair, value in pairs("geo-02", "pairs"):
        if value["distance_m"] > 120_000:
            continue
        got = nearby.way(pair["lat1"], pair["lon1"], pair["lat2"], pair["lon2"])
        assert got.distance_m == pytest.approx(value["distance_m"], rel=0.001)
        assert abs((got.bearing_deg - value["azimuth_start_deg"] + 180) % 360 - 180) < 0.1


@given(st.floats(-80, 80), st.floats(-180, 180), st.floats(0, 359), st.floats(1, 100_000))
def test_the_near_formula_follows_the_geodesic(lat: float, lon: float, bearing: float, length: float) -> None:
    end = geodesy.destination(lat, lon, bearing, length)
    if abs(end.lat_deg) > 80:
        return
    got = nearby.way(lat, lon, end.lat_deg, end.lon_deg)
    assert got.distance_m == pytest.approx(length, rel=0.001)
    assert abs((got.bearing_deg - bearing + 180) % 360 - 180) < 0.1


def test_the_phones_near_formula_is_the_same() -> None:
    ways = [(-24.7297, 15.342, -24.731, 15.3455), (-17.0, 179.9995, -17.0, -179.9995), (10.0, 5.0, 10.0, 5.0),
            (39.0, 82.5, 39.3, 83.1), (0.0, 10.0, -0.5, 9.5)]
    answers = javascript("science/geodesy.js", *[["way", *one] for one in ways],
                         ["moved", -24.73, 15.34, 170.0, 250.0])
    for one, got in zip(ways, answers, strict=False):
        here = nearby.way(*one)
        assert_same(got, {"distance_m": here.distance_m, "bearing_deg": here.bearing_deg})
    lat, lon = nearby.moved(-24.73, 15.34, 170.0, 250.0)
    assert_same(answers[-1], {"lat_deg": lat, "lon_deg": lon})


@pytest.mark.parametrize(("given_utm", "message"), [
    ((61, "N", 5e5, 1e6), "zone 61"),
    ((33, "K", 5e5, 1e6), "neither N nor S"),
    ((33, "S", 5e6, 1e6), "easting"),
    ((33, "S", 5e5, 2e7), "northing"),
])
def test_impossible_grid_coordinates_are_refused(given_utm: tuple[Any, ...], message: str) -> None:
    with pytest.raises(Refusal, match=message):
        geodesy.from_utm(*given_utm)
    assert message in javascript("science/utm.js", ["fromUtm", *given_utm])[0]["error"]


def test_impossible_places_are_refused() -> None:
    for lat, lon in ((91, 0), (0, 181), (float("nan"), 0)):
        with pytest.raises(Refusal):
            geodesy.distance_m(lat, lon, 0, 0)
    with pytest.raises(Refusal, match="no UTM zone"):
        geodesy.to_utm(85, 0)


def test_a_place_along_a_track_by_its_time() -> None:
    start = datetime(2026, 3, 4, 6, tzinfo=UTC)
    track = [(20.0, 50.0, 100.0, start), (20.0, 50.0, None, None), (20.009, 50.0, 110.0, start + timedelta(minutes=10)),
             (20.009, 50.01, None, start + timedelta(minutes=20))]
    got = geodesy.along_track(track, start + timedelta(minutes=4))
    assert (got.lat_deg, got.lon_deg) == pytest.approx((20.0036, 50.0), abs=1e-7)
    assert got.altitude_m == pytest.approx(104.0)
    assert got.gap_s == 600
    assert geodesy.along_track(track, start).lat_deg == pytest.approx(20.0)
    end = geodesy.along_track(track, start + timedelta(minutes=20))
    assert (end.lat_deg, end.lon_deg, end.altitude_m) == (pytest.approx(20.009), pytest.approx(50.01), None)
    assert geodesy.along_track(track[:1], start).lat_deg == pytest.approx(20.0)
    for when in (start - timedelta(seconds=1), start + timedelta(minutes=21)):
        with pytest.raises(Refusal, match="no place at"):
            geodesy.along_track(track, when)
    with pytest.raises(Refusal, match="no times"):
        geodesy.along_track([(20.0, 50.0, None, None)], start)


SOSSUS = {"lat_deg": -24.7297, "lon_deg": 15.342}


@pytest.mark.parametrize("text", [
    "-24.7297, 15.3420", "-24.7297 15.342", "24.7297 S, 15.342 E", "15.342 E 24.7297 S", "S 24.7297 E 15.342",
    "24 43 46.92 S 15 20 31.2 E", "24°43'46.92\"S 15°20'31.2\"E", "24,7297 S; 15,342 E", "\N{MINUS SIGN}24.7297, 15.342",
    "24 43.782 S, 15 20.52 E", "33 S 534586.3736 7264938.462", "zone 33 south, 534586.3736 E, 7264938.462 N",
])
def test_places_as_people_type_them(text: str) -> None:
    got = javascript("science/typed_place.js", ["typedPlace", text])[0]
    assert got == pytest.approx(SOSSUS, abs=1e-8)


@pytest.mark.parametrize(("text", "message"), [
    ("", "write latitude and longitude"),
    ("somewhere", "write latitude and longitude"),
    ("24.5", "write latitude and longitude"),
    ("95, 10", "at most 90"),
    ("10, 190", "at most 180"),
    ("24 61 0 S, 15 0 0 E", "below 60"),
    ("33 K 534586 7264938", "band letter"),
    ("70 N 534586 7264938", "zone 70"),
    ("33 S 34586 7264938", "easting 34586"),
])
def test_places_that_are_none_are_refused_in_words(text: str, message: str) -> None:
    assert message in javascript("science/typed_place.js", ["typedPlace", text])[0]["error"]
