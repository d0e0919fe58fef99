"""`make bench`: measure and write bench.json, a flat object of names and numbers.

`make bench ONLY=circular` runs one group and keeps what the others measured before.
"""

from __future__ import annotations

import importlib
import json
import sys
import time

from tests.conftest import ROOT

GROUPS = ("circular", "handover", "phone")
TARGET = ROOT / "bench.json"


def main(arguments: list[str]) -> int:
    """Run the groups named, all where none is."""
    unknown = set(arguments) - set(GROUPS)
    if unknown:
        print(f"no such group: {', '.join(sorted(unknown))}. There are: {', '.join(GROUPS)}", file=sys.stderr)
        return 2
    held = json.loads(TARGET.read_text(encoding="utf-8")) if arguments and TARGET.exists() else {}
    for group in arguments or GROUPS:
        begun = time.monotonic()
        found = importlib.import_module(f"tests.bench.{group}").measure()
        for name, value in sorted(found.items()):
            print(f"{name} = {value:.6g}")
        print(f"{group}: {time.monotonic() - begun:.0f} s\n", flush=True)
        held |= found
        TARGET.write_text(json.dumps(held, indent=1, sort_keys=True) + "\n", encoding="utf-8")
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
