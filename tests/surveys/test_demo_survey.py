"""The demonstration survey: it loads, once, and its sites are of the character that its README says."""

from __future__ import annotations

import hashlib
import json
import shutil
import subprocess
import sys
from collections import defaultdict
from collections.abc import Callable, Iterator
from functools import cache
from pathlib import Path
from typing import Any

import gpxpy
import pytest
from flask import Flask
from sqlalchemy import func, select

from fieldlog.ledger.entry import Entry
from fieldlog.ledger.merge import merge
from fieldlog.ledger.project import project
from fieldlog.science.summary import summarise
from fieldlog.sheet.check import questions
from fieldlog.sheet.fields import absent_column
from fieldlog.sheet.question import Question
from fieldlog.sheet.sample import samples
from fieldlog.store.db import db
from fieldlog.store.photos import PhotoFolder
from fieldlog.store.rebuild import check
from fieldlog.store.tables import (
    SetAside,
    SurveyCounter,
    TwoVersions,
    crew,
    observations,
    photos,
    sites,
    tracks,
)
from fieldlog.store.transaction import write
from fieldlog.surveys.ledger_file import (
    LedgerFileError,
    Loaded,
    load_ledger,
    read_folder,
)

FOLDER = Path(__file__).resolve().parents[2] / "demo_survey"
CAST = json.loads((FOLDER / "cast.json").read_text(encoding="utf-8"))


def load(folder: Path, kept: Path) -> Loaded:
    with write() as session:
        return load_ledger(session, folder, PhotoFolder(kept))


@pytest.fixture
def loaded(app: Flask, tmp_path: Path) -> Iterator[Loaded]:
    with app.app_context():
        yield load(FOLDER, tmp_path / "photos")


@cache
def said() -> dict[str, list[dict[str, Any]]]:
    """Kind -> the rows that the folder's ledger adds up to, without a database."""
    entries: dict[str, list[Entry]] = defaultdict(list)
    for device, run in read_folder(FOLDER).runs:
        for item in run:
            entry = item.entry(device)
            entries[entry.record].append(entry)
    made: dict[str, list[dict[str, Any]]] = defaultdict(list)
    for of_record in entries.values():
        made[of_record[0].kind].append(project(merge(of_record)))
    return made


def rows(site: str) -> list[dict[str, Any]]:
    return [row for row in said()["observation"] if row["site"] == CAST["sites"][site]]


def test_the_files_are_what_the_script_makes() -> None:
    done = subprocess.run(
        [sys.executable, str(FOLDER / "make.py"), "--check"], capture_output=True, text=True, check=False
    )
    assert done.returncode == 0, done.stderr


def test_all_of_it_stays_under_two_megabytes() -> None:
    files = [path for path in FOLDER.rglob("*") if path.is_file() and "__pycache__" not in path.parts]
    assert sum(path.stat().st_size for path in files) < 2_000_000
    assert all(path.stat().st_size <= 40_000 for path in (FOLDER / "photos").iterdir())


def test_loading_twice_changes_nothing(loaded: Loaded, tmp_path: Path) -> None:
    assert loaded.entries_new == loaded.entries > 350
    assert (loaded.photos, loaded.photos_new) == (5, 5)
    before = db.session.scalar(select(SurveyCounter.seq))
    again = load(FOLDER, tmp_path / "photos")
    assert (again.entries, again.entries_new, again.photos_new) == (loaded.entries, 0, 0)
    assert db.session.scalar(select(SurveyCounter.seq)) == before == loaded.entries
    assert list(check(db.session)) == []


def test_it_holds_what_a_survey_holds(loaded: Loaded) -> None:
    def count(table: Any, *where: Any) -> int:
        return db.session.scalar(select(func.count()).select_from(table).where(*where)) or 0

    assert (count(sites), count(crew), count(tracks), count(photos)) == (8, 5, 2, 5)
    assert count(observations, observations.c.bedform.is_not(None), observations.c.check_of.is_(None)) >= 300
    assert count(observations, observations.c.check_of.is_not(None)) == len(CAST["check_readings"]) == 8
    assert count(observations, observations.c.crossed_out.is_not(None)) == 4
    assert count(observations, observations.c.lat_deg.is_(None)) == 2
    assert count(SetAside) == 0
    doubtful = db.session.scalars(select(TwoVersions)).one()
    assert (doubtful.field, len(doubtful.versions)) == ("grain_class", 2)


