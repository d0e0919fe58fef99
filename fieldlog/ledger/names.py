"""Names of devices, entries and records.

A device is 74 random bits written as 15 characters; an entry is DEVICE-n with n = 1, 2, 3 ...
without a hole; a record carries the name of the entry that created it. For the outside world a
name packs into a UUID of version 8 (RFC 9562): 74 + 48 bits are its 122 free bits.
Mirrored in static/js/ledger/names.js.
"""

from __future__ import annotations

import re
import secrets
import uuid
from typing import Final

ALPHABET: Final = "0123456789abcdefghjkmnpqrstvwxyz"
"""32 characters without i, l, o and u, which are misread or spell things."""

DEVICE_BITS: Final = 74
COUNTER_BITS: Final = 48
NAME: Final = re.compile(rf"([{ALPHABET[:16]}][{ALPHABET}]{{14}})-([1-9][0-9]{{0,14}})")
SURVEY_ID: Final = re.compile(rf"[{ALPHABET}]{{10}}")


def encode(number: int, length: int) -> str:
    """`number` as `length` characters of ALPHABET, most significant first."""
    return "".join(ALPHABET[(number >> shift) & 31] for shift in range(5 * (length - 1), -1, -5))


def new_device() -> str:
    """A new device id."""
    return encode(secrets.randbits(DEVICE_BITS), 15)


def new_survey_id() -> str:
    """A new survey id: 50 random bits."""
    return encode(secrets.randbits(50), 10)


def is_device(text: str) -> bool:
    """Whether this can be a device's id."""
    return NAME.fullmatch(f"{text}-1") is not None


def entry_name(device: str, n: int) -> str:
    """The name of the entry that `device` numbered `n`."""
    return f"{device}-{n}"


def split_name(name: str) -> tuple[str, int]:
    """Device and number of an entry name; ValueError where it is not one."""
    match = NAME.fullmatch(name)
    if match is None or int(match[2]) >= 1 << COUNTER_BITS:
        raise ValueError(f"not the name of an entry: {name!r}")
    return match[1], int(match[2])


def name_to_uuid(name: str) -> uuid.UUID:
    """The name as a UUID of version 8: device in the high, counter in the low free bits."""
    device, n = split_name(name)
    bits = 0
    for character in device:
        bits = (bits << 5) | ALPHABET.index(character)
    free = (bits << COUNTER_BITS) | n
    high, middle, low = free >> 74, (free >> 62) & 0xFFF, free & ((1 << 62) - 1)
    return uuid.UUID(int=(high << 80) | (8 << 76) | (middle << 64) | (2 << 62) | low)
