"""The rose's geometry: what each mark says, and the same shapes in both languages."""

from __future__ import annotations

import math
from collections import Counter
from types import SimpleNamespace
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from fieldlog.draw.rose import Rose, RoseError, petal_counts, rose
from fieldlog.science.summary import summarise
from tests.mirror import assert_same, javascript, vectors

CASES = vectors("rose")
NOTHING = {
    "mean_direction_deg": None, "resultant_length": None, "threshold_resultant": None, "ci95_low_deg": None,
    "ci95_high_deg": None, "modes": [], "outcome": "too_few", "finding": "",
}


def drawn(case: dict[str, Any]) -> Rose:
    options = {key: case[key] for key in ("crossed_out_deg", "expected_deg", "marked") if key in case}
    summary = SimpleNamespace(**case["summary"])
    return rose(case["readings_deg"], summary, axial=case["axial"], size=case["size"], **options)


def summary(**values: Any) -> SimpleNamespace:
    return SimpleNamespace(**{**NOTHING, **values})


def of(picture: Rose, role: str) -> list[dict[str, Any]]:
    return [shape for shape in picture.shapes if shape["role"] == role]


@pytest.mark.parametrize("case", CASES, ids=lambda case: case["what"])
def test_every_mark_is_there_and_no_other(case: dict[str, Any]) -> None:
    picture = drawn(case)
    expected = case["expected"]
    assert Counter(shape["role"] for shape in picture.shapes) == expected["roles"]
    if "text" in expected:
        assert picture.text == expected["text"]
    if "title" in expected:
        assert picture.title == expected["title"]


def test_the_phone_draws_the_same_shapes() -> None:
    names = {"crossed_out_deg": "crossedOutDeg", "expected_deg": "expectedDeg", "marked": "marked"}
    calls = []
    for case in CASES:
        options = {camel: case[snake] for snake, camel in names.items() if snake in case}
        calls.append(["rose", case["readings_deg"], case["summary"],
                      {"axial": case["axial"], "size": case["size"], **options}])
    for case, got in zip(CASES, javascript("draw/rose.js", *calls), strict=True):
        here = drawn(case)
        expected = {"size": here.size, "detail": here.detail, "shapes": here.shapes, "title": here.title,
                    "text": here.text}
        assert_same(got, expected, at=case["what"])


def test_the_arrow_ends_at_the_resultant_length_on_a_scale_where_the_rim_is_one() -> None:
    picture = rose([90], summary(mean_direction_deg=90, resultant_length=0.5, threshold_resultant=0.25), axial=False,
                   size=320)
    rim, ring = of(picture, "rose-rim")[0], of(picture, "rose-threshold")[0]
    xs = [command[1] for command in of(picture, "rose-mean")[0]["commands"] if len(command) > 1]
    assert max(xs) == pytest.approx(160 + 0.5 * rim["r"])
    assert min(xs) == pytest.approx(160)
    assert ring["r"] == pytest.approx(0.25 * rim["r"])


def test_bearings_run_clockwise_from_the_top() -> None:
    picture = rose([0, 90, 180, 270], summary(), axial=False, size=320)
    rim = of(picture, "rose-rim")[0]["r"]
    places = [(dot["cx"] - 160, dot["cy"] - 160) for dot in of(picture, "rose-dot")]
    expected = [(0, -rim), (rim, 0), (0, rim), (-rim, 0)]
    assert [pytest.approx(place, abs=1e-9) for place in places] == expected


def test_the_area_of_petals_is_in_proportion_to_their_counts() -> None:
    picture = rose([0.0] * 8 + [100.0] * 2, summary(), axial=False, size=320)
    radii = [petal["commands"][2][1] for petal in of(picture, "rose-petal")]
    rim = of(picture, "rose-rim")[0]["r"]
    assert [r**2 / rim**2 for r in radii] == pytest.approx([0.8, 0.2])


