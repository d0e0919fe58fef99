"""What the phone computes, in a real Chromium slowed down four times."""

from __future__ import annotations

import statistics

import numpy as np
from playwright.sync_api import sync_playwright

from tests.bench.trials import Numbers, generator
from tests.browser.conftest import ARGUMENTS
from tests.browser.find import chromium
from tests.browser.test_science_vectors import science_page

FRAME_MS = 1000 / 60
THROTTLE = 4
TIMES = """
async (asked) => {
  const { summarise } = await import('/shell/under-test/js/science/summary.js');
  const taken = [];
  for (const [angles, options] of asked) {
    const begun = performance.now();
    summarise(angles, {...options, modes: 'pending'});
    taken.push(performance.now() - begun);
  }
  return taken;
}
"""


def measure() -> Numbers:
    """The summary of 1,000 readings on 50 dunes, and of 1,000 without dunes, over one frame; the slower counts."""
    random = generator("phone")
    samples = [[(np.degrees(random.vonmises(0, 3, 1000)) % 360).tolist(), {"targetDeg": 10, "stepDeg": 1}] for _ in range(40)]
    on_dunes = [[angles, {**options, "bedforms": (np.arange(1000) // 20).tolist()}] for angles, options in samples]
    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=chromium(), args=ARGUMENTS)
        page = browser.new_page()
        science_page(page)
        page.context.new_cdp_session(page).send("Emulation.setCPUThrottlingRate", {"rate": THROTTLE})
        taken = [statistics.median(page.evaluate(TIMES, asked)[10:]) for asked in (samples, on_dunes)]
        browser.close()
    print(f"  1,000 readings {taken[0]:.2f} ms, 1,000 on 50 dunes {taken[1]:.2f} ms")
    name = "phone.summary_1000_over_frame"
    return {name: max(taken) / FRAME_MS, f"{name}.top": max(taken), f"{name}.bottom": FRAME_MS}
