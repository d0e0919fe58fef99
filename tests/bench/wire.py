"""What handing over costs on a thin line: every byte between a real browser's phone and a real store."""

from __future__ import annotations

import csv
import gzip
import io
import tempfile
from pathlib import Path
from typing import Any

from playwright.sync_api import sync_playwright

from tests.bench.readings import readings
from tests.bench.relay import Relay
from tests.bench.trials import Numbers, generator
from tests.browser.conftest import Phone
from tests.browser.find import chromium
from tests.browser.notebook.faulty_line import Line
from tests.browser.notebook.notebook_page import Profile
from tests.browser.notebook.store_of_one_survey import StoreOfOneSurvey
from tests.conftest import Server

COUNT = 1000


def measure() -> Numbers:
    """Bytes for each of 1,000 observations, headers and answers included, and over the same as gzipped CSV."""
    with tempfile.TemporaryDirectory() as folder, sync_playwright() as playwright:
        wire, table = _hand_over(Path(folder), playwright)
    each, plain = wire / COUNT, table / COUNT
    return {
        "handover.bytes_per_observation": each,
        "handover.bytes_over_gzip_csv": each / plain,
        "handover.bytes_over_gzip_csv.top": each,
        "handover.bytes_over_gzip_csv.bottom": plain,
    }


def _hand_over(folder: Path, playwright: Any) -> tuple[int, int]:
    store = StoreOfOneSurvey(folder / "store")
    server = Server(folder / "store").start()
    relay = Relay(server.port)
    line = Line(relay.port)
    phone = Phone(playwright, str(chromium()), folder / "phone")
    try:
        page = Profile(phone).page(line.address)
        page.join(store.joining_code())
        made = readings(generator("wire"), COUNT, store.site)
        page.run("async (all) => { for (const set of all) await book.save('observation', set, {}); }", made)
        before = relay.counted
        page.hand_over()
        counted = relay.counted - before
        assert len(store.observations()) == COUNT
        return counted, _table(made)
    finally:
        phone.forget()
        line.close()
        relay.close()
        server.stop()
        store.close()


def _table(made: list[dict[str, Any]]) -> int:
    """The size of the same observations as gzipped CSV."""
    text = io.StringIO()
    lines = csv.DictWriter(text, made[0].keys())
    lines.writeheader()
    lines.writerows(made)
    return len(gzip.compress(text.getvalue().encode(), 6))
