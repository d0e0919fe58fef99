"""The short form: a few schedules with the phone's own code in a real browser and a real store process."""

from __future__ import annotations

from collections import Counter
from pathlib import Path

import pytest
from playwright.sync_api import Playwright

from tests.faults.browser_schedules import Desert


@pytest.mark.timeout(200)
def test_a_phone_and_a_store_that_fail_lose_nothing(tmp_path: Path, playwright: Playwright, chromium_path: str) -> None:
    desert = Desert(tmp_path, playwright, chromium_path, Counter())
    for seed in range(20260708, 20260711):
        desert.schedule(seed)
    desert.close()
