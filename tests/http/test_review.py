"""Day sheet, site sheet and history by real HTTP: the numbers on them, their filters, and who may write what into them."""

from __future__ import annotations

import re
from collections.abc import Iterator
from contextlib import contextmanager
from datetime import UTC, datetime
from typing import Any

import pytest
from flask import Flask
from flask.testing import FlaskClient
from sqlalchemy import event, select

from fieldlog.ledger.entry import write_text
from fieldlog.science.summary import summarise
from fieldlog.store.db import db
from fieldlog.store.rebuild import check
from fieldlog.store.tables import observations
from fieldlog.store.transaction import write
from fieldlog.surveys.service import change_survey, put_site
from tests.http.conftest import Base, csrf
from tests.http.text import apart, plain

FACES = [214, 220, 209, 231, 198, 205, 217, 222, 240, 210]


@pytest.fixture
def desk(base: Base) -> FlaskClient:
    return base.signed_in()


class Notebook:
    """A phone that says things one after another."""

    def __init__(self, base: Base, name: str) -> None:
        self.base, self.phone, self.n = base, base.phone(name), 0

    def say(self, values: dict[str, Any], **more: Any) -> str:
        """One entry; its name."""
        self.n += 1
        text = write_text(
            app="0.1.0", by=self.phone.crew, survey=self.base.survey, kind="observation", values=values,
            hlc=f"{self.n:012x}.0000", made_at=datetime(2026, 7, 8, 5, 6, 7, tzinfo=UTC), **more,
        )
        told = self.phone.push(self.n, [text]).get_json()
        assert told["results"][0]["status"] == "stored", told
        return f"{self.phone.device}-{self.n}"

    def read(self, face: int, *, dune: int = 1, at: str = "2026-07-08T05:06:07Z", **more: Any) -> str:
        return self.say({
            "site": self.base.site, "observed_at": at, "north": "true", "bedform": dune, "bedform_order": "dune", "face": "main",
            "slip_face_read_deg": face, "slip_face_looking": "down", "reading_step_deg": 1, **more,
        })


def sheet(desk: FlaskClient, base: Base, **wanted: str) -> str:
    answer = desk.get(f"/surveys/{base.survey}/day", query_string=wanted)
    assert answer.status_code == 200
    return plain(answer.get_data(as_text=True))


def test_a_day_sheet_without_data_says_what_is_missing(base: Base, desk: FlaskClient) -> None:
    text = sheet(desk, base)
    assert "Nothing has been handed over yet" in text
    assert "not read yet" in text


def test_one_reading_is_too_few_to_say(base: Base, desk: FlaskClient) -> None:
    Notebook(base, "Ysolde").read(214)
    text = sheet(desk, base)
    assert "1 reading on 1 dune is too few to say" in text
    assert "revisit?" in text


