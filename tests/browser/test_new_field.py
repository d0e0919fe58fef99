"""A field that nobody foresaw, added to a copy of the repository in the one place where fields stand.

It then has to turn up in the phone's form, in the store, in every export and in the dictionary.
What the field is differs from run to run; the seed of the run (pytest-randomly prints it) brings it back.
"""

from __future__ import annotations

import csv
import json
import os
import random
import shutil
import sqlite3
import subprocess
import sys
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import gpxpy
import pyogrio.raw
import pytest
from playwright.sync_api import Page, expect

from tests.browser import walk
from tests.browser.conftest import Phone
from tests.conftest import ROOT, Server

PARTS = ("fieldlog", "static", "templates", "demo_survey")
LETTERS = "bcdfghjklmnprstvz"


@dataclass(frozen=True)
class MadeUp:
    """A field, how it is declared, what is filled in, and the value that this means."""

    name: str
    label: str
    type: str
    measure: bool
    typed: str
    value: Any

    @property
    def declaration(self) -> str:
        more = {
            "number": 'unit="kPa", minimum=0, maximum=900, decimals=2, ', "integer": "minimum=0, maximum=900, ",
            "choice": 'vocabulary="sorting", ',
        }.get(self.type, "")
        return (
            f'Field(name="{self.name}", type="{self.type}", label="{self.label}", group="record", {more}'
            f'measure={self.measure}, help="Made up: {self.name}."),'
        )


def made_up() -> MadeUp:
    word = "".join(random.choice(LETTERS) + random.choice("aeiou") for _ in range(4))
    kind = random.choice(["number", "integer", "direction", "orientation", "choice", "text", "flag", "time", "names"])
    number = random.randrange(1, 179)
    typed, value = {
        "number": (f"{number}.25", number + 0.25), "integer": (str(number), number), "direction": (str(number), number),
        "orientation": (str(number), number), "choice": ("well sorted", "well"), "text": (f"سهل {number}", f"سهل {number}"),
        "flag": ("", True), "time": ("2026-03-04T05:06:07", "2026-03-04T05:06:07Z"),
        "names": ("ab, cd", ["ab", "cd"]),
    }[kind]
    measure = kind in ("number", "integer", "direction", "orientation", "choice") and random.random() < 0.5
    return MadeUp(word, word.capitalize(), kind, measure, str(typed), value)


def run(copy: Path, *command: str, **environment: str) -> str:
    done = subprocess.run(
        [sys.executable, "-m", *command], cwd=copy, capture_output=True, text=True, encoding="utf-8", check=False,
        timeout=120, env={**os.environ, "PYTHONPATH": str(copy), **environment},
    )
    assert done.returncode == 0, done.stderr
    return done.stdout


@pytest.fixture
def copy(tmp_path: Path) -> Path:
    """The repository's own files, to be changed."""
    target = tmp_path / "copy"
    for part in PARTS:
        shutil.copytree(ROOT / part, target / part, ignore=shutil.ignore_patterns("__pycache__"))
    return target


def declare(copy: Path, field: MadeUp) -> None:
    """The edit that DEVELOPERS.md describes, and its two commands."""
    sheet = copy / "fieldlog" / "sheet" / "observation.py"
    text = sheet.read_text(encoding="utf-8")
    before = '        Field(name="note",'
    assert text.count(before) == 1
    sheet.write_text(text.replace(before, f"        {field.declaration}\n{before}"), encoding="utf-8")
    run(copy, "fieldlog.sheet.generate")
    versions = set((copy / "fieldlog/store/migrations/versions").glob("*.py"))
    run(copy, "fieldlog.cli.main", "migration", field.name)
    added = set((copy / "fieldlog/store/migrations/versions").glob("*.py")) - versions
    assert len(added) == 1
    assert field.name in added.pop().read_text(encoding="utf-8")


