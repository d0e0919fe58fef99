"""Settings, from the environment; the default needs none."""

from __future__ import annotations

import os
from collections.abc import Mapping
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Final

from fieldlog.errors import Refusal

PREFIX: Final = "ERGBOOK_"
DATABASES: Final = ("sqlite:///", "postgres://", "postgresql://", "postgresql+psycopg://")


class SettingsError(Refusal, ValueError):
    """A setting that cannot be what it says."""


@dataclass(frozen=True, kw_only=True)
class Settings:
    """Where the store lies, where it listens, how large a photo may be."""

    data_dir: Path
    database_url: str
    host: str = "127.0.0.1"
    port: int = 8421
    public_url: str = ""
    tls_certificate: Path | None = None
    tls_key: Path | None = None
    photo_bytes_max: int = 16 * 1024 * 1024

    @property
    def notebook_bytes_max(self) -> int:
        """The largest file of a phone that a lead may upload."""
        return 256 * 1024 * 1024

    @property
    def request_bytes_max(self) -> int:
        """The largest request of all: a photo, and a little for its head."""
        return self.photo_bytes_max + 1024 * 1024

    @property
    def address(self) -> str:
        """The address that links and codes name."""
        if self.public_url:
            return self.public_url.rstrip("/")
        scheme = "https" if self.tls_certificate else "http"
        host = "127.0.0.1" if self.host in ("0.0.0.0", "::", "") else self.host  # noqa: S104  compared, not bound
        return f"{scheme}://{f'[{host}]' if ':' in host else host}:{self.port}"

    @classmethod
    def from_environment(
        cls, environment: Mapping[str, str] | None = None, *, host: str | None = None, port: int | None = None
    ) -> Settings:
        """Read ERGBOOK_*; what the command line says goes first. SettingsError names the wrong one."""
        found = os.environ if environment is None else environment

        def text(name: str, default: str = "") -> str:
            return found.get(PREFIX + name, "").strip() or default

        data_dir = Path(text("DATA_DIR", "ergbook-data")).absolute()
        if data_dir.exists() and not data_dir.is_dir():
            raise SettingsError(f"{data_dir} is not a folder", PREFIX + "DATA_DIR")
        settings = cls(
            data_dir=data_dir,
            database_url=_database(text("DATABASE_URL", f"sqlite:///{data_dir / 'ergbook.sqlite'}")),
            host=host or text("HOST", "127.0.0.1"),
            port=port or _whole("PORT", text("PORT", "8421"), 1, 65535),
            public_url=text("PUBLIC_URL"),
            tls_certificate=_file("TLS_CERTIFICATE", text("TLS_CERTIFICATE")),
            tls_key=_file("TLS_KEY", text("TLS_KEY")),
        )
        if (settings.tls_certificate is None) != (settings.tls_key is None):
            raise SettingsError("a certificate and its key go together", PREFIX + "TLS_KEY", "Set both or neither")
        megabytes = text("PHOTO_MEGABYTES")
        if megabytes:
            limit = _whole("PHOTO_MEGABYTES", megabytes, 1, 100)
            settings = replace(settings, photo_bytes_max=limit * 1024 * 1024)
        return settings


def _database(url: str) -> str:
    if not url.startswith(DATABASES):
        raise SettingsError(
            f"{url.partition(':')[0]!r} is no kind of database known here", PREFIX + "DATABASE_URL",
            "Write postgresql://user@host/name or sqlite:///path/to/file",
        )
    return url


def _whole(name: str, text: str, low: int, high: int) -> int:
    if not text.isdigit() or not low <= int(text) <= high:
        raise SettingsError(f"{text!r} is not a whole number from {low} to {high}", PREFIX + name)
    return int(text)


def _file(name: str, text: str) -> Path | None:
    if not text:
        return None
    path = Path(text).absolute()
    if not path.is_file():
        raise SettingsError(f"there is no file {path}", PREFIX + name)
    return path