def test_five_phones_read_on_three_days_and_only_forwards() -> None:
    found = [(row["made_on"], row["observed_at"]) for row in said()["observation"]]
    assert len({device for device, _ in found}) == 5
    assert len({when.date() for _, when in found}) == 3
    for device in {device for device, _ in found}:
        times = [when for made_on, when in found if made_on == device]
        assert times == sorted(times)


def test_the_stony_site_answers_none_here() -> None:
    for row in rows("hesk"):
        assert row["bedform"] is None
        assert row["slip_face_read_deg"] is None
        assert row[absent_column("slip_face_read_deg")] == "none_here"
        assert row["surface_type"]
        assert row["stone_cover_percent"]
        assert row["landform"]


@pytest.mark.parametrize(
    ("site", "measure", "face", "outcomes", "enough"),
    [
        ("tamrel", "slip_face_deg", "main", {"one"}, True),
        ("tamrel", "crest_deg", "main", {"one"}, True),
        ("ushkar", "slip_face_deg", "main", {"two"}, False),
        ("belq", "slip_face_deg", "main", {"spread", "three_or_more"}, False),
        ("sorrel", "slip_face_deg", "main", {"too_few"}, False),
        ("turnback", "slip_face_deg", "main", {"one"}, True),
        ("lomar", "slip_face_deg", "main", {"two_opposed"}, False),
        ("lomar", "crest_deg", "main", {"one"}, True),
    ],
)
def test_each_site_is_of_its_character(
    site: str, measure: str, face: str, outcomes: set[str], enough: bool
) -> None:
    sample = samples(rows(site), measure)[0]
    assert sample.face == face
    found = summarise(
        sample.angles, bedforms=sample.bedforms, axial=measure == "crest_deg", target_deg=10, spacing=False
    )
    assert found.outcome in outcomes, found.finding
    assert found.enough is enough, found.finding


def test_reversed_caps_face_the_other_way() -> None:
    main, caps = samples(rows("turnback"), "slip_face_deg")
    assert (main.face, caps.face) == ("main", "reversed_cap")
    facing, cap_facing = (
        summarise(sample.angles, bedforms=sample.bedforms, spacing=False).mean_direction_deg for sample in (main, caps)
    )
    assert facing is not None
    assert cap_facing is not None
    assert (facing - cap_facing) % 360 == pytest.approx(180, abs=15)


@pytest.mark.parametrize("site", ["tamrel", "sorrel", "turnback"])
def test_dunes_differ_by_more_than_readings_on_one_dune(site: str) -> None:
    sample = samples(rows(site), "slip_face_deg")[0]
    found = summarise(sample.angles, bedforms=sample.bedforms, spacing=False)
    assert found.between_bedform_sd_deg is not None
    assert found.within_bedform_sd_deg is not None
    assert found.between_bedform_sd_deg > found.within_bedform_sd_deg


def asked() -> list[Question]:
    return questions(said()["observation"], sites=said()["site"], time_zone="Etc/GMT-4")


def test_every_seeded_slip_is_asked_about() -> None:
    told: set[tuple[str, str]] = set()
    for question in asked():
        # An instrument's day is asked about once, for all its readings.
        concerned = question.other_records if question.code == "wrong_north" else ()
        told |= {(record, question.code) for record in (question.record, *concerned)}
    assert set(CAST["seeded"].items()) <= told


def test_hardly_any_other_reading_draws_a_question() -> None:
    unseeded = {question.record for question in asked()} - set(CAST["seeded"])
    assert len(unseeded) <= 0.02 * (len(said()["observation"]) - len(CAST["seeded"]))


