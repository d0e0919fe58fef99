"""A phone's file: read, looked at, accepted; and every way in which it can be wrong."""

from __future__ import annotations

import base64
import gzip
import hashlib
import io
import json
from pathlib import Path
from typing import Any

import pytest
from flask import Flask
from PIL import Image
from sqlalchemy import select

from fieldlog.imports.accepting import UNKNOWN, accept, look
from fieldlog.imports.found import ImportFileError
from fieldlog.imports.notebook import Notebook, read_notebook
from fieldlog.ledger.names import new_device
from fieldlog.review.service import history
from fieldlog.store.db import db
from fieldlog.store.photos import PhotoFolder
from fieldlog.store.rebuild import check
from fieldlog.store.tables import LedgerEntry, SetAside, observations
from fieldlog.store.transaction import write
from tests.factories import Survey, send

DEVICE = new_device()


def picture() -> tuple[str, bytes]:
    made = io.BytesIO()
    Image.new("RGB", (16, 12), "red").save(made, "JPEG")
    return hashlib.sha256(made.getvalue()).hexdigest(), made.getvalue()


def packed(survey: str, entries: list[tuple[str, int, str]], photos: dict[str, bytes] | None = None, **head: Any) -> bytes:
    told = {"file": "ergbook notebook", "v": 1, "survey": survey, "name": "Test", "device": DEVICE, "crew_name": "Ysolde", "made_at": "2026-07-08T05:00:00.000Z"}
    lines: list[Any] = [{**told, **head}, *({"device": d, "n": n, "text": t} for d, n, t in entries)]
    lines += [{"photo": name, "base64": base64.b64encode(data).decode()} for name, data in (photos or {}).items()]
    return gzip.compress("".join(json.dumps(line) + "\n" for line in lines).encode())


@pytest.fixture
def survey(app: Flask) -> Any:
    with app.app_context():
        yield Survey()


@pytest.fixture
def folder(tmp_path: Path) -> PhotoFolder:
    return PhotoFolder(tmp_path / "photos")


def taken(survey: Survey, notebook: Notebook, folder: PhotoFolder) -> Any:
    with write() as session:
        return accept(session, survey.id, survey.lead, "Lead", notebook, folder)


def test_what_base_lacks_is_taken_and_marked_with_who_accepted_it(survey: Survey, folder: PhotoFolder) -> None:
    send(survey, DEVICE, survey.batch(range(1, 3)))
    texts = [survey.text(n) for n in range(1, 6)]
    name, data = picture()
    notebook = read_notebook(packed(survey.id, [(DEVICE, n, text) for n, text in enumerate(texts, start=1)], {name: data}))
    plan = look(db.session, survey.id, notebook, folder)
    assert (plan.devices[0].already, plan.devices[0].fresh, plan.photos) == (2, 3, 1)
    assert db.session.scalars(select(observations.c.record)).all() == [f"{DEVICE}-1", f"{DEVICE}-2"]
    taken(survey, notebook, folder)
    marks = db.session.execute(select(LedgerEntry.n, LedgerEntry.accepted_by).where(LedgerEntry.device == DEVICE).order_by(LedgerEntry.n)).all()
    assert [tuple(mark) for mark in marks] == [(1, None), (2, None), *((n, survey.lead) for n in (3, 4, 5))]
    assert history(db.session, survey.id, f"{DEVICE}-4")[0].accepted_by == "Lead"
    assert folder.read(survey.id, name) == data
    assert list(check(db.session)) == []


def test_the_same_file_twice_and_a_hand_over_after_it_change_nothing(survey: Survey, folder: PhotoFolder) -> None:
    texts = [survey.text(n) for n in range(1, 4)]
    notebook = read_notebook(packed(survey.id, [(DEVICE, n, text) for n, text in enumerate(texts, start=1)]))
    taken(survey, notebook, folder)
    before = db.session.scalars(select(LedgerEntry.seq)).all()
    assert taken(survey, notebook, folder).fresh == 0
    assert send(survey, DEVICE, survey.batch(range(1, 4))) == ["already"] * 3
    assert db.session.scalars(select(LedgerEntry.seq)).all() == before


