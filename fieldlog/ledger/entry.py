"""An entry: one thing said about a survey, written once and never changed.

Its text is JSON in UTF-8, written by the device that says it; its bytes and their SHA-256 are
kept on the phone, on the wire and in the ledger, so no two JSON writers ever have to agree.
"""

from __future__ import annotations

import hashlib
import json
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import datetime
from functools import cached_property
from typing import Any

from fieldlog.errors import Refusal
from fieldlog.ledger import clock, names
from fieldlog.ledger.protocol import VERSIONS, upcast
from fieldlog.sheet.subjects import SHEETS
from fieldlog.sheet.times import iso_millis, read_time


class EntryError(Refusal, ValueError):
    """The text is not an entry that can be kept in the ledger."""


@dataclass(frozen=True)
class Entry:
    """One entry as it stands in the ledger: who numbered it, and its text."""

    device: str
    n: int
    text: str

    @property
    def name(self) -> str:
        return names.entry_name(self.device, self.n)

    @cached_property
    def body(self) -> dict[str, Any]:
        """The parsed text, brought to the present protocol version."""
        body: dict[str, Any] = upcast(json.loads(self.text))
        return body

    @property
    def kind(self) -> str:
        return str(self.body["kind"])

    @property
    def record(self) -> str:
        """The record it speaks of: the one it creates, or the one it names."""
        return str(self.body.get("record") or self.name)

    @property
    def creates(self) -> bool:
        return not self.body.get("record")

    @property
    def values(self) -> dict[str, Any]:
        values: dict[str, Any] = self.body["set"]
        return values

    @property
    def over(self) -> dict[str, list[str]]:
        return self.body.get("over") or {}

    @property
    def saw(self) -> list[str]:
        return self.body.get("saw") or []

    @property
    def order(self) -> tuple[str, str, int]:
        """What decides the provisional value among versions: (hlc, device, n)."""
        return str(self.body["hlc"]), self.device, self.n


def hash_of(text: str) -> str:
    """SHA-256 of an entry's text in UTF-8, in hexadecimal."""
    return hashlib.sha256(raw_bytes(text)).hexdigest()


def raw_bytes(text: str) -> bytes:
    """The text's bytes, even where it holds lone surrogates and so is no UTF-8."""
    return text.encode("utf-8", errors="surrogatepass")


def write_text(
    *,
    app: str,
    by: str,
    survey: str,
    kind: str,
    values: Mapping[str, Any],
    hlc: str,
    made_at: datetime,
    record: str | None = None,
    over: Mapping[str, list[str]] | None = None,
    saw: list[str] | None = None,
    offset_ms: int | None = None,
) -> str:
    """The text of a new entry. An entry that creates its record has no record, over and saw."""
    body: dict[str, Any] = {"v": VERSIONS[-1], "app": app, "by": by, "survey": survey, "kind": kind}
    if record is not None:
        body["record"] = record
    body["set"] = dict(values)
    if record is not None:
        body["over"] = dict(over or {})
        body["saw"] = list(saw or [])
    body["hlc"] = hlc
    body["offset"] = offset_ms
    body["made_at"] = iso_millis(made_at)
    return json.dumps(body, ensure_ascii=False, separators=(",", ":"), allow_nan=False)


def check_shape(text: str, survey: str) -> dict[str, Any]:
    """The body of an entry text that has the shape of one; EntryError says what is wrong.

    Values are not looked at here: the wire schema of the kind's sheet does that.
    """
    body: Any
    try:
        text.encode("utf-8")
        body = json.loads(text, parse_constant=_no_constant)
    except (ValueError, RecursionError) as error:
        raise EntryError(f"the entry is not JSON ({error})") from error
    if not isinstance(body, dict):
        raise EntryError("the entry is not a JSON object")
    if body.get("v") not in VERSIONS or isinstance(body.get("v"), bool):
        raise EntryError(
            f"protocol version {body.get('v')!r} is not known here", "v", "Update the store, then hand over again"
        )
    body = upcast(body)
    if body.get("survey") != survey:
        raise EntryError("the entry belongs to another survey", "survey")
    if body.get("kind") not in SHEETS:
        raise EntryError(f"nothing is known of the kind {body.get('kind')!r}", "kind")
    for key, kind in (("by", str), ("app", str), ("set", dict), ("hlc", str), ("made_at", str)):
        if not isinstance(body.get(key), kind):
            raise EntryError("is missing or of the wrong type", key)
    if not isinstance(body.get("offset"), int | None):
        raise EntryError("is neither whole milliseconds nor null", "offset")
    try:
        clock.read_stamp(body["hlc"])
        read_time(body["made_at"])
        for name in _names_in(body):
            names.split_name(name)
    except (ValueError, TypeError, AttributeError) as error:
        raise EntryError(str(error)) from error
    checked: dict[str, Any] = body
    return checked


def _names_in(body: Mapping[str, Any]) -> list[str]:
    found = [body["by"], *(body.get("saw") or [])]
    if body.get("record") is not None:
        found.append(body["record"])
    for field, over in (body.get("over") or {}).items():
        if field not in body["set"]:
            raise ValueError(f"over names {field!r}, which the entry does not set")
        found.extend(over)
    return found


def _no_constant(name: str) -> None:
    raise ValueError(f"{name} is not a JSON number")
