"""Importing: what a file would change in a survey, and, confirmed, that change."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, field
from datetime import datetime
from pathlib import PurePath
from typing import Any, Final

from sqlalchemy import select

from fieldlog.errors import Refusal
from fieldlog.imports.accepting import NotebookPlan, accept, look, sentence
from fieldlog.imports.found import Found, FoundTrack, ImportFileError, RefusedRow, Values
from fieldlog.imports.gpx import read_gpx
from fieldlog.imports.notebook import ENDING, read_notebook
from fieldlog.imports.placing import Placement, place
from fieldlog.imports.sites_csv import read_sites
from fieldlog.sheet.schema import problems
from fieldlog.sheet.subjects import label_in
from fieldlog.sheet.times import read_time
from fieldlog.store.append import say
from fieldlog.store.db import AnySession
from fieldlog.store.photos import PhotoFolder
from fieldlog.store.tables import crew, observations, tracks
from fieldlog.surveys.service import crew_names, put_site, sites_of

READERS: Final = {".gpx": read_gpx, ".csv": read_sites}

PART: Final = 1000
"""Points in one entry of a track."""

SAME_PLACE_DEG: Final = 2e-7


@dataclass(frozen=True)
class TrackLine:
    """A track that would be written: its name, who walked it, how many points, and when."""

    name: str
    crew: str | None
    points: int
    begins: datetime | None
    ends: datetime | None


@dataclass
class Plan:
    """What an import would write, what it would not and why.

    `sites` and `tracks` are the values of new records (a long track has several); `placements` are
    changes of observations; `already` names what the survey holds already.
    """

    sites: list[Values] = field(default_factory=list)
    tracks: list[Values] = field(default_factory=list)
    placements: list[Placement] = field(default_factory=list)
    already: list[str] = field(default_factory=list)
    refused: list[RefusedRow] = field(default_factory=list)
    notes: list[str] = field(default_factory=list)
    notebook: NotebookPlan | None = None
    """What a phone's file brings, where the file is one."""

    @property
    def is_empty(self) -> bool:
        """Whether there is nothing to write."""
        phones = self.notebook is not None and (self.notebook.fresh or self.notebook.photos)
        return not (self.sites or self.tracks or self.placements or phones)

    @property
    def track_lines(self) -> list[TrackLine]:
        """The tracks, each as a whole."""
        parts: dict[str, list[Values]] = {}
        for values in self.tracks:
            parts.setdefault(values["name"], []).append(values)
        return [_line(name, held) for name, held in parts.items()]

    @property
    def sentence(self) -> str:
        """What would be written, in words."""
        if self.notebook is not None:
            return sentence(self.notebook)
        if self.is_empty:
            return "Nothing to add: all of it is here already." if self.already else "Nothing to add."
        counted = (
            (len(self.sites), "site", "sites"),
            (len({track["name"] for track in self.tracks}), "track", "tracks"),
            (len(self.placements), "observation placed along a track", "observations placed along a track"),
        )
        return ", ".join(f"{n} {one if n == 1 else many}" for n, one, many in counted if n) + "."


def preview(
    session: AnySession, survey: str, name: str, data: bytes, walker: str | None = None, *, folder: PhotoFolder
) -> Plan:
    """What importing a file would do; nothing is written.

    `name` is the file's name (its ending says what it is), `walker` the crew record of whoever
    carried the device: then only their observations are placed. `folder` is where photos are kept.
    Refusal for a file that cannot be read; what is wrong in parts of it stands in the plan.
    """
    if _ending(name) == ENDING:
        return Plan(notebook=look(session, survey, read_notebook(data), folder))
    if walker is not None and walker not in crew_names(session, survey):
        raise Refusal("this is nobody of the survey's crew", "Walked by")
    found = READERS[_ending(name)](data)
    plan = Plan(refused=list(found.refused), notes=list(found.notes))
    _plan_sites(plan, found, sites_of(session, survey))
    _plan_tracks(plan, found, _held_tracks(session, survey), walker)
    placements, refused = place(_without_place(session, survey, walker), found.tracks)
    plan.placements.extend(placements)
    plan.refused.extend(refused)
    return plan


def _ending(name: str) -> str:
    ending = PurePath(name).suffix.lower()
    if ending not in (*READERS, ENDING):
        raise ImportFileError(
            f"{ending or 'no ending'} is not imported", name,
            f"Choose .gpx (waypoints, tracks), .csv (sites) or {ENDING} (a phone's file)",
        )
    return ending


