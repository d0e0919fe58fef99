"""The phone as a person sees it: real screens in a real browser, against a real store."""

from __future__ import annotations

import json
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest
from PIL import Image
from playwright.sync_api import Locator, Page, expect

from fieldlog.science.magnetic import declination
from fieldlog.sheet.observation import OBSERVATION
from tests.browser.conftest import Phone
from tests.browser.notebook.faulty_line import serving
from tests.browser.notebook.store_of_one_survey import StoreOfOneSurvey

SITE = (20.0, 10.0)
HERE = {"latitude": 20.0004, "longitude": 10.0003, "accuracy": 4.5}


@pytest.fixture
def store(tmp_path: Path) -> Iterator[StoreOfOneSurvey]:
    store = StoreOfOneSurvey(tmp_path / "store")
    yield store
    store.close()


@pytest.fixture
def port(store: StoreOfOneSurvey) -> Iterator[int]:
    with serving(store.app) as port:
        yield port


class Screens:
    """A person's hands and eyes on one phone."""

    def __init__(self, phone: Phone, page: Page) -> None:
        self.phone = phone
        self.page = page

    def button(self, name: str, within: Locator | None = None) -> Locator:
        return (within or self.page).get_by_role("button", name=name, exact=True)

    def go(self, place: str) -> None:
        self.page.get_by_role("navigation").get_by_role("button", name=place, exact=True).click()

    def open_block(self, label: str) -> Locator:
        """The block of the sheet under this label, open."""
        block = self.page.locator("section.block").filter(has=self.page.locator(".name", has_text=label)).first
        line = block.locator("button.line")
        if line.get_attribute("aria-expanded") == "false":
            line.click()
        return block

    def line(self, label: str) -> Locator:
        return self.page.locator("button.line").filter(has=self.page.locator(".name", has_text=label)).locator(".said")

    def read(self, label: str, digits: str) -> None:
        """Type a number on the pad of a measure."""
        block = self.open_block(label)
        for digit in digits:
            self.button(digit, block).click()

    def choose(self, word: str, label: str) -> None:
        self.button(word, self.open_block(label)).click()

    def save(self) -> None:
        self.page.locator(".dock .save").click()

    def saved(self, text: str) -> None:
        expect(self.page.locator(".dock .status")).to_contain_text(f"Saved: {text}" if text else "Saved.")

    def settled(self) -> None:
        """Base has everything."""
        self.go("Hand over")
        expect(self.page.locator(".held")).to_contain_text("base has everything")


def switch_on(phone: Phone, port: int, code: str, name: str = "Bo") -> Screens:
    page = phone.open(f"http://127.0.0.1:{port}/phone/#join={code}")
    page.get_by_label("Your name").fill(name)
    page.get_by_role("button", name="Join", exact=True).click()
    expect(page.get_by_role("button", name="Read here")).to_be_visible(timeout=20_000)
    return Screens(phone, page)


@pytest.fixture
def screens(new_phone: Callable[..., Phone], store: StoreOfOneSurvey, port: int) -> Iterator[Screens]:
    """A phone that has joined and stands at the site."""
    screens = switch_on(new_phone(geolocation=HERE), port, store.joining_code())
    yield screens
    assert screens.phone.errors == []


@pytest.fixture
def reading(screens: Screens) -> Screens:
    """The same on its Reading screen: site and first dune chosen, north said."""
    screens.page.locator(".sites button").first.click()
    screens.button("First dune").click()
    screens.button("Read here").click()
    screens.choose("magnetic", "Crest bearing")
    return screens


def test_joining_by_a_typed_code_says_the_cautions_and_asks_who_one_is(
    new_phone: Callable[..., Phone], store: StoreOfOneSurvey, port: int
) -> None:
    phone = new_phone()
    page = phone.open(f"http://127.0.0.1:{port}/phone/")
    page.get_by_label("Joining code").fill("NOPE-NOPE")
    page.get_by_role("button", name="Look").click()
    expect(page.get_by_role("alert")).to_contain_text("code")
    page.get_by_label("Joining code").fill(store.joining_code().lower())
    page.get_by_role("button", name="Look").click()
    expect(page.get_by_role("heading", name="Red Erg")).to_be_visible()
    expect(page.locator(".cautions")).to_contain_text("Heat and thirst")
    page.get_by_role("button", name="Join", exact=True).click()
    expect(page.get_by_role("alert")).to_have_text("Choose your name, or type it.")
    page.get_by_role("button", name="Ada").click()
    page.get_by_role("button", name="Join", exact=True).click()
    expect(page.locator(".sites")).to_contain_text("North dune")
    assert phone.errors == []


