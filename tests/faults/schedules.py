"""Many schedules, one after the other, in stores that are renewed now and then."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable

from flask import Flask

from tests.faults.world import World

STEPS = 45
PER_STORE = 50


def run(new_app: Callable[[], Flask], seeds: range, met: Counter[str], tell: Callable[[int], None] = lambda _: None) -> None:
    """Run a schedule for every seed; AssertionError names the seed."""
    app = None
    for i, seed in enumerate(seeds):
        if app is None or i % PER_STORE == 0:
            app = new_app()
            app.config["PROPAGATE_EXCEPTIONS"] = False
        world = World(app, seed, met)
        try:
            for _ in range(STEPS):
                world.step()
                world.hold()
            world.heal()
            world.judge()
        except AssertionError as error:
            raise AssertionError(f"seed {seed}: {error}") from error
        tell(i + 1)
