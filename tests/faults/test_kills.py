"""The short form: a real store killed a few times, and fifty phones at once."""

from __future__ import annotations

import threading
from collections import Counter
from collections.abc import Callable
from typing import Any

from flask import Flask
from sqlalchemy import func, select

from fieldlog.store.db import db
from fieldlog.store.rebuild import check
from fieldlog.store.tables import LedgerEntry, observations
from tests.conftest import Server
from tests.faults import kills
from tests.faults.world import World

PHONES, READINGS = 50, 200


def test_what_was_acknowledged_outlives_a_killed_store(new_server: Callable[..., Server]) -> None:
    server = new_server()
    code = kills.set_up(server.data_dir)
    met: Counter[str] = Counter()
    kills.run(server.start(), code, rounds=4, seed=20260708, met=met)
    assert met["store killed while phones hand over"] == 4


def test_fifty_phones_at_once(app: Flask) -> None:
    """Each hands over 200 readings at the same moment; whatever fails, a retry mends; all 10,000 are there once."""
    world = World(app, 1, Counter())
    code = world.new_code()
    twins = [world.join(code, f"Phone {i}") for i in range(PHONES)]
    for twin in twins:
        for i in range(READINGS):
            twin.say({"site": world.site, "observed_at": "2026-07-08T05:06:07Z", "north": "true", "crest_read_deg": i % 180})
    failed: list[Any] = []

    def hand_over(twin: Any) -> None:
        send = world.line(twin)
        for _ in range(50):
            if not twin.unsent:
                return
            twin.push(send, 50)
        failed.append(twin.device)

    threads = [threading.Thread(target=hand_over, args=(twin,)) for twin in twins]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert not failed
    with app.app_context():
        assert db.session.scalar(select(func.count()).select_from(observations)) == PHONES * READINGS
        seqs = db.session.scalars(select(LedgerEntry.seq).where(LedgerEntry.survey == world.survey).order_by(LedgerEntry.seq)).all()
        assert list(seqs) == list(range(1, len(seqs) + 1))
        assert list(check(db.session)) == []