def test_the_walks_are_gpx_and_cover_the_readings_without_a_fix() -> None:
    walked = gpxpy.parse((FOLDER / "tracks" / "tome-8-july.gpx").read_text(encoding="utf-8"))
    bounds = walked.get_time_bounds()
    assert bounds.start_time
    assert bounds.end_time
    unplaced = [row for row in rows("lomar") if row["lat_deg"] is None]
    assert len(unplaced) == 2
    for row in unplaced:
        assert bounds.start_time < row["observed_at"] < bounds.end_time
    listed = gpxpy.parse((FOLDER / "sites.gpx").read_text(encoding="utf-8"))
    assert {point.name for point in listed.waypoints} == {site["name"] for site in said()["site"]}


def _cut_last_line(folder: Path) -> None:
    path = folder / "ledger.jsonl"
    path.write_bytes(b"\n".join(path.read_bytes().splitlines()[:-1]) + b"\n")


def _swap(name: str, old: bytes, new: bytes) -> Callable[[Path], None]:
    def swap(folder: Path) -> None:
        data = (folder / name).read_bytes()
        assert old in data
        (folder / name).write_bytes(data.replace(old, new, 1))

    return swap


@pytest.mark.parametrize(
    ("damage", "told"),
    [
        (_cut_last_line, "ledger.jsonl: holds"),
        (_swap("ledger.jsonl", b"Tom", b"Tim"), "does not match its hash"),
        (_swap("ledger.jsonl", b'{"device"', b'{"devise"'), "ledger.jsonl line 1"),
        (_swap("manifest.json", b"{", b""), "manifest.json: is not JSON"),
        (_swap("manifest.json", b'"entries"', b'"entrees"'), "is not an object of"),
        (_swap("photos/belq-star-3.jpg", b"\xff\xd8", b"\xff\xd9"), "photos/belq-star-3.jpg"),
        (lambda folder: (folder / "photos" / "belq-star-3.jpg").unlink(), "cannot be read"),
        (lambda folder: (folder / "ledger.jsonl").unlink(), "cannot be read"),
    ],
)
def test_a_damaged_folder_is_refused(tmp_path: Path, damage: Callable[[Path], None], told: str) -> None:
    folder = tmp_path / "demo"
    shutil.copytree(FOLDER, folder)
    damage(folder)
    with pytest.raises(LedgerFileError, match=told) as caught:
        read_folder(folder)
    assert caught.value.mend


def test_a_damaged_folder_leaves_nothing_behind(app: Flask, tmp_path: Path) -> None:
    folder = tmp_path / "demo"
    shutil.copytree(FOLDER, folder)
    (folder / "photos" / "tamrel-ridge-4.jpg").write_bytes(b"no photo")
    with app.app_context():
        with pytest.raises(LedgerFileError):
            load(folder, tmp_path / "photos")
        assert db.session.scalar(select(func.count()).select_from(SurveyCounter)) == 0
    assert not (tmp_path / "photos").exists()


def test_other_line_endings_are_the_same_ledger(tmp_path: Path) -> None:
    folder = tmp_path / "demo"
    shutil.copytree(FOLDER, folder)
    ledger = folder / "ledger.jsonl"
    ledger.write_bytes(ledger.read_bytes().replace(b"\n", b"\r\n"))
    assert read_folder(folder) == read_folder(FOLDER)


def test_another_entry_under_a_known_name_is_refused(loaded: Loaded, tmp_path: Path) -> None:
    folder = tmp_path / "forged"
    shutil.copytree(FOLDER, folder)
    ledger, manifest = folder / "ledger.jsonl", folder / "manifest.json"
    lines = ledger.read_bytes().replace(b"cairn on the north horn", b"cairn on the south horn")
    ledger.write_bytes(lines)
    held = json.loads(manifest.read_text(encoding="utf-8"))
    held["ledger_sha256"] = hashlib.sha256(lines.removesuffix(b"\n")).hexdigest()
    manifest.write_text(json.dumps(held), encoding="utf-8")
    with pytest.raises(LedgerFileError, match="another entry under this name"):
        load(folder, tmp_path / "photos")
