"""Setting a survey up by real HTTP: every form, what is wrong with it, and what it leaves in the ledger."""

from __future__ import annotations

import json
import re
from typing import Any

import pytest
from flask import Flask
from flask.testing import FlaskClient
from sqlalchemy import func, select

from fieldlog.people.models import JoiningCode
from fieldlog.store.db import db
from fieldlog.store.tables import LedgerEntry, sites, surveys
from tests.http.conftest import Base, csrf

GOOD = {"name": "Ridge line", "time_zone": "Etc/GMT-4", "target_half_width_deg": "7,5", "fewest_dunes": "6", "reading_step_deg": "2"}


@pytest.fixture
def desk(base: Base) -> FlaskClient:
    return base.signed_in()


def post(desk: FlaskClient, page: str, address: str, form: dict[str, Any]) -> Any:
    """Send a form of a page with the page's token."""
    return desk.post(address, data={"csrf_token": csrf(desk.get(page).get_data(as_text=True)), **form})


def entries(app: Flask) -> list[dict[str, Any]]:
    with app.app_context():
        return [json.loads(text) for text in db.session.scalars(select(LedgerEntry.text).order_by(LedgerEntry.seq))]


def alert(answer: Any) -> str:
    """What the page's problem box says."""
    found = re.search(r'role="alert">(.*?)</p>', answer.get_data(as_text=True), re.DOTALL)
    assert found, answer.get_data(as_text=True)
    return re.sub(r"<[^>]+>|\s+", " ", found[1])


def test_a_survey_is_created_with_its_lead_as_two_entries(app: Flask, base: Base, desk: FlaskClient) -> None:
    before = len(entries(app))
    answer = post(desk, "/surveys/new", "/surveys/new", GOOD)
    assert answer.status_code == 302
    page = desk.get(answer.location).get_data(as_text=True)
    assert "Ridge line" in page
    made = entries(app)
    assert len(made) == before + 2
    with app.app_context():
        row = db.session.execute(select(surveys).where(surveys.c.name == "Ridge line")).mappings().one()
    assert (row["target_half_width_deg"], row["fewest_dunes"], row["reading_step_deg"], row["time_zone"]) == (7.5, 6, 2, "Etc/GMT-4")


@pytest.mark.parametrize(
    ("wrong", "said"),
    [
        ({"time_zone": "Mars/Olympus"}, "time zone"), ({"time_zone": ""}, "time zone"), ({"name": ""}, "name"),
        ({"target_half_width_deg": "-3"}, "half-width"), ({"target_half_width_deg": "wide"}, "not a number"),
        ({"fewest_dunes": "1e9"}, "not a number"), ({"reading_step_deg": "400"}, "step"), ({"name": "x" * 5000}, "name"),
    ],
)
def test_a_wrong_survey_is_said_and_what_was_typed_stays(
    app: Flask, base: Base, desk: FlaskClient, wrong: dict[str, str], said: str
) -> None:
    before = entries(app)
    answer = post(desk, "/surveys/new", "/surveys/new", {**GOOD, **wrong, "note": "kept as typed"})
    assert answer.status_code == 422
    assert said.lower() in alert(answer).lower()
    assert "kept as typed" in answer.get_data(as_text=True)
    assert entries(app) == before


def test_changing_the_survey_switches_optional_fields_on(app: Flask, base: Base, desk: FlaskClient) -> None:
    page = f"/surveys/{base.survey}"
    assert post(desk, page, page, {**GOOD, "optional_fields": ["height_m", "activity"]}).status_code == 302
    assert entries(app)[-1]["set"]["optional_fields"] == ["height_m", "activity"]
    wrong = post(desk, page, page, {**GOOD, "optional_fields": ["crest_deg"]})
    assert wrong.status_code == 422
    assert "not an optional field" in alert(wrong)
    phone = base.phone()
    pack = phone.client.get(f"/api/v1/surveys/{base.survey}/changes?after=0", headers=phone.headers).get_json()
    told = [json.loads(entry["text"]) for entry in pack["entries"]]
    assert [said["set"]["optional_fields"] for said in told if "optional_fields" in said["set"]] == [["height_m", "activity"]]


