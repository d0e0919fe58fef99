"""How often the tests reject samples that are uniform."""

from __future__ import annotations

import numpy as np

from fieldlog.science.many import rayleigh_p
from fieldlog.science.omnibus import omnibus
from tests.bench.trials import Numbers, generator, spread_over

TRIALS = 20_000
LEVEL = 0.05
ROUNDED = [(n, step) for n in (12, 40) for step in (5.0, 10.0)]


def measure() -> Numbers:
    """Shares of uniform samples rejected at the 5 % level."""
    plain = dict(zip((10, 50), spread_over(continuous, (10, 50)), strict=True))
    rounded = dict(zip(ROUNDED, spread_over(in_classes, ROUNDED), strict=True))
    for n, shares in plain.items():
        print(f"  n = {n}: " + ", ".join(f"{name} {share:.4f}" for name, share in shares.items()))
    for (n, step), shares in rounded.items():
        print(f"  n = {n} read to {step:g} deg: " + ", ".join(f"{name} {share:.4f}" for name, share in shares.items()))
    every = [share for shares in plain.values() for share in shares.values()]
    return {
        "circular.false_alarm_min": min(every),
        "circular.false_alarm_max": max(every),
        "circular.false_alarm_rounded_max": max(share for shares in rounded.values() for share in shares.values()),
    }


def _shares(angles: np.ndarray, step: float | None) -> dict[str, float]:
    """Share of rows that each test rejects, of those for which it gives a p."""
    theta = np.deg2rad(angles)
    n = angles.shape[1]
    lengths = np.hypot(np.cos(theta).sum(1), np.sin(theta).sum(1)) / n
    seen: dict[str, list[float | None]] = {"Rayleigh": rayleigh_p(lengths, np.full(len(angles), n)).tolist(), "Kuiper": [], "Watson": [], "Rao": []}
    for row in angles:
        found = omnibus(row, step, spacing=True)
        for name, test in (("Kuiper", found.kuiper), ("Watson", found.watson), ("Rao", found.rao)):
            seen[name].append(test.p)
    given = {name: [p for p in values if p is not None] for name, values in seen.items()}
    return {name: sum(p <= LEVEL for p in values) / len(values) for name, values in given.items() if values}


def continuous(n: int) -> dict[str, float]:
    """Uniform readings as they are."""
    return _shares(generator("levels", n).uniform(0, 360, (TRIALS, n)), None)


def in_classes(cell: tuple[int, float]) -> dict[str, float]:
    """Uniform readings, read to whole steps."""
    n, step = cell
    angles = generator("rounded", n, step).uniform(0, 360, (TRIALS, n))
    return _shares(np.round(angles / step) * step, step)