def test_the_numbers_are_the_summarys(base: Base, desk: FlaskClient) -> None:
    notebook = Notebook(base, "Ysolde")
    for i, face in enumerate(FACES):
        notebook.read(face, dune=i // 2 + 1)
    told = summarise(
        FACES, bedforms=[i // 2 for i in range(10)], step_deg=1, target_deg=10, fewest_bedforms=5, subject="Slip faces", spacing=False
    )
    text = sheet(desk, base)
    assert told.finding in text
    assert f"R {told.resultant_length:.2f}" in text
    assert f"95 % {told.ci95_low_deg:03.0f}° to {told.ci95_high_deg:03.0f}°" in text
    site = plain(desk.get(f"/surveys/{base.survey}/sites/{base.site}").get_data(as_text=True))
    assert f"Mean direction, towards {told.mean_direction_deg:05.1f}°" in site
    assert f"Circular standard deviation {told.circular_sd_deg:.1f}°" in site


def test_crossed_out_readings_do_not_count(base: Base, desk: FlaskClient) -> None:
    notebook = Notebook(base, "Ysolde")
    for i, face in enumerate(FACES):
        record = notebook.read(face, dune=i // 2 + 1)
    notebook.say({"crossed_out": "wrong dune"}, record=record)
    assert "9 of 9 readings" in sheet(desk, base)
    page = desk.get(f"/surveys/{base.survey}/sites/{base.site}").get_data(as_text=True)
    assert page.count('<tr class="crossed"') == 1


def test_day_and_crew_are_chosen(base: Base, desk: FlaskClient) -> None:
    one, other = Notebook(base, "Ysolde"), Notebook(base, "Samir")
    one.read(214, at="2026-07-08T05:00:00Z")
    one.read(215, at="2026-07-09T05:00:00Z")
    other.read(216, at="2026-07-09T06:00:00Z")
    assert "2 of 3 readings" in sheet(desk, base)  # the newest day
    assert "3 of 3 readings" in sheet(desk, base, day="all")
    assert "1 of 3 readings" in sheet(desk, base, day="2026-07-08")
    assert "1 of 3 readings" in sheet(desk, base, day="2026-07-09", crew=other.phone.crew)
    wrong = desk.get(f"/surveys/{base.survey}/day?day=yesterday")
    assert wrong.status_code == 422
    assert "not a day" in wrong.get_data(as_text=True)


def test_a_day_begins_at_the_surveys_midnight(base: Base, desk: FlaskClient) -> None:
    """Etc/GMT-4 is four hours ahead of UTC (IANA time zone database: its signs are turned round)."""
    notebook = Notebook(base, "Ysolde")
    notebook.read(214, at="2026-07-08T19:59:59Z")
    notebook.read(215, at="2026-07-08T20:00:01Z")
    assert "1 of 2 readings" in sheet(desk, base, day="2026-07-08")
    assert "1 of 2 readings" in sheet(desk, base, day="2026-07-09")


def test_history_shows_every_entry_and_what_it_replaced(base: Base, desk: FlaskClient) -> None:
    notebook = Notebook(base, "Ysolde")
    record = notebook.read(214)
    notebook.say({"slip_face_read_deg": 241}, record=record, over={"slip_face_read_deg": [record]}, saw=[record])
    page = plain(desk.get(f"/surveys/{base.survey}/observations/{record}").get_data(as_text=True))
    assert "214° → 241°" in page
    assert page.count(f"phone {notebook.phone.device}") == 2
    assert page.count("Ysolde , 2026-07-08 09:06:07") == 2, "who and when, in the survey's zone"
    with base.app.app_context():
        assert db.session.scalar(select(observations.c.slip_face_deg)) == 241


def test_two_versions_are_both_shown_and_named_on_the_day_sheet(base: Base, desk: FlaskClient) -> None:
    one, other = Notebook(base, "Ysolde"), Notebook(base, "Samir")
    record = one.read(214)
    one.say({"slip_face_read_deg": 200}, record=record, over={"slip_face_read_deg": [record]}, saw=[record])
    other.say({"slip_face_read_deg": 300}, record=record, over={"slip_face_read_deg": [record]}, saw=[record])
    assert "two versions" in sheet(desk, base)
    page = plain(desk.get(f"/surveys/{base.survey}/observations/{record}").get_data(as_text=True))
    assert "Two versions of Slip face bearing" in page
    assert "200" in page
    assert "300" in page


def two_versions(base: Base) -> str:
    """A record whose slip face two people changed without seeing each other, to 200 and to 300."""
    one, other = Notebook(base, "Ysolde"), Notebook(base, "Samir")
    record = one.read(214)
    for notebook, face in ((one, 200), (other, 300)):
        notebook.say({"slip_face_read_deg": face}, record=record, over={"slip_face_read_deg": [record]}, saw=[record])
    return record


def test_the_leads_choice_is_an_entry_over_both(base: Base, desk: FlaskClient) -> None:
    record = two_versions(base)
    address = f"/surveys/{base.survey}/observations/{record}"
    page = desk.get(address).get_data(as_text=True)
    offered = re.findall(r'name="version" value="(slip_face_read_deg [^"]+)">Keep <bdi>(\d+)°', page)
    assert {face for _, face in offered} == {"200", "300"}
    chosen = next(value for value, face in offered if face == "300")
    choose = f"/surveys/{base.survey}/records/{record}/choose"
    answer = desk.post(choose, data={"csrf_token": csrf(page), "version": chosen})
    assert answer.location == address
    after = desk.get(address).get_data(as_text=True)
    assert "Two versions" not in after
    with base.app.app_context():
        assert db.session.scalar(select(observations.c.slip_face_deg)) == 300
        assert list(check(db.session)) == []
    again = desk.post(choose, data={"csrf_token": csrf(page), "version": chosen})
    assert again.status_code == 422
    assert "no longer the versions" in again.get_data(as_text=True)


def test_an_edit_made_meanwhile_is_two_versions_again(base: Base, desk: FlaskClient) -> None:
    record = two_versions(base)
    page = desk.get(f"/surveys/{base.survey}/observations/{record}").get_data(as_text=True)
    value = re.search(r'name="version" value="([^"]+)"', page)
    assert value
    desk.post(f"/surveys/{base.survey}/records/{record}/choose", data={"csrf_token": csrf(page), "version": value[1]})
    late = Notebook(base, "Tome")
    late.say({"slip_face_read_deg": 90}, record=record, over={"slip_face_read_deg": [record]}, saw=[record])
    assert "two versions" in sheet(desk, base)


def test_cross_out_against_edit_is_chosen_too(base: Base, desk: FlaskClient) -> None:
    one, other = Notebook(base, "Ysolde"), Notebook(base, "Samir")
    record = one.read(214)
    one.say({"crossed_out": "wrong dune"}, record=record, saw=[record])
    other.say({"slip_face_read_deg": 300}, record=record, over={"slip_face_read_deg": [record]}, saw=[record])
    address = f"/surveys/{base.survey}/observations/{record}"
    page = desk.get(address).get_data(as_text=True)
    assert "Keep <bdi>it standing</bdi>" in page
    value = re.search(r'name="version" value="([^"]+)">Keep <bdi>it standing', page)
    assert value
    desk.post(f"/surveys/{base.survey}/records/{record}/choose", data={"csrf_token": csrf(page), "version": value[1]})
    assert "Two versions" not in desk.get(address).get_data(as_text=True)
    with base.app.app_context():
        assert db.session.execute(select(observations.c.crossed_out, observations.c.slip_face_deg)).one() == (None, 300)


def test_dunes_of_two_phones_are_two_until_the_lead_says_they_are_one(base: Base, desk: FlaskClient) -> None:
    one, other = Notebook(base, "Ysolde"), Notebook(base, "Samir")
    for i, face in enumerate(FACES):
        (one if i % 2 else other).read(face, dune=i // 2 + 1)
    address = f"/surveys/{base.survey}/sites/{base.site}"
    page = desk.get(address).get_data(as_text=True)
    assert "10 readings on 10 dunes" in page
    said = {"csrf_token": csrf(page), "dune": f"{one.phone.device}/1", "other": f"{other.phone.device}/1"}
    assert desk.post(f"{address}/dunes", data=said).status_code == 302
    merged = desk.get(address).get_data(as_text=True)
    assert "10 readings on 9 dunes" in merged
    assert "are one dune" in plain(merged)
    export = desk.get(f"/surveys/{base.survey}/day").get_data(as_text=True)
    assert "10 readings on 9 dunes" in export
    same = re.search(r'name="same" value="([^"]+)"', merged)
    assert same
    desk.post(f"{address}/dunes", data={"csrf_token": csrf(page), "same": same[1], "reason": "200 m apart"})
    assert "10 readings on 10 dunes" in desk.get(address).get_data(as_text=True)
    wrong = desk.post(f"{address}/dunes", data={**said, "other": said["dune"]})
    assert wrong.status_code == 422
    with base.app.app_context():
        assert list(check(db.session)) == []


def test_what_people_write_stays_text_with_a_direction_of_its_own(base: Base, desk: FlaskClient) -> None:
    """Each lies in an element of its own whose direction is its own, so that it turns nothing around it."""
    nasty = "<script>alert(1)</script> \u0631\u0645\u0644"
    names = {what: f"{what} {nasty}" for what in ("survey", "site", "crew", "note", "instrument", "reason")}
    with base.app.app_context(), write() as session:
        change_survey(session, base.survey, base.lead, {"name": names["survey"]})
        put_site(session, base.survey, base.lead, {"name": names["site"], "dune_pattern": names["note"]}, base.site)
    notebook, other = Notebook(base, names["crew"]), Notebook(base, f"other {names['crew']}")
    other.read(214)
    record = notebook.read(214, note=names["note"], instrument=names["instrument"])
    other.say({"note": f"other {names['note']}"}, record=record)
    notebook.say({"crossed_out": names["reason"]}, record=notebook.read(30))
    for path in ("", "/day", f"/sites/{base.site}", f"/observations/{record}", "/export", "/import", f"/site/{base.site}"):
        page = desk.get(f"/surveys/{base.survey}{path}").get_data(as_text=True)
        assert "<script>alert" not in page, path
        assert "&lt;script&gt;" in page, path
        assert [text for text, is_apart in apart(page) if nasty in text and not is_apart] == [], path
    assert [text for text, is_apart in apart(desk.get("/surveys").get_data(as_text=True)) if nasty in text and not is_apart] == []


def test_a_question_that_spans_sites_is_on_the_sheet_of_its_site(base: Base, desk: FlaskClient) -> None:
    """Saved after a reading of another site, said to be observed before it."""
    with base.app.app_context(), write() as session:
        second = put_site(session, base.survey, base.lead, {"name": "Comb 2", "lat_deg": -19.9, "lon_deg": 66.03})
    notebook = Notebook(base, "Ysolde")
    notebook.read(214, at="2026-07-08T05:30:00Z")
    notebook.read(210, at="2026-07-08T05:00:00Z", site=second)
    assert "1 question" in sheet(desk, base)
    assert "Is the time right?" in plain(desk.get(f"/surveys/{base.survey}/sites/{second}").get_data(as_text=True))
    assert "Is the time right?" not in plain(desk.get(f"/surveys/{base.survey}/sites/{base.site}").get_data(as_text=True))


def test_a_day_without_readings_is_named_in_its_filter(base: Base, desk: FlaskClient) -> None:
    Notebook(base, "Ysolde").read(214)
    page = desk.get(f"/surveys/{base.survey}/day?day=2026-07-01").get_data(as_text=True)
    assert "1 July 2026" in page
    assert re.findall(r'<option value="([^"]*)" selected', page) == ["2026-07-01"]
    assert "0 of 1 readings" in plain(page)


@contextmanager
def counted(app: Flask) -> Iterator[list[str]]:
    """The statements that the database is sent meanwhile."""
    sent: list[str] = []

    def note(_connection: Any, _cursor: Any, statement: str, *_: Any) -> None:
        sent.append(statement)

    with app.app_context():
        engine = db.engine
    event.listen(engine, "before_cursor_execute", note)
    yield sent
    event.remove(engine, "before_cursor_execute", note)


def test_the_day_sheet_asks_the_database_no_more_for_more_sites(app: Flask, base: Base, desk: FlaskClient) -> None:
    Notebook(base, "Ysolde").read(214)
    with counted(app) as few:
        sheet(desk, base)
    with app.app_context(), write() as session:
        for i in range(12):
            put_site(session, base.survey, base.lead, {"name": f"Site {i}", "lat_deg": 20.0 + i, "lon_deg": 10.0})
    with counted(app) as many:
        sheet(desk, base)
    assert len(many) == len(few)


def test_photos_reach_the_lead_only_through_the_survey(base: Base, desk: FlaskClient) -> None:
    assert desk.get(f"/api/v1/surveys/{base.survey}/photos/{'0' * 64}").status_code == 404


