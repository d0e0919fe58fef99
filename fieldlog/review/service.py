"""What the lead's pages are made of, as plain values."""

from __future__ import annotations

from collections import Counter, defaultdict
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from datetime import date, datetime
from typing import Any
from zoneinfo import ZoneInfo

from sqlalchemy import select

from fieldlog.errors import Refusal
from fieldlog.ledger.entry import Entry
from fieldlog.review.results import MEASURES, Measure, Result, more_needed, results
from fieldlog.sheet.check import questions
from fieldlog.sheet.question import Question, thresholds_of
from fieldlog.sheet.sample import dune
from fieldlog.sheet.subjects import label_in
from fieldlog.sheet.times import read_time
from fieldlog.store.append import ForeignStoreError, base_device, say
from fieldlog.store.db import AnySession
from fieldlog.store.projection import numbered_entries_of
from fieldlog.store.tables import LedgerEntry, TwoVersions, observations, photos, same_dunes
from fieldlog.surveys.service import Row, crew_names, site_row, sites_of, survey_row


@dataclass(frozen=True)
class SiteLine:
    """One site on the day sheet: what the chosen readings say, and what everything so far says."""

    site: Row
    chosen: dict[str, Result | None]
    so_far: dict[str, Result | None]
    readings_chosen: int
    readings: int
    questions: int
    two_versions: int

    @property
    def decision(self) -> str:
        """The words for what wants a decision, "" where nothing does."""
        words = ["two versions"] if self.two_versions else []
        if self.questions:
            words.append(f"{self.questions} question{'s' if self.questions > 1 else ''}")
        main = self.so_far.get("slip_face_deg") or self.so_far.get("crest_deg")
        if not self.readings:
            words.append("not read yet")
        elif main is not None and not main.summary.enough:
            words.append("revisit?")
        return ", ".join(words)


@dataclass(frozen=True)
class DaySheet:
    """The day sheet of a survey."""

    survey: Row
    day: date | None
    member: str
    days: list[date]
    crew: dict[str, str]
    lines: list[SiteLine]
    measures: tuple[Measure, ...] = MEASURES


@dataclass(frozen=True)
class SiteSheet:
    """All about one site."""

    survey: Row
    site: Row
    crew: dict[str, str]
    rows: Sequence[Row]
    results: dict[str, list[Result]]
    questions: dict[str, list[Question]]
    two_versions: dict[str, list[str]]
    own_versions: dict[str, list[VersionLine]]
    photos: dict[str, list[Row]]
    dunes: list[DuneLine]
    same_dunes: list[Row]
    measures: tuple[Measure, ...] = MEASURES


@dataclass(frozen=True)
class Change:
    """One entry of a record's history: who, when, and each field from what to what.

    `at_base`: it was said at a desk, not on a phone. `accepted_by`: who accepted it from a file, "" for nobody.
    """

    seq: int
    n: int
    who: str
    device: str
    at_base: bool
    made_at: datetime
    received_at: datetime
    accepted_by: str
    fields: list[tuple[str, Any, Any]] = field(default_factory=list)


def day_of(when: datetime, zone: str) -> date:
    """The survey's day of a time."""
    return when.astimezone(ZoneInfo(zone)).date()


def day_sheet(session: AnySession, survey: str, *, day: str = "", member: str = "") -> DaySheet:
    """The day sheet, for one day and crew member or for all; worst site first.

    `day` is a date as text, "" for the newest day with readings, "all" for no filter.
    """
    head = survey_row(session, survey)
    zone = head["time_zone"]
    rows = _observations(session, survey)
    days = sorted({day_of(row["observed_at"], zone) for row in rows}, reverse=True)
    chosen_day = _chosen_day(day, days)
    by_site: dict[str, list[Row]] = defaultdict(list)
    for row in rows:
        by_site[row["site"]].append(row)
    all_sites = sites_of(session, survey)
    same = dune_pairs(session, survey)
    site_of = {row["record"]: row["site"] for row in rows}
    asked = Counter(site_of[question.record] for question in questions(rows, sites=all_sites, thresholds=thresholds_of(head), time_zone=zone))
    doubtful = _two_versions_by_site(session, survey, site_of)
    lines = []
    for site in all_sites:
        if site["crossed_out"]:
            continue
        everything = by_site.get(site["record"], [])
        chosen = [
            row for row in everything
            if (chosen_day is None or day_of(row["observed_at"], zone) == chosen_day)
            and (not member or row["made_by"] == member)
        ]
        lines.append(SiteLine(
            site=site,
            chosen={m.column: _first(results(head, site, chosen, m, same[site["record"]])) for m in MEASURES},
            so_far={m.column: _first(results(head, site, everything, m, same[site["record"]])) for m in MEASURES},
            readings_chosen=sum(not row["crossed_out"] for row in chosen),
            readings=sum(not row["crossed_out"] for row in everything),
            questions=asked[site["record"]],
            two_versions=doubtful[site["record"]],
        ))
    lines.sort(key=_worst_first)
    return DaySheet(head, chosen_day, member, days, crew_names(session, survey), lines)


