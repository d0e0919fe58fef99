"""Takes the README's pictures anew from the demo survey: python -m tests.browser.pictures"""

from __future__ import annotations

import io
import re
import tempfile
from pathlib import Path

from PIL import Image
from playwright.sync_api import Page, sync_playwright

from tests.browser import walk
from tests.browser.conftest import ARGUMENTS, PHONE
from tests.browser.find import chromium
from tests.conftest import ROOT, Server

FOLDER = ROOT / "demo_survey" / "screens"
COLOURS = 48


def keep(page: Page, name: str, *, height: int | None = None) -> None:
    """The page as a small PNG."""
    clip = {"x": 0, "y": 0, "width": page.viewport_size["width"], "height": height} if height else None
    image = Image.open(io.BytesIO(page.screenshot(clip=clip, full_page=height is not None))).convert("RGB")
    image.quantize(COLOURS, dither=Image.Dither.NONE).save(FOLDER / name, optimize=True)


def main() -> None:
    """Serve the demo, walk through it, keep three pictures."""
    FOLDER.mkdir(exist_ok=True)
    with tempfile.TemporaryDirectory() as folder, sync_playwright() as playwright:
        server = Server(Path(folder), command=("demo",)).start()
        browser = playwright.chromium.launch(executable_path=chromium(), args=ARGUMENTS)
        try:
            desk = browser.new_page(viewport={"width": 1280, "height": 900})
            found = re.search(r"http\S+/way-in/\S+", server.log())
            joining = re.search(r"http\S+/phone/#join=\S+", server.log())
            assert found
            assert joining
            desk.goto(found[0])
            desk.get_by_role("button", name="Sign in").click()
            desk.wait_for_url("**/surveys")
            desk.goto(f"{server.address}/surveys/desertdem0/day?day=all")
            keep(desk, "day-sheet.png", height=1000)
            page = browser.new_context(**PHONE, color_scheme="light").new_page()
            page.goto(joining[0])
            page.get_by_role("button", name="Maren").click()
            page.get_by_role("button", name="Join", exact=True).click()
            walk.choose_site(page, "Tamrel Combs")
            walk.type_number(page, "Crest bearing", "052")
            walk.say(page, "Read from", "magnetic")
            keep(page, "reading.png")
            walk.go(page, "Finding")
            page.locator(".sample .sentence").first.wait_for()
            keep(page, "finding.png")
        finally:
            browser.close()
            server.stop()


if __name__ == "__main__":
    main()
