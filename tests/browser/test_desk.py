"""The lead's pages in a real browser: set-up, every page in every light and width, keyboard, print, awkward data."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from playwright.sync_api import Browser, Page, expect

from tests.browser import walk
from tests.browser.conftest import watched_errors
from tests.conftest import Server
from tests.imports import files

DEMO = "desertdem0"
LONG = "A very long name of a site that somebody typed without a thought for widths"
TOO_WIDE = "document.documentElement.scrollWidth - document.documentElement.clientWidth"


@pytest.fixture(scope="module")
def demo(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Server]:
    """A server with the demonstration survey."""
    server = Server(tmp_path_factory.mktemp("demo"), command=("demo",)).start()
    yield server
    server.stop()


@pytest.fixture(scope="module")
def signed_in(demo: Server, browser: Browser, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The demo lead's cookies, kept for every page."""
    state = tmp_path_factory.mktemp("state") / "state.json"
    context = browser.new_context()
    page = context.new_page()
    found = re.search(r"http\S+/way-in/\S+", demo.log())
    assert found
    page.goto(found[0])
    page.get_by_role("button", name="Sign in").click()
    page.wait_for_url("**/surveys")
    context.storage_state(path=state)
    context.close()
    return state


@pytest.fixture
def lead(browser: Browser, signed_in: Path) -> Iterator[Page]:
    context = browser.new_context(storage_state=signed_in, viewport={"width": 1280, "height": 900})
    page = context.new_page()
    errors = watched_errors(page)
    yield page
    context.close()
    assert errors == []


def pages(page: Page, demo: Server) -> list[str]:
    """An address of every kind of page that a lead sees."""
    base = f"/surveys/{DEMO}"
    page.goto(f"{demo.address}{base}/day?day=all")
    site = page.locator("tbody th a").first.get_attribute("href") or ""
    page.goto(f"{demo.address}{site}")
    observation = page.locator("table.rows tbody th a").first.get_attribute("href") or ""
    return [
        "/surveys", "/surveys/new", base, f"{base}/day", f"{base}/day?day=all", site, observation, f"{base}/site", f"{base}/export",
        f"{base}/import", "/dictionary", "/cautions",
    ]


def test_a_first_lead_sets_a_survey_up(new_server: Callable[..., Server], desk: Page, tmp_path: Path) -> None:
    server = new_server().start()
    walk.become_lead(desk, server.log())
    survey = walk.create_survey(desk, server.address, name="رمل الشمال", time_zone="Etc/GMT-4", target_half_width_deg="10")
    walk.add_site(desk, server.address, survey, name=LONG, lat_deg="-19.9", lon_deg="66.0")
    assert walk.joining_code(desk, server.address, survey)
    # GPX of another device: looked at first, then written.
    walk_file = tmp_path / "walk.gpx"
    walk_file.write_text(files.HANDHELD, encoding="utf-8")
    desk.goto(f"{server.address}/surveys/{survey}/import")
    desk.get_by_label("File").set_input_files(walk_file)
    desk.get_by_role("button", name="Read the file").click()
    expect(desk.get_by_text("3 sites, 2 tracks.")).to_be_visible()
    desk.get_by_role("button", name="Import it").click()
    expect(desk.get_by_role("heading", name="Imported from walk.gpx")).to_be_visible()
    desk.get_by_role("link", name="Day sheet").first.click()
    expect(desk.get_by_role("link", name=LONG)).to_be_visible()
    expect(desk.get_by_role("link", name="علامة")).to_be_visible()
    expect(desk.get_by_text("Nothing has been handed over yet")).to_be_visible()
    assert desk.evaluate(TOO_WIDE) <= 0


@pytest.mark.parametrize("width", [1280, 360])
def test_no_page_is_wider_than_its_window_in_any_light(demo: Server, lead: Page, width: int) -> None:
    found = pages(lead, demo)
    lead.set_viewport_size({"width": width, "height": 800})
    for theme in ("", "sunlit", "dark"):
        lead.goto(f"{demo.address}/cautions")
        lead.get_by_label("Light").select_option(theme)
        for path in found:
            lead.goto(demo.address + path)
            assert lead.evaluate(TOO_WIDE) <= 0, (path, theme)
            assert lead.locator("h1").count() == 1, path


def test_the_light_that_was_chosen_stays(demo: Server, lead: Page) -> None:
    lead.goto(f"{demo.address}/surveys/{DEMO}/day")
    colour = "getComputedStyle(document.body).backgroundColor"
    lead.get_by_label("Light").select_option("paper")
    paper = lead.evaluate(colour)
    lead.get_by_label("Light").select_option("dark")
    dark = lead.evaluate(colour)
    lead.reload()
    assert lead.evaluate(colour) == dark != paper


def test_everything_is_reached_by_keyboard_and_seen(demo: Server, lead: Page) -> None:
    lead.goto(f"{demo.address}/surveys/{DEMO}/day?day=all")
    wanted = lead.locator("a[href]:visible, button:visible, select:visible, input:visible").count()
    reached = set()
    for _ in range(wanted + 5):
        lead.keyboard.press("Tab")
        told = lead.evaluate(
            """() => {
                const at = document.activeElement;
                const all = [...document.querySelectorAll('a[href], button, select, input')];
                const style = getComputedStyle(at);
                return [all.indexOf(at), style.outlineStyle !== 'none' && parseFloat(style.outlineWidth) >= 2];
            }"""
        )
        if told[0] >= 0:
            reached.add(told[0])
            assert told[1], lead.evaluate("document.activeElement.outerHTML")
    assert len(reached) >= wanted


def test_paper_shows_the_page_without_its_controls(demo: Server, lead: Page) -> None:
    lead.goto(f"{demo.address}/surveys/{DEMO}/day?day=all")
    lead.emulate_media(media="print")
    for selector in ("nav", "form", "footer a"):
        for element in lead.locator(selector).all():
            assert not element.is_visible(), selector
    expect(lead.locator("table.day")).to_be_visible()
    expect(lead.get_by_text("local codes and licensed practitioners")).to_be_visible()


def test_every_rose_has_its_words(demo: Server, lead: Page) -> None:
    lead.goto(f"{demo.address}/surveys/{DEMO}/day?day=all")
    roses = lead.locator("table.day svg")
    assert roses.count() >= 20
    for rose in roses.all():
        assert rose.get_attribute("role") == "img"
        assert len(rose.locator("title, desc").first.text_content() or "") > 10


def test_every_export_is_one_touch(demo: Server, lead: Page, tmp_path: Path) -> None:
    lead.goto(f"{demo.address}/surveys/{DEMO}/export")
    for name, ending in (("GeoPackage", ".gpkg"), ("GeoJSON", ".geojson"), ("CSV", ".csv"), ("GPX", ".gpx")):
        with lead.expect_download() as download:
            lead.get_by_role("link", name=name, exact=True).click()
        assert download.value.suggested_filename == f"Orvassa-sand-sea-corridor-4{ending}"
        download.value.save_as(tmp_path / f"file{ending}")
        assert (tmp_path / f"file{ending}").stat().st_size > 10_000
