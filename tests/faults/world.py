"""One store, some phones, and a random schedule of what can go wrong between them."""

from __future__ import annotations

import hashlib
import io
import random
from collections import Counter
from datetime import timedelta
from typing import Any
from unittest import mock

from flask import Flask
from PIL import Image
from sqlalchemy import delete, insert, select

from fieldlog.ledger.names import new_device
from fieldlog.people.service import join, make_joining_code
from fieldlog.review.service import choose_version
from fieldlog.store import append as appending
from fieldlog.store.db import db
from fieldlog.store.identity import begin_epoch
from fieldlog.store.rebuild import check, rebuild
from fieldlog.store.tables import DeviceCounter, LedgerEntry, SetAside, SurveyCounter, TwoVersions, observations
from fieldlog.store.transaction import write
from fieldlog.surveys.service import create_survey, put_site
from tests.faults.oracle import Oracle
from tests.faults.twin import Answer, Twin, standing

RESTORED_SHARE = 0.25
"""Of the schedules: after a restore the lead's choices since the back-up are gone, and less can be compared."""

LEDGER = (LedgerEntry, DeviceCounter, SetAside)
VALUES = {"crest_read_deg": (0, 44, 90, 179.5), "note": ("steep", "crête", "", None), "grain_class": ("fine_sand", "coarse_sand")}


class Failpoint(Exception):
    """The store stops here."""


