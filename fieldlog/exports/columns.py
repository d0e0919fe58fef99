"""The columns that exports carry, drawn from the sheets: a new field arrives in every format by itself."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Final

from fieldlog.sheet.fields import ABSENCES, Field, absent_column
from fieldlog.sheet.subjects import SHEETS

_TYPES: Final = {
    "number": "real", "direction": "real", "orientation": "real", "integer": "integer", "flag": "flag",
    "time": "time", "names": "json", "points": "json", "choice": "text", "text": "text", "reference": "text",
}


@dataclass(frozen=True, kw_only=True)
class Column:
    """One column of an export.

    `type` is real, integer, flag, time (aware, UTC), text, or json (a list: formats without lists
    write it as JSON text). `source` is the sheet's field where the column is one. `vocabulary`
    names the words that the values are of.
    """

    name: str
    type: str
    label: str
    help: str = ""
    unit: str = ""
    minimum: float | None = None
    maximum: float | None = None
    vocabulary: str | None = None
    source: Field | None = None


def text(name: str, label: str, explained: str = "") -> Column:
    """A column of text."""
    return Column(name=name, type="text", label=label, help=explained)


def of_field(field: Field) -> Column:
    """The column of one field of a sheet."""
    return Column(
        name=field.name, type=_TYPES[field.type], label=field.label, help=field.help, unit=field.unit,
        minimum=0.0 if field.is_angle else field.minimum, maximum=field.limit if field.is_angle else field.maximum,
        vocabulary=field.vocabulary, source=field,
    )


def name_column(name: str) -> str:
    """The column with the name of the site or person that another column refers to by id."""
    return f"{name}_name"


def local_column(name: str) -> str:
    """The column with a time in the survey's zone."""
    return f"{name}_local"


_IDENTITY: Final = (
    text("record", "Record", "The record's id in the survey's ledger; it never changes."),
    text("uuid", "UUID", "The same id as a UUID of version 8 (RFC 9562)."),
)
_PROVENANCE: Final = (
    text("two_versions", "Two versions",
         "Fields that two people changed without seeing each other, and the values that do not stand in this row."),
    text("made_by", "Made by", "Crew record of whoever made it."),
    text("made_by_name", "Made by (name)", "Name of whoever made it."),
    text("made_on", "Made on", "Id of the device that it was made on."),
    Column(name="made_at", type="time", label="Made at", help="When it was written down, UTC, by the device's clock."),
    text("app_version", "Ergbook version", "Version of Ergbook that wrote this file."),
)


def columns_of(kind: str) -> tuple[Column, ...]:
    """All columns of one kind of record, in the order of its sheet."""
    return (*_IDENTITY, *(column for field in SHEETS[kind].fields for column in _of_sheet(field)), *_PROVENANCE)


def _of_sheet(field: Field) -> Iterator[Column]:
    column = of_field(field)
    yield column
    if field.refers_to in ("site", "crew"):
        yield text(name_column(field.name), f"{field.label} (name)", f"Name of the {field.refers_to}.")
    if field.type == "time":
        yield text(local_column(field.name), f"{field.label}, local",
                   "The same time in the survey's time zone, with its offset from UTC.")
    if field.measure:
        reasons = " or ".join(f"{value} ({label})" for value, label in ABSENCES.items())
        yield text(absent_column(field.name), f"{field.label}: why there is none",
                   f"{reasons}; empty where there is a value, or nobody looked.")


def pick(columns: tuple[Column, ...], *names: str) -> tuple[Column, ...]:
    """Some of the columns by name, in the order named."""
    by_name = {column.name: column for column in columns}
    return tuple(by_name[name] for name in names)

