"""Exporting as such: whole files or none, progress, a survey without data."""

from __future__ import annotations

from pathlib import Path

import pytest
from flask import Flask

from fieldlog.errors import Refusal
from fieldlog.exports.service import FORMATS, export
from fieldlog.ledger.names import new_device
from fieldlog.store.db import db
from tests.exports.conftest import layer
from tests.factories import Survey, send


@pytest.mark.parametrize("ending", [*FORMATS])
def test_a_survey_without_observations_is_a_whole_file(app: Flask, tmp_path: Path, ending: str) -> None:
    target = tmp_path / f"empty{ending}"
    with app.app_context():
        export(db.session, Survey().id, target)
    assert target.stat().st_size > 0
    if ending == ".gpkg":
        assert layer(target, "observations")[1] == []
        assert len(layer(target, "sites")[1]) == 1


def test_a_failed_export_leaves_the_old_file_and_nothing_beside_it(
    app: Flask, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    folder = tmp_path / "out"
    folder.mkdir()
    target = folder / "survey.csv"
    target.write_text("the one before")

    def stops(*_: object, **__: object) -> None:
        raise OSError("no space left on device")

    with app.app_context():
        survey = Survey().id
        monkeypatch.setattr("fieldlog.exports.csv_file.csv.writer", stops)
        with pytest.raises(OSError, match="no space"):
            export(db.session, survey, target)
    assert target.read_text() == "the one before"
    assert [path.name for path in folder.iterdir()] == ["survey.csv"]


def test_an_unknown_survey_and_a_missing_folder_are_said(app: Flask, tmp_path: Path) -> None:
    with app.app_context():
        survey = Survey().id
        with pytest.raises(Refusal, match="no such survey"):
            export(db.session, "0000000000", tmp_path / "a.csv")
        with pytest.raises(Refusal, match="no such folder"):
            export(db.session, survey, tmp_path / "none" / "a.csv")


def test_progress_counts_rows_up_to_all_of_them(app: Flask, tmp_path: Path) -> None:
    told: list[tuple[int, int]] = []
    with app.app_context():
        survey = Survey()
        send(survey, new_device(), survey.batch(range(1, 8)))
        export(db.session, survey.id, tmp_path / "a.csv", progress=lambda done, total: told.append((done, total)))
    assert told == [(7, 7)]
