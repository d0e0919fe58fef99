"""The one shape of every error a person sees: what is wrong, where, and how to mend it."""

from __future__ import annotations


class Refusal(Exception):
    """Something a person can mend.

    `what` is a plain clause, `where` names the line, field or file, `mend` says what to do next.
    Each room's own errors subclass this and a builtin, so that callers may catch either.
    """

    def __init__(self, what: str, where: str = "", mend: str = "") -> None:
        super().__init__(what, where, mend)
        self.what = what
        self.where = where
        self.mend = mend

    def __str__(self) -> str:
        head = f"{self.where}: {self.what}" if self.where else self.what
        return f"{head}. {self.mend}" if self.mend else head
