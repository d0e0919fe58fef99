"""The demonstration survey, exported once in every format, and a survey of awkward readings."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import pyogrio.raw
import pytest
from flask import Flask
from sqlalchemy import select

from fieldlog.exports.service import FORMATS, export
from fieldlog.store.append import prepare
from fieldlog.store.db import db
from fieldlog.store.photos import PhotoFolder
from fieldlog.store.tables import observations
from fieldlog.store.transaction import write
from fieldlog.surveys.ledger_file import load_ledger
from fieldlog.web.app import create_app
from fieldlog.web.settings import Settings
from tests.conftest import ROOT
from tests.factories import Survey, send

Table = list[dict[str, Any]]


@dataclass(frozen=True)
class Exported:
    """Files by ending, and the rows that the store holds."""

    files: dict[str, Path]
    rows: Table


def write_all(survey: str, folder: Path) -> Exported:
    files = {ending: folder / f"survey{ending}" for ending in FORMATS}
    for target in files.values():
        export(db.session, survey, target)
    found = db.session.execute(select(observations).where(observations.c.survey == survey)).mappings()
    return Exported(files, [dict(row) for row in found])


@pytest.fixture(scope="session")
def demo(tmp_path_factory: pytest.TempPathFactory) -> Exported:
    folder = tmp_path_factory.mktemp("demo-exports")
    app = create_app(Settings(data_dir=folder, database_url=f"sqlite:///{folder / 'store.sqlite'}"))
    with app.app_context():
        with write() as session:
            loaded = load_ledger(session, ROOT / "demo_survey", PhotoFolder(folder / "photos"))
        made = write_all(loaded.survey, folder)
        db.engine.dispose()
    return made


AWKWARD = [
    {"note": '=HYPERLINK("x")', "crest_read_deg": 30, "lat_deg": 20.0, "lon_deg": 179.9999},
    {"note": 'two\nlines, "quoted"; \u0631\u0645\u0644', "crest_read_deg": 90, "lat_deg": -89.5, "lon_deg": 0.0},
    {"note": "no place", "crest_read_deg": 10},
    {"note": "crossed out", "crossed_out": "wrong dune", "crest_read_deg": 20, "lat_deg": 20.0, "lon_deg": 10.0},
    {"note": "\x0b vertical tab", "slip_face_read_deg": {"absent": "none_here"}, "lat_deg": 20.0, "lon_deg": 10.0},
]


@pytest.fixture
def awkward(app: Flask, tmp_path: Path) -> Iterator[Exported]:
    with app.app_context():
        survey = Survey()
        base = {"site": survey.site, "observed_at": "2026-03-04T05:06:07Z", "north": "true", "bedform": 1}
        texts = [survey.text(n, {**base, **more}) for n, more in enumerate(AWKWARD, start=1)]
        batch = [prepare(survey.id, n, text) for n, text in enumerate(texts, start=1)]
        assert set(send(survey, "0" * 14 + "1", batch)) == {"stored"}
        yield write_all(survey.id, tmp_path)


def layer(file: Path, name: str | None = None) -> tuple[Any, Table]:
    """GDAL's reading of a layer: (geometries as WKB, rows)."""
    meta, _, geometry, columns = pyogrio.raw.read(file, layer=name)
    names = list(meta["fields"])
    count = len(columns[0]) if columns else 0
    return geometry, [{name: columns[i][row] for i, name in enumerate(names)} for row in range(count)]