def _observations(session: AnySession, survey: str, *more: Any) -> list[Row]:
    """Observations in the order in which they were made."""
    found = session.execute(
        select(observations)
        .where(observations.c.survey == survey, *more)
        .order_by(observations.c.observed_at, observations.c.record)
    )
    return [dict(row) for row in found.mappings()]


def _chosen_day(text: str, days: list[date]) -> date | None:
    if text == "all":
        return None
    if not text:
        return days[0] if days else None
    try:
        return date.fromisoformat(text)
    except ValueError as error:
        raise Refusal(f"{text!r} is not a day", "day", "Write it like 2026-07-08") from error


def _first(found: list[Result]) -> Result | None:
    return found[0] if found else None


def _worst_first(line: SiteLine) -> tuple[int, float, str]:
    """Two versions, then questions, then not read yet, then the most dunes still needed; last what wants nothing."""
    main = line.so_far.get("slip_face_deg") or line.so_far.get("crest_deg")
    if line.two_versions:
        rank = 0
    elif line.questions:
        rank = 1
    elif main is None:
        rank = 4 if line.readings else 2
    else:
        rank = 4 if main.summary.enough else 3
    needed = more_needed(main) if main else None
    return rank, -(needed if needed is not None else 1e9), line.site["name"]


def _two_versions_by_site(session: AnySession, survey: str, site_of: Mapping[str, str]) -> Counter[str]:
    found: Counter[str] = Counter()
    for kind, record in session.execute(
        select(TwoVersions.kind, TwoVersions.record).where(TwoVersions.survey == survey)
    ):
        found[record if kind == "site" else site_of.get(record, "")] += 1
    return found


def site_sheet(session: AnySession, survey: str, record: str) -> SiteSheet:
    """All of one site."""
    head = survey_row(session, survey)
    site = site_row(session, survey, record)
    everything = _observations(session, survey)
    rows = [row for row in everything if row["site"] == record]
    records = {row["record"] for row in rows}
    asked: dict[str, list[Question]] = defaultdict(list)
    # An instrument's day and a phone's order go over several sites, so all of the survey is asked.
    for question in questions(everything, sites=sites_of(session, survey), thresholds=thresholds_of(head), time_zone=head["time_zone"]):
        if question.record in records:
            asked[question.record].append(question)
    doubtful: dict[str, list[str]] = defaultdict(list)
    for name, fieldname in session.execute(
        select(TwoVersions.record, TwoVersions.field).where(TwoVersions.survey == survey)
    ):
        if name in records:
            doubtful[name].append(fieldname)
    return SiteSheet(
        head, site, crew_names(session, survey), rows,
        {m.column: results(head, site, rows, m, dune_pairs(session, survey)[record]) for m in MEASURES},
        asked, doubtful, versions_of_record(session, survey, record), photos_of(session, survey, records),
        dunes_of(session, survey, record, rows), _same_rows(session, survey, record),
    )


@dataclass(frozen=True)
class DuneLine:
    """A dune as one device numbered it: `name` is device/number, `who` read on it, how often."""

    name: str
    number: int
    who: str
    readings: int


def dunes_of(session: AnySession, survey: str, site: str, rows: Sequence[Row]) -> list[DuneLine]:
    """The dunes of a site as its phones numbered them; empty where only one phone did."""
    names = crew_names(session, survey)
    counted: Counter[str] = Counter()
    first: dict[str, Row] = {}
    for row in rows:
        name = dune(row)
        if name and not row["crossed_out"]:
            counted[name] += 1
            first.setdefault(name, row)
    if len({name.partition("/")[0] for name in counted}) < 2:
        return []
    lines = [DuneLine(name, row["bedform"], names.get(str(row["made_by"])) or str(row["made_by"]), counted[name]) for name, row in first.items()]
    return sorted(lines, key=lambda line: (line.number, line.who))


def dune_pairs(session: AnySession, survey: str) -> dict[str, list[tuple[str, str]]]:
    """Site -> pairs of dunes that a lead has called one."""
    found: dict[str, list[tuple[str, str]]] = defaultdict(list)
    for row in _same_rows(session, survey):
        if not row["crossed_out"]:
            found[row["site"]].append((row["dune"], row["other"]))
    return found


