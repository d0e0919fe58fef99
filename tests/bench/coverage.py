"""How often the 95 % interval holds the true direction."""

from __future__ import annotations

import math

import numpy as np

from fieldlog.science.finding import Pattern, decide
from fieldlog.science.interval import OF_READINGS
from fieldlog.science.many import intervals, rayleigh_p
from fieldlog.science.summary import Summary, summarise
from tests.bench.trials import Numbers, generator, spread_over

TRIALS = 20_000
CELLS = [(n, kappa, axial) for n, kappas in ((10, (3, 10)), (25, (1, 3, 10)), (100, (1, 3, 10))) for kappa in kappas for axial in (False, True)]
STOPPING = [(20.0, 10.0), (12.0, 7.0), (20.0, 15.0)]
"""SD between dunes and target half-width, degrees."""
STOPPING_TRIALS, MOST_DUNES, WITHIN_DEG = 4000, 40, 6.0


def measure() -> Numbers:
    """Coverage by readings, by dunes, and when reading stops at "enough"."""
    plain = spread_over(by_readings, CELLS)
    clustered = spread_over(by_dunes, [6, 8])
    stopping = spread_over(until_enough, STOPPING)
    for cell, (covered, refused) in zip(CELLS, plain, strict=True):
        print(f"  n = {cell[0]}, kappa = {cell[1]}, {'axes' if cell[2] else 'directions'}: covers {covered:.4f}, refused {refused:.4f}")
    for dunes, (covered, refused) in zip((6, 8), clustered, strict=True):
        print(f"  {dunes} dunes x 5: covers {covered:.4f}, refused {refused:.4f}")
    for cell, (covered, refused) in zip(STOPPING, stopping, strict=True):
        print(f"  stopping, dune SD {cell[0]:g}, target {cell[1]:g}: covers {covered:.4f}, never enough {refused:.4f}")
    return {
        "circular.coverage_min": min(covered for covered, _ in plain),
        "circular.coverage_max": max(covered for covered, _ in plain),
        "circular.coverage_refused_max": max(refused for _, refused in plain),
        "circular.coverage_clustered_min": min(covered for covered, _ in clustered),
        "circular.coverage_stopping_min": min(covered for covered, _ in stopping),
    }


def by_readings(cell: tuple[int, float, bool]) -> tuple[float, float]:
    """(coverage where an interval is given, share refused) of one cell.

    Up to n = 19 everything decides as in the product. From 20 readings the product also looks for
    modes before it gives an interval; that is left out here (see circular.two_modes_false).
    """
    n, kappa, axial = cell
    random = generator("coverage", n, kappa, axial)
    fold = 2 if axial else 1
    truth = random.uniform(0, 360 / fold, TRIALS)
    angles = truth[:, None] + np.degrees(random.vonmises(0, kappa, (TRIALS, n))) / fold
    means, halves = intervals(angles * fold, OF_READINGS)
    theta = np.deg2rad(angles * fold)
    lengths = np.array([np.hypot(np.cos(k * theta).sum(1), np.sin(k * theta).sum(1)) / n for k in (1, 2, 3)])
    p = np.array([rayleigh_p(length, np.full(TRIALS, n)) for length in lengths])
    one = np.array([
        decide(n, 5, Pattern(tuple(p[:, i]), tuple(lengths[:, i])), None, axial=axial) == "one" for i in range(TRIALS)
    ])
    given = one & np.isfinite(halves)
    off = np.abs((means - truth * fold + 180) % 360 - 180)
    return float((off[given] <= halves[given]).mean()), float(1 - given.mean())


def holds(summary: Summary, truth_deg: float) -> bool | None:
    """Whether the interval holds the truth; None where none is given."""
    half = summary.ci95_half_width_deg
    if half is None or summary.mean_direction_deg is None:
        return None
    return abs((summary.mean_direction_deg - truth_deg + 180) % 360 - 180) <= half


def by_dunes(dunes: int) -> tuple[float, float]:
    """5 readings on each dune, SD 20 deg between and 6 deg within dunes (wrapped normal)."""
    random = generator("clustered", dunes)
    names = np.repeat(np.arange(dunes), 5).tolist()
    seen = []
    for _ in range(TRIALS):
        truth = random.uniform(0, 360)
        readings = np.repeat(truth + random.normal(0, 20, dunes), 5) + random.normal(0, WITHIN_DEG, 5 * dunes)
        seen.append(holds(summarise(readings, bedforms=names, spacing=False), truth))
    given = [told for told in seen if told is not None]
    return sum(given) / len(given), 1 - len(given) / len(seen)


def until_enough(cell: tuple[float, float]) -> tuple[float, float]:
    """A crew reads dune by dune, 5 readings each, and stops at "enough", or at 40 dunes without an answer."""
    between, target = cell
    random = generator("stopping", between, target)
    seen = []
    for _ in range(STOPPING_TRIALS):
        truth = random.uniform(0, 360)
        all_readings = np.repeat(truth + random.normal(0, between, MOST_DUNES), 5) + random.normal(0, WITHIN_DEG, 5 * MOST_DUNES)
        told = None
        dunes = 5
        while dunes <= MOST_DUNES:
            summary = summarise(all_readings[: 5 * dunes], bedforms=(np.arange(5 * dunes) // 5).tolist(), target_deg=target, spacing=False)
            if summary.enough:
                told = holds(summary, truth)
                break
            dunes += 1
        seen.append(told)
    given = [told for told in seen if told is not None]
    return sum(given) / len(given), math.fsum(told is None for told in seen) / len(seen)
