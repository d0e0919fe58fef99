"""Setting up a survey: what the lead may do, each as an entry in its ledger."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any
from zoneinfo import ZoneInfo, available_timezones

from sqlalchemy import func, select

from fieldlog.errors import Refusal
from fieldlog.sheet.observation import OBSERVATION
from fieldlog.store.append import ForeignStoreError, open_survey, say
from fieldlog.store.db import AnySession
from fieldlog.store.tables import crew, observations, sites, surveys

Row = dict[str, Any]
"""A row of a projected table, column -> value."""

DEFAULTS: dict[str, Any] = {"fewest_dunes": 5, "reading_step_deg": 1}


@dataclass(frozen=True)
class SurveyLine:
    """One survey in the list."""

    survey: str
    name: str
    observations: int
    sites: int


def list_surveys(session: AnySession) -> list[SurveyLine]:
    """All surveys of the store by name."""
    counts: dict[str, dict[str, int]] = {
        table.name: dict(
            session.execute(select(table.c.survey, func.count()).group_by(table.c.survey)).all()
        )
        for table in (observations, sites)
    }
    found = session.execute(select(surveys.c.survey, surveys.c.name).order_by(surveys.c.name)).all()
    return [
        SurveyLine(survey, name, counts["observation"].get(survey, 0), counts["site"].get(survey, 0))
        for survey, name in found
    ]


def find_survey(session: AnySession, name_or_id: str) -> Row:
    """A survey's row by its id or its unique name; Refusal where there is none or more than one."""
    found = session.execute(
        select(surveys).where((surveys.c.survey == name_or_id) | (surveys.c.name == name_or_id))
    ).mappings().all()
    if not found:
        raise ForeignStoreError(
            f"there is no survey {name_or_id!r} here", mend="`ergbook surveys` lists those there are"
        )
    if len(found) > 1:
        raise Refusal(f"{len(found)} surveys are called {name_or_id!r}", mend="Name it by its id")
    return dict(found[0])


def survey_row(session: AnySession, survey: str) -> Row:
    """A survey's row by its id."""
    found = session.execute(select(surveys).where(surveys.c.survey == survey)).mappings().first()
    if found is None:
        raise ForeignStoreError("there is no such survey here", mend="Begin at the list of surveys")
    return dict(found)


def check_time_zone(name: str | None) -> None:
    """Refusal where the zone is none that is known."""
    if not name or name not in available_timezones():
        raise Refusal(f"{name!r} is no time zone", "Time zone", "Write an IANA name, for example Etc/GMT-3")
    ZoneInfo(name)


def create_survey(session: AnySession, values: Mapping[str, Any], lead_name: str) -> tuple[str, str]:
    """A new survey with its lead as the first crew member: (survey id, the lead's record). Inside `write()`."""
    check_time_zone(values.get("time_zone"))
    survey = open_survey(session)
    lead = say(session, survey, by=None, kind="crew", values={"name": lead_name, "lead": True})
    said = {**DEFAULTS, **{name: value for name, value in values.items() if value is not None}}
    say(session, survey, by=lead, kind="survey", values=said)
    return survey, lead


def change_survey(session: AnySession, survey: str, by: str, values: Mapping[str, Any]) -> None:
    """Change what is said of the survey. Inside `write()`."""
    if "time_zone" in values:
        check_time_zone(values["time_zone"])
    unknown = set(values.get("optional_fields") or []) - {field.name for field in optional_fields()}
    if unknown:
        raise Refusal(f"not an optional field: {', '.join(sorted(unknown))}", "Optional fields")
    say(session, survey, by=by, kind="survey", values=values, record=survey_row(session, survey)["record"])


def optional_fields() -> list[Any]:
    """The observation's fields that a survey switches on."""
    return [field for field in OBSERVATION.fields if field.optional and not field.retired]


def crew_of_lead(session: AnySession, survey: str, lead_name: str) -> str:
    """The crew record under which a lead speaks in this survey, made at their first word. Inside `write()`."""
    survey_row(session, survey)
    found = session.scalar(
        select(crew.c.record)
        .where(crew.c.survey == survey, crew.c.name == lead_name, crew.c.lead.is_(True))
        .order_by(crew.c.first_seq)
    )
    return found or say(session, survey, by=None, kind="crew", values={"name": lead_name, "lead": True})


def sites_of(session: AnySession, survey: str) -> list[Row]:
    """The survey's sites by name, the crossed-out ones last."""
    found = session.execute(
        select(sites).where(sites.c.survey == survey).order_by(sites.c.crossed_out.is_not(None), sites.c.name)
    )
    return [dict(row) for row in found.mappings()]


def site_row(session: AnySession, survey: str, record: str) -> Row:
    """One site."""
    found = session.execute(
        select(sites).where(sites.c.survey == survey, sites.c.record == record)
    ).mappings().first()
    if found is None:
        raise ForeignStoreError("there is no such site in this survey", mend="Begin at the survey's page")
    return dict(found)


def crew_names(session: AnySession, survey: str) -> dict[str, str]:
    """Record -> name of everybody in the survey."""
    return dict(
        session.execute(select(crew.c.record, crew.c.name).where(crew.c.survey == survey).order_by(crew.c.name)).all()
    )


def put_site(session: AnySession, survey: str, by: str, values: Mapping[str, Any], record: str | None = None) -> str:
    """Add a site, or change one. Inside `write()`."""
    if record is not None:
        site_row(session, survey, record)
    said = {name: value for name, value in values.items() if record is not None or value is not None}
    return say(session, survey, by=by, kind="site", values=said, record=record)
