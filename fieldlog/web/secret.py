"""The store's secret: signs cookies and hashes joining codes. Made once, kept in the data folder."""

from __future__ import annotations

import os
import secrets
from pathlib import Path

NAME = "secret.key"


def secret_key(data_dir: Path) -> str:
    """The secret of this data folder, made at first use and readable by its owner only."""
    path = data_dir / NAME
    try:
        handle = os.open(path, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o600)
    except FileExistsError:
        return path.read_text(encoding="ascii").strip()
    with os.fdopen(handle, "w", encoding="ascii") as out:
        made = secrets.token_hex(32)
        out.write(made)
    return made