def test_a_bad_entry_is_set_aside_and_stops_no_other(survey: Survey, folder: PhotoFolder) -> None:
    bad = survey.text(2, {"site": survey.site, "observed_at": "2026-07-08T05:00:00Z", "crest_read_deg": 400})
    notebook = read_notebook(packed(survey.id, [(DEVICE, 1, survey.text(1)), (DEVICE, 2, bad), (DEVICE, 3, survey.text(3))]))
    assert "will be set aside" in look(db.session, survey.id, notebook, folder).devices[0].problems[0]
    taken(survey, notebook, folder)
    assert db.session.scalars(select(SetAside.n)).all() == [2]
    assert len(db.session.scalars(select(observations.c.record)).all()) == 2


def test_an_entry_that_differs_from_bases_is_said_and_left(survey: Survey, folder: PhotoFolder) -> None:
    send(survey, DEVICE, survey.batch(range(1, 2)))
    notebook = read_notebook(packed(survey.id, [(DEVICE, 1, survey.text(99)), (DEVICE, 2, survey.text(2))]))
    plan = taken(survey, notebook, folder)
    assert "differs" in plan.devices[0].problems[0]
    assert db.session.scalar(select(LedgerEntry.text).where(LedgerEntry.device == DEVICE, LedgerEntry.n == 1)) == survey.text(1)


def test_a_hole_in_the_file_is_said(survey: Survey, folder: PhotoFolder) -> None:
    plan = taken(survey, read_notebook(packed(survey.id, [(DEVICE, 1, survey.text(1)), (DEVICE, 3, survey.text(3))])), folder)
    assert "numbers are missing" in plan.devices[0].problems[0]
    plan = taken(survey, read_notebook(packed(survey.id, [(DEVICE, 3, survey.text(3))])), folder)
    assert "are missing" in plan.devices[0].problems[0]
    assert db.session.scalars(select(observations.c.record)).all() == []


def test_a_device_that_never_joined_is_named_so(survey: Survey, folder: PhotoFolder) -> None:
    plan = look(db.session, survey.id, read_notebook(packed(survey.id, [(DEVICE, 1, survey.text(1))])), folder)
    assert plan.devices[0].standing == UNKNOWN


def test_a_notebook_of_another_survey_is_refused(survey: Survey, folder: PhotoFolder) -> None:
    with pytest.raises(ImportFileError, match="another survey"):
        look(db.session, survey.id, read_notebook(packed("0000000000", [])), folder)


def test_a_damaged_photo_is_said_and_not_kept(survey: Survey, folder: PhotoFolder) -> None:
    name, data = picture()
    plan = taken(survey, read_notebook(packed(survey.id, [(DEVICE, 1, survey.text(1))], {name: data[:-40]})), folder)
    assert plan.photo_problems
    assert folder.size(survey.id, name) is None


WHOLE = packed("0000000000", [(DEVICE, 1, "x" * 3000)], {"0" * 64: b"abc"})


@pytest.mark.parametrize(
    ("data", "said"),
    [
        (b"", "damaged"), (b"not a notebook\n", "damaged"), (b"{}\n", "no phone's notebook"), (WHOLE[: len(WHOLE) // 2], "cut off"),
        (WHOLE[:-12], "cut off"), (b"\x1f\x8bgarbage", "cut off"), (packed("0000000000", [], v=99), "newer app"),
        (gzip.decompress(WHOLE)[:-5], "cut off"), (packed("0000000000", [("me", 1, "x")]), "no entry"),
        (packed("0000000000", [(DEVICE, 0, "x")]), "number"),
    ],
)
def test_a_file_that_is_none_is_said(data: bytes, said: str) -> None:
    with pytest.raises(ImportFileError) as refused:
        read_notebook(data)
    assert said in str(refused.value)
    assert refused.value.mend


def test_a_file_cut_at_any_byte_is_noticed() -> None:
    for cut in range(1, len(WHOLE), 7):
        with pytest.raises(ImportFileError):
            read_notebook(WHOLE[:cut])
