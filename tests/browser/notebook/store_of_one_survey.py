"""A real store with one survey in it, for phones to join, and what has arrived there."""

from __future__ import annotations

import shutil
import sqlite3
from contextlib import closing
from pathlib import Path
from typing import Any

from sqlalchemy import select

from fieldlog.people.service import make_joining_code, phones_of, revoke_phone
from fieldlog.store.append import say
from fieldlog.store.db import db
from fieldlog.store.identity import begin_epoch
from fieldlog.store.rebuild import check
from fieldlog.store.tables import LedgerEntry, SetAside, TwoVersions, observations, photos
from fieldlog.store.transaction import write
from fieldlog.surveys.service import create_survey
from fieldlog.web.app import create_app
from fieldlog.web.settings import Settings


class StoreOfOneSurvey:
    """The store, called in process; phones reach the same application over the network."""

    def __init__(self, folder: Path) -> None:
        self.folder = folder
        self.file = folder / "ergbook.sqlite"
        self.app = create_app(Settings(data_dir=folder, database_url=f"sqlite:///{self.file}"))
        with self.app.app_context(), write() as session:
            values = {"name": "Red Erg", "time_zone": "Etc/GMT-3", "target_half_width_deg": 10}
            self.survey, self.lead = create_survey(session, values, "Lead")
            self.member = say(session, self.survey, by=None, kind="crew", values={"name": "Ada"})
            self.site = self.say("site", {"name": "North dune", "lat_deg": 20.0, "lon_deg": 10.0}, session=session)

    def say(self, kind: str, values: dict[str, Any], *, record: str | None = None, session: Any = None) -> str:
        """Say something as the lead; the record."""
        if session is not None:
            return say(session, self.survey, by=self.lead, kind=kind, values=values, record=record)
        with self.app.app_context(), write() as own:
            return say(own, self.survey, by=self.lead, kind=kind, values=values, record=record)

    def say_sites(self, count: int) -> None:
        """Say as many sites, in one transaction."""
        with self.app.app_context(), write() as session:
            for number in range(count):
                self.say("site", {"name": f"Site {number}", "lat_deg": 20.0, "lon_deg": 10.0}, session=session)

    def joining_code(self) -> str:
        with self.app.app_context(), write() as session:
            return make_joining_code(session, self.survey, secret=self.app.secret_key, who="Lead")

    def revoke_all(self) -> None:
        with self.app.app_context(), write() as session:
            for phone in phones_of(session, self.survey):
                revoke_phone(session, self.survey, phone.device, "Lead")

    def entries(self, *, device: str | None = None) -> list[tuple[str, int, str]]:
        """The ledger in order: (device, n, text)."""
        with self.app.app_context():
            rows = db.session.execute(
                select(LedgerEntry.device, LedgerEntry.n, LedgerEntry.text)
                .where(LedgerEntry.survey == self.survey)
                .order_by(LedgerEntry.seq)
            ).all()
        return [(of, n, text) for of, n, text in rows if device in (None, of)]

    def set_aside(self) -> list[tuple[int, str]]:
        """What could not be kept: (n, why)."""
        with self.app.app_context():
            return [(n, problem) for n, problem in db.session.execute(select(SetAside.n, SetAside.problem))]

    def observations(self) -> list[dict[str, Any]]:
        with self.app.app_context():
            return [dict(row) for row in db.session.execute(select(observations).order_by(observations.c.first_seq)).mappings()]

    def photos(self) -> list[dict[str, Any]]:
        with self.app.app_context():
            return [dict(row) for row in db.session.execute(select(photos)).mappings()]

    def two_versions(self) -> list[tuple[str, str]]:
        """(record, field) of what nobody has chosen between yet."""
        with self.app.app_context():
            found = db.session.execute(select(TwoVersions.record, TwoVersions.field))
            return [(record, field) for record, field in found]

    def is_sound(self) -> bool:
        """Whether the tables are what the ledger adds up to."""
        with self.app.app_context():
            return not list(check(db.session))

    def keep_copy(self) -> Path:
        """A back-up of the database as it is now."""
        copy = self.folder / "copy.sqlite"
        copy.unlink(missing_ok=True)
        with closing(sqlite3.connect(self.file)) as now, closing(sqlite3.connect(copy)) as kept:
            now.backup(kept)
        return copy

    def go_back_to(self, copy: Path) -> None:
        """Put a back-up in place, as restoring does: a new epoch begins."""
        with self.app.app_context():
            db.session.remove()
            db.engine.dispose()
            for ending in ("-wal", "-shm"):
                Path(f"{self.file}{ending}").unlink(missing_ok=True)
            shutil.copyfile(copy, self.file)
            with write() as session:
                begin_epoch(session)

    def close(self) -> None:
        with self.app.app_context():
            db.session.remove()
            db.engine.dispose()