def confirm(
    session: AnySession, survey: str, by: str, name: str, data: bytes, walker: str | None = None, *,
    folder: PhotoFolder, who: str,
) -> Plan:
    """Write what `preview` shows, as it stands now. Inside `write()`. All of it or, on a Refusal, nothing.

    `who` is the lead's name, for the audit line of a phone's file.
    """
    if _ending(name) == ENDING:
        return Plan(notebook=accept(session, survey, by, who, read_notebook(data), folder))
    plan = preview(session, survey, name, data, walker, folder=folder)
    for values in plan.sites:
        put_site(session, survey, by, values)
    for values in plan.tracks:
        say(session, survey, by=by, kind="track", values=values)
    for placement in plan.placements:
        say(session, survey, by=by, kind="observation", values=placement.values, record=placement.row["record"])
    return plan


def first_lead(session: AnySession, survey: str) -> str:
    """The crew record of the survey's first lead; Refusal where it has none."""
    found = session.scalar(
        select(crew.c.record).where(crew.c.survey == survey, crew.c.lead.is_(True)).order_by(crew.c.first_seq)
    )
    if found is None:
        raise Refusal("the survey has no lead", mend="Import from the lead's page")
    return str(found)


def _plan_sites(plan: Plan, found: Found, held: Iterable[Mapping[str, Any]]) -> None:
    by_name = {site["name"]: site for site in held}
    fresh: set[str] = set()
    for where, values in found.sites:
        wrong = problems("site", values, creates=True)
        there = by_name.get(values.get("name"))
        if wrong:
            said = "; ".join(f"{label_in('site', name)} {what}" for name, what in wrong.items())
            plan.refused.append(RefusedRow(where, said))
        elif there is not None and _same_place(there, values):
            plan.already.append(f"site {values['name']}")
        elif there is not None:
            plan.refused.append(RefusedRow(where, "a site of this name is at another place: rename one of them"))
        elif values["name"] in fresh:
            plan.refused.append(RefusedRow(where, "the name stands twice in the file"))
        else:
            fresh.add(values["name"])
            plan.sites.append(values)


def _same_place(held: Mapping[str, Any], values: Values) -> bool:
    return all(abs(held[name] - values[name]) <= SAME_PLACE_DEG for name in ("lat_deg", "lon_deg"))


def _plan_tracks(
    plan: Plan, found: Found, held: Mapping[tuple[str, int | None], list[Any]], walker: str | None
) -> None:
    for track in found.tracks:
        parts = list(_parts(track, walker))
        wrong = problems("track", parts[0], creates=True)
        if wrong:
            plan.refused.append(RefusedRow(f"track {track.name}", "; ".join(wrong.values())))
            continue
        fresh = [part for part in parts if part["points"] not in held.get((part["name"], part["part"]), [])]
        if not fresh:
            plan.already.append(f"track {track.name}")
        elif len(fresh) < len(parts):
            plan.refused.append(RefusedRow(f"track {track.name}", "parts of it are here already: rename it in the file"))
        elif parts[0] in plan.tracks:
            plan.refused.append(RefusedRow(f"track {track.name}", "it stands twice in the file"))
        else:
            plan.tracks.extend(parts)


def _parts(track: FoundTrack, walker: str | None) -> Iterator[Values]:
    for number, start in enumerate(range(0, len(track.points), PART), start=1):
        values: Values = {"name": track.name, "part": number, "points": track.points[start : start + PART]}
        yield values if walker is None else {**values, "crew": walker}


def _line(name: str, parts: list[Values]) -> TrackLine:
    points = [point for part in parts for point in part["points"]]
    times = sorted(read_time(point[3]) for point in points if point[3] is not None)
    begins, ends = (times[0], times[-1]) if times else (None, None)
    return TrackLine(name, parts[0].get("crew"), len(points), begins, ends)


def _held_tracks(session: AnySession, survey: str) -> dict[tuple[str, int | None], list[Any]]:
    """(name, part) -> the points of every track that is so called."""
    held: dict[tuple[str, int | None], list[Any]] = {}
    for name, part, points in session.execute(
        select(tracks.c.name, tracks.c.part, tracks.c.points).where(tracks.c.survey == survey)
    ):
        held.setdefault((name, part), []).append(points)
    return held


def _without_place(session: AnySession, survey: str, walker: str | None) -> list[dict[str, Any]]:
    """Standing observations without coordinates, of one crew member or of all."""
    wanted = [
        observations.c.survey == survey, observations.c.crossed_out.is_(None),
        observations.c.lat_deg.is_(None), observations.c.lon_deg.is_(None),
    ]
    if walker is not None:
        wanted.append(observations.c.made_by == walker)
    found = session.execute(select(observations).where(*wanted).order_by(observations.c.observed_at))
    return [dict(row) for row in found.mappings()]