def test_a_wrong_change_keeps_what_was_typed_and_ticked(app: Flask, base: Base, desk: FlaskClient) -> None:
    page = f"/surveys/{base.survey}"
    assert post(desk, page, page, {**GOOD, "optional_fields": ["activity"]}).status_code == 302
    before = entries(app)
    wrong = post(desk, page, page, {**GOOD, "target_half_width_deg": "-3", "note": "kept as typed", "optional_fields": ["height_m"]})
    assert wrong.status_code == 422
    text = wrong.get_data(as_text=True)
    assert "kept as typed" in text
    assert re.findall(r'name="optional_fields" value="(\w+)" checked', text) == ["height_m"]
    assert entries(app) == before


def test_a_site_is_added_changed_crossed_out_and_taken_back(app: Flask, base: Base, desk: FlaskClient) -> None:
    form = f"/surveys/{base.survey}/site"
    given = {"name": "رمل <b>2</b>", "lat_deg": "-19,5", "lon_deg": "66.25", "radius_m": "300", "expected_facing_deg": "300"}
    assert post(desk, form, form, given).status_code == 302
    with app.app_context():
        row = db.session.execute(select(sites).where(sites.c.name == given["name"])).mappings().one()
    assert (row["lat_deg"], row["lon_deg"], row["expected_facing_deg"]) == (-19.5, 66.25, 300)
    shown = desk.get(f"/surveys/{base.survey}").get_data(as_text=True)
    assert "رمل &lt;b&gt;2&lt;/b&gt;" in shown
    assert "<b>2</b>" not in shown
    change = f"{form}/{row['record']}"
    assert post(desk, change, change, {**given, "radius_m": "500"}).status_code == 302
    assert post(desk, change, f"{change}/cross-out", {"reason": "flooded"}).status_code == 302
    assert post(desk, change, f"{change}/cross-out", {}).status_code == 302
    said = [entry["set"] for entry in entries(app) if entry.get("record") == row["record"]]
    assert said[0]["radius_m"] == 500
    assert [entry["crossed_out"] for entry in said if "crossed_out" in entry] == ["flooded", None]


@pytest.mark.parametrize(
    ("wrong", "said"),
    [
        ({"lat_deg": "91"}, "Latitude"), ({"lon_deg": "-181"}, "Longitude"), ({"lat_deg": "north"}, "not a number"),
        ({"lat_deg": ""}, "Latitude"), ({"name": " "}, "name"), ({"expected_facing_deg": "400"}, "400"),
    ],
)
def test_a_site_that_cannot_be_is_said(app: Flask, base: Base, desk: FlaskClient, wrong: dict[str, str], said: str) -> None:
    before = entries(app)
    form = f"/surveys/{base.survey}/site"
    answer = post(desk, form, form, {"name": "Two", "lat_deg": "20", "lon_deg": "10", "note": "kept as typed", **wrong})
    assert answer.status_code == 422
    assert said.lower() in alert(answer).lower()
    assert "kept as typed" in answer.get_data(as_text=True)
    assert entries(app) == before


def test_a_joining_code_is_shown_once_with_its_qr_and_closed(app: Flask, base: Base, desk: FlaskClient) -> None:
    page = f"/surveys/{base.survey}"
    shown = post(desk, page, f"{page}/joining-codes", {"hours": "2"}).get_data(as_text=True)
    code = re.search(r'id="code">([^<]+)<', shown)
    assert code
    assert "<svg" in shown
    assert code[1] not in desk.get(page).get_data(as_text=True)
    looked = app.test_client().post("/api/v1/joining/look", json={"code": code[1]})
    assert looked.status_code == 200
    assert post(desk, page, f"{page}/joining-codes/close", {}).status_code == 302
    assert app.test_client().post("/api/v1/joining/look", json={"code": code[1]}).status_code == 422


