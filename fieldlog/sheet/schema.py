"""The wire schema of a sheet, drawn from its declaration.

Unknown fields pass (an older store keeps what a newer phone says); null takes a value away.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from functools import cache
from typing import Any

from marshmallow import INCLUDE, Schema, ValidationError, fields, validate

from fieldlog.sheet.fields import ABSENCES, Field
from fieldlog.sheet.subjects import SHEETS
from fieldlog.sheet.times import read_time
from fieldlog.sheet.vocabulary import VOCABULARIES

_REFERENCE = r"^[0-9a-hjkmnp-tv-z]{15}-[1-9][0-9]{0,14}$"


class _Number(fields.Field[float]):
    """A finite JSON number; numbers in quotes and true/false are refused."""

    def __init__(self, *, whole: bool = False, **keywords: Any) -> None:
        super().__init__(**keywords)
        self.whole = whole

    def _deserialize(self, value: Any, attr: str | None, data: Any, **keywords: Any) -> float:
        if isinstance(value, bool) or not isinstance(value, int | float) or not math.isfinite(value):
            raise ValidationError("is not a number")
        if self.whole and value != int(value):
            raise ValidationError("is not a whole number")
        return value


class _Flag(fields.Field[bool]):
    """true or false and nothing that merely equals them."""

    def _deserialize(self, value: Any, attr: str | None, data: Any, **keywords: Any) -> bool:
        if not isinstance(value, bool):
            raise ValidationError("is neither true nor false")
        return value


class _Text(fields.Field[str]):
    """Text that every database can hold."""

    def _deserialize(self, value: Any, attr: str | None, data: Any, **keywords: Any) -> str:
        if not isinstance(value, str):
            raise ValidationError("is not text")
        if "\x00" in value or any("\ud800" <= character <= "\udfff" for character in value):
            raise ValidationError("holds a character that is no text")
        return value


class _Time(fields.Field[str]):
    """UTC, ISO 8601, ending with Z."""

    def _deserialize(self, value: Any, attr: str | None, data: Any, **keywords: Any) -> str:
        try:
            read_time(value)
        except (TypeError, ValueError) as error:
            raise ValidationError("is not a UTC time like 2026-03-04T05:06:07Z") from error
        return str(value)


class _Measure(fields.Field[Any]):
    """A value, or the reason why there is none: {"absent": "none_here" | "not_measurable"}."""

    def __init__(self, inner: fields.Field[Any], **keywords: Any) -> None:
        super().__init__(**keywords)
        self.inner = inner

    def _deserialize(self, value: Any, attr: str | None, data: Any, **keywords: Any) -> Any:
        if isinstance(value, dict):
            if set(value) != {"absent"} or value["absent"] not in ABSENCES:
                raise ValidationError(f"an absent measure is one of {', '.join(ABSENCES)}")
            return value
        return self.inner.deserialize(value, attr, data, **keywords)


class _Points(fields.Field[list[Any]]):
    """[[lat, lon, altitude or null, time or null], ...], at most 1,000."""

    def _deserialize(self, value: Any, attr: str | None, data: Any, **keywords: Any) -> list[Any]:
        if not isinstance(value, list) or not 1 <= len(value) <= 1000:
            raise ValidationError("holds 1 to 1000 points")
        for index, point in enumerate(value, start=1):
            if not _is_point(point):
                raise ValidationError(f"point {index} is not [lat, lon, altitude, time]")
        return value


def _is_point(point: Any) -> bool:
    if not isinstance(point, list) or len(point) != 4:
        return False
    lat, lon, altitude, time = point
    numbers = (lat, lon) if altitude is None else (lat, lon, altitude)
    if any(isinstance(v, bool) or not isinstance(v, int | float) or not math.isfinite(v) for v in numbers):
        return False
    return abs(lat) <= 90 and abs(lon) <= 180 and (time is None or isinstance(time, str))


def _range(field: Field) -> validate.Range | None:
    low = 0.0 if field.is_angle else field.minimum
    high = field.limit if field.is_angle else field.maximum
    if low is None and high is None:
        return None
    bound = f"{_plain(low)} to below {_plain(high)}" if field.is_angle else f"{_plain(low)} to {_plain(high)}"
    unit = f" {field.unit}" if field.unit else ""
    return validate.Range(
        min=low, max=high, max_inclusive=not field.is_angle, error=f"{{input}} is outside {bound}{unit}"
    )


def _plain(value: float | None) -> str:
    return "any" if value is None else f"{value:g}"


def wire_field(field: Field) -> fields.Field[Any]:
    """The marshmallow field that checks one field's values."""
    common: dict[str, Any] = {"allow_none": True, "metadata": {"description": field.help, "title": field.label}}
    inner: fields.Field[Any]
    if field.type in ("number", "integer", "direction", "orientation"):
        bounds = _range(field)
        inner = _Number(whole=field.type == "integer", validate=(bounds and [bounds]) or [], **common)
    elif field.type == "choice":
        words = [word.value for word in VOCABULARIES[field.vocabulary or ""]]
        inner = _Text(validate=validate.OneOf(words, error="{input} is none of {choices}"), **common)
    elif field.type == "text":
        inner = _Text(validate=validate.Length(max=field.max_length), **common)
    elif field.type == "flag":
        inner = _Flag(**common)
    elif field.type == "time":
        inner = _Time(**common)
    elif field.type == "reference":
        inner = _Text(validate=validate.Regexp(_REFERENCE, error="{input} is not the id of a record"), **common)
    elif field.type == "names":
        inner = fields.List(_Text(validate=validate.Length(max=60)), **common)
    else:
        inner = _Points(**common)
    return _Measure(inner, **common) if field.measure else inner


@cache
def schema_for(kind: str) -> Schema:
    """The schema of one kind's values as entries carry them."""
    members = {field.name: wire_field(field) for field in SHEETS[kind].said}
    made = Schema.from_dict(members, name=kind.capitalize())
    return made(unknown=INCLUDE)


@cache
def _required(kind: str) -> tuple[str, ...]:
    return tuple(field.name for field in SHEETS[kind].said if field.required)


def problems(kind: str, values: Mapping[str, Any], *, creates: bool) -> dict[str, str]:
    """What is wrong with the values of one entry: field -> one sentence; empty where all is well.

    A creating entry must hold the required fields; no entry may take one of them away.
    """
    found: dict[str, str] = {}
    for name, messages in schema_for(kind).validate(values).items():
        found[str(name)] = _first(messages)
    for name in _required(kind):
        if values.get(name) in (None, "") and (creates or name in values):
            found.setdefault(name, "is needed")
    return found


def _first(messages: Any) -> str:
    while isinstance(messages, dict):
        messages = next(iter(messages.values()))
    return str(messages[0]) if isinstance(messages, list) else str(messages)
