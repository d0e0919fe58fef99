"""Random schedules with a real phone's code in a real browser, a line that fails, and a real store process."""

from __future__ import annotations

import random
import signal
from collections import Counter
from pathlib import Path
from typing import Any

from playwright.sync_api import Error, Playwright

from tests.browser.conftest import Phone
from tests.browser.notebook.faulty_line import Line
from tests.browser.notebook.notebook_page import Profile
from tests.browser.notebook.store_of_one_survey import StoreOfOneSurvey
from tests.conftest import Server

STEPS = 16
FAULTS = ("refuse", "cut", "cut_answer", "swallow", "portal", "stranger")
HASTY = "{random: () => 0.05}"
"""Waits at the short end of their jitter, so that a schedule ends in seconds."""


class Desert:
    """One phone, one store, one line; what the phone was told is saved."""

    def __init__(self, folder: Path, playwright: Playwright, chromium_path: str, met: Counter[str]) -> None:
        self.met = met
        self.store = StoreOfOneSurvey(folder / "store")
        self.server = Server(folder / "store").start()
        self.line = Line(self.server.port)
        self.profile = Profile(Phone(playwright, chromium_path, folder / "phone"))
        self.page = self.profile.page(self.line.address, deps=HASTY)
        self.page.join(self.store.joining_code())
        self.saved: list[str] = []
        self.photos = 0

    def schedule(self, seed: int) -> None:
        """Some steps of what can happen, then a good line and nobody touching anything: all must be at base once."""
        source = random.Random(seed)
        for _ in range(STEPS):
            self._step(source)
        self._heal()
        self._judge(seed)

    def _step(self, source: random.Random) -> None:
        act = source.choice(["save"] * 3 + ["edit", "photo", "hand over"] + ["fault"] * 4 + ["kill browser", "kill store", "lead edits"])
        if act == "save":
            self._note(self.page.save(self.store.site, source.randrange(180)))
        elif act == "photo":
            self.photos += 1
            colour = f"#{source.randrange(16**6):06x}"
            self._note(self.page.save_photo(self.store.site, source.randrange(180), colour=colour, size=source.randrange(20, 90)))
        elif act == "edit" and self._own():
            self._note(self.page.save(self.store.site, source.randrange(180), record=source.choice(self._own())))
        elif act == "hand over":
            self._hand_over()
        elif act == "fault":
            action = source.choice(FAULTS)
            method, path = source.choice([("POST", r"/entries$"), ("GET", r"/changes$"), ("PATCH", r"/photos/"), ("HEAD", r"/photos/")])
            self.line.fault(action, method, path, share=source.random())
            self.met[f"browser: {action}"] += 1
            self._hand_over()
        elif act == "kill browser":
            self.met["browser killed right after saved"] += 1
            self._note(self.page.save(self.store.site, source.randrange(180)))
            self.profile.phone.kill()
            self._open()
        elif act == "kill store":
            self.met["browser: store killed"] += 1
            self.server.stop(signal.SIGKILL)
            self._hand_over()
            self.server.start()
        elif act == "lead edits":
            self._lead_edits(source)

    def _own(self) -> list[str]:
        return sorted(name for name in self.saved if any(row["record"] == name for row in self.page.observations()))

    def _note(self, told: dict[str, Any]) -> None:
        if told["entry"]:
            self.saved.append(told["entry"])

    def _hand_over(self) -> None:
        self.page.hand_over()

    def _open(self) -> None:
        self.page = self.profile.page(self.line.address, deps=HASTY)
        self.page.open(self.store.survey)

    def _lead_edits(self, source: random.Random) -> None:
        rows = self.store.observations()
        if rows:
            self.met["lead and phone on one record"] += 1
            record = source.choice(sorted(row["record"] for row in rows))
            self.store.say("observation", {"note": f"seen by the lead {source.randrange(1000)}"}, record=record)

    def _heal(self) -> None:
        """Nobody touches anything: the notebook hands over by itself."""
        self.line.heal()
        try:
            self.page.run("() => book.handover.start()")
        except Error:
            self._open()
            self.page.run("() => book.handover.start()")
        self.page.wait_until(self._is_empty, seconds=60)
        self.page.run("() => book.handover.stop()")

    def _is_empty(self) -> bool:
        counts = self.page.counts()
        return counts["unsent"] == 0 and counts["unsentPhotos"] == 0

    def _judge(self, seed: int) -> None:
        held = [f"{device}-{n}" for device, n, _ in self.store.entries()]
        assert len(held) == len(set(held)), f"seed {seed}: I2: an entry is there twice"
        missing = set(self.saved) - set(held)
        assert not missing, f"seed {seed}: I1, I2: saved and not at base: {sorted(missing)}"
        assert not self.store.set_aside(), f"seed {seed}: I10"
        assert self.store.is_sound(), f"seed {seed}: I7"
        kept = {path.name for path in (self.store.folder / "photos").rglob("*") if path.is_file()}
        assert {row["sha256"] for row in self.store.photos()} <= kept, f"seed {seed}: I11: a photo is missing"
        self.page.hand_over()
        here = {row["record"]: (row["crest_read_deg"], row["note"]) for row in self.page.observations()}
        there = {row["record"]: (row["crest_read_deg"], row["note"]) for row in self.store.observations()}
        assert here == there, f"seed {seed}: I7: phone and base differ"

    def close(self) -> None:
        self.profile.phone.forget()
        self.line.close()
        self.server.stop(signal.SIGKILL)
        self.store.close()
