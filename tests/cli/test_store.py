"""`ergbook` on a store: loading, listing, checking, exporting, importing, and what it answers to nonsense."""

from __future__ import annotations

import json
import shutil
import socket
import sqlite3
from collections.abc import Iterator
from contextlib import contextmanager
from datetime import UTC, datetime
from pathlib import Path

import pytest

from fieldlog.cli.main import COMMANDS
from fieldlog.ledger.entry import write_text
from tests.cli.ergbook import ergbook, refused
from tests.imports import files
from tests.imports.test_notebook import packed

DEMO = "desertdem0"


@pytest.fixture(scope="module")
def loaded(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A data folder with the demonstration survey, loaded twice."""
    folder = tmp_path_factory.mktemp("cli") / "data"
    first = ergbook("demo", "--load-only", data_dir=folder)
    assert first.returncode == 0, first.stderr
    again = ergbook("demo", "--load-only", data_dir=folder)
    assert "0 of them new" in again.stdout
    return folder


@pytest.fixture
def store(loaded: Path, tmp_path: Path) -> Path:
    """A copy of it to change."""
    return shutil.copytree(loaded, tmp_path / "data")


@contextmanager
def opened(store: Path) -> Iterator[sqlite3.Connection]:
    connection = sqlite3.connect(store / "ergbook.sqlite")
    with connection:
        yield connection
    connection.close()


def test_the_surveys_are_listed_for_people_and_for_programs(loaded: Path) -> None:
    assert json.loads(ergbook("surveys", "--json", data_dir=loaded).stdout) == [
        {"id": DEMO, "name": "Orvassa sand sea, corridor 4", "observations": 371}
    ]
    assert "371  Orvassa sand sea, corridor 4" in ergbook("surveys", data_dir=loaded).stdout


def test_a_store_that_adds_up_is_said_to(loaded: Path) -> None:
    done = ergbook("check", data_dir=loaded)
    assert done.returncode == 0, done.stderr
    assert "the tables are what the ledger adds up to" in done.stdout


def assert_found(store: Path) -> None:
    """A line for each fault and one that says what to do."""
    done = ergbook("check", data_dir=store)
    assert done.returncode == 1
    *faults, last = done.stderr.splitlines()
    assert faults
    assert all(line.startswith(f"ergbook: survey {DEMO}, ") for line in faults)
    assert "Restore from a back-up" in last


@pytest.mark.parametrize(
    "damage",
    [
        "UPDATE observation SET crest_deg = crest_deg + 1 WHERE record = (SELECT record FROM observation WHERE crest_deg < 170 LIMIT 1)",
        "DELETE FROM observation WHERE record = (SELECT record FROM observation LIMIT 1)",
        "DELETE FROM ledger_entry WHERE seq = 100",
    ],
)
def test_a_changed_cell_a_dropped_row_and_a_lost_entry_are_found(store: Path, damage: str) -> None:
    with opened(store) as connection:
        assert connection.execute(damage).rowcount == 1
    assert_found(store)


def test_a_flipped_byte_of_the_ledger_is_found(store: Path) -> None:
    with opened(store) as connection:
        (text,) = connection.execute("SELECT text FROM ledger_entry WHERE seq = 200").fetchone()
        place = len(text) // 2
        flipped = text[:place] + chr(ord(text[place]) ^ 1) + text[place + 1 :]
        connection.execute("UPDATE ledger_entry SET text = ? WHERE seq = 200", (flipped,))
    assert_found(store)


@pytest.mark.parametrize("ending", ["gpkg", "geojson", "csv", "gpx"])
def test_a_survey_is_exported_by_its_name(loaded: Path, tmp_path: Path, ending: str) -> None:
    target = tmp_path / f"out.{ending}"
    done = ergbook("export", "Orvassa sand sea, corridor 4", "--to", str(target), data_dir=loaded)
    assert done.returncode == 0, done.stderr
    assert target.stat().st_size > 10_000


def test_what_cannot_be_exported_is_one_line_and_exit_2(loaded: Path, tmp_path: Path) -> None:
    assert ".gpkg" in refused(ergbook("export", DEMO, "--to", str(tmp_path / "out.xls"), data_dir=loaded), 2)
    assert "no survey" in refused(ergbook("export", "Nowhere", "--to", str(tmp_path / "out.csv"), data_dir=loaded), 2)
    assert "no such folder" in refused(ergbook("export", DEMO, "--to", str(tmp_path / "none" / "a.csv"), data_dir=loaded), 2)


def test_a_file_is_looked_at_then_imported(store: Path, tmp_path: Path) -> None:
    walk = tmp_path / "walk.gpx"
    walk.write_text(files.HANDHELD, encoding="utf-8")
    before = ergbook("import", DEMO, str(walk), "--preview", data_dir=store)
    assert before.returncode == 0, before.stderr
    assert "3 sites, 2 tracks" in before.stdout
    assert "3 sites, 2 tracks" in ergbook("import", DEMO, str(walk), data_dir=store).stdout
    assert "all of it is here already" in ergbook("import", DEMO, str(walk), data_dir=store).stdout
    assert ergbook("check", data_dir=store).returncode == 0


def test_parts_not_taken_are_named_and_exit_1(store: Path, tmp_path: Path) -> None:
    awkward = tmp_path / "awkward.gpx"
    awkward.write_text(files.IMPOSSIBLE, encoding="utf-8")
    done = ergbook("import", DEMO, str(awkward), data_dir=store)
    assert done.returncode == 1
    assert "latitude 91" in done.stderr
    awkward.write_text("name,latitude", encoding="utf-8")
    assert "not XML" in refused(ergbook("import", DEMO, str(awkward), data_dir=store), 2)


def test_a_phones_file_is_accepted(store: Path, tmp_path: Path) -> None:
    with opened(store) as connection:
        ((site,),) = connection.execute("SELECT record FROM site LIMIT 1").fetchall()
        ((lead,),) = connection.execute("SELECT record FROM crew WHERE lead LIMIT 1").fetchall()
    text = write_text(
        app="0.1.0", by=lead, survey=DEMO, kind="observation", hlc=f"{1:012x}.0000", made_at=datetime(2026, 7, 9, tzinfo=UTC),
        values={"site": site, "observed_at": "2026-07-09T05:06:07Z", "north": "true", "crest_read_deg": 44},
    )
    file = tmp_path / "lost-phone.ergbook"
    file.write_bytes(packed(DEMO, [("0" * 14 + "1", 1, text)]))
    assert "1 entry that base does not hold" in ergbook("import", DEMO, str(file), "--preview", data_dir=store).stdout
    done = ergbook("import", DEMO, str(file), data_dir=store)
    assert done.returncode == 0, done.stderr
    assert "Base holds all of it already" in ergbook("import", DEMO, str(file), data_dir=store).stdout
    assert ergbook("check", data_dir=store).returncode == 0


def test_a_busy_port_is_said_and_exit_1(tmp_path: Path) -> None:
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        port = taken.getsockname()[1]
        said = refused(ergbook("serve", "--port", str(port), data_dir=tmp_path / "data"), 1)
    assert f"127.0.0.1:{port}" in said
    assert "ERGBOOK_PORT" in said


def test_a_wrong_setting_is_named(tmp_path: Path) -> None:
    said = refused(ergbook("surveys", data_dir=tmp_path / "data", ERGBOOK_PORT="eighty"), 2)
    assert "ERGBOOK_PORT" in said


def test_help_names_every_command() -> None:
    said = ergbook("--help").stdout
    assert all(f"  {name} " in said for name in COMMANDS)
