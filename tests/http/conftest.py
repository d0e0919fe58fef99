"""A survey with a lead who can sign in, and phones with their tokens."""

from __future__ import annotations

import gzip
import json
import re
from dataclasses import dataclass
from typing import Any

import pytest
from flask import Flask
from flask.testing import FlaskClient

from fieldlog.handover.service import head
from fieldlog.ledger.names import new_device
from fieldlog.people.service import add_lead, join, make_joining_code
from fieldlog.store.transaction import write
from fieldlog.surveys.service import create_survey, put_site

PASSWORD = "four words and a comma,"
VALUES = {"name": "Test sands", "time_zone": "Etc/GMT-4", "target_half_width_deg": 10}


@dataclass
class PhoneClient:
    """A phone's requests."""

    client: FlaskClient
    survey: str
    device: str
    crew: str
    token: str
    head: dict[str, str]

    @property
    def headers(self) -> dict[str, str]:
        return {"Authorization": f"Bearer {self.token}"}

    def push(self, first: int, texts: list[str], *, packed: bool = False, **more: Any) -> Any:
        body = {"v": 0, "device": self.device, "store": self.head["store"], "epoch": self.head["epoch"],
                "first": first, "app": "0.1.0", "entries": texts, **more}
        data = json.dumps(body).encode()
        headers = {**self.headers, "Content-Type": "application/json"}
        if packed:
            data, headers["Content-Encoding"] = gzip.compress(data), "gzip"
        return self.client.post(f"/api/v1/surveys/{self.survey}/entries", data=data, headers=headers)


@dataclass
class Base:
    """A store with one survey, its lead and one site."""

    app: Flask
    survey: str
    lead: str
    site: str

    def code(self, hours: int = 1) -> str:
        with self.app.app_context(), write() as session:
            return make_joining_code(session, self.survey, secret=str(self.app.secret_key), who="Lead", hours=hours)

    def phone(self, name: str = "Ysolde") -> PhoneClient:
        device = new_device()
        code = self.code()
        with self.app.app_context(), write() as session:
            made = join(session, code, secret=str(self.app.secret_key), device=device, app="0.1.0", name=name)
            told = head(session)
        return PhoneClient(self.app.test_client(), self.survey, device, made.crew, made.token, told)

    def signed_in(self) -> FlaskClient:
        client = self.app.test_client()
        page = client.get("/sign-in").get_data(as_text=True)
        data = {"name": "Lead", "password": PASSWORD, "csrf_token": csrf(page)}
        answer = client.post("/sign-in", data=data)
        assert answer.status_code == 302, answer.get_data(as_text=True)
        return client


def csrf(page: str) -> str:
    """The hidden token of a page's form."""
    found = re.search(r'name="csrf_token" value="([^"]+)"', page)
    assert found, page
    return found[1]


def new_survey(name: str) -> tuple[str, str, str]:
    """A survey, its lead's crew record, and a site."""
    with write() as session:
        survey, lead = create_survey(session, {**VALUES, "name": name}, "Lead")
        site = put_site(session, survey, lead, {"name": "Comb 1", "lat_deg": -19.95, "lon_deg": 66.03, "radius_m": 500})
    return survey, lead, site


@pytest.fixture
def base(app: Flask) -> Base:
    # No context stays open: what one request keeps in `g` must not reach the next.
    with app.app_context():
        with write() as session:
            add_lead(session, "Lead", PASSWORD)
        made = new_survey("Test sands")
    return Base(app, *made)
