"""A plan first, then exactly that, as entries of the ledger."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
from flask import Flask
from sqlalchemy import func, select

from fieldlog.errors import Refusal
from fieldlog.imports import placing, service
from fieldlog.imports.found import ImportFileError
from fieldlog.ledger.names import new_device
from fieldlog.store.db import db
from fieldlog.store.photos import PhotoFolder
from fieldlog.store.rebuild import check
from fieldlog.store.tables import LedgerEntry, observations, sites, tracks
from fieldlog.store.transaction import write
from tests.factories import Survey, send
from tests.imports import files

GPX = files.HANDHELD.encode()
NO_PHOTOS = PhotoFolder(Path("no-photos"))


@pytest.fixture
def survey(app: Flask) -> Any:
    with app.app_context():
        made = Survey()
        device = new_device()
        assert set(send(made, device, made.batch(range(1, 4)))) == {"stored"}
        yield made


def run(survey: Survey, name: str, data: bytes, walker: str | None = None) -> service.Plan:
    with write() as session:
        return service.confirm(session, survey.id, survey.lead, name, data, walker, folder=NO_PHOTOS, who="Lead")


def entries() -> int:
    return db.session.scalar(select(func.count()).select_from(LedgerEntry)) or 0


def test_a_preview_writes_nothing(survey: Survey) -> None:
    before = entries()
    plan = service.preview(db.session, survey.id, "walk.gpx", GPX, folder=NO_PHOTOS)
    db.session.rollback()
    assert entries() == before
    assert plan.sentence == "3 sites, 2 tracks, 3 observations placed along a track."


def test_sites_tracks_and_places_are_written_and_the_tables_add_up(survey: Survey) -> None:
    run(survey, "walk.gpx", GPX)
    names = set(db.session.scalars(select(sites.c.name).where(sites.c.survey == survey.id)))
    assert {"Ridge foot", "علامة", "Waypoint 3"} <= names
    assert db.session.scalar(select(func.count()).select_from(tracks)) == 2
    rows = db.session.execute(select(observations)).mappings().all()
    # 05:06:07 is 7 s after the first point, of 60 s in which 0.001 deg of longitude went by: linear on
    # so short a way (the geodesic differs by less than a millimetre).
    for row in rows:
        assert row["lat_deg"] == pytest.approx(-20.0, abs=1e-6)
        assert row["lon_deg"] == pytest.approx(66.0 + 0.001 * 7 / 60, abs=1e-6)
        assert row["fix_method"] == "track"
        assert row["accuracy_m"] == placing.accuracy_m(60)
    assert not list(check(db.session))


def test_the_same_file_twice_adds_nothing(survey: Survey) -> None:
    run(survey, "walk.gpx", GPX)
    before = entries()
    again = run(survey, "walk.gpx", GPX)
    assert again.is_empty
    assert len(again.already) == 5
    assert entries() == before


def test_a_name_at_another_place_is_refused_and_the_rest_goes_in(survey: Survey) -> None:
    plan = run(survey, "sites.csv", b"name,lat,lon\nOne,44,10\nTwo,20.1,10\nTwo,20.2,10\n")
    assert [site["name"] for site in plan.sites] == ["Two"]
    assert len(plan.refused) == 2
    assert "another place" in plan.refused[0].why


def test_only_the_walkers_observations_are_placed(survey: Survey, app: Flask) -> None:
    with write() as session:
        other = service.say(session, survey.id, by=survey.lead, kind="crew", values={"name": "Somebody else"})
    assert not service.preview(db.session, survey.id, "walk.gpx", GPX, other, folder=NO_PHOTOS).placements
    assert len(service.preview(db.session, survey.id, "walk.gpx", GPX, survey.lead, folder=NO_PHOTOS).placements) == 3
    with pytest.raises(Refusal, match="nobody"):
        service.preview(db.session, survey.id, "walk.gpx", GPX, "no such record", folder=NO_PHOTOS)


def test_a_long_gap_places_nothing_and_says_so(survey: Survey) -> None:
    long = files.HANDHELD.replace("05:07:00Z", "07:07:00Z").replace("09:37:00+04:30", "07:08:00Z")
    plan = service.preview(db.session, survey.id, "walk.gpx", long.encode(), folder=NO_PHOTOS)
    assert not plan.placements
    assert all("gap" in row.why for row in plan.refused)


def test_a_long_track_is_said_in_parts(survey: Survey) -> None:
    points = "".join(f'<trkpt lat="{i / 10000}" lon="5"/>' for i in range(2500))
    run(survey, "long.gpx", f'<gpx version="1.1" creator="x"><trk><trkseg>{points}</trkseg></trk></gpx>'.encode())
    parts = db.session.execute(select(tracks.c.part, tracks.c.points).order_by(tracks.c.part)).all()
    assert [(part, len(held)) for part, held in parts] == [(1, 1000), (2, 1000), (3, 500)]


def test_a_file_of_another_kind_is_refused(survey: Survey) -> None:
    with pytest.raises(ImportFileError, match="not imported"):
        service.preview(db.session, survey.id, "walk.fit", b"", folder=NO_PHOTOS)
