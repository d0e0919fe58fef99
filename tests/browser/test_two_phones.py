"""The main job from an empty store to a map layer, with two phones that have no network when it counts."""

from __future__ import annotations

import json
import sqlite3
from collections.abc import Callable
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

import numpy as np
import pyogrio.raw
import pytest
from PIL import Image
from playwright.sync_api import Page, expect

from fieldlog.science.magnetic import declination
from fieldlog.science.summary import summarise
from tests.browser import walk
from tests.browser.conftest import Phone
from tests.conftest import Server

SITE = {"name": "Comb 1", "lat_deg": "-19.9462", "lon_deg": "66.0318", "radius_m": "700"}
SURVEY = {"name": "Orvassa, north", "time_zone": "Etc/GMT-4", "target_half_width_deg": "10", "reading_step_deg": "1"}
# (crest, slip face) as read from magnetic north, two on each of five dunes.
NORTH_PHONE = [(52, 322), (55, 325), (49, 318), (47, 316), (58, 330), (60, 329), (51, 320), (50, 323), (44, 312), (46, 315)]
SOUTH_PHONE = [(62, 331), (59, 333), (53, 324), (57, 327), (48, 319), (45, 317), (66, 338), (63, 335), (54, 322), (52, 326)]


def answers(page: Page, address: str) -> bool:
    """Whether the page reaches the store."""
    reached: bool = page.evaluate(
        "address => fetch(`${address}/api/v1/health`).then(() => true, () => false)", address
    )
    return reached


def record_ten(phone: Phone, page: Page, readings: list[tuple[int, int]]) -> None:
    walk.choose_site(page, "Comb 1")
    for i, (crest, slip_face) in enumerate(readings):
        phone.move_to(-19.9462 + 0.0003 * i, 66.0318 + 0.0002 * i)
        if i and i % 2 == 0:
            page.get_by_role("button", name="Next dune").click()
        walk.read(page, crest=crest, slip_face=slip_face)


def open_observation(page: Page, record: str) -> None:
    page.get_by_role("button", name="Readings of today", exact=True).click()
    page.locator(f"[data-record='{record}']").click()


def records_of_today(page: Page) -> list[str]:
    """Oldest first."""
    page.get_by_role("button", name="Readings of today", exact=True).click()
    lines = page.locator("main [data-record]")
    expect(lines.first).to_be_visible()
    named = [(line.locator("time").get_attribute("datetime"), line.get_attribute("data-record")) for line in lines.all()]
    return [str(record) for _, record in sorted(named)]


def edit_slip_face(page: Page, record: str, number: int) -> None:
    open_observation(page, record)
    walk.type_number(page, "Slip face bearing", f"{number:03d}")
    page.get_by_role("button", name="Save changes").click()
    expect(page.get_by_role("status").filter(has_text="Saved")).to_be_visible()


def cross_out(page: Page, record: str) -> None:
    open_observation(page, record)
    page.get_by_role("button", name="Cross out", exact=True).click()
    page.get_by_role("textbox", name="Reason").fill("read the wrong dune")
    page.get_by_role("button", name="Cross out with this reason").click()
    expect(page.get_by_text("Crossed out: read the wrong dune")).to_be_visible()


def finding_on_screen(page: Page, measure: str) -> str:
    walk.go(page, "Finding")
    page.get_by_role("button", name=measure, exact=True).click()
    sentence = page.locator(".sample .sentence").first
    expect(sentence).to_contain_text("readings")
    return sentence.inner_text()


