"""A real store process that is killed (SIGKILL) while phones hand over, again and again."""

from __future__ import annotations

import http.client
import json
import random
import signal
import sqlite3
import threading
import time
import urllib.error
import urllib.request
from collections import Counter
from pathlib import Path

from fieldlog.ledger.names import new_device
from tests.conftest import Server
from tests.faults.twin import Answer, Send, Twin

PHONES, SAVED_A_ROUND = 4, 60
TIMEOUT_S = 5


def ask(address: str, token: str = "") -> Send:
    """Real HTTP; None where nobody answered."""

    def send(method: str, path: str, body: object) -> Answer | None:
        data = None if body is None else json.dumps(body).encode()
        request = urllib.request.Request(
            address + path, data=data, method=method, headers={"Content-Type": "application/json", "Authorization": f"Bearer {token}"}
        )
        try:
            with urllib.request.urlopen(request, timeout=TIMEOUT_S) as answer:
                return Answer(answer.status, json.loads(answer.read()))
        except urllib.error.HTTPError as error:
            try:
                return Answer(error.code, json.loads(error.read()))
            except (OSError, ValueError, http.client.HTTPException):
                return None
        except (OSError, ValueError, http.client.HTTPException):
            return None

    return send


def join(server: Server, code: str, name: str) -> tuple[Twin, Send]:
    """A phone that joins over HTTP, and its line to the survey."""
    device = new_device()
    made = ask(server.address)("POST", "/api/v1/joining", {"code": code, "device": device, "app": "0.1.0", "name": name})
    assert made is not None
    assert made.status in (200, 201), made
    survey = made.body["survey"]["id"]
    twin = Twin(survey, device, made.body["crew"], made.body["store"], made.body["epoch"])
    plain = ask(server.address, made.body["token"])

    def line(method: str, path: str, body: object) -> Answer | None:
        return plain(method, path if path.startswith("/") else f"/api/v1/surveys/{survey}/{path}", body)  # type: ignore[arg-type]

    return twin, line


def site_of(twin: Twin) -> str:
    return next(entry.name for entry in twin.heard.values() if entry.kind == "site")


def save(twin: Twin, count: int) -> None:
    for i in range(count):
        twin.say({"site": site_of(twin), "observed_at": "2026-07-08T05:06:07Z", "north": "true", "crest_read_deg": i % 180})


def hand_over(twin: Twin, line: Send, stop: threading.Event, size: int) -> None:
    """Push until there is nothing left or somebody says stop; a failure waits a little and tries again."""
    while twin.unsent and not stop.is_set():
        if not twin.push(line, size):
            time.sleep(0.05)


def run(server: Server, code: str, rounds: int, seed: int, met: Counter[str]) -> None:
    """Kill the store in every round while all phones hand over; then let it live and look at what is there.

    AssertionError where something acknowledged is gone, or anything is there twice or not at all.
    """
    source = random.Random(seed)
    phones = [join(server, code, f"Phone {i}") for i in range(PHONES)]
    for twin, line in phones:
        twin.pull(line, 500)
    for _ in range(rounds):
        stop = threading.Event()
        for twin, _line in phones:
            save(twin, SAVED_A_ROUND)
        threads = [threading.Thread(target=hand_over, args=(twin, line, stop, source.choice([1, 5, 20]))) for twin, line in phones]
        for thread in threads:
            thread.start()
        time.sleep(source.uniform(0.0, 0.4))
        server.stop(signal.SIGKILL)
        stop.set()
        for thread in threads:
            thread.join()
        met["store killed while phones hand over"] += 1
        acknowledged = {(twin.device, n) for twin, _ in phones for n in range(1, twin.acked + 1)}
        assert acknowledged <= stored(server.data_dir, phones[0][0].survey), "I5: something acknowledged is gone"
        server.start()
    for twin, line in phones:
        hand_over(twin, line, threading.Event(), 500)
    saved = {(twin.device, n) for twin, _ in phones for n in range(1, len(twin.own) + 1)}
    assert saved == {key for key in stored(server.data_dir, phones[0][0].survey) if key[0] in {twin.device for twin, _ in phones}}, "I2"


def stored(folder: Path, survey: str) -> set[tuple[str, int]]:
    """(device, n) of every entry in the file, read while no store runs or beside one."""
    store = sqlite3.connect(folder / "ergbook.sqlite")
    found = store.execute("SELECT device, n FROM ledger_entry WHERE survey = ?", (survey,)).fetchall()
    store.close()
    assert len(found) == len(set(found))
    return set(found)


def set_up(data_dir: Path) -> str:
    """A survey with a site in a store that does not run yet; a joining code."""
    from fieldlog.people.service import make_joining_code
    from fieldlog.store.db import db
    from fieldlog.store.transaction import write
    from fieldlog.surveys.service import create_survey, put_site
    from fieldlog.web.app import create_app
    from fieldlog.web.settings import Settings

    app = create_app(Settings(data_dir=data_dir, database_url=f"sqlite:///{data_dir / 'ergbook.sqlite'}"))
    with app.app_context():
        with write() as session:
            survey, lead = create_survey(session, {"name": "Killed", "time_zone": "Etc/GMT-4", "target_half_width_deg": 10}, "Lead")
            put_site(session, survey, lead, {"name": "One", "lat_deg": 20.0, "lon_deg": 10.0})
            code = make_joining_code(session, survey, secret=str(app.secret_key), who="Lead")
        db.session.remove()
        db.engine.dispose()
    return code
