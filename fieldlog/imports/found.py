"""What a file was found to hold, before anything is compared with the survey."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

from fieldlog.errors import Refusal

Values = dict[str, Any]
"""Wire values of one record."""


class ImportFileError(Refusal, ValueError):
    """A file that cannot be read at all."""


@dataclass(frozen=True)
class RefusedRow:
    """One thing in a file that will not be written: where it stands, and why."""

    where: str
    why: str


@dataclass(frozen=True)
class FoundTrack:
    """A track without a gap: points are [lat, lon, altitude or None, wire time or None]."""

    name: str
    points: list[list[Any]]


@dataclass
class Found:
    """Sites and tracks of a file, what of it is refused, and what else there is to say."""

    sites: list[tuple[str, Values]] = field(default_factory=list)
    """(where it stands in the file, its values)"""
    tracks: list[FoundTrack] = field(default_factory=list)
    refused: list[RefusedRow] = field(default_factory=list)
    notes: list[str] = field(default_factory=list)
