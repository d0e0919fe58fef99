"""The ledger adds up to the same on the phone and at base: shared vectors, and random histories."""

from __future__ import annotations

import json
from typing import Any

import pytest
from histories import added_up, entry_of, random_history, wire
from mirror import VECTORS, assert_same, javascript, vectors

from fieldlog.ledger import clock, names
from fieldlog.ledger.merge import merge

MERGES = vectors("merge")
PROJECTIONS = vectors("project")
NAMES = json.loads((VECTORS / "names.json").read_text(encoding="utf-8"))
CLOCK = json.loads((VECTORS / "clock.json").read_text(encoding="utf-8"))
ADDED_UP = "../../tests/ledger/added_up.js"
HISTORIES = 400


def merged_part(whole: dict[str, Any]) -> dict[str, Any]:
    return {key: value for key, value in whole.items() if key != "row"}


def expected_row(case: dict[str, Any], row: dict[str, Any]) -> None:
    for field, value in case["expected"].items():
        if value == "MISSING":
            assert field not in row
        else:
            assert_same(row[field], value, at=f"{case['what']}: {field}")


def projection_entry(case: dict[str, Any]) -> dict[str, Any]:
    return {"name": "000000000000000-7", "hlc": 1, "kind": case["kind"], "set": case["set"], "offset": case.get("offset")}


@pytest.mark.parametrize("case", MERGES, ids=lambda case: case["what"])
def test_base_merges_as_the_vectors_say(case: dict[str, Any]) -> None:
    entries = [entry_of(each) for each in case["entries"]]
    assert merged_part(added_up(merge(entries))) == case["expected"]
    assert merged_part(added_up(merge(entries[::-1] * 2))) == case["expected"]


def test_the_phone_merges_as_the_vectors_say() -> None:
    batches = [[entry_of(each) for each in case["entries"]] for case in MERGES]
    answers = javascript(ADDED_UP, *[["addedUp", wire(entries[::-1])] for entries in batches])
    for case, got in zip(MERGES, answers, strict=True):
        assert merged_part(got) == case["expected"], case["what"]


@pytest.mark.parametrize("case", PROJECTIONS, ids=lambda case: case["what"])
def test_base_projects_as_the_vectors_say(case: dict[str, Any]) -> None:
    expected_row(case, added_up(merge([entry_of(projection_entry(case))]))["row"])


def test_the_phone_projects_as_the_vectors_say() -> None:
    answers = javascript(ADDED_UP, *[["addedUp", wire([entry_of(projection_entry(case))])] for case in PROJECTIONS])
    for case, got in zip(PROJECTIONS, answers, strict=True):
        expected_row(case, got["row"])


def test_random_histories_add_up_to_the_same_on_phone_and_at_base() -> None:
    histories = [random_history(seed) for seed in range(HISTORIES)]
    answers = javascript(ADDED_UP, *[["addedUp", wire(entries)] for entries in histories])
    wanted = [added_up(merge(entries)) for entries in histories]
    assert sum(1 for each in wanted if each["two_versions"]) > HISTORIES / 5, "too tame to show anything"
    assert sum(1 for each in wanted if each["created"] is None) > 5
    for seed, (got, expected) in enumerate(zip(answers, wanted, strict=True)):
        assert "error" not in got, f"seed {seed}: {got}"
        assert_same(got, expected, at=f"seed {seed}")


def test_base_names_as_the_vectors_say() -> None:
    for case in NAMES["names"]:
        assert names.split_name(case["name"]) == (case["device"], case["n"])
        assert names.entry_name(case["device"], case["n"]) == case["name"]
        assert str(names.name_to_uuid(case["name"])) == case["uuid"]
    for text in NAMES["not_names"]:
        with pytest.raises(ValueError, match="not the name"):
            names.split_name(text)


def test_the_phone_names_as_the_vectors_say() -> None:
    for case in NAMES["names"]:
        split, name = javascript(
            "ledger/names.js", ["splitName", case["name"]], ["entryName", case["device"], case["n"]]
        )
        assert (split, name) == ({"device": case["device"], "n": case["n"]}, case["name"])
    refused = javascript("ledger/names.js", *[["splitName", text] for text in NAMES["not_names"]])
    assert all("error" in answer for answer in refused), refused


def test_the_clock_runs_as_the_vectors_say_on_both_sides() -> None:
    ticks = [["tick", case["last"], case["now_ms"]] for case in CLOCK["tick"]]
    receipts = [["receive", case["last"], case["seen"], case["now_ms"]] for case in CLOCK["receive"]]
    expected = [case["expected"] for case in CLOCK["tick"] + CLOCK["receive"]]
    assert javascript("ledger/clock.js", *ticks, *receipts) == expected
    assert [clock.tick(*call[1:]) for call in ticks] + [clock.receive(*call[1:]) for call in receipts] == expected
    refused = javascript("ledger/clock.js", *[["readStamp", text] for text in CLOCK["not_stamps"]])
    assert all("error" in answer for answer in refused), refused
    for text in CLOCK["not_stamps"]:
        with pytest.raises(ValueError, match="not a clock stamp"):
            clock.read_stamp(text)
