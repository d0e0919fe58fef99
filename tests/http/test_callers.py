"""Every route against every caller. A route without a row here fails.

The callers: nobody; a phone of this survey; a phone of another; a revoked phone; a lead.
"""

from __future__ import annotations

from typing import Any

import pytest
from flask import Flask
from flask.testing import FlaskClient

from fieldlog.people.service import revoke_phone
from fieldlog.store.transaction import write
from tests.http.conftest import Base, new_survey

# What a caller meets: "in" (the view answers, whatever it says), "sign in" (sent to the sign-in page),
# or the status of the refusal.
ANYONE = ("in", "in", "in", "in", "in")
LEAD = ("sign in", 403, 403, 403, "in")
PHONE_API = (401, "in", 403, 403, 401)
BOTH_API = (401, "in", 403, 403, "in")

TABLE: dict[str, tuple[Any, ...]] = {
    "static": ANYONE,
    "shell.phone": ANYONE,
    "shell.phone_without_slash": ANYONE,
    "shell.shell_file": ANYONE,
    "shell.service_worker": ANYONE,
    "people.sign_in_page": ANYONE,
    "people.sign_in": (401, 401, 401, 401, 401),  # let in, and told that name and password are wrong
    "people.sign_out": ("sign in", 403, 403, 403, "sign in"),  # a lead is let in, and led to the sign-in page
    "people.way_in_page": ANYONE,
    "people.way_in": ANYONE,
    "joining.look": ANYONE,
    "joining.join": ANYONE,
    "handover.push": PHONE_API,
    "handover.pull": PHONE_API,
    "handover.photo": BOTH_API,
    "handover.small_photo": BOTH_API,
    "handover.add_to_photo": PHONE_API,
    "surveys.index": LEAD,
    "surveys.new": LEAD,
    "surveys.create": LEAD,
    "surveys.page": LEAD,
    "surveys.change": LEAD,
    "surveys.site_form": LEAD,
    "surveys.put_site": LEAD,
    "surveys.cross_out_site": LEAD,
    "surveys.make_code": LEAD,
    "surveys.close_codes": LEAD,
    "surveys.revoke": LEAD,
    "review.day": LEAD,
    "review.site": LEAD,
    "review.observation": LEAD,
    "review.choose": LEAD,
    "review.one_dune": LEAD,
    "exports.page": LEAD,
    "exports.file": LEAD,
    "imports.page": LEAD,
    "imports.take": LEAD,
    "imports.preview": LEAD,
    "imports.confirm": LEAD,
    "pages.start": LEAD,
    "pages.dictionary": LEAD,
    "pages.cautions": ANYONE,
    "pages.health": ANYONE,
    "pages.openapi": ANYONE,
}


def routes(app: Flask) -> list[tuple[str, str, str]]:
    """(endpoint, method, rule) of every route, OPTIONS left out."""
    return sorted(
        (rule.endpoint, method, rule.rule)
        for rule in app.url_map.iter_rules()
        for method in (rule.methods or set()) - {"OPTIONS"}
    )


def test_every_route_stands_in_the_table(app: Flask) -> None:
    assert {endpoint for endpoint, *_ in routes(app)} == set(TABLE)


def address(rule: str, base: Base) -> str:
    given = {"survey": base.survey, "record": base.site, "device": "0" * 15, "sha256": "0" * 64, "token": "x" * 32,
             "name": "survey.csv", "path:filename": "css/tokens.css", "path:path": "none", "upload": "0" * 32}
    for name, value in given.items():
        rule = rule.replace(f"<{name}>", value)
    assert "<" not in rule, rule
    return rule


def met(client: FlaskClient, method: str, path: str, headers: dict[str, str]) -> Any:
    answer = client.open(path, method=method, headers=headers, buffered=True)
    if answer.status_code == 302 and answer.location.startswith("/sign-in"):
        return "sign in"
    told = answer.get_json(silent=True) or {}
    refused = str(told.get("type", "")).rpartition(":")[2]
    if answer.status_code in (401, 403) and (method == "HEAD" or refused in GATE or not path.startswith("/api/")):
        return answer.status_code
    assert answer.status_code != 500, answer.get_data(as_text=True)
    return "in"


GATE = {"not-signed-in", "unknown-phone", "phone-revoked", "other-survey", "not-for-phones"}


@pytest.mark.parametrize("database_url", ["sqlite"], indirect=True)
def test_a_route_lets_in_whom_it_names_and_nobody_else(app: Flask, base: Base) -> None:
    app.config["WTF_CSRF_ENABLED"] = False
    here, revoked = base.phone("Here"), base.phone("Revoked")
    with app.app_context():
        other_survey = new_survey("Elsewhere")[0]
        with write() as session:
            revoke_phone(session, base.survey, revoked.device, "Lead")
    there = Base(app, other_survey, "", "").phone("There")
    cookie = base.signed_in().get_cookie("session")
    wrong = {}
    for endpoint, method, rule in routes(app):
        path = address(rule, base)
        seen = (
            met(app.test_client(), method, path, {}),
            met(app.test_client(), method, path, here.headers),
            met(app.test_client(), method, path, there.headers),
            met(app.test_client(), method, path, revoked.headers),
            met(_lead(app, cookie), method, path, {}),
        )
        if seen != TABLE[endpoint]:
            wrong[f"{method} {path} ({endpoint})"] = seen
    assert wrong == {}


def _lead(app: Flask, cookie: Any) -> FlaskClient:
    client = app.test_client()
    client.set_cookie("session", cookie.value)
    return client
