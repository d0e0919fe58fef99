"""Write tests/vectors/circular.json: samples with the answers that both languages must give.

`python -m tests.science.make_vectors`. The inputs are the published samples of tests/published and
seeded made-up ones; the answers are those of the Python side, which is itself held to the published
values by test_published.py. Run it only when an answer is meant to change, and read the difference.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np

from fieldlog.science.summary import summarise

TESTS = Path(__file__).resolve().parents[1]
TARGET = TESTS / "vectors" / "circular.json"
SEED = 20260301

Options = dict[str, Any]


def published_samples() -> list[tuple[str, list[float], Options]]:
    """Every published sample with readings, as it is and with a target."""
    cases = json.loads((TESTS / "published" / "circular.json").read_text(encoding="utf-8"))
    found = []
    for case in cases:
        if "data_deg" not in case:
            continue
        options: Options = {"axial": True} if case["axial"] else {}
        if "mu0_deg" in case:
            options["against_deg"] = case["mu0_deg"]
        plain = (f"published {case['id']}: {case['what']}", case["data_deg"], options)
        found += [plain, (f"{case['id']} with a target", case["data_deg"], {**options, "target_deg": 10})]
    return found


def made_samples() -> list[tuple[str, list[float], Options]]:
    """Seeded samples for every outcome and option."""
    rng = np.random.default_rng(SEED)

    def towards(mean: float, kappa: float, n: int) -> list[float]:
        return list(np.round(np.degrees(rng.vonmises(np.radians(mean), kappa, n)) % 360, 3))

    def on_step(values: list[float], step: float) -> list[float]:
        return [float(round(v / step) * step) for v in values]

    made = []
    for n in (3, 4, 5, 6, 7, 9, 10, 15, 16, 30, 100):
        made.append((f"one direction, n = {n}", towards(214, 6, n), {"target_deg": 12, "subject": "Slip faces"}))
        even = list(np.round(rng.uniform(0, 360, n), 3))
        made.append((f"uniform, n = {n}", even, {"against_deg": 45}))
    for n, kappa in ((5, 80), (8, 400), (20, 100), (60, 20)):
        made.append((f"concentrated, n = {n}", towards(1, kappa, n), {"against_deg": 90, "target_deg": 2.5}))
    made.append(("opposed faces", towards(30, 8, 15) + towards(210, 8, 15), {"subject": "Slip faces"}))
    made.append(("opposed faces, few", towards(30, 12, 5) + towards(210, 12, 5), {"subject": "Slip faces"}))
    made.append(("two directions", towards(350, 8, 20) + towards(80, 8, 20), {"subject": "Slip faces"}))
    made.append(("three arms", towards(10, 15, 12) + towards(130, 15, 12) + towards(250, 15, 12), {}))
    made.append(("three arms, few", towards(10, 15, 4) + towards(130, 15, 4) + towards(250, 15, 4), {}))
    crests = [a / 2 for a in towards(340, 6, 24)]
    made.append(("crests", crests, {"axial": True, "target_deg": 8, "subject": "Crests", "step_deg": 1}))
    crossed = [a / 2 for a in towards(40, 20, 7) + towards(220, 20, 7)]
    made.append(("crests square to each other", crossed, {"axial": True, "subject": "Crests"}))
    for step in (1, 2, 5, 10, 30, 45, 7):
        made.extend(
            (f"in {step} deg classes, n = {n}", on_step(towards(100, 2, n), step), {"step_deg": step}) for n in (12, 40)
        )
    turned = [v + 13.7 for v in on_step(towards(100, 2, 25), 5)]
    made.append(("classes turned by declination", turned, {"step_deg": 5, "axial": True}))
    for dunes, each in ((2, 4), (4, 5), (5, 3), (6, 5), (8, 5), (12, 1), (25, 2)):
        truth = rng.normal(214, 20, dunes)
        angles = [round(float(t + rng.normal(0, 6)), 2) for t in truth for _ in range(each)]
        names = [f"dune {i}" for i in range(dunes) for _ in range(each)]
        options = {"bedforms": names, "target_deg": 10, "subject": "Slip faces", "step_deg": 1}
        made.append((f"{dunes} dunes of {each}", angles, options))
        made.append((f"{dunes} dunes of {each}, axes", angles, {**options, "axial": True}))
    names = ["a", None, "b", None, "c", "c", "d", "e", "e"]
    made.append(("dunes unnamed and cancelling out", [10, 20, 30, 15, 40, 220, 12, 5, 9], {"bedforms": names}))
    made.append(("no names at all", [10, 20, 30, 15, 40], {"bedforms": [None] * 5}))
    dunes8 = [name for name in "abcdefgh" for _ in range(2)]
    made.append(("eight dunes are fewer than ten", towards(5, 20, 16), {"bedforms": dunes8, "fewest_bedforms": 10}))
    made.append(("out of reach", towards(5, 1.2, 40), {"target_deg": 0.05}))
    made.append(("beyond one turn", [370, -20, 720, 5, -355, 12], {}))
    made.append(("all equal, with a step", [120] * 8, {"step_deg": 5, "target_deg": 5}))
    made.append(("beyond the exact range", towards(200, 0.12, 1200), {"against_deg": 200}))
    made.append(("many different values", list(np.round(rng.uniform(0, 360, 1600), 4)), {}))
    return made


def cases() -> list[dict[str, Any]]:
    """Input and expected answer of every case; Rao's test is base's alone."""
    found = []
    for what, angles, options in [*published_samples(), *made_samples()]:
        expected = summarise(angles, spacing=False, **options).as_json()
        found.append({"what": what, "angles_deg": angles, "options": options, "expected": expected})
    return found


if __name__ == "__main__":
    TARGET.write_text(json.dumps(cases(), ensure_ascii=False, allow_nan=False, indent=0) + "\n", encoding="utf-8")
