"""Find Chrome or Chromium, or install it and say so.

`python tests/browser/find.py` prints its path; with `--install` a missing one is installed where
this machine's package manager can do it.
"""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from pathlib import Path

NAMES = ("chromium", "chromium-browser", "google-chrome", "google-chrome-stable", "chrome", "msedge")
PLACES = (
    "/Applications/Google Chrome.app/Contents/MacOS/Google Chrome",
    "/Applications/Chromium.app/Contents/MacOS/Chromium",
    r"C:\Program Files\Google\Chrome\Application\chrome.exe",
    r"C:\Program Files (x86)\Microsoft\Edge\Application\msedge.exe",
)
INSTALLERS = (
    ("apt-get", [["apt-get", "update", "-qq"], ["apt-get", "install", "-y", "-qq", "--no-install-recommends", "chromium"]]),
    ("dnf", [["dnf", "install", "-y", "-q", "chromium"]]),
    ("apk", [["apk", "add", "--quiet", "chromium"]]),
)


def chromium() -> str | None:
    """The path of a Chrome or Chromium, CHROME_PATH first; None where there is none."""
    named = os.environ.get("CHROME_PATH")
    if named and Path(named).exists():
        return named
    found = next((path for name in NAMES if (path := shutil.which(name))), None)
    return found or next((place for place in PLACES if Path(place).exists()), None)


def install() -> str | None:
    """Install one by the machine's package manager, saying so; its path, None where that failed."""
    for manager, commands in INSTALLERS:
        if shutil.which(manager) is None:
            continue
        print(f"No Chrome or Chromium here: installing chromium with {manager} ...", flush=True)
        prefix = [] if os.geteuid() == 0 else ["sudo", "-n"]
        environment = {**os.environ, "DEBIAN_FRONTEND": "noninteractive"}
        if all(subprocess.run([*prefix, *command], check=False, env=environment).returncode == 0 for command in commands):
            return chromium()
    return None


def main(arguments: list[str]) -> int:
    found = chromium() or (install() if "--install" in arguments else None)
    if found is None:
        print("No Chrome or Chromium found. Install one, or set CHROME_PATH to it.", file=sys.stderr)
        return 1
    print(f"Browser: {found}")
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