def expected_finding(readings: list[tuple[int, int]], *, axial: bool) -> str:
    """What Python says of the numbers as read: the declination of the site is added to each."""
    turn = declination(-19.9462, 66.0318, 0, datetime.now(UTC)).declination_deg
    numbers = [crest if axial else slip_face for crest, slip_face in readings]
    dunes = [i // 2 for i in range(10)]
    kept = [i for i in range(10) if i != 7]
    summary = summarise(
        [(numbers[i] + turn) % (180 if axial else 360) for i in kept],
        bedforms=[dunes[i] for i in kept], axial=axial, step_deg=1, target_deg=10, fewest_bedforms=5,
        subject="Crests" if axial else "Slip faces",
    )
    return summary.finding


@pytest.fixture
def photo_file(tmp_path: Path) -> Path:
    """A photo with a gradient, so that it has something to compress."""
    ramp = np.linspace(90, 220, 800, dtype=np.uint8)
    file = tmp_path / "dune.jpg"
    Image.fromarray(np.stack([np.tile(ramp, (600, 1))] * 3, axis=-1)).save(file, quality=85)
    return file


@pytest.mark.timeout(420)
def test_from_an_empty_store_to_a_map_layer(
    new_server: Callable[..., Server], new_phone: Callable[..., Phone], desk: Page, photo_file: Path, tmp_path: Path
) -> None:
    # At camp: the first lead, a survey, a site, a code.
    server = new_server().start()
    walk.become_lead(desk, server.log())
    survey = walk.create_survey(desk, server.address, **SURVEY)
    walk.add_site(desk, server.address, survey, **SITE)
    code = walk.joining_code(desk, server.address, survey)

    # Two phones join, one by the link, one by the typed code.
    north, south = new_phone(), new_phone()
    page = north.open(f"{server.address}/phone/#join={code}")
    walk.join_by_name(page, "Ysolde")
    walk.wait_until_offline_works(page)
    other = south.open(f"{server.address}/phone/")
    other.get_by_label("Joining code").fill(code.lower())
    other.keyboard.press("Enter")
    walk.join_by_name(other, "سمير")
    walk.wait_until_offline_works(other)

    # Out of reach: the process is gone, and seen to be gone.
    server.stop()
    assert server.refuses
    assert not answers(page, server.address)
    north.forget()
    south.forget()

    kept: dict[str, list[str]] = {}
    for phone, readings, edited in ((north, NORTH_PHONE, 326), (south, SOUTH_PHONE, 332)):
        page = phone.open(f"{server.address}/phone/")
        phone.signal(on=False)
        expect(page.get_by_role("navigation", name="Places")).to_be_visible()
        record_ten(phone, page, readings[:9])
        walk.add_photo(page, photo_file)
        walk.read(page, crest=readings[9][0], slip_face=readings[9][1])
        if phone is north:
            phone.kill()  # the battery dies right after the word
            page = phone.open(f"{server.address}/phone/")
        records = records_of_today(page)
        assert len(records) == 10
        edit_slip_face(page, records[1], edited)
        cross_out(page, records[7])
        kept[phone.folder.name] = records
        changed = [(crest, edited if i == 1 else slip_face) for i, (crest, slip_face) in enumerate(readings)]
        assert finding_on_screen(page, "Slip faces") == expected_finding(changed, axial=False)
        assert finding_on_screen(page, "Crests") == expected_finding(changed, axial=True)
        expect(page.get_by_role("button", name="10 on this phone only")).to_be_visible()
        if phone is north:
            phone.forget()

    # Back in reach: nobody touches anything, and both hand over.
    server.start()
    south.signal(on=True)
    for screen in (north.open(f"{server.address}/phone/"), south.page):
        walk.go(screen, "Hand over")
        expect(screen.get_by_text("base has everything")).to_be_visible(timeout=60_000)
    assert north.errors == []
    assert south.errors == []

    check_store(server, survey, kept)
    check_desk(desk, server.address, survey)
    check_layer(desk, server.address, survey, tmp_path)


def check_store(server: Server, survey: str, kept: dict[str, list[str]]) -> None:
    """Exactly the twenty, with every edit in the ledger and both photos."""
    store = sqlite3.connect(server.data_dir / "ergbook.sqlite")
    rows = {row[0]: row[1:] for row in store.execute(
        "SELECT record, slip_face_read_deg, crossed_out, fix_method, declination_model FROM observation")}
    texts = [json.loads(text) for (text,) in store.execute("SELECT text FROM ledger_entry ORDER BY seq")]
    photos = store.execute("SELECT observation, sha256 FROM photo").fetchall()
    store.close()
    assert set(rows) == {record for records in kept.values() for record in records}
    assert len(rows) == 20
    for records, edited in zip(kept.values(), (326, 332), strict=True):
        assert rows[records[1]][0] == edited
        assert rows[records[7]][1] == "read the wrong dune"
        assert {"slip_face_read_deg": edited} in [body["set"] for body in texts if body.get("record") == records[1]]
        assert {"crossed_out": "read the wrong dune"} in [b["set"] for b in texts if b.get("record") == records[7]]
    assert {row[2] for row in rows.values()} <= {"single", "averaged"}
    assert {row[3] for row in rows.values()} == {"WMM2025"}
    assert {record for record, _ in photos} == {records[9] for records in kept.values()}
    for _, sha256 in photos:
        assert (server.data_dir / "photos" / survey / sha256[:2] / sha256).stat().st_size > 1000


def check_desk(desk: Page, address: str, survey: str) -> None:
    """The day sheet shows both, in one rose."""
    desk.goto(f"{address}/surveys/{survey}/day")
    row = desk.get_by_role("row").filter(has=desk.get_by_role("link", name="Comb 1"))
    expect(row).to_contain_text("18 of 18 readings")
    expect(row).to_contain_text("n 18 on 10 dunes")
    for name in ("Ysolde", "سمير"):
        desk.get_by_label("Crew").select_option(label=name)
        desk.get_by_role("button", name="Show").click()
        expect(row).to_contain_text("9 of 18 readings")
    desk.get_by_role("link", name="Comb 1").click()
    expect(desk.locator("table.rows tbody tr")).to_have_count(20)
    expect(desk.locator("table.rows tr.crossed")).to_have_count(2)


def check_layer(desk: Page, address: str, survey: str, folder: Path) -> None:
    """GDAL opens the GeoPackage and reads the same true azimuths."""
    desk.goto(f"{address}/surveys/{survey}/export")
    with desk.expect_download() as download:
        desk.get_by_role("link", name="GeoPackage").first.click()
    file = folder / "survey.gpkg"
    download.value.save_as(file)
    meta, _, geometry, columns = pyogrio.raw.read(file, layer="observations")
    table: dict[str, Any] = dict(zip(meta["fields"], columns, strict=True))
    assert len(geometry) == 20
    turn = declination(-19.9462, 66.0318, 0, datetime.now(UTC)).declination_deg
    for as_read, true, limit in (("crest_read_deg", "crest_deg", 180), ("slip_face_read_deg", "slip_face_deg", 360)):
        expected = (table[as_read] + table["declination_deg"]) % limit
        np.testing.assert_allclose(table[true], expected, atol=0.0051)
        np.testing.assert_allclose(table["declination_deg"], turn, atol=0.02)
    assert sorted(table["slip_face_read_deg"]) == sorted(
        [326 if i == 1 else slip for i, (_, slip) in enumerate(NORTH_PHONE)]
        + [332 if i == 1 else slip for i, (_, slip) in enumerate(SOUTH_PHONE)]
    )
