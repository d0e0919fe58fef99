"""The lead's pages of the demonstration survey: their numbers are the computation's, whatever room asked for it."""

from __future__ import annotations

import json
import re
from collections import Counter, defaultdict
from pathlib import Path
from typing import Any

import pytest
from flask import Flask
from flask.testing import FlaskClient
from sqlalchemy import select

from fieldlog.people.service import add_lead
from fieldlog.science.summary import Summary, summarise
from fieldlog.store.db import db
from fieldlog.store.photos import PhotoFolder
from fieldlog.store.tables import observations, photos, sites, surveys
from fieldlog.store.transaction import write
from fieldlog.surveys.ledger_file import load_ledger
from fieldlog.web.settings import Settings
from tests.http.conftest import PASSWORD, Base
from tests.http.text import plain, section

FOLDER = Path(__file__).resolve().parents[2] / "demo_survey"
SITES = json.loads((FOLDER / "cast.json").read_text(encoding="utf-8"))["sites"]


@pytest.fixture
def demo(app: Flask, settings: Settings) -> Base:
    with app.app_context(), write() as session:
        loaded = load_ledger(session, FOLDER, PhotoFolder(settings.data_dir / "photos"))
        add_lead(session, "Lead", PASSWORD)
    return Base(app, loaded.survey, "", SITES["tamrel"])


@pytest.fixture
def desk(demo: Base) -> FlaskClient:
    return demo.signed_in()


def rows_of(demo: Base, table: Any, *where: Any) -> list[dict[str, Any]]:
    with demo.app.app_context():
        return [dict(row) for row in db.session.execute(select(table).where(*where)).mappings()]


def told_by_the_science(demo: Base, site: str, measure: str, axial: bool) -> Summary:
    """The summary of a site's largest group of one order, face and dune type, grouped here anew."""
    groups = defaultdict(list)
    for row in rows_of(demo, observations, observations.c.site == site):
        if row[measure] is not None and not row["crossed_out"] and not row["check_of"]:
            groups[row["bedform_order"], row["face"], row["dune_type"]].append(row)
    group = max(groups.values(), key=len)
    place, survey = rows_of(demo, sites, sites.c.record == site)[0], rows_of(demo, surveys)[0]
    return summarise(
        [row[measure] for row in group], bedforms=[f"{row['made_on']} {row['bedform']}" for row in group], axial=axial,
        step_deg=max(row["reading_step_deg"] for row in group), against_deg=None if axial else place["expected_facing_deg"],
        target_deg=place["target_half_width_deg"] or survey["target_half_width_deg"], fewest_bedforms=survey["fewest_dunes"],
        subject="Crests" if axial else "Slip faces", spacing=False,
    )


def test_the_pages_numbers_are_those_of_the_science(demo: Base, desk: FlaskClient) -> None:
    """A direction and an axis of one site, to the digits shown."""
    sheet = plain(desk.get(f"/surveys/{demo.survey}/day?day=all").get_data(as_text=True))
    page = desk.get(f"/surveys/{demo.survey}/sites/{demo.site}").get_data(as_text=True)
    for measure, axial, title, mean in (
        ("slip_face_deg", False, "Slip faces", "Mean direction, towards"), ("crest_deg", True, "Crests", "Mean orientation"),
    ):
        told = told_by_the_science(demo, demo.site, measure, axial)
        assert told.outcome == "one"
        assert told.ci95_low_deg is not None
        assert told.ci95_high_deg is not None
        site = section(page, title)
        for words in (
            told.finding, f"n readings {told.n} n dunes {told.bedforms}", f"{mean} {told.mean_direction_deg:05.1f}°",
            f"Mean resultant length R {told.resultant_length:.2f}", f"Circular standard deviation {told.circular_sd_deg:.1f}°",
            f"95 % interval {told.ci95_low_deg:05.1f}° to {told.ci95_high_deg:05.1f}°", f"Rayleigh z, p {told.rayleigh_z:.2f}, <0.001",
            f"Kappa {told.kappa_corrected:,.1f}", f"Dunes needed in all for ±10° {told.bedforms_needed}",
        ):
            assert words in site, (measure, words)
        assert told.finding in sheet
        assert f"n {told.n} on {told.bedforms} dunes mean {told.mean_direction_deg:03.0f}° R {told.resultant_length:.2f}" in sheet


def test_the_day_sheet_and_the_sites_sheet_ask_the_same(demo: Base, desk: FlaskClient) -> None:
    rows = re.findall(
        r'<a href="(/surveys/\w+/sites/[^"]+)".*?<td>(.*?)</td>', desk.get(f"/surveys/{demo.survey}/day?day=all").get_data(as_text=True), re.DOTALL
    )
    assert len(rows) == len(SITES)
    asked = Counter[str]()
    for address, decision in rows:
        said = re.search(r"(\d+) question", decision)
        page = desk.get(address).get_data(as_text=True)
        listed = re.search(r'<ul class="questions">(.*?)</ul>', page, re.DOTALL)
        asked[address] = int(said[1]) if said else 0
        assert (listed[1].count("<li>") if listed else 0) == asked[address], address
    assert asked.total() > 0


def test_the_sites_sheet_shows_every_reading_and_its_photos(demo: Base, desk: FlaskClient) -> None:
    for photo in rows_of(demo, photos):
        row = rows_of(demo, observations, observations.c.record == photo["observation"])[0]
        address = f"/api/v1/surveys/{demo.survey}/photos/{photo['sha256']}"
        page = desk.get(f"/surveys/{demo.survey}/sites/{row['site']}").get_data(as_text=True)
        assert f'src="{address}/small"' in page
        assert f'src="{address}"' in desk.get(f"/surveys/{demo.survey}/observations/{row['record']}").get_data(as_text=True)
        for shown in (address, f"{address}/small"):
            assert desk.get(shown).content_type == "image/jpeg"
        readings = rows_of(demo, observations, observations.c.site == row["site"])
        assert all(f'/observations/{reading["record"]}"' in page for reading in readings)
