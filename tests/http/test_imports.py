"""The lead's import, by real HTTP: choose, look, confirm or let go."""

from __future__ import annotations

import io
import re
from pathlib import Path
from typing import Any

import pytest
from flask import Flask
from flask.testing import FlaskClient
from sqlalchemy import func, select

from fieldlog.store.db import db
from fieldlog.store.tables import LedgerEntry, sites
from tests.http.conftest import Base, csrf
from tests.imports import files


@pytest.fixture
def desk(base: Base) -> FlaskClient:
    return base.signed_in()


def choose(desk: FlaskClient, base: Base, name: str, data: bytes) -> Any:
    address = f"/surveys/{base.survey}/import"
    token = csrf(desk.get(address).get_data(as_text=True))
    return desk.post(address, data={"csrf_token": token, "walker": "", "file": (io.BytesIO(data), name)})


def counted(app: Flask) -> tuple[int, int]:
    """(entries, sites)"""
    with app.app_context():
        entries = db.session.scalar(select(func.count()).select_from(LedgerEntry))
        return entries or 0, db.session.scalar(select(func.count()).select_from(sites)) or 0


def test_a_file_is_shown_and_then_written(app: Flask, base: Base, desk: FlaskClient) -> None:
    before = counted(app)
    taken = choose(desk, base, "handheld.gpx", files.HANDHELD.encode())
    assert taken.status_code == 302
    shown = desk.get(taken.location).get_data(as_text=True)
    assert "3 sites, 2 tracks." in shown
    assert "علامة" in shown
    assert counted(app) == before
    done = desk.post(taken.location, data={"csrf_token": csrf(shown)})
    assert done.status_code == 200
    assert counted(app)[1] == before[1] + 3
    again = desk.post(taken.location, data={"csrf_token": csrf(shown)})
    assert again.status_code == 422
    assert "no longer waiting" in again.get_data(as_text=True)


def test_a_file_let_go_writes_nothing(app: Flask, base: Base, desk: FlaskClient) -> None:
    before = counted(app)
    taken = choose(desk, base, "sites.csv", b"name,lat,lon\nNew,1,2\n")
    shown = desk.get(taken.location).get_data(as_text=True)
    assert desk.post(taken.location, data={"csrf_token": csrf(shown), "let_go": "1"}).status_code == 302
    assert counted(app) == before
    assert not list(Path(app.config["ERGBOOK"].data_dir).glob("imports/*"))


@pytest.mark.parametrize(
    ("name", "data", "said"),
    [
        ("walk.gpx", b"not xml at all", "not XML"),
        ("walk.gpx", files.BOMB.encode(), "document type"),
        ("walk.fit", b"\x0e\x10", "not imported"),
        ("sites.csv", b"name,lat\nA,1\n", "no column"),
        ("", b"", "no file was chosen"),
    ],
)
def test_a_file_that_cannot_be_read_is_said_on_the_page(
    app: Flask, base: Base, desk: FlaskClient, name: str, data: bytes, said: str
) -> None:
    before = counted(app)
    answer = choose(desk, base, name, data)
    page = answer.get_data(as_text=True)
    assert answer.status_code == 422
    assert said in re.sub(r"\s+", " ", page)
    assert 'role="alert"' in page
    assert counted(app) == before


def test_impossible_coordinates_are_named_and_the_rest_goes_in(app: Flask, base: Base, desk: FlaskClient) -> None:
    taken = choose(desk, base, "awkward.gpx", files.IMPOSSIBLE.encode())
    shown = desk.get(taken.location).get_data(as_text=True)
    assert "latitude 91, longitude 10 is no place on Earth" in shown
    desk.post(taken.location, data={"csrf_token": csrf(shown)})
    with app.app_context():
        assert "Somewhere" in set(db.session.scalars(select(sites.c.name)))


def test_a_held_file_is_its_surveys_only(base: Base, desk: FlaskClient) -> None:
    taken = choose(desk, base, "sites.csv", b"name,lat,lon\nNew,1,2\n")
    upload = taken.location.rpartition("/")[2]
    assert desk.get(f"/surveys/{base.survey}/import/..%2F{upload}").status_code == 404
    assert desk.get(f"/surveys/0000000000/import/{upload}").status_code == 404
    assert desk.get(f"/surveys/{base.survey}/import/{'z' * 32}").status_code == 422
