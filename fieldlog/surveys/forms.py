"""From what a page's form holds to wire values, by the sheet."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from typing import Any

from fieldlog.errors import Refusal
from fieldlog.sheet.fields import Field, Sheet


def values_from(sheet: Sheet, form: Mapping[str, Any], names: Iterable[str]) -> dict[str, Any]:
    """The named fields of a form as wire values; an empty input is null. Refusal names the field."""
    return {name: _value(sheet.by_name[name], str(form.get(name, ""))) for name in names}


def _value(field: Field, text: str) -> Any:
    text = text.strip()
    if field.type == "flag":
        return text in ("1", "on", "yes", "true")
    if not text:
        return None
    if field.type in ("number", "integer", "direction", "orientation"):
        return _number(field, text)
    return text


def _number(field: Field, text: str) -> float | int:
    plain = text.replace("\u2212", "-").replace(" ", "")
    if re.fullmatch(r"-?\d+,\d+", plain):
        plain = plain.replace(",", ".")
    if re.fullmatch(r"-?\d{1,15}(\.\d{1,15})?", plain) is None:
        raise Refusal(f"{text!r} is not a number", field.label, "Write it like 12.5, without its unit")
    value = float(plain)
    return int(value) if value.is_integer() else value
