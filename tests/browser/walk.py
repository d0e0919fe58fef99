"""Doing on the screens what people do: on the desk and on a phone."""

from __future__ import annotations

import re
from pathlib import Path
from typing import Any

from playwright.sync_api import Page, expect

PASSWORD = "four words and a comma,"


def become_lead(page: Page, log: str, name: str = "Maren") -> None:
    """Use the one-time link that the server printed."""
    found = re.search(r"http\S+/way-in/\S+", log)
    assert found, log
    page.goto(found[0])
    page.get_by_label("Name").fill(name)
    page.get_by_label("Password").fill(PASSWORD)
    page.get_by_role("button", name="Become lead").click()
    expect(page.get_by_role("heading", name="Surveys")).to_be_visible()


def create_survey(page: Page, address: str, **values: str) -> str:
    """Fill the form of a new survey; its id."""
    page.goto(f"{address}/surveys/new")
    for label, text in values.items():
        page.locator(f"[name={label}]").fill(text)
    page.get_by_role("button", name="Create the survey").click()
    expect(page.get_by_role("heading", name="Sites")).to_be_visible()
    return page.url.rstrip("#").rpartition("/")[2]


def add_site(page: Page, address: str, survey: str, **values: str) -> None:
    """Type a site in."""
    page.goto(f"{address}/surveys/{survey}/site")
    for label, text in values.items():
        field = page.locator(f"[name={label}]")
        if field.evaluate("element => element.tagName") == "SELECT":
            field.select_option(text)
        else:
            field.fill(text)
    page.get_by_role("button", name="Add the site").click()
    expect(page.get_by_role("heading", name="Sites")).to_be_visible()


def joining_code(page: Page, address: str, survey: str) -> str:
    """A new joining code as the lead's screen shows it."""
    page.goto(f"{address}/surveys/{survey}")
    page.get_by_role("button", name="Make a joining code").click()
    expect(page.locator("svg.qr")).to_be_visible()
    return page.locator("#code").inner_text()


def join_by_name(page: Page, name: str) -> None:
    """On the join screen, with the code known: be somebody new."""
    page.get_by_label("Your name").fill(name)
    page.get_by_role("button", name="Join", exact=True).click()
    expect(go(page, "Place")).to_be_visible()


def go(page: Page, place: str) -> Any:
    """Touch one of the four places at the thumb."""
    button = page.get_by_role("navigation", name="Places").get_by_role("button", name=place, exact=True)
    button.click()
    return button


def wait_until_offline_works(page: Page) -> None:
    """The worker has the whole shell."""
    go(page, "Hand over")
    expect(page.get_by_text("Opens without a network.")).to_be_visible(timeout=20_000)


def choose_site(page: Page, name: str) -> None:
    """Place: the site, its first dune, the usual order and face."""
    go(page, "Place")
    page.get_by_role("button", name=re.compile(name)).first.click()
    page.get_by_role("button", name="First dune").click()
    page.get_by_role("group", name="Order").get_by_role("button", name="dune", exact=True).click()
    page.get_by_role("group", name="Face").get_by_role("button", name="main", exact=True).click()
    page.get_by_role("button", name="Read here").click()


def type_number(page: Page, label: str, number: int | str) -> None:
    """Open the measure, if it is not open, and press the pad's keys."""
    pad = page.get_by_role("group", name=f"Number pad for {label}", exact=True)
    if not pad.is_visible():
        page.get_by_role("button", name=re.compile(f"^{label}")).first.click()
    for digit in str(number):
        pad.get_by_role("button", name=digit, exact=True).click()


def say(page: Page, group: str, word: str) -> None:
    """Choose a word of an open group, if it is not chosen already."""
    button = page.get_by_role("group", name=group, exact=True).get_by_role("button", name=word, exact=True).first
    if button.get_attribute("aria-pressed") != "true":
        button.click()


def read(page: Page, *, crest: int, slip_face: int) -> None:
    """One reading of both bearings, saved."""
    type_number(page, "Crest bearing", f"{crest:03d}")
    say(page, "Read from", "magnetic")
    type_number(page, "Slip face bearing", f"{slip_face:03d}")
    say(page, "Looking", "down the face")
    save(page)
    expect(page.get_by_role("button", name=f"Saved {crest:03d}°, {slip_face:03d}°")).to_be_visible()


def save(page: Page) -> None:
    """Touch Save, whatever the bar still shows of the reading before."""
    page.locator("button.save").click()


def add_photo(page: Page, file: Path) -> None:
    """Take a photo with the reading in hand."""
    page.get_by_label("Add a photo").set_input_files(str(file))
    expect(page.get_by_alt_text("Photo 1 of this reading")).to_be_visible()
