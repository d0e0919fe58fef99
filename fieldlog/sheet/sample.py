"""Which readings may be put together: the samples of one measure.

A sample never mixes orders, faces or dune types; crossed-out observations, check readings and
observations without the measure are left out. Mirrored in static/js/sheet/sample.js;
tests/vectors/sample.json holds both to the same answers.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any


@dataclass(frozen=True)
class Sample:
    """Readings of one order, face and dune type (None where that was not said).

    `angles` are degrees, `bedforms` name the dune of each (None where none was said), `records` the
    observation of each; all three in the order of the rows.
    """

    order: str | None
    face: str | None
    dune_type: str | None
    angles: tuple[float, ...]
    bedforms: tuple[str | None, ...]
    records: tuple[str, ...]


def samples(
    rows: Iterable[Mapping[str, Any]], measure: str, same: Iterable[tuple[str, str]] = ()
) -> list[Sample]:
    """The samples among `rows` (of one site), the largest first; the first is the site's default.

    `measure` is a derived bearing, such as "slip_face_deg" or "crest_deg". Samples of one size keep
    the order in which their first readings stand in `rows`. `same`: pairs of dunes that a lead has
    called one. No usable row: an empty list.
    """
    called = one_name(same)
    groups: dict[tuple[str | None, str | None, str | None], list[Mapping[str, Any]]] = {}
    for row in rows:
        if counts(row) and row.get(measure) is not None:
            groups.setdefault((row.get("bedform_order"), row.get("face"), row.get("dune_type")), []).append(row)
    found = [
        Sample(
            *group,
            angles=tuple(float(row[measure]) for row in members),
            bedforms=tuple(called.get(name, name) if (name := dune(row)) else None for row in members),
            records=tuple(row["record"] for row in members),
        )
        for group, members in groups.items()
    ]
    return sorted(found, key=lambda sample: -len(sample.angles))


def one_name(same: Iterable[tuple[str, str]]) -> dict[str, str]:
    """Dune -> the one name under which it and all dunes that are the same are counted."""
    called: dict[str, str] = {}
    for pair in same:
        one, other = (called.get(name, name) for name in pair)
        kept, dropped = sorted((one, other))
        called = {name: kept if to == dropped else to for name, to in called.items()} | {pair[0]: kept, pair[1]: kept, dropped: kept}
    return called


def counts(row: Mapping[str, Any]) -> bool:
    """Whether an observation stands and adds to n: not crossed out and no check reading."""
    return not row.get("crossed_out") and not row.get("check_of")


def dune(row: Mapping[str, Any]) -> str | None:
    """The dune of an observation, named by the device that numbered it and its number.

    Two phones number their dunes without seeing each other, so dune 3 of one is not dune 3 of the
    other until a lead says so (`same` of `samples`). Valid within one site.
    """
    number = row.get("bedform")
    return None if number is None else f"{device(row)}/{number:g}"


def device(row: Mapping[str, Any]) -> str:
    """The device that made an observation: its record's name without the number."""
    return str(row["record"]).rpartition("-")[0]
