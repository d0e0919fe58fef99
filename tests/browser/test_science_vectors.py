"""The shared vectors in a real browser, on the page and in the worker."""

from __future__ import annotations

from pathlib import Path

from playwright.sync_api import Page, Route

from fieldlog.science.summary import summarise
from fieldlog.web.security import CONTENT_SECURITY_POLICY
from tests.mirror import vectors
from tests.science.same_answers import assert_same_summary, camel

STATIC = Path(__file__).resolve().parents[2] / "static"
SHELL = "/shell/under-test"

ON_THE_PAGE = """
async (asked) => {
  const { summarise } = await import('/shell/under-test/js/science/summary.js');
  return asked.map(([angles, options]) => summarise(angles, options));
}
"""
APART = """
async ([angles, options]) => {
  const { vouchForOwnScripts } = await import('/shell/under-test/js/ui/trusted.js');
  const { summariseApart } = await import('/shell/under-test/js/science/summarise_apart.js');
  vouchForOwnScripts();
  const asked = summariseApart().summarise(angles, options);
  return {first: asked.first, whole: await asked.whole};
}
"""


def serve(route: Route) -> None:
    path = route.request.url.removeprefix("http://science.test")
    if path == "/phone/":
        body, kind = "<!doctype html><title>Science</title><body>", "text/html"
    else:
        body, kind = (STATIC / path.removeprefix(f"{SHELL}/")).read_text(encoding="utf-8"), "text/javascript"
    route.fulfill(content_type=kind, body=body, headers={"Content-Security-Policy": CONTENT_SECURITY_POLICY})


def science_page(desk: Page) -> None:
    desk.route("http://science.test/**", serve)
    desk.goto("http://science.test/phone/")


def test_the_browser_gives_every_vector(desk: Page) -> None:
    science_page(desk)
    cases = vectors("circular")
    found = desk.evaluate(ON_THE_PAGE, [[case["angles_deg"], camel(case["options"])] for case in cases])
    for case, got in zip(cases, found, strict=True):
        assert_same_summary(got, case["expected"], case["what"])


def test_the_worker_finds_the_modes_that_the_page_leaves_to_it(desk: Page) -> None:
    science_page(desk)
    case = next(case for case in vectors("circular") if case["what"] == "two directions")
    got = desk.evaluate(APART, [case["angles_deg"], camel(case["options"])])
    assert got["first"]["outcome"] == "pending"
    assert got["first"]["finding"] == "40 readings: modes are still being sought."
    assert_same_summary(got["whole"], case["expected"], "from the worker")


def test_a_small_sample_needs_no_worker(desk: Page) -> None:
    science_page(desk)
    angles = [200, 210, 214, 220, 208]
    got = desk.evaluate(APART, [angles, {}])
    assert_same_summary(got["first"], summarise(angles, spacing=False).as_json(), "at once")
