"""Runs functions of static/js in node, so that one set of vectors holds both languages.

node is the one that Playwright's Python package carries, so nothing has to be installed.
"""

from __future__ import annotations

import json
import math
import subprocess
from pathlib import Path
from typing import Any

from playwright._impl._driver import compute_driver_executable

ROOT = Path(__file__).resolve().parents[1]
VECTORS = ROOT / "tests" / "vectors"

_RUN = """
import { readFileSync } from 'node:fs';
const { module, calls } = JSON.parse(readFileSync(0, 'utf8'));
const found = await import(module);
const answers = calls.map(([name, ...given]) => {
  try {
    if (!(name in found)) throw new Error(`${module} exports no ${name}`);
    const value = found[name];
    return { value: typeof value === 'function' ? value(...given) : value };
  } catch (error) {
    return { error: error.message };
  }
});
process.stdout.write(JSON.stringify(answers));
"""


def vectors(name: str) -> list[dict[str, Any]]:
    """The cases of tests/vectors/NAME.json."""
    return json.loads((VECTORS / f"{name}.json").read_text(encoding="utf-8"))


def javascript(module: str, *calls: list[Any]) -> list[Any]:
    """Answers of `calls`, each [function or constant, argument, ...], of static/js/MODULE.

    A call that throws answers {"error": its message}.
    """
    asked = {"module": (ROOT / "static" / "js" / module).as_uri(), "calls": calls}
    ran = subprocess.run(
        [compute_driver_executable()[0], "--input-type=module", "--eval", _RUN],
        input=json.dumps(asked),
        capture_output=True,
        text=True,
        encoding="utf-8",
        timeout=60,
        check=False,
    )
    assert ran.returncode == 0, ran.stderr
    answers = json.loads(ran.stdout)
    return [answer if "error" in answer else answer.get("value") for answer in answers]


def assert_same(got: Any, expected: Any, *, relative: float = 1e-9, absolute: float = 1e-9, at: str = "") -> None:
    """Equal through lists and mappings, numbers within the tolerance (1e-9 unless said)."""
    if isinstance(expected, bool) or expected is None or isinstance(expected, str):
        assert got == expected, f"{at}: {got!r} is not {expected!r}"
    elif isinstance(expected, int | float):
        close = isinstance(got, int | float) and math.isclose(got, expected, rel_tol=relative, abs_tol=absolute)
        assert close, f"{at}: {got!r} is not {expected!r}"
    elif isinstance(expected, dict):
        assert set(got) == set(expected), f"{at}: {sorted(got)} are not {sorted(expected)}"
        for key, value in expected.items():
            assert_same(got[key], value, relative=relative, absolute=absolute, at=f"{at}.{key}")
    else:
        assert len(got) == len(expected), f"{at}: {len(got)} items, not {len(expected)}"
        for i, value in enumerate(expected):
            assert_same(got[i], value, relative=relative, absolute=absolute, at=f"{at}[{i}]")