def test_a_reading_is_saved_with_what_the_phone_sets_and_reaches_base(reading: Screens, store: StoreOfOneSurvey) -> None:
    expect(reading.page.locator(".status")).to_contain_text("Fix ±4.5 m")
    reading.read("Slip face bearing", "214")
    reading.choose("up the face", "Slip face bearing")
    reading.save()
    reading.saved("214°")
    expect(reading.page.locator("header .here")).to_have_text("dune 1 · 1 reading here")
    reading.settled()
    [row] = store.observations()
    model = declination(20.0004, 10.0003, 0, row["observed_at"])
    assert model is not None
    assert row["slip_face_read_deg"] == 214
    assert row["north"] == "magnetic"
    assert row["how_read"] == "hand_compass"
    assert row["declination_deg"] == pytest.approx(model.declination_deg, abs=0.011)
    assert row["slip_face_deg"] == pytest.approx((214 + 180 + row["declination_deg"]) % 360, abs=0.01)
    assert (row["lat_deg"], row["lon_deg"]) == (20.0004, 10.0003)
    assert (row["accuracy_m"], row["fix_method"]) == (4.5, "single")


def test_what_the_sheet_carries_stays_and_the_rest_does_not(reading: Screens) -> None:
    reading.choose("middle", "Crest bearing")
    reading.read("Crest bearing", "124")
    reading.save()
    reading.saved("124°")
    expect(reading.page.get_by_label("Crest bearing", exact=True)).to_have_value("")
    expect(reading.line("Crest bearing")).to_contain_text("middle")
    expect(reading.line("Crest bearing")).to_contain_text("carried")
    reading.page.locator(".dock").get_by_role("button", name="Next dune").click()
    expect(reading.line("Crest bearing")).not_to_contain_text("middle")
    expect(reading.line("Crest bearing")).to_contain_text("magnetic")
    expect(reading.line("Site and dune")).to_contain_text("Dune 2")


def test_a_repeat_reading_takes_five_touches(reading: Screens) -> None:
    reading.read("Crest bearing", "124")
    reading.save()
    reading.saved("124°")
    touches = 0
    for digit in "131":
        reading.page.locator(".pad").get_by_role("button", name=digit, exact=True).click()
        touches += 1
    reading.save()
    touches += 1
    reading.saved("131°")
    assert touches <= 5


def test_what_cannot_be_is_refused_in_words_and_the_form_kept(screens: Screens, store: StoreOfOneSurvey) -> None:
    screens.button("Read here").click()
    status = screens.page.locator(".status")
    screens.save()
    expect(status).to_have_text("Site: Choose it first.")
    screens.page.get_by_label("Site", exact=True).select_option(label="North dune")
    screens.save()
    expect(status).to_contain_text("Nothing read yet")
    screens.read("Crest bearing", "400")
    screens.save()
    expect(screens.page.locator(".block.open .problem")).to_have_text("400 is no bearing: they run from 0 to 359.")
    screens.read("Crest bearing", "360")
    screens.save()
    expect(status).to_have_text('Crest bearing: Choose "Read from" too.')
    screens.choose("true", "Crest bearing")
    screens.save()
    screens.saved("000°")
    screens.settled()
    assert [row["crest_read_deg"] for row in store.observations()] == [0]


def test_none_here_and_could_not_be_measured_are_answers(reading: Screens, store: StoreOfOneSurvey) -> None:
    reading.choose("none here", "Slip face bearing")
    reading.choose("could not be measured", "Grain size")
    expect(reading.line("Slip face bearing")).to_contain_text("none here")
    reading.save()
    reading.saved("")
    reading.settled()
    [row] = store.observations()
    assert row["slip_face_read_deg_absent"] == "none_here"
    assert row["grain_class_absent"] == "not_measurable"
    assert row["surface_type_absent"] is None


