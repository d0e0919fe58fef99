"""The other way out: a revoked phone saves everything to a file, the lead accepts it, the phone may let go."""

from __future__ import annotations

import sqlite3
from collections.abc import Callable
from pathlib import Path

from PIL import Image
from playwright.sync_api import Page, expect

from tests.browser import walk
from tests.browser.conftest import Phone
from tests.conftest import Server


def test_a_revoked_phones_readings_reach_base_by_file(
    new_server: Callable[..., Server], new_phone: Callable[..., Phone], desk: Page, tmp_path: Path
) -> None:
    server = new_server().start()
    walk.become_lead(desk, server.log())
    survey = walk.create_survey(desk, server.address, name="Orvassa", time_zone="Etc/GMT-4", target_half_width_deg="10")
    walk.add_site(desk, server.address, survey, name="Comb 1", lat_deg="-19.9462", lon_deg="66.0318")
    page = new_phone().open(f"{server.address}/phone/#join={walk.joining_code(desk, server.address, survey)}")
    walk.join_by_name(page, "Ysolde")

    # The lead revokes the phone; its crew reads on.
    desk.goto(f"{server.address}/surveys/{survey}")
    desk.get_by_text("Revoke", exact=True).click()
    desk.get_by_role("button", name="Revoke this phone").click()
    photo = tmp_path / "dune.png"
    Image.new("RGB", (80, 60), "tan").save(photo)
    walk.choose_site(page, "Comb 1")
    walk.add_photo(page, photo)
    walk.read(page, crest=52, slip_face=322)
    walk.read(page, crest=54, slip_face=325)
    walk.go(page, "Hand over")
    expect(page.get_by_text("the lead has revoked this phone")).to_be_visible(timeout=15_000)

    # It does not let go of what is nowhere else.
    page.get_by_text("Leave this survey").first.click()
    page.get_by_role("button", name="Leave this survey").click()
    expect(page.get_by_text("Some of it is on this phone only.")).to_be_visible()

    with page.expect_download() as download:
        page.get_by_role("button", name="Save everything to a file").click()
    file = tmp_path / download.value.suggested_filename
    assert file.name.startswith("Orvassa-Ysolde-")
    download.value.save_as(file)
    expect(page.get_by_text("Saved to Orvassa")).to_contain_text("and 1 photo")

    desk.goto(f"{server.address}/surveys/{survey}/import")
    desk.get_by_label("File").set_input_files(file)
    desk.get_by_role("button", name="Read the file").click()
    expect(desk.get_by_text("3 entries and 1 photo that base does not hold.")).to_be_visible()
    expect(desk.get_by_role("row").filter(has_text="revoked")).to_contain_text("Ysolde")
    desk.get_by_role("button", name="Accept it").click()
    expect(desk.get_by_role("heading", name="Imported from")).to_be_visible()
    desk.goto(f"{server.address}/surveys/{survey}/day")
    expect(desk.get_by_role("row").filter(has=desk.get_by_role("link", name="Comb 1"))).to_contain_text("2 of 2 readings")

    page.get_by_role("button", name="Leave this survey").click()
    expect(page.get_by_label("Joining code")).to_be_visible()
    page.reload()
    expect(page.get_by_label("Joining code")).to_be_visible()

    store = sqlite3.connect(server.data_dir / "ergbook.sqlite")
    marked = store.execute("SELECT count(*) FROM ledger_entry WHERE accepted_by IS NOT NULL").fetchone()
    ((sha256,),) = store.execute("SELECT sha256 FROM photo").fetchall()
    store.close()
    assert marked == (3,)
    assert (server.data_dir / "photos" / survey / sha256[:2] / sha256).exists()
