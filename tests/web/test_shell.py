"""The phone's shell: one hash over all of it, served whole, old ones kept."""

from __future__ import annotations

import gzip
import json
import os
import re
import shutil
from pathlib import Path

import pytest
from flask import Flask
from flask.testing import FlaskClient

from fieldlog.web.app import create_app
from fieldlog.web.folders import static_folder
from fieldlog.web.settings import Settings
from fieldlog.web.shell_files import KEPT, PAGE, Shell, collect, module_paths, publish, read_published


def page(name: str, modules: object) -> str:
    return f"{name} {modules}"


@pytest.fixture
def static(tmp_path: Path) -> Path:
    return shutil.copytree(static_folder(), tmp_path / "static")


@pytest.fixture
def app(tmp_path: Path) -> Flask:
    return create_app(Settings(data_dir=tmp_path / "data", database_url=f"sqlite:///{tmp_path / 'store.sqlite'}"))


@pytest.fixture
def client(app: Flask) -> FlaskClient:
    return app.test_client()


def current(app: Flask) -> Shell:
    shell: Shell = app.extensions["ergbook_shell"]
    return shell


@pytest.mark.parametrize("path", ["js/ui/element.js", "css/phone.css", "icons/icon.svg", "manifest.webmanifest"])
def test_a_change_in_any_file_is_another_shell(static: Path, path: str) -> None:
    before = collect(static, "template", "1", page)
    assert path in before.files
    (static / path).write_bytes((static / path).read_bytes() + b"\n")
    assert collect(static, "template", "1", page).hash != before.hash


def test_template_and_version_are_part_of_the_hash_and_the_desk_is_not(static: Path) -> None:
    before = collect(static, "template", "1", page)
    assert collect(static, "template 2", "1", page).hash != before.hash
    assert collect(static, "template", "2", page).hash != before.hash
    (static / "css" / "desk.css").write_text("/* changed */")
    assert collect(static, "template", "1", page).hash == before.hash


def test_modules_are_all_that_the_phone_imports_and_the_workers_it_starts() -> None:
    modules = module_paths(static_folder())
    assert modules[0] == "js/phone.js"
    assert {"js/ui/reading.js", "js/science/summary_worker.js", "js/sheet/declared.js", "js/store/open.js"} <= set(modules)
    assert not [module for module in modules if "desk" in module or "fake" in module]


def test_every_file_of_the_shell_is_served_for_ever_under_its_hash(client: FlaskClient, app: Flask) -> None:
    shell = current(app)
    for path, content in shell.files.items():
        answer = client.get(f"/shell/{shell.hash}/{path}")
        assert answer.status_code == 200, path
        assert answer.data == content
        assert "immutable" in answer.headers["Cache-Control"]
        assert "require-trusted-types-for 'script'" in answer.headers["Content-Security-Policy"]
    assert client.get(f"/shell/{shell.hash}/js/phone.js").mimetype == "text/javascript"


def test_text_travels_compressed(client: FlaskClient, app: Flask) -> None:
    shell = current(app)
    answer = client.get(f"/shell/{shell.hash}/js/phone.js", headers={"Accept-Encoding": "gzip"})
    assert answer.headers["Content-Encoding"] == "gzip"
    assert gzip.decompress(answer.data) == shell.files["js/phone.js"]


def test_the_page_names_its_files_relatively_and_holds_no_inline_script(client: FlaskClient, app: Flask) -> None:
    answer = client.get("/phone/")
    assert answer.headers["Cache-Control"] == "no-cache"
    assert answer.data == current(app).files[PAGE]
    named = re.findall(r'(?:src|href)="([^"]+)"', answer.text)
    assert named
    assert all(name.startswith(f"../shell/{current(app).hash}/") for name in named)
    scripts = re.findall(r"<script([^>]*)>([^<]*)", answer.text)
    assert [text for kind, text in scripts if "application/json" not in kind and text.strip()] == []
    assert "<style" not in answer.text


def test_the_worker_is_told_the_shell_and_asked_for_anew_each_time(client: FlaskClient, app: Flask) -> None:
    answer = client.get("/sw.js")
    assert answer.headers["Cache-Control"] == "no-cache"
    told = json.loads(answer.text.partition("const SHELL = ")[2].partition(";\n")[0])
    assert told == {"hash": current(app).hash, "files": sorted(current(app).files)}


def test_an_earlier_shell_stays_served(client: FlaskClient, app: Flask) -> None:
    folder = Path(app.config["ERGBOOK"].data_dir) / "shells"
    publish(Shell("0123456789ab", {"js/old.js": b"old", PAGE: b"old page"}), folder)
    assert client.get("/shell/0123456789ab/js/old.js").data == b"old"
    assert client.get("/shell/0123456789ab/js/phone.js").status_code == 404
    assert client.get("/shell/fedcba987654/js/phone.js").status_code == 404


def test_only_the_newest_shells_are_kept(tmp_path: Path) -> None:
    for age in range(KEPT + 2):
        publish(Shell(f"{age:012x}", {PAGE: b"page"}), tmp_path)
        os.utime(tmp_path / f"{age:012x}", (age, age))
    publish(Shell("a" * 12, {PAGE: b"page"}), tmp_path)
    kept = {path.name for path in tmp_path.iterdir()}
    assert kept == {"a" * 12, *(f"{age:012x}" for age in range(3, KEPT + 2))}


@pytest.mark.parametrize("path", ["../../secret", "..%2f..%2fsecret", "/etc/passwd", "js"])
def test_nothing_outside_a_shell_is_read(tmp_path: Path, path: str) -> None:
    (tmp_path / "secret").write_text("secret")
    publish(Shell("0123456789ab", {"js/a.js": b"a"}), tmp_path / "shells")
    assert read_published(tmp_path / "shells", "0123456789ab", path) is None
    assert read_published(tmp_path / "shells", "..", "secret") is None
