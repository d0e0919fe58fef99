"""A phone without screens: a blank page of a real browser profile that works on a notebook."""

from __future__ import annotations

import shutil
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

from playwright.sync_api import Page

from tests.browser.conftest import Phone

SET_UP = """
async ({deps, watch}) => {
  window.notebooks = await import('/static/js/handover/notebook.js');
  window.deps = notebooks.browserDeps({app: '0.1.0', persist: async () => false, ...deps});
  window.transactions = [];
  if (watch) {
    const plain = IDBDatabase.prototype.transaction;
    IDBDatabase.prototype.transaction = function (stores, mode, options) {
      const made = plain.call(this, stores, mode, options);
      transactions.push({stores: [...stores].join(' '), mode: made.mode, durability: made.durability});
      return made;
    };
  }
}
"""


class Profile:
    """A phone that outlives its browser, and its notebook pages."""

    def __init__(self, phone: Phone) -> None:
        self.phone = phone

    def page(self, address: str, *, deps: str = "{}", watch: bool = False) -> NotebookPage:
        """A new page at a store's address, the browser started if need be. `deps`: JavaScript of overrides."""
        return NotebookPage(self.phone.open(f"{address}/blank"), deps=deps, watch=watch)

    def twin(self) -> Profile:
        """A second phone on which a copy of this one was put back."""
        copy = Path(f"{self.phone.folder}-twin")
        shutil.copytree(self.phone.folder, copy, ignore=shutil.ignore_patterns("Singleton*"), symlinks=True)
        return Profile(replace(self.phone, folder=copy, context=None))


class NotebookPage:
    """What a screen would do with the notebook facade."""

    def __init__(self, page: Page, *, deps: str, watch: bool) -> None:
        self.page = page
        page.evaluate(f"({SET_UP})({{deps: {deps}, watch: {str(watch).lower()}}})")

    def join(self, code: str, **who: Any) -> dict[str, Any]:
        who = who or {"name": "Bo"}
        return self.run("async (j) => { window.book = await notebooks.join(deps, j); return book.info; }", {"code": code, **who})

    def open(self, survey: str) -> dict[str, Any]:
        return self.run("async (s) => { window.book = await notebooks.openNotebook(deps, s); return book.info; }", survey)

    def save(self, site: str, crest: float, *, draft: str | None = None, record: str | None = None, **more: Any) -> dict[str, Any]:
        """Save a reading, or a change of one."""
        values: dict[str, Any] = {"crest_read_deg": crest, **more}
        if record is None:
            values |= {"site": site, "observed_at": "2026-03-04T05:06:07Z", "north": "true"}
        options = {key: value for key, value in (("draft", draft), ("record", record)) if value is not None}
        return self.run("([set, options]) => book.save('observation', set, options)", [values, options])

    def save_photo(self, site: str, crest: float, *, colour: str = "red", size: int = 60) -> dict[str, Any]:
        """Save a reading with a photo that the camera module made of a drawn picture."""
        return self.run(
            """async ([site, crest, colour, size]) => {
                const {readPhoto} = await import('/static/js/sensors/camera.js');
                const canvas = document.createElement('canvas');
                canvas.width = size * 2; canvas.height = size;
                const pen = canvas.getContext('2d');
                pen.fillStyle = colour; pen.fillRect(0, 0, size, size);
                const photo = await readPhoto(await new Promise((done) => canvas.toBlob(done, 'image/png')));
                const set = {site, observed_at: '2026-03-04T05:06:07Z', north: 'true', crest_read_deg: crest};
                return book.save('observation', set, {photos: [photo]});
            }""",
            [site, crest, colour, size],
        )

    def hand_over(self) -> dict[str, Any]:
        """Hand over once; the state in which that ended."""
        return self.run("async () => { await book.handover.now(); return book.handover.state; }")

    def counts(self) -> dict[str, Any]:
        return self.run("() => book.counts()")

    def observations(self) -> list[dict[str, Any]]:
        return self.run("() => book.observations()")

    def transactions(self) -> list[dict[str, str]]:
        """The database transactions since this was last asked."""
        return self.run("() => transactions.splice(0)")

    def run(self, script: str, given: Any = None) -> Any:
        return self.page.evaluate(script, given)

    def wait_until(self, is_so: Callable[[], bool], *, seconds: float = 15) -> None:
        """Wait, letting the page live, until something is so."""
        for _ in range(int(seconds * 20)):
            if is_so():
                return
            self.page.wait_for_timeout(50)
        raise AssertionError(f"not so after {seconds} s")