class World:
    """A survey in a store, phones that joined it, and the faults met so far."""

    def __init__(self, app: Flask, seed: int, met: Counter[str]) -> None:
        self.app, self.random, self.met, self.oracle = app, random.Random(seed), met, Oracle()
        self.client = app.test_client()
        self.held_back: list[tuple[Twin, dict[str, Any]]] = []
        self.copy: dict[str, Any] | None = None
        self.photos: dict[str, bytes] = {}
        self.restored = False
        self.may_restore = self.random.random() < RESTORED_SHARE
        with app.app_context(), write() as session:
            values = {"name": f"Schedule {seed}", "time_zone": "Etc/GMT-4", "target_half_width_deg": 10}
            self.survey, self.lead = create_survey(session, values, "Lead")
            self.site = put_site(session, self.survey, self.lead, {"name": "One", "lat_deg": 20.0, "lon_deg": 10.0})
        self.tokens: dict[str, str] = {}
        code = self.new_code()
        self.twins = [self.join(code, name) for name in ("Ysolde", "Samir", "Tome")]

    def new_code(self) -> str:
        """A joining code of the survey."""
        with self.app.app_context(), write() as session:
            return make_joining_code(session, self.survey, secret=str(self.app.secret_key), who="Lead")

    def join(self, code: str, name: str) -> Twin:
        """A phone that has joined and read all there is."""
        device = new_device()
        with self.app.app_context(), write() as session:
            made = join(session, code, secret=str(self.app.secret_key), device=device, app="0.1.0", name=name)
        self.tokens[device] = made.token
        health = self.client.get("/api/v1/health").get_json()
        twin = Twin(self.survey, device, made.crew, health["store"], health["epoch"])
        while self._pull(twin, 500) and twin.cursor < 4:
            pass
        return twin

    # The line

    def line(self, twin: Twin, *, failpoint: bool = False, lose: bool = False) -> Any:
        """A phone's way to the store: to its end, or stopped inside (`failpoint`), or without the answer (`lose`)."""
        client = self.app.test_client()

        def send(method: str, path: str, body: dict[str, Any] | None) -> Answer | None:
            address = path if path.startswith("/") else f"/api/v1/surveys/{self.survey}/{path}"
            headers = {"Authorization": f"Bearer {self.tokens[twin.device]}"}
            where = mock.patch.object(appending, "project_records", side_effect=Failpoint)
            if failpoint and method == "POST":
                with where:
                    answer = client.open(address, method=method, json=body, headers=headers)
            else:
                answer = client.open(address, method=method, json=body, headers=headers)
            told = answer.get_json(silent=True)
            return None if lose or not isinstance(told, dict) else Answer(answer.status_code, told)

        return send

    def _nobody(self, *_: Any) -> None:
        return None

    def _push(self, twin: Twin, size: int) -> None:
        if not twin.unsent:
            return
        fate = self.random.choice(["deliver"] * 4 + ["cut before", "cut after", "stopped inside", "twice", "held back"])
        self.met[f"push: {fate}"] += 1
        if fate == "cut before":
            twin.push(self._nobody, size)
        elif fate == "cut after":
            twin.push(self.line(twin, lose=True), size)
        elif fate == "stopped inside":
            twin.push(self.line(twin, failpoint=True), size)
        elif fate == "twice":
            batch = twin.batch(size)
            self.line(twin)("POST", "entries", batch)
            twin.push(self.line(twin), size)
        elif fate == "held back":
            self.held_back.append((twin, twin.batch(size)))
        else:
            twin.push(self.line(twin), size)

    def _pull(self, twin: Twin, size: int) -> bool:
        return twin.pull(self.line(twin), size)

    # What can happen

    def step(self) -> None:
        twin = self.random.choice(self.twins)
        size = self.random.choice([1, 2, 5, 500])
        act = self.random.choice(
            ["save"] * 4 + ["edit"] * 4 + ["cross out"] * 2 + ["push"] * 6 + ["pull"] * 4
            + ["late batch", "lost page", "clock", "poison", "choose", "photo", "unknown field", "copy", "restore"]
        )
        {
            "save": lambda: self._save(twin), "edit": lambda: self._edit(twin), "cross out": lambda: self._cross_out(twin),
            "push": lambda: self._push(twin, size), "pull": lambda: self._pull(twin, size), "late batch": self._late_batch,
            "lost page": lambda: self._lost_page(twin, size), "clock": lambda: self._shift(twin), "poison": lambda: self._poison(twin),
            "choose": self._choose, "photo": lambda: self._photo(twin), "unknown field": lambda: self._unknown(twin),
            "copy": self._keep_copy, "restore": self._restore,
        }[act]()

    def _say(self, twin: Twin, values: dict[str, Any], record: str | None = None) -> None:
        seen = frozenset(e.name for e in twin.records().get(record or "", ()))
        name = twin.say(values, record=record)
        self.oracle.note(name, record or name, values, seen, twin.own[-1])

    def _save(self, twin: Twin) -> None:
        self._say(twin, {
            "site": self.site, "observed_at": "2026-07-08T05:06:07Z", "north": "true", "crest_read_deg": self.random.randrange(180),
        })

    def _edit(self, twin: Twin) -> None:
        records = sorted(twin.merged())
        if records:
            name = self.random.choice(sorted(VALUES))
            record = self.random.choice(records)
            self.met["two phones on one record"] += not record.startswith(twin.device)
            self._say(twin, {name: self.random.choice(VALUES[name])}, record)

    def _cross_out(self, twin: Twin) -> None:
        made = twin.merged()
        if made:
            record = self.random.choice(sorted(made))
            reason = None if made[record].values.get("crossed_out") else "wrong dune"
            self.met["cross out or take back"] += 1
            self._say(twin, {"crossed_out": reason}, record)

    def _late_batch(self) -> None:
        """A batch that was under way arrives after all, when nobody waits for it any more."""
        if self.held_back:
            twin, batch = self.held_back.pop(self.random.randrange(len(self.held_back)))
            self.met["late batch"] += 1
            self.line(twin)("POST", "entries", batch)

    def _lost_page(self, twin: Twin, size: int) -> None:
        self.met["phone killed before it wrote a page down"] += 1
        twin.pull(self.line(twin, lose=True), size)

    def _shift(self, twin: Twin) -> None:
        self.met["clock jump"] += 1
        twin.clock_off = timedelta(days=self.random.choice([-1096, -1, 0, 1, 1096]))
        if self.random.random() < 0.5:
            twin.learn_offset()

    def _poison(self, twin: Twin) -> None:
        self.met["poison"] += 1
        twin.poison(self.site)

    def _unknown(self, twin: Twin) -> None:
        records = sorted(twin.merged())
        if records:
            self.met["unknown field"] += 1
            self._say(twin, {"not_thought_of": self.random.randrange(9)}, self.random.choice(records))

    def _choose(self) -> None:
        """The lead lets one of two versions stand."""
        with self.app.app_context(), write() as session:
            row = session.scalar(
                select(TwoVersions).where(TwoVersions.survey == self.survey).order_by(TwoVersions.record, TwoVersions.field)
            )
            if row is None:
                return
            record, name, versions = row.record, row.field, row.versions
            seen = frozenset(self._names(session, record))
            chosen = self.random.choice(versions)
            choose_version(session, self.survey, self.lead, record, name, chosen["entry"])
            session.flush()
            said = set(self._names(session, record)) - seen
        self.met["the lead's choice"] += 1
        (entry,) = said
        self.oracle.note(entry, record, {name: chosen["value"]}, seen, "")

    def _names(self, session: Any, record: str) -> list[str]:
        found = session.execute(
            select(LedgerEntry.device, LedgerEntry.n).where(LedgerEntry.survey == self.survey, LedgerEntry.record == record)
        )
        return [f"{device}-{n}" for device, n in found]

    def _photo(self, twin: Twin) -> None:
        """A photo that is cut at some byte, again and again, until it is whole."""
        made = io.BytesIO()
        Image.new("RGB", (16, 12), (self.random.randrange(256), self.random.randrange(256), 90)).save(made, "JPEG")
        data = made.getvalue()
        name = hashlib.sha256(data).hexdigest()
        address = f"/api/v1/surveys/{self.survey}/photos/{name}"
        headers = {"Authorization": f"Bearer {self.tokens[twin.device]}", "Upload-Length": str(len(data))}
        while True:
            told = self.client.head(address, headers=headers)
            at = int(told.headers["Upload-Offset"])
            if told.status_code == 200:
                break
            end = self.random.randrange(at, len(data) + 1)
            answer = self.client.patch(address, data=data[at:end], headers={**headers, "Upload-Offset": str(at)})
            assert answer.status_code == 200, answer.get_data(as_text=True)
        assert self.client.get(address, headers=headers).data == data, "I11: a photo is not what was sent"
        self.met["photo cut at a byte"] += 1
        self.photos[name] = data

    def _keep_copy(self) -> None:
        """Back up this survey's part of the store."""
        with self.app.app_context():
            self.copy = {
                table.__tablename__: [dict(row) for row in db.session.execute(select(table.__table__).where(table.survey == self.survey)).mappings()]
                for table in (*LEDGER, SurveyCounter)
            }

    def _restore(self) -> None:
        """Put the back-up in place: the store has gone back in time, and says so."""
        if self.copy is None or not self.may_restore:
            return
        self.met["store restored"] += 1
        self.restored = True
        with self.app.app_context(), write() as session:
            for table in LEDGER:
                session.execute(delete(table).where(table.survey == self.survey))
                if self.copy[table.__tablename__]:
                    session.execute(insert(table.__table__), self.copy[table.__tablename__])
            counter = session.get(SurveyCounter, self.survey)
            assert counter is not None
            kept = self.copy["survey_counter"][0]
            counter.seq, counter.hlc = kept["seq"], kept["hlc"]
            session.flush()
            rebuild(session, self.survey)
            begin_epoch(session)

    # What must hold

    def hold(self) -> None:
        """After every step: numbers without a hole, on every device and in the survey."""
        with self.app.app_context():
            seqs = db.session.scalars(select(LedgerEntry.seq).where(LedgerEntry.survey == self.survey).order_by(LedgerEntry.seq)).all()
            assert list(seqs) == list(range(1, len(seqs) + 1)), "I4: a survey's numbers have a hole"
            for twin in self.twins:
                numbers = [
                    n for table in (LedgerEntry, SetAside)
                    for n in db.session.scalars(select(table.n).where(table.survey == self.survey, table.device == twin.device))
                ]
                assert sorted(numbers) == list(range(1, len(numbers) + 1)), "I3: a device's numbers have a hole"
                if not self.restored:
                    assert len(numbers) >= twin.acked, "I5: something acknowledged is gone"

    def heal(self) -> None:
        """The line is good again and nobody saves anything: every queue must empty."""
        for twin, batch in self.held_back:
            self.line(twin)("POST", "entries", batch)
        for _ in range(100):
            for twin in self.twins:
                twin.push(self.line(twin), 500)
                twin.pull(self.line(twin), 500)
            with self.app.app_context():
                last = db.session.scalar(select(SurveyCounter.seq).where(SurveyCounter.survey == self.survey))
            if all(not twin.unsent and twin.cursor == last for twin in self.twins):
                return
        raise AssertionError("I9: a queue does not empty")

    def judge(self) -> None:
        """At the end: each saved entry once, all replicas alike, versions as the oracle says, tables as the ledger."""
        with self.app.app_context():
            rows = db.session.execute(
                select(LedgerEntry.device, LedgerEntry.n, LedgerEntry.text).where(LedgerEntry.survey == self.survey)
            ).all()
            aside = {f"{d}-{n}" for d, n in db.session.execute(select(SetAside.device, SetAside.n).where(SetAside.survey == self.survey))}
            versions = {
                (record, f) for record, f in db.session.execute(select(TwoVersions.record, TwoVersions.field).where(TwoVersions.survey == self.survey))
            }
            values = {row["record"]: row for row in db.session.execute(select(observations).where(observations.c.survey == self.survey)).mappings()}
            assert not [fault for fault in check(db.session) if fault.survey == self.survey], "I7: the tables are not what the ledger adds up to"
        held = {f"{device}-{n}": text for device, n, text in rows}
        for twin in self.twins:
            for n, text in enumerate(twin.own, start=1):
                name = f"{twin.device}-{n}"
                assert held.get(name, text) == text, "I14: an entry changed"
                assert (name in held) != (name in aside), "I2: not there exactly once"
                assert (name in aside) == (n in twin.problems), "I10: what is set aside is marked, and nothing else"
        known = [{record: standing(made) for record, made in twin.merged().items()} for twin in self.twins]
        if not self.restored:
            assert all(one == known[0] for one in known), "I7: replicas differ"
            assert versions == self.oracle.two_versions(set(held)), "I8: two versions are not those of the version vectors"
            assert set(values) == set(known[0])