def test_the_interval_across_north_is_the_short_arc() -> None:
    picture = rose([0], summary(ci95_low_deg=350, ci95_high_deg=10), axial=False, size=320)
    command = next(c for c in of(picture, "rose-interval")[0]["commands"] if c[0] == "A")
    assert command[4:6] == [0, 1]
    picture = rose([0], summary(ci95_low_deg=10, ci95_high_deg=350), axial=False, size=320)
    command = next(c for c in of(picture, "rose-interval")[0]["commands"] if c[0] == "A")
    assert command[4:6] == [1, 1]


def test_an_open_triangle_stands_at_the_expected_facing_and_the_wind_across() -> None:
    picture = rose([], summary(), axial=False, size=320, expected_deg=90)
    tip = of(picture, "rose-expected")[0]["commands"][0]
    staff = of(picture, "rose-wind")[0]["commands"][0]
    assert tip[1] > 290
    assert staff[1] < 30


@settings(max_examples=60, deadline=None)
@given(st.lists(st.integers(0, 71).map(lambda k: k * 5.0), max_size=60), st.booleans(), st.sampled_from([64, 120, 320]))
def test_dots_of_moderate_samples_never_hide_each_other(readings: list[float], axial: bool, size: int) -> None:
    picture = rose(readings, summary(), axial=axial, size=size)
    dots = of(picture, "rose-end" if axial else "rose-dot")
    assert len(dots) == len(readings) * (2 if axial else 1)
    if max(Counter(reading % (180 if axial else 360) for reading in readings).values(), default=0) > 3:
        return
    for i, one in enumerate(dots):
        for other in dots[i + 1:]:
            apart = math.hypot(one["cx"] - other["cx"], one["cy"] - other["cy"])
            assert apart > one["r"]


@given(st.lists(st.floats(-720, 720), max_size=80), st.booleans())
def test_petals_count_every_reading_once(readings: list[float], axial: bool) -> None:
    assert sum(count for _, count in petal_counts(readings, axial)) == len(readings)


@given(st.lists(st.floats(-720, 720), max_size=40), st.booleans(), st.floats(20, 600))
def test_nothing_is_drawn_outside_the_square(readings: list[float], axial: bool, size: float) -> None:
    s = summary(mean_direction_deg=33.0, resultant_length=1.0, threshold_resultant=0.4, ci95_low_deg=300.0 % 180,
                ci95_high_deg=10.0, modes=[{"direction_deg": 33.0}], outcome="one")
    picture = rose(readings, s, axial=axial, size=size, expected_deg=45.0, crossed_out_deg=[12.0], marked=[0])
    for shape in picture.shapes:
        if shape["kind"] == "path":
            numbers = [v for command in shape["commands"] for v in command[-2:] if command[0] != "Z"]
        else:
            numbers = [shape[key] for key in ("cx", "cy", "x1", "y1", "x2", "y2", "x", "y") if key in shape]
        assert all(-0.5 <= value <= size + 0.5 for value in numbers), shape


@pytest.mark.parametrize("value", [math.nan, math.inf])
def test_a_bearing_that_is_no_number_is_refused_by_position(value: float) -> None:
    with pytest.raises(RoseError, match="reading 2"):
        rose([1.0, value], summary(), axial=False, size=320)


def test_the_arrow_and_the_ring_are_those_of_the_dunes_where_dunes_count() -> None:
    readings = [200.0, 202, 204, 206, 208, 210, 214, 216, 218, 220, 230, 232]
    dunes = ["a", "a", "a", "b", "b", "c", "c", "d", "d", "e", "f", "f"]
    found = summarise(readings, bedforms=dunes, subject="Slip faces")
    picture = rose(readings, found, axial=False, size=320)
    ring, rim = of(picture, "rose-threshold")[0], of(picture, "rose-rim")[0]
    assert found.threshold_resultant is not None
    assert ring["r"] == pytest.approx(found.threshold_resultant * rim["r"])
    assert found.threshold_resultant > 0.6, "six dunes need more than twelve readings would"
    assert picture.title == found.finding
    assert len(of(picture, "rose-dot")) == 12
