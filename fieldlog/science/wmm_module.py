"""Write static/js/science/wmm.js: the coefficients of the model in force, for the phone.

`python -m fieldlog.science.wmm_module` writes it, with `--check` it exits 1 when it is stale.
The coefficients are in the public domain (NOAA NCEI and British Geological Survey).
"""

from __future__ import annotations

import sys
from importlib.resources import files
from pathlib import Path

from fieldlog.science.magnetic import MODELS

HEAD = "// Made by `python -m fieldlog.science.wmm_module` from the World Magnetic Model. Do not edit.\n"


def module_text() -> str:
    """The JavaScript module: model, span in decimal years, rows of n, m, g, h, dg, dh (nT, nT/year)."""
    name, file, first, last = MODELS[0]
    lines = (files("pygeomag") / file).read_text(encoding="ascii").splitlines()
    rows = [line.split() for line in lines[1:] if not line.startswith("9999")]
    body = "\n".join(f"  [{', '.join(f'{float(value) + 0.0:g}' for value in row)}]," for row in rows if row)
    return (
        f"{HEAD}\nexport const MODEL = '{name}';\n\n"
        f"/** Decimal years. */\nexport const FIRST = {first:g};\nexport const LAST = {last:g};\n\n"
        "/**\n * Rows of n, m, g, h (nT) and their change (nT a year).\n"
        " * @type {[number, number, number, number, number, number][]}\n */\n"
        f"export const COEFFICIENTS = [\n{body}\n];\n"
    )


def main(argv: list[str]) -> int:
    """Write the module, or with --check say whether it is fresh (exit code 0) or stale (1)."""
    path = Path(__file__).resolve().parents[2] / "static" / "js" / "science" / "wmm.js"
    text = module_text()
    if path.exists() and path.read_text(encoding="utf-8") == text:
        return 0
    if "--check" in argv:
        sys.stderr.write(f"{path.name}: stale. Run python -m fieldlog.science.wmm_module\n")
        return 1
    path.write_text(text, encoding="utf-8", newline="\n")
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
