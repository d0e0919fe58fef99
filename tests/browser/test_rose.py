"""The rose as elements in a real browser, under the security policy, beside the desk's SVG text."""

from __future__ import annotations

from dataclasses import asdict
from pathlib import Path
from xml.etree.ElementTree import canonicalize

from playwright.sync_api import Page, Route

from fieldlog.draw.rose import rose
from fieldlog.draw.svg import svg
from fieldlog.science.summary import summarise

STATIC = Path(__file__).resolve().parents[2] / "static"
POLICY = (
    "default-src 'none'; script-src 'self'; style-src 'self'; base-uri 'none'; require-trusted-types-for 'script'"
)
READINGS = [200.0, 205.0, 205.0, 210.0, 214.0, 220.0, 230.0, 212.0, 208.0, 219.0]
OPTIONS = {"axial": False, "size": 320, "crossed_out_deg": [10.0], "expected_deg": 230.0, "marked": [2]}

DRAW = """
async ({readings, summary, options}) => {
  const { rose } = await import('/js/draw/rose.js');
  const { svg } = await import('/js/draw/svg.js');
  const drawn = svg(rose(readings, summary, options), {identifier: 'r', classes: 'wide'});
  document.body.append(drawn);
  return new XMLSerializer().serializeToString(drawn);
}
"""


def serve(route: Route) -> None:
    """The page, the script modules and the style sheets."""
    path = route.request.url.removeprefix("http://rose.test")
    headers = {"Content-Security-Policy": POLICY}
    if path == "/":
        sheets = "".join(f'<link rel="stylesheet" href="/css/{name}.css">' for name in ("tokens", "rose"))
        body = f"<!doctype html><title>Rose</title>{sheets}<body>"
        route.fulfill(content_type="text/html", body=body, headers=headers)
    else:
        kind = "text/css" if path.endswith(".css") else "text/javascript"
        route.fulfill(content_type=kind, body=(STATIC / path[1:]).read_text(encoding="utf-8"), headers=headers)


def test_elements_and_text_are_the_same_picture(desk: Page) -> None:
    found = summarise(READINGS, subject="Slip faces")
    desk.route("http://rose.test/**", serve)
    desk.goto("http://rose.test/")
    options = {"axial": False, "size": 320, "crossedOutDeg": [10], "expectedDeg": 230, "marked": [2]}
    made = desk.evaluate(DRAW, {"readings": READINGS, "summary": asdict(found), "options": options})
    text = svg(rose(READINGS, found, **OPTIONS), identifier="r", classes="wide")  # type: ignore[arg-type]
    assert canonicalize(made) == canonicalize(text)
    picture = desk.get_by_role("img", name=found.finding)
    assert picture.is_visible()
    fill = desk.evaluate("getComputedStyle(document.querySelector('.rose-mean')).fill")
    assert fill == "rgb(28, 25, 21)", "the colour is the style sheet's ink"
