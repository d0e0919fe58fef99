"""Exporting a survey: from the database to one file."""

from __future__ import annotations

import tempfile
from collections.abc import Callable, Iterable, Iterator, Mapping
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import Any, Final

from sqlalchemy import func, select

from fieldlog.errors import Refusal
from fieldlog.exports.csv_file import write_csv
from fieldlog.exports.geojson import write_geojson
from fieldlog.exports.geopackage import write_geopackage
from fieldlog.exports.gpx import write_gpx
from fieldlog.exports.rows import SurveyRows, Version
from fieldlog.store.db import AnySession
from fieldlog.store.tables import TABLES, TwoVersions, observations
from fieldlog.surveys.service import crew_names, sites_of, survey_row

Progress = Callable[[int, int], None]

FETCHED_AT_ONCE: Final = 1000


class ExportError(Refusal, ValueError):
    """Nothing that can be exported so."""


@dataclass(frozen=True)
class Format:
    """One kind of file: its ending, what it holds, and how many times writing it reads the observations."""

    ending: str
    media_type: str
    title: str
    holds: str
    write: Callable[[SurveyRows, Path], None]
    passes: int = 1


FORMATS: Final = {
    made.ending: made
    for made in (
        Format(
            ".gpkg", "application/geopackage+sqlite3", "GeoPackage",
            "Everything, in layers: observations, sites, tracks, crest lines and slip-face ticks at their true azimuths, what "
            "each site's readings say with its uncertainty, photo points, two versions, and a data dictionary. WGS 84.",
            write_geopackage, passes=5,
        ),
        Format(
            ".geojson", "application/geo+json", "GeoJSON",
            "The observations as points with all their fields, crossed-out ones too. RFC 7946, WGS 84.", write_geojson,
        ),
        Format(
            ".csv", "text/csv; charset=utf-8", "CSV",
            "The observations, one a line, with all their fields, crossed-out ones too. RFC 4180, UTF-8. Text that a spreadsheet "
            "would take for a formula (it begins with = + - or @) has an apostrophe put before it.", write_csv,
        ),
        Format(
            ".gpx", "application/gpx+xml", "GPX",
            "For a handheld: sites and observations as waypoints, and tracks. What is crossed out, and observations without "
            "coordinates, are left out. GPX 1.1.", write_gpx,
        ),
    )
}


def format_of(name: str) -> Format:
    """The format that a file's ending names; Refusal for another ending."""
    ending = Path(name).suffix.lower()
    if ending not in FORMATS:
        raise ExportError(
            f"{ending or 'no ending'} is none of the formats", Path(name).name, f"Use one of {' '.join(FORMATS)}"
        )
    return FORMATS[ending]


def export(
    session: AnySession, survey: str, target: Path, format: str | None = None, progress: Progress | None = None  # noqa: A002
) -> None:
    """Write a survey into a file, in the format named (".gpkg") or that of the file's ending.

    The file is written beside its place and put there when it is whole; one that was there is
    replaced. `progress` is called with rows read so far and in all. The session's transaction is
    ended before and after: all is read at one moment. Refusal: unknown survey or ending.
    """
    chosen = format_of(f"file{format}" if format else target.name)
    if not target.parent.is_dir():
        raise ExportError("there is no such folder", str(target.parent), "Make it first, or name another")
    with _one_moment(session), tempfile.TemporaryDirectory(prefix=".ergbook-", dir=target.parent) as folder:
        beside = Path(folder) / f"survey{chosen.ending}"
        chosen.write(survey_rows(session, survey, _counted(session, survey, chosen.passes, progress)), beside)
        beside.replace(target)


def survey_rows(
    session: AnySession, survey: str, counted: Callable[[Iterable[Any]], Iterable[Any]] = lambda rows: rows
) -> SurveyRows:
    """The streams of a survey; observations pass through `counted`."""

    def fetch(kind: str) -> Iterable[Mapping[str, Any]]:
        rows = _fetch(session, survey, kind)
        return counted(rows) if kind == "observation" else rows

    head = survey_row(session, survey)
    names = {**crew_names(session, survey), **{site["record"]: site["name"] for site in sites_of(session, survey)}}
    return SurveyRows(head, names, tuple(_versions(session, survey)), fetch)


_ORDER: Final = {
    "observation": ("observed_at", "record"), "site": ("name", "record"), "track": ("made_on", "first_seq"),
}


def _fetch(session: AnySession, survey: str, kind: str) -> Iterator[Mapping[str, Any]]:
    table = TABLES[kind]
    order = [table.c[name] for name in _ORDER.get(kind, ("first_seq",))]
    found = session.execute(
        select(table).where(table.c.survey == survey).order_by(*order).execution_options(yield_per=FETCHED_AT_ONCE)
    )
    for row in found.mappings():
        yield dict(row)


def _versions(session: AnySession, survey: str) -> Iterator[Version]:
    found = session.execute(
        select(TwoVersions.record, TwoVersions.kind, TwoVersions.field, TwoVersions.versions)
        .where(TwoVersions.survey == survey)
        .order_by(TwoVersions.record, TwoVersions.field)
    )
    for record, kind, field, versions in found:
        for index, version in enumerate(versions):
            yield Version(record, kind, field, version["entry"], version["value"], stands=index == 0)


def _counted(
    session: AnySession, survey: str, passes: int, progress: Progress | None
) -> Callable[[Iterable[Any]], Iterable[Any]]:
    if progress is None:
        return lambda rows: rows
    count = session.scalar(select(func.count()).select_from(observations).where(observations.c.survey == survey))
    total, done = (count or 0) * passes, 0

    def counted(rows: Iterable[Any]) -> Iterator[Any]:
        nonlocal done
        for row in rows:
            yield row
            done += 1
            if done % FETCHED_AT_ONCE == 0 or done == total:
                progress(done, total)

    return counted


@contextmanager
def _one_moment(session: AnySession) -> Iterator[None]:
    """Everything inside is read as of one moment (SQLite's transactions are so anyway)."""
    session.rollback()
    if session.get_bind().dialect.name == "postgresql":
        session.connection(execution_options={"isolation_level": "REPEATABLE READ"})
    try:
        yield
    finally:
        session.rollback()