def test_every_asked_field_stands_in_the_form_and_optional_ones_only_when_on(
    reading: Screens, store: StoreOfOneSurvey
) -> None:
    def labels() -> set[str]:
        found = set()
        for i in range(reading.page.locator("section.block").count()):
            block = reading.page.locator("section.block").nth(i)
            if block.locator("button.line").get_attribute("aria-expanded") == "false":
                block.locator("button.line").click()
            for part in block.locator(".body [aria-label]").all():
                found.add(part.get_attribute("aria-label"))
            found |= set(block.locator(".name").all_inner_texts())
        return found

    asked = [f for f in OBSERVATION.fields if f.asked and not f.is_derived and not f.retired]
    before = labels()
    assert {f.label for f in asked if not f.optional} <= before
    assert not {f.label for f in asked if f.optional} & before
    optional = [f.name for f in OBSERVATION.fields if f.optional and f.asked]
    device, n, _ = next(entry for entry in store.entries() if json.loads(entry[2])["kind"] == "survey")
    store.say("survey", {"optional_fields": optional}, record=f"{device}-{n}")
    reading.go("Hand over")
    reading.button("Hand over now").click()
    expect(reading.page.locator(".state")).to_contain_text("Last hand-over")
    reading.go("Reading")
    expect(reading.page.locator("section.block", has_text="Brink bearing")).to_have_count(1)
    assert {f.label for f in asked} <= labels()


def test_the_open_form_survives_a_killed_browser(reading: Screens, port: int) -> None:
    reading.read("Crest bearing", "127")
    note = reading.open_block("Note").get_by_label("Note")
    note.fill("sharp brink, رمل")
    reading.page.wait_for_timeout(300)
    reading.phone.kill()
    page = reading.phone.open(f"http://127.0.0.1:{port}/phone/")
    again = Screens(reading.phone, page)
    expect(again.line("Note")).to_contain_text("sharp brink, رمل")
    expect(again.line("Crest bearing")).to_contain_text("127°")


def test_saving_does_not_wait_for_a_fix_which_is_added_when_it_comes(
    new_phone: Callable[..., Phone], store: StoreOfOneSurvey, port: int
) -> None:
    screens = switch_on(new_phone(geolocation=None, permissions=[]), port, store.joining_code())
    screens.page.locator(".sites button").first.click()
    screens.button("Read here").click()
    screens.choose("magnetic", "Crest bearing")
    expect(screens.page.locator(".status")).to_contain_text("Saving")
    screens.read("Crest bearing", "124")
    context = screens.page.context
    screens.save()
    screens.saved("124°")
    screens.settled()
    [row] = store.observations()
    assert row["lat_deg"] is None
    assert row["crest_deg"] is not None, "the site's own point gives the declination meanwhile"
    context.grant_permissions(["geolocation"])
    context.set_geolocation(HERE)
    screens.go("Reading")
    expect(screens.page.locator(".status")).to_contain_text("Fix ±4.5 m")
    screens.settled()
    [row] = store.observations()
    assert (row["lat_deg"], row["lon_deg"], row["fix_method"]) == (20.0004, 10.0003, "single")
    assert row["crest_read_deg"] == 124


def test_undo_crosses_the_reading_out_within_ten_seconds(reading: Screens, store: StoreOfOneSurvey) -> None:
    reading.read("Crest bearing", "124")
    reading.save()
    reading.button("Undo").click()
    expect(reading.page.locator(".status")).to_have_text("Undone: crossed out.")
    expect(reading.page.locator("header .here")).to_have_text("dune 1 · 0 readings here")
    reading.settled()
    assert [row["crossed_out"] for row in store.observations()] == ["undone at once"]


def test_a_saved_reading_is_edited_crossed_out_and_taken_back(reading: Screens, store: StoreOfOneSurvey) -> None:
    reading.read("Crest bearing", "124")
    reading.save()
    reading.saved("124°")
    reading.button("Readings of today").click()
    reading.page.locator(".observations button[data-record]").click()
    reading.read("Crest bearing", "134")
    reading.button("Save changes").click()
    expect(reading.page.locator(".status")).to_have_text("Changes saved.")
    reading.button("Cross out").click()
    reading.button("misread").click()
    expect(reading.page.get_by_text("Crossed out: misread")).to_be_visible()
    reading.button("Back to today").click()
    expect(reading.page.locator(".observations")).to_contain_text("crossed out: misread")
    reading.page.locator(".observations button[data-record]").click()
    reading.button("Take back the crossing out").click()
    expect(reading.button("Cross out")).to_be_visible()
    reading.settled()
    [row] = store.observations()
    assert (row["crest_read_deg"], row["crossed_out"]) == (134, None)
    assert sum("observation" in json.loads(text)["kind"] for _, _, text in store.entries()) == 4