@pytest.mark.parametrize("hours", ["0", "-1", "1441", "10000", "soon", "", "1.5", "\u00b2", "9" * 5000])
def test_a_code_for_no_sensible_time_is_refused(app: Flask, base: Base, desk: FlaskClient, hours: str) -> None:
    page = f"/surveys/{base.survey}"
    answer = post(desk, page, f"{page}/joining-codes", {"hours": hours})
    assert answer.status_code == 422
    assert "hours" in answer.get_data(as_text=True)
    with app.app_context():
        assert db.session.scalars(select(JoiningCode)).all() == []


def test_a_revoked_phone_is_told_so(base: Base, desk: FlaskClient) -> None:
    phone = base.phone("Ysolde")
    page = f"/surveys/{base.survey}"
    assert "Ysolde" in desk.get(page).get_data(as_text=True)
    assert post(desk, page, f"{page}/phones/{phone.device}/revoke", {}).status_code == 302
    answer = phone.client.get(f"/api/v1/surveys/{base.survey}/changes", headers=phone.headers)
    assert answer.status_code == 403
    assert answer.get_json()["mend"]


def test_a_survey_that_is_not_there_is_a_page_with_a_way_on(base: Base, desk: FlaskClient) -> None:
    for path in ("/surveys/0000000000", "/surveys/0000000000/day", "/surveys/0000000000/export", f"/surveys/{base.survey}/sites/none"):
        answer = desk.get(path)
        assert answer.status_code == 404, path
        assert 'href="/' in answer.get_data(as_text=True)


def test_what_is_not_there_is_not_changed(app: Flask, base: Base, desk: FlaskClient) -> None:
    page, before = f"/surveys/{base.survey}", entries(app)
    for address, status in (
        ("/surveys/0000000000", 404), ("/surveys/0000000000/site", 404), (f"{page}/site/none", 404), (f"{page}/site/none/cross-out", 404),
        ("/surveys/0000000000/joining-codes", 404), ("/surveys/0000000000/joining-codes/close", 404), (f"{page}/phones/none/revoke", 404),
    ):
        answer = post(desk, page, address, {**GOOD, "lat_deg": "20", "lon_deg": "10", "reason": "x", "hours": "1"})
        assert answer.status_code == status, address
        assert 'href="/' in answer.get_data(as_text=True)
    assert entries(app) == before


def test_a_reason_as_long_as_a_book_is_refused(app: Flask, base: Base, desk: FlaskClient) -> None:
    before = entries(app)
    answer = post(desk, f"/surveys/{base.survey}", f"/surveys/{base.survey}/site/{base.site}/cross-out", {"reason": "x" * 5000})
    assert answer.status_code == 422
    assert "Crossed out because" in answer.get_data(as_text=True)
    assert entries(app) == before


def test_every_change_is_one_entry_by_the_lead_who_made_it(app: Flask, base: Base, desk: FlaskClient) -> None:
    page = f"/surveys/{base.survey}"
    place = {"name": "Comb 1", "lat_deg": "-19.95", "lon_deg": "66.03", "radius_m": "500"}
    before = len(entries(app))
    for address, form in (
        (page, {**GOOD, "note": "Mind the tide"}), (f"{page}/site", {"name": "Mine", "lat_deg": "20", "lon_deg": "10"}),
        (f"{page}/site/{base.site}", {**place, "radius_m": "400"}), (f"{page}/site/{base.site}/cross-out", {"reason": "flooded"}),
        (f"{page}/site/{base.site}/cross-out", {}),
    ):
        assert post(desk, page, address, form).status_code == 302
    made = entries(app)[before:]
    assert [(entry["kind"], entry["by"]) for entry in made] == [("survey", base.lead), *[("site", base.lead)] * 4]
    assert made[2]["set"] == {"radius_m": 400}
    assert post(desk, page, f"{page}/site/{base.site}", {**place, "radius_m": "400"}).status_code == 302
    assert len(entries(app)) == before + 5, "saving what stands already says nothing"
    with app.app_context():
        assert db.session.scalar(select(func.count()).select_from(sites)) == 2
