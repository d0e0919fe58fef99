"""Samples that cannot bear a statistic: nulls and a plain sentence, never a warning, a trace or a NaN."""

from __future__ import annotations

import json
import math
from typing import Any

import numpy as np
import pytest

from fieldlog.science.angles import SampleError
from fieldlog.science.summary import Summary, summarise

SAMPLES: dict[str, Any] = {
    "none": [], "one": [30], "two": [30, 50], "two opposite": [10, 190], "three": [1, 2, 3], "all equal": [77.0] * 12,
    "all equal, many": [77.0] * 50, "perfectly even": list(range(0, 360, 10)), "even, few": [0, 90, 180, 270],
    "two heaps opposite": [0] * 10 + [180] * 10, "at north": [359.9, 0.1, 0, 360, 720], "tiny": [1e-300, 5e-324, 0.0],
    "large": [1e12, 1e15, -1e15],
}


def numbers(value: Any) -> list[float]:
    if isinstance(value, float):
        return [value]
    if isinstance(value, dict):
        return [n for part in value.values() for n in numbers(part)]
    return [n for part in value for n in numbers(part)] if isinstance(value, list) else []


@pytest.mark.parametrize("axial", [False, True])
@pytest.mark.parametrize("dunes", [False, True])
@pytest.mark.parametrize("what", [*SAMPLES])
def test_every_value_is_a_number_or_null(what: str, dunes: bool, axial: bool) -> None:
    angles = SAMPLES[what]
    names = [i // 2 for i in range(len(angles))] if dunes else None
    said = summarise(angles, bedforms=names, axial=axial, step_deg=1, against_deg=10, target_deg=10)
    told = said.as_json()
    assert all(math.isfinite(number) for number in numbers(json.loads(json.dumps(told))))
    assert said.finding.endswith(".")
    assert "nan" not in f"{said.finding} {said.notes}".lower()
    limit = 180 if axial else 360
    for name in ("mean_direction_deg", "median_direction_deg", "ci95_low_deg", "ci95_high_deg"):
        assert told[name] is None or 0 <= told[name] < limit


def test_no_readings() -> None:
    said = summarise([])
    assert (said.n, said.finding, said.outcome) == (0, "No readings.", "too_few")
    assert {getattr(said, name) for name in ("mean_direction_deg", "resultant_length", "kappa", "rayleigh_p", "ci95_low_deg")} == {None}


def nothing_announced(said: Summary) -> bool:
    return said.ci95_low_deg is None and said.enough in (None, False) and said.outcome != "one"


def test_opposite_readings_have_no_mean() -> None:
    said = summarise([10, 190])
    assert said.mean_direction_deg is None
    assert said.resultant_length == 0
    assert nothing_announced(said)


def test_evenly_spread_readings_have_no_direction() -> None:
    said = summarise(range(0, 360, 10))
    assert said.outcome == "spread"
    assert said.mean_direction_deg is None
    assert nothing_announced(said)


def test_equal_readings_have_no_interval_and_no_kappa() -> None:
    said = summarise([77.0] * 12, target_deg=10)
    assert said.mean_direction_deg == 77
    assert said.kappa is None
    assert said.ci95_low_deg is None
    assert said.enough is False
    assert any("same" in note or "equal" in note or "identical" in note for note in said.notes), said.notes


@pytest.mark.parametrize("wrong", [math.nan, math.inf, -math.inf, "north", None])
def test_what_is_no_number_is_named_with_its_place(wrong: Any) -> None:
    with pytest.raises(SampleError) as refused:
        summarise([10, 20, wrong, 30])
    assert "3" in refused.value.where + refused.value.what


def test_a_million_readings() -> None:
    angles = np.random.default_rng(7).vonmises(1, 2, 1_000_000)
    said = summarise(np.degrees(angles), spacing=False)
    assert said.n == 1_000_000
    # Mean resultant length of a von Mises distribution with kappa 2: I1(2)/I0(2) = 0.6978 (Mardia & Jupp 2000, from memory)
    assert said.resultant_length == pytest.approx(0.6978, abs=0.002)
    assert said.mean_direction_deg == pytest.approx(math.degrees(1), abs=0.3)
