"""A real `ergbook serve` that is killed while phones hand over."""

from __future__ import annotations

import signal
from collections.abc import Callable

from tests.browser.notebook.faulty_line import Line
from tests.browser.notebook.notebook_page import Profile
from tests.browser.notebook.store_of_one_survey import StoreOfOneSurvey
from tests.conftest import Server

DELAYS_MS = (0, 5, 10, 20, 40)


def test_a_store_killed_while_it_takes_readings_has_each_once(new_server: Callable[[], Server], profile: Profile) -> None:
    server = new_server()
    store = StoreOfOneSurvey(server.data_dir)
    code = store.joining_code()
    server.start()
    line = Line(server.port)
    page = profile.page(line.address)
    page.join(code)
    crest = 0
    for delay in DELAYS_MS:
        for _ in range(10):
            page.save(store.site, crest)
            crest += 1
        page.run("() => { window.under_way = book.handover.now(); }")
        page.page.wait_for_timeout(delay)
        server.stop(signal.SIGKILL)
        assert server.refuses
        page.run("() => under_way")
        at_base = {row["crest_deg"] for row in store.observations()}
        assert {row["crest_deg"] for row in page.observations() if row["atBase"]} <= at_base
        server.start()
    assert page.hand_over()["phase"] == "idle"
    assert page.counts()["unsent"] == 0
    assert [row["crest_deg"] for row in store.observations()] == list(range(crest))
    assert store.is_sound()
    line.close()
    store.close()
