"""Which readings may be put together, the same in both languages."""

from __future__ import annotations

from dataclasses import asdict
from typing import Any

import pytest

from fieldlog.sheet.sample import samples
from tests.mirror import assert_same, javascript, vectors

CASES = vectors("sample")


@pytest.mark.parametrize("case", CASES, ids=lambda case: case["what"])
def test_vectors(case: dict[str, Any]) -> None:
    got = [asdict(sample) for sample in samples(case["rows"], case["measure"], case.get("same", ()))]
    assert_same(got, case["expected"])


def test_the_phone_takes_the_same_samples() -> None:
    answers = javascript("sheet/sample.js", *[["samples", case["rows"], case["measure"], case.get("same", [])] for case in CASES])
    for case, got in zip(CASES, answers, strict=True):
        assert_same(got, case["expected"], at=case["what"])
