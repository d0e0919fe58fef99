"""Merging goes by what the editor had seen; order of arrival and clocks decide nothing."""

from __future__ import annotations

from datetime import UTC, datetime
from typing import Any

from hypothesis import given
from hypothesis import strategies as st

from fieldlog.ledger.entry import Entry, write_text
from fieldlog.ledger.merge import merge
from fieldlog.ledger.names import entry_name

DEVICES = ("0" * 15, "1" * 15, "2" * 15)
WHEN = datetime(2026, 3, 4, 5, 6, 7, tzinfo=UTC)


def an_entry(device: str, n: int, values: dict[str, Any], *, hlc: int, **more: Any) -> Entry:
    text = write_text(app="0.1.0", by=entry_name(DEVICES[0], 1), survey="0" * 10, kind="site", values=values,
                      hlc=f"{hlc:012x}.0000", made_at=WHEN, **more)
    return Entry(device, n, text)


def test_an_edit_that_saw_the_first_value_replaces_it_whatever_the_clocks() -> None:
    first = an_entry(DEVICES[0], 1, {"name": "A"}, hlc=1000)
    edit = an_entry(DEVICES[1], 1, {"name": "B"}, hlc=1, record=first.name, over={"name": [first.name]},
                    saw=[first.name])
    merged = merge([edit, first])
    assert merged.values == {"name": "B"}
    assert merged.two_versions == {}


def test_two_edits_that_did_not_see_each_other_are_two_versions_until_chosen() -> None:
    first = an_entry(DEVICES[0], 1, {"name": "A"}, hlc=1)
    one = an_entry(DEVICES[1], 1, {"name": "B"}, hlc=2, record=first.name, over={"name": [first.name]},
                   saw=[first.name])
    other = an_entry(DEVICES[2], 1, {"name": "C"}, hlc=3, record=first.name, over={"name": [first.name]},
                     saw=[first.name])
    merged = merge([first, one, other])
    assert merged.values["name"] == "C"
    assert [version.value for version in merged.two_versions["name"]] == ["C", "B"]
    assert set(merged.frontier) == {one.name, other.name}
    choice = an_entry(DEVICES[0], 2, {"name": "B"}, hlc=4, record=first.name,
                      over={"name": list(merged.heads["name"])}, saw=list(merged.frontier))
    assert merge([choice, other, one, first]).two_versions == {}
    assert merge([choice, other, one, first]).values["name"] == "B"


def test_two_edits_to_the_same_value_are_one_version() -> None:
    first = an_entry(DEVICES[0], 1, {"radius_m": 5}, hlc=1)
    edits = [an_entry(d, 1, {"radius_m": value}, hlc=2, record=first.name, over={"radius_m": [first.name]},
                      saw=[first.name]) for d, value in ((DEVICES[1], 7), (DEVICES[2], 7.0))]
    assert merge([first, *edits]).two_versions == {}


def test_a_cross_out_and_an_edit_that_did_not_see_each_other_are_two_versions() -> None:
    first = an_entry(DEVICES[0], 1, {"name": "A"}, hlc=1)
    cross = an_entry(DEVICES[1], 1, {"crossed_out": "wrong dune"}, hlc=2, record=first.name, over={},
                     saw=[first.name])
    edit = an_entry(DEVICES[2], 1, {"name": "B"}, hlc=3, record=first.name, over={"name": [first.name]},
                    saw=[first.name])
    assert "crossed_out" in merge([first, cross, edit]).two_versions
    later = an_entry(DEVICES[2], 1, {"name": "B"}, hlc=3, record=first.name, over={"name": [first.name]},
                     saw=[cross.name])
    assert merge([first, cross, later]).two_versions == {}
    assert merge([first, cross, later]).values["crossed_out"] == "wrong dune"


@given(st.data())
def test_the_order_of_arrival_changes_nothing(data: st.DataObject) -> None:
    """Random histories on three replicas: every order and every repetition merges to the same."""
    first = an_entry(DEVICES[0], 1, {"name": "A", "note": "x"}, hlc=5)
    seen: dict[str, list[Entry]] = {device: [first] for device in DEVICES}
    counters = {DEVICES[0]: 1, DEVICES[1]: 0, DEVICES[2]: 0}
    everything = [first]
    for _ in range(data.draw(st.integers(0, 8))):
        device = data.draw(st.sampled_from(DEVICES))
        if data.draw(st.booleans()):
            known = {entry.name for entry in seen[device]}
            seen[device] += [entry for entry in everything if entry.name not in known]
        merged = merge(seen[device])
        field = data.draw(st.sampled_from(["name", "note", "crossed_out"]))
        counters[device] += 1
        made = an_entry(device, counters[device], {field: data.draw(st.sampled_from(["A", "B", None]))},
                        hlc=data.draw(st.integers(0, 100)), record=first.name,
                        over={field: list(merged.heads.get(field, ()))}, saw=list(merged.frontier))
        seen[device].append(made)
        everything.append(made)
    wanted = merge(everything)
    shuffled = data.draw(st.permutations(everything))
    assert merge(shuffled) == wanted
    assert merge(shuffled + shuffled) == wanted