def _same_rows(session: AnySession, survey: str, site: str | None = None) -> list[Row]:
    wanted = [same_dunes.c.survey == survey, *([] if site is None else [same_dunes.c.site == site])]
    return [dict(row) for row in session.execute(select(same_dunes).where(*wanted).order_by(same_dunes.c.first_seq)).mappings()]


def call_one_dune(session: AnySession, survey: str, by: str, site: str, one: str, other: str) -> str:
    """Say that two phones' dunes are one; the record, which can be crossed out. Inside `write()`."""
    known = {line.name for line in dunes_of(session, survey, site, _observations(session, survey, observations.c.site == site))}
    if one == other or not {one, other} <= known:
        raise Refusal("choose two different dunes of this site", "One dune")
    return say(session, survey, by=by, kind="same_dune", values={"site": site, "dune": one, "other": other})


def part_dunes(session: AnySession, survey: str, by: str, record: str, reason: str | None) -> None:
    """Take back that two dunes are one, with a reason, or, without one, say it again. Inside `write()`."""
    say(session, survey, by=by, kind="same_dune", values={"crossed_out": reason}, record=record)


def photos_of(session: AnySession, survey: str, records: set[str]) -> dict[str, list[Row]]:
    """Observation -> its standing photos in the order in which they were made."""
    found: dict[str, list[Row]] = defaultdict(list)
    rows = session.execute(
        select(photos).where(photos.c.survey == survey, photos.c.crossed_out.is_(None)).order_by(photos.c.made_at)
    ).mappings()
    for row in rows:
        if row["observation"] in records:
            found[row["observation"]].append(dict(row))
    return found


def history(session: AnySession, survey: str, record: str) -> list[Change]:
    """The entries of a record from the ledger, oldest first, as changes from what stood before."""
    numbered = numbered_entries_of(session, survey, [record]).get(record, [])
    if not numbered:
        raise ForeignStoreError("there is no such record in this survey")
    names = crew_names(session, survey)
    received = {
        seq: (at, names.get(by, by or ""))
        for seq, at, by in session.execute(
            select(LedgerEntry.seq, LedgerEntry.received_at, LedgerEntry.accepted_by).where(
                LedgerEntry.survey == survey, LedgerEntry.record == record
            )
        )
    }
    by_name = {entry.name: entry for _, entry in numbered}
    desk = base_device(session, survey)
    changes = []
    for seq, entry in numbered:
        fields = [(name, _before(entry, name, by_name), value) for name, value in entry.values.items()]
        by = entry.body["by"]
        changes.append(Change(
            seq=seq, n=entry.n, who=names.get(by, by), device=entry.device, at_base=entry.device == desk,
            made_at=read_time(entry.body["made_at"]), received_at=received[seq][0], accepted_by=received[seq][1], fields=fields,
        ))
    return changes


def _before(entry: Entry, name: str, by_name: Mapping[str, Entry]) -> Any:
    """What the entry replaced: the value of the newest entry that it lists over its field."""
    replaced = [by_name[other] for other in entry.over.get(name, ()) if other in by_name]
    return max(replaced, key=lambda other: other.order).values.get(name) if replaced else None


def observation_row(session: AnySession, survey: str, record: str) -> Row:
    """One observation."""
    found = _observations(session, survey, observations.c.record == record)
    if not found:
        raise ForeignStoreError("there is no such observation in this survey")
    return found[0]


@dataclass(frozen=True)
class VersionLine:
    """One of two versions: its entry, what it says, and who said it when."""

    entry: str
    value: Any
    who: str
    made_at: datetime


def versions_of_record(session: AnySession, survey: str, record: str) -> dict[str, list[VersionLine]]:
    """Field -> its versions, the provisional one first."""
    told = {f"{change.device}-{change.n}": change for change in history(session, survey, record)}
    return {
        name: [
            VersionLine(v["entry"], v["value"], told[v["entry"]].who, told[v["entry"]].made_at) for v in versions
        ]
        for name, versions in session.execute(
            select(TwoVersions.field, TwoVersions.versions)
            .where(TwoVersions.survey == survey, TwoVersions.record == record)
            .order_by(TwoVersions.field)
        )
    }


def choose_version(session: AnySession, survey: str, by: str, record: str, field: str, entry: str) -> str:
    """Let one of two versions stand, as an entry over both; the record's kind. Inside `write()`.

    Refusal where the versions are no longer those that were looked at.
    """
    row = session.get(TwoVersions, (survey, record, field))
    chosen = [v["value"] for v in row.versions if v["entry"] == entry] if row else []
    if row is None or not chosen:
        raise Refusal(
            "these are no longer the versions", label_in("observation", field), "Somebody has chosen or changed it meanwhile: look again"
        )
    kind = row.kind
    say(session, survey, by=by, kind=kind, values={field: chosen[0]}, record=record)
    return kind
