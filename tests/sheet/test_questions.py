"""What the checks ask, the same in both languages, and that they keep quiet on good surveys."""

from __future__ import annotations

import random
from collections.abc import Iterator
from dataclasses import asdict
from typing import Any

import pytest

from fieldlog.sheet.check import questions
from fieldlog.sheet.crowd import strays
from fieldlog.sheet.question import Thresholds
from fieldlog.sheet.times import read_time
from tests.mirror import assert_same, javascript, vectors

CASES = vectors("check")


def asked(case: dict[str, Any], rows: list[dict[str, Any]] | None = None) -> list[dict[str, Any]]:
    found = questions(
        case["rows"] if rows is None else rows,
        sites=case.get("sites", ()),
        thresholds=Thresholds(**case.get("thresholds", {})),
        time_zone=case.get("time_zone", "UTC"),
    )
    return [{**asdict(question), "other_records": list(question.other_records)} for question in found]


def asked_on_the_phone(cases: list[dict[str, Any]]) -> list[list[dict[str, Any]]]:
    calls = []
    for case in cases:
        options = {"sites": case.get("sites", []), "thresholds": case.get("thresholds", {}),
                   "timeZone": case.get("time_zone", "UTC")}
        calls.append(["questions", case["rows"], options])
    return javascript("sheet/check.js", *calls)


@pytest.mark.parametrize("case", CASES, ids=lambda case: case["what"])
def test_vectors(case: dict[str, Any]) -> None:
    assert asked(case) == case["expected"]


def test_the_phone_asks_the_same() -> None:
    for case, got in zip(CASES, asked_on_the_phone(CASES), strict=True):
        assert_same(got, case["expected"], at=case["what"])


def test_times_may_come_as_the_store_holds_them() -> None:
    for case in CASES:
        rows = [{**row, "observed_at": read_time(row["observed_at"])} if "observed_at" in row else row
                for row in case["rows"]]
        assert asked(case, rows) == case["expected"]


def test_thresholds_are_the_same_on_the_phone() -> None:
    assert javascript("sheet/question.js", ["THRESHOLDS"]) == [asdict(Thresholds())]


def made_up(seed: int, *, good: bool) -> dict[str, Any]:
    """A survey of made-up sites: one clear, one of two faces, one of a wide spread. Where it is not
    `good`, values are thrown in that raise questions."""
    chance = random.Random(seed)
    sites = [{"record": f"s-{i}", "name": f"Site {i}", "lat_deg": 21 + i * 0.02, "lon_deg": 51.0, "radius_m": 400}
             for i in range(3)]
    rows: list[dict[str, Any]] = []
    minute = 0
    for n, (site, face) in enumerate((site, face) for site in sites for face in range(20)):
        index = sites.index(site)
        minute += 4
        middle = (210, 40 if face % 3 == 0 else 150, 300)[index]
        slip = round(chance.gauss(middle, (14, 12, 22)[index])) % 360
        crest = round(slip + 90 + chance.gauss(0, 8)) % 180
        row = {
            "record": f"{'ab'[n % 2]}-{n + 1}", "site": site["record"], "bedform": face // 3 + 1,
            "bedform_order": "dune", "face": "main", "dune_type": "barchan",
            "observed_at": f"2026-03-04T{5 + minute // 60:02d}:{minute % 60:02d}:00Z",
            "lat_deg": site["lat_deg"] + chance.gauss(0, 0.0008), "lon_deg": 51 + chance.gauss(0, 0.0008),
            "accuracy_m": 6, "north": "magnetic", "instrument": f"K{n % 2}", "declination_deg": 6.0,
            "reading_step_deg": 1, "slip_face_read_deg": (slip - 6) % 360, "slip_face_deg": slip,
            "crest_read_deg": (crest - 6) % 180, "crest_deg": crest,
            "slip_face_dip_deg": min(max(round(chance.gauss(32, 1.2)), 28), 36),
        }
        if not good and chance.random() < 0.3:
            row |= chance.choice([
                {"slip_face_deg": (slip + 180) % 360}, {"slip_face_deg": (slip + 80) % 360}, {"slip_face_dip_deg": 44},
                {"lat_deg": 20.0}, {"observed_at": "2026-03-04T01:00:00Z"}, {"north": "true"}, {"face": "secondary"},
                {"crossed_out": "misread"}, {"crest_deg": None}, {"bedform": None}, {"transcribed": True},
            ])
        rows.append(row)
    return {"what": f"made up, {seed}", "rows": rows, "sites": sites, "time_zone": "Etc/GMT-3"}


def test_phone_and_desk_ask_the_same_of_made_up_surveys() -> None:
    cases = [made_up(seed, good=False) for seed in range(25)]
    total = 0
    for case, got in zip(cases, asked_on_the_phone(cases), strict=True):
        here = asked(case)
        total += len(here)
        assert_same(got, here, at=case["what"])
    assert total > 200


def test_good_surveys_draw_questions_on_at_most_two_percent_of_readings() -> None:
    readings = drawn = 0
    for seed in range(30):
        case = made_up(seed, good=True)
        readings += len(case["rows"])
        drawn += len({question["record"] for question in asked(case)})
    assert drawn <= 0.02 * readings


def samples_of(period: float, sd: float, n: int) -> Iterator[list[float]]:
    chance = random.Random(f"{period} {sd} {n}")
    for _ in range(60):
        yield [chance.gauss(10, sd) % period for _ in range(n)]


@pytest.mark.parametrize(("period", "sd"), [(360, 10), (360, 20), (360, 30), (180, 8), (180, 12)])
def test_samples_without_a_stray_reading_stay_quiet(period: float, sd: float) -> None:
    for n in (8, 20, 40):
        found = sum(len(strays(sample, period, 4)) for sample in samples_of(period, sd, n))
        assert found <= 0.02 * 60 * n


def test_a_reading_far_from_two_crowds_is_found_and_neither_crowd_is() -> None:
    angles = [40, 45, 50, 55, 60, 42, 150, 155, 160, 165, 158, 270.0]
    assert [stray.position for stray in strays(angles, 360, 4)] == [11]


def test_readings_spread_all_round_have_no_stray() -> None:
    assert strays([i * 36.0 for i in range(10)], 360, 4) == []