def test_a_photo_is_taken_shown_and_saved_with_its_reading(reading: Screens, store: StoreOfOneSurvey, tmp_path: Path) -> None:
    picture = tmp_path / "slope.jpg"
    Image.effect_noise((2400, 1800), 60).convert("RGB").save(picture)
    fake = tmp_path / "fake.jpg"
    fake.write_text("no picture")
    chooser = reading.page.get_by_label("Add a photo", exact=True)
    chooser.set_input_files(fake)
    expect(reading.page.locator(".photos .problem")).to_contain_text("not a picture")
    chooser.set_input_files(picture)
    expect(reading.page.get_by_alt_text("Photo 1 of this reading")).to_be_visible()
    reading.read("Crest bearing", "124")
    reading.save()
    expect(reading.page.locator(".status")).to_contain_text("1 photo")
    reading.settled()
    [photo] = store.photos()
    assert max(photo["width_px"], photo["height_px"]) == 1600
    reading.button("Readings of today").click()
    reading.page.locator(".observations button[data-record]").click()
    expect(reading.page.get_by_alt_text("Photo 1 of this observation")).to_be_visible()


@pytest.mark.parametrize(
    "typed", ["20.5, 10.25", "20 30 0 N, 10 15 0 E", "N 20 30.0 E 10 15.0", "32 N 630444.6 2267313.4"]
)
def test_coordinates_are_typed_in_the_usual_forms(screens: Screens, store: StoreOfOneSurvey, typed: str) -> None:
    from pyproj import Transformer

    if typed.startswith("32"):
        east, north = Transformer.from_crs(4326, 32632, always_xy=True).transform(10.25, 20.5)
        typed = f"32 N {east:.1f} {north:.1f}"
    screens.page.locator(".sites button").first.click()
    screens.page.get_by_text("Type coordinates instead").click()
    field = screens.page.get_by_label("Coordinates, WGS 84")
    field.fill("somewhere")
    screens.button("Use these").click()
    expect(screens.page.locator(".typed .problem")).to_be_visible()
    field.fill(typed)
    screens.button("Use these").click()
    expect(screens.page.locator(".accuracy")).to_contain_text("Typed")
    screens.button("Read here").click()
    screens.choose("true", "Crest bearing")
    screens.read("Crest bearing", "90")
    screens.save()
    screens.saved("090°")
    screens.settled()
    [row] = store.observations()
    assert (row["lat_deg"], row["lon_deg"]) == (pytest.approx(20.5, abs=2e-6), pytest.approx(10.25, abs=2e-6))
    assert (row["fix_method"], row["accuracy_m"]) == ("typed", None)


def test_the_finding_and_its_question_are_said_where_the_reader_still_stands(reading: Screens) -> None:
    for slip in ("210", "214", "220"):
        reading.choose("down the face", "Slip face bearing") if slip == "210" else None
        reading.read("Slip face bearing", slip)
        reading.save()
        reading.saved(f"{slip}°")
    reading.read("Slip face dip", "44")
    reading.save()
    reading.saved("44°")
    question = reading.page.locator(".last .question")
    expect(question).to_contain_text("44 deg is steeper")
    reading.button("Keep", question).click()
    expect(question).to_have_count(0)
    reading.go("Finding")
    expect(reading.page.locator(".sentence")).to_contain_text("3 readings on 1 dune")
    expect(reading.page.locator("svg.rose")).to_be_visible()
    assert "Readings: 2" in (reading.page.locator("svg.rose desc").text_content() or "")
    expect(reading.page.get_by_text("want a look")).to_have_count(0)


def test_the_look_is_chosen_and_kept(screens: Screens) -> None:
    screens.go("Hand over")
    screens.button("sunlit").click()
    screens.page.wait_for_timeout(200)
    screens.page.reload()
    expect(screens.page.locator("html[data-theme=sunlit]")).to_have_count(1)


def test_touched_things_are_large_enough_and_named(reading: Screens) -> None:
    sizes: list[dict[str, Any]] = []
    for place in ("Place", "Reading", "Finding", "Hand over"):
        reading.go(place)
        reading.page.wait_for_timeout(150)
        sizes += reading.page.evaluate(
            """() => [...document.querySelectorAll('button, select, input:not([type=file]):not(.figure), summary')]
            .filter((e) => e.getClientRects().length)
            .map((e) => ({what: e.outerHTML.slice(0, 90), height: e.getBoundingClientRect().height,
                          name: (e.ariaLabel ?? e.textContent).trim()}))"""
        )
    assert [item for item in sizes if item["height"] < 47.5] == []
    assert [item for item in sizes if not item["name"]] == []
    assert reading.page.evaluate("document.documentElement.scrollWidth") <= 360
