"""What a field is. A sheet is a tuple of fields; everything else is drawn from it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cached_property
from typing import Final

TYPES: Final = (
    "number",
    "integer",
    "direction",  # degrees, 0 <= x < 360
    "orientation",  # degrees of an axis, 0 <= x < 180
    "choice",
    "text",
    "flag",
    "time",  # UTC
    "reference",  # the id of another record
    "names",  # a list of short texts
    "points",  # a list of [lat, lon, altitude or null, time or null]
)

ABSENCES: Final = {
    "none_here": "none here",
    "not_measurable": "could not be measured",
}
"""The two answers that are not a value; a field that was not looked at is simply missing."""


@dataclass(frozen=True, kw_only=True)
class Field:
    """One field of a sheet.

    `carries` says until what changes the value stays in the form: "" (never), "dune", "site" or
    "day". `measure` fields may be answered "none here" or "could not be measured". `optional`
    fields stay off until a survey switches them on. `derived_from` names the fields from which
    the projection computes this one; such a field never travels. `asked` fields stand in the
    phone's form; the others are filled by the phone itself. `clocked` times come from the
    device's clock: rows show them corrected by what the entry knew of that clock. `retired` fields are still read and
    exported, never asked.
    """

    name: str
    type: str
    label: str
    help: str
    group: str
    unit: str = ""
    minimum: float | None = None
    maximum: float | None = None
    decimals: int | None = None
    vocabulary: str | None = None
    refers_to: str | None = None
    max_length: int = 500
    required: bool = False
    measure: bool = False
    carries: str = ""
    optional: bool = False
    derived_from: tuple[str, ...] = ()
    asked: bool = True
    clocked: bool = False
    retired: bool = False

    def __post_init__(self) -> None:
        if self.type not in TYPES:
            raise ValueError(f"{self.name}: unknown field type {self.type!r}")
        if (self.type == "choice") != (self.vocabulary is not None):
            raise ValueError(f"{self.name}: a choice names its vocabulary, nothing else does")
        if self.carries not in ("", "dune", "site", "day"):
            raise ValueError(f"{self.name}: carries until {self.carries!r}?")

    @property
    def is_angle(self) -> bool:
        return self.type in ("direction", "orientation")

    @property
    def limit(self) -> float | None:
        """The exclusive upper bound of an angle, None for anything else."""
        return {"direction": 360.0, "orientation": 180.0}.get(self.type)

    @property
    def is_derived(self) -> bool:
        return bool(self.derived_from)


@dataclass(frozen=True)
class Sheet:
    """All that may be said about one kind of record, in the order in which it is shown."""

    kind: str
    label: str
    fields: tuple[Field, ...]
    groups: Mapping[str, str] = field(default_factory=dict)

    def __post_init__(self) -> None:
        names = [f.name for f in self.fields]
        if len(set(names)) != len(names):
            raise ValueError(f"{self.kind}: a field name is used twice")

    @cached_property
    def by_name(self) -> dict[str, Field]:
        return {f.name: f for f in self.fields}

    @property
    def said(self) -> tuple[Field, ...]:
        """The fields that travel in entries."""
        return tuple(f for f in self.fields if not f.is_derived)

    @property
    def columns(self) -> tuple[str, ...]:
        """The names of the columns of this kind's table, in order."""
        out: list[str] = []
        for f in self.fields:
            out.append(f.name)
            if f.measure:
                out.append(absent_column(f.name))
        return tuple(out)


def absent_column(name: str) -> str:
    """The column that says why a measure has no value."""
    return f"{name}_absent"