def fill_in(page: Page, field: MadeUp) -> None:
    opens = page.get_by_role("button", name=field.label if field.measure else "Record").first
    if opens.get_attribute("aria-expanded") == "false":
        opens.click()
    if field.type == "choice":
        page.get_by_role("group", name=field.label, exact=True).locator(f"[data-value={field.value}]").click()
    elif field.type == "flag":
        page.get_by_role("checkbox", name=field.label).check()
    else:
        page.get_by_label(f"{field.label}, UTC" if field.type == "time" else field.label, exact=True).fill(field.typed)


@pytest.mark.timeout(240)
def test_a_made_up_field_arrives_everywhere(
    copy: Path, new_server: Callable[..., Server], new_phone: Callable[..., Phone], desk: Page, tmp_path: Path
) -> None:
    field = made_up()
    declare(copy, field)
    server = new_server(root=copy).start(PYTHONPATH=str(copy))
    walk.become_lead(desk, server.log())
    survey = walk.create_survey(desk, server.address, name="Made up", time_zone="Etc/GMT-4", target_half_width_deg="10")
    walk.add_site(desk, server.address, survey, name="Comb 1", lat_deg="-19.9462", lon_deg="66.0318")
    code = walk.joining_code(desk, server.address, survey)

    page = new_phone().open(f"{server.address}/phone/#join={code}")
    walk.join_by_name(page, "Ysolde")
    walk.choose_site(page, "Comb 1")
    walk.type_number(page, "Crest bearing", "052")
    walk.say(page, "Read from", "magnetic")
    fill_in(page, field)
    walk.save(page)
    expect(page.locator("button.save")).to_contain_text("Saved")
    walk.go(page, "Hand over")
    expect(page.get_by_text("base has everything")).to_be_visible(timeout=30_000)

    check_store(server, field)
    check_exports(copy, server, survey, field, tmp_path)
    desk.goto(f"{server.address}/dictionary#observation-{field.name}")
    expect(desk.locator(f"#observation-{field.name}")).to_contain_text(f"Made up: {field.name}.")
    run(copy, "fieldlog.cli.main", "check", ERGBOOK_DATA_DIR=str(server.data_dir))


def check_store(server: Server, field: MadeUp) -> None:
    store = sqlite3.connect(server.data_dir / "ergbook.sqlite")
    (kept,) = store.execute(f"SELECT {field.name} FROM observation").fetchone()
    said = [json.loads(text)["set"] for (text,) in store.execute("SELECT text FROM ledger_entry")]
    store.close()
    assert field.value in [entry[field.name] for entry in said if field.name in entry], field
    if field.type == "time":
        assert str(kept).startswith("2026-03-04 05:06:07"), field
    else:
        assert (json.loads(kept) if field.type == "names" else kept) == field.value, field


def check_exports(copy: Path, server: Server, survey: str, field: MadeUp, folder: Path) -> None:
    files = {ending: folder / f"out.{ending}" for ending in ("csv", "geojson", "gpx", "gpkg")}
    for file in files.values():
        run(copy, "fieldlog.cli.main", "export", survey, "--to", str(file), ERGBOOK_DATA_DIR=str(server.data_dir))
    with files["csv"].open(encoding="utf-8-sig", newline="") as text:
        (row,) = csv.DictReader(text)
    (feature,) = json.loads(files["geojson"].read_text(encoding="utf-8"))["features"]
    assert feature["properties"][field.name] == field.value, field
    meta, _, _, columns = pyogrio.raw.read(files["gpkg"], layer="observations")
    cell = columns[list(meta["fields"]).index(field.name)][0]
    told = gpxpy.parse(files["gpx"].read_text(encoding="utf-8")).waypoints[-1].description or ""
    assert f"{field.label}: " in told, field
    if field.type in ("number", "integer", "direction", "orientation"):
        assert float(row[field.name]) == cell == field.value, field
        assert f"{field.label}: {field.value:g}" in told, field
    elif field.type in ("choice", "text"):
        assert row[field.name] == cell == field.value, field
        assert f"{field.label}: {field.typed}" in told, field
    else:
        assert row[field.name], field
        assert cell, field
    meta, _, _, columns = pyogrio.raw.read(files["gpkg"], layer="data_dictionary")
    assert any(field.name in set(column) for column in columns), field
