"""Ways in: one-time links, passwords, joining codes. Each refusal is a clear message."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta
from typing import Any

import pytest
from flask import Flask
from flask.testing import FlaskClient
from sqlalchemy import select, update

from fieldlog.ledger.names import new_device
from fieldlog.people.models import JoiningCode, Lead, OneTimeLink, Phone
from fieldlog.people.service import close_joining_codes, first_lead_link, plain_code
from fieldlog.store.db import db
from fieldlog.store.tables import crew
from fieldlog.store.transaction import write
from tests.http.conftest import PASSWORD, Base, csrf


@pytest.fixture
def token(app: Flask) -> str:
    with app.app_context(), write() as session:
        return str(first_lead_link(session))


def spend(client: FlaskClient, token: str, **form: str) -> Any:
    page = client.get(f"/way-in/{token}").get_data(as_text=True)
    return client.post(f"/way-in/{token}", data={"csrf_token": csrf(page), **form})


def test_the_first_lead_link_is_looked_at_without_being_spent_and_spent_once(app: Flask, token: str) -> None:
    client = app.test_client()
    for _ in range(3):
        assert "Become the first lead" in client.get(f"/way-in/{token}").get_data(as_text=True)
    assert spend(client, token, name="Maren", password=PASSWORD).status_code == 302
    assert client.get("/surveys").status_code == 200
    again = app.test_client().get(f"/way-in/{token}")
    assert again.status_code == 410
    assert "has been used already" in again.get_data(as_text=True)
    with app.app_context():
        assert first_lead_link(db.session) is None
        kept = db.session.scalars(select(Lead)).one()
        assert kept.password_hash.startswith("scrypt:")
        assert token not in str(db.session.scalars(select(OneTimeLink.token_hash)).all())


def test_a_second_first_lead_link_opens_nothing_once_there_is_a_lead(app: Flask, token: str) -> None:
    with app.app_context(), write() as session:
        other = str(first_lead_link(session))
    spend(app.test_client(), token, name="Maren", password=PASSWORD)
    answer = app.test_client().get(f"/way-in/{other}")
    assert answer.status_code == 410
    assert "there is a first lead already" in answer.get_data(as_text=True)


def test_a_short_password_is_refused_and_the_link_stays_good(app: Flask, token: str) -> None:
    client = app.test_client()
    answer = spend(client, token, name="Maren", password="short")
    assert answer.status_code == 422
    assert "at least 10 characters" in answer.get_data(as_text=True)
    assert spend(client, token, name="Maren", password=PASSWORD).status_code == 302


def test_an_old_link_says_so(app: Flask, token: str) -> None:
    with app.app_context(), write() as session:
        session.execute(update(OneTimeLink).values(expires_at=datetime.now(UTC) - timedelta(minutes=1)))
    assert "too old" in app.test_client().get(f"/way-in/{token}").get_data(as_text=True)


def test_a_wrong_password_and_a_wrong_name_are_told_alike(base: Base) -> None:
    told = []
    for name, password in (("Lead", "wrong words here"), ("Nobody", PASSWORD)):
        client = base.app.test_client()
        page = client.get("/sign-in").get_data(as_text=True)
        answer = client.post("/sign-in", data={"name": name, "password": password, "csrf_token": csrf(page)})
        assert answer.status_code == 401
        told.append("name and password do not go together" in answer.get_data(as_text=True))
    assert told == [True, True]


def test_a_form_without_its_token_changes_nothing(base: Base) -> None:
    client = base.signed_in()
    answer = client.post(f"/surveys/{base.survey}/joining-codes", data={"hours": "1"})
    assert answer.status_code == 400
    with base.app.app_context():
        assert db.session.scalars(select(JoiningCode)).all() == []


def test_signing_in_leads_to_our_own_pages_only(base: Base) -> None:
    for target in ("https://elsewhere.example/", "//elsewhere.example", "/\\elsewhere.example"):
        client = base.app.test_client()
        page = client.get("/sign-in").get_data(as_text=True)
        data = {"name": "Lead", "password": PASSWORD, "csrf_token": csrf(page), "next": target}
        assert client.post("/sign-in", data=data).location == "/"


def join(base: Base, **asked: Any) -> Any:
    body = {"device": new_device(), "app": "0.1.0", **asked}
    return base.app.test_client().post("/api/v1/joining", json=body)


def test_one_code_lets_several_phones_join_as_old_and_new_members(base: Base) -> None:
    code = base.code()
    first = join(base, code=code.lower().replace("-", " "), name="Ysolde")
    assert first.status_code == 201
    look = base.app.test_client().post("/api/v1/joining/look", json={"code": code}).get_json()
    assert look["survey"]["name"] == "Test sands"
    assert {member["name"] for member in look["crew"]} == {"Lead", "Ysolde"}
    record = next(member["record"] for member in look["crew"] if member["name"] == "Ysolde")
    assert join(base, code=code, crew=record).get_json()["crew"] == record
    with base.app.app_context():
        assert db.session.execute(select(crew.c.name).where(crew.c.name == "Ysolde")).all() == [("Ysolde",)]
        tokens = db.session.scalars(select(Phone.token_hash)).all()
    assert first.get_json()["token"] not in str(tokens)


@pytest.mark.parametrize("typed", ["", "AAAA-AAAA", "nonsense", "🐪" * 8])
def test_an_unknown_code_says_so(base: Base, typed: str) -> None:
    answer = join(base, code=typed, name="X")
    assert answer.status_code == 422
    assert answer.content_type == "application/problem+json"
    assert answer.get_json()["title"] == "this joining code is not known here"
    assert "lead's screen" in answer.get_json()["mend"]


def test_an_expired_and_a_closed_code_say_so(base: Base) -> None:
    expired, closed = base.code(), None
    with base.app.app_context(), write() as session:
        session.execute(update(JoiningCode).values(expires_at=datetime.now(UTC) - timedelta(seconds=1)))
    assert join(base, code=expired, name="X").get_json()["title"] == "this joining code has expired"
    closed = base.code()
    with base.app.app_context(), write() as session:
        close_joining_codes(session, base.survey, "Lead")
    assert join(base, code=closed, name="X").get_json()["title"] == "this joining code has been closed"
    with base.app.app_context():
        assert db.session.scalars(select(Phone)).all() == []


@pytest.mark.parametrize("asked", [{"name": ""}, {"crew": "0" * 15 + "-9"}, {"name": "X", "device": "iiiiiiiiiiiiiii"}])
def test_nothing_is_half_written_when_joining_fails(base: Base, asked: dict[str, str]) -> None:
    assert join(base, code=base.code(), **asked).status_code == 422
    with base.app.app_context():
        assert db.session.scalars(select(Phone)).all() == []
        assert db.session.execute(select(crew.c.name)).all() == [("Lead",)]


def test_codes_read_aloud_are_understood() -> None:
    assert plain_code(" o1lI-abCD ") == "0111abcd"
