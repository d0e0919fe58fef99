"""Who may call a view. A view without a word on it does not start; the gate in web/ holds it."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, Final, TypeVar

View = TypeVar("View", bound=Callable[..., Any])

CALLERS: Final = frozenset({"anyone", "lead", "phone"})
_MARK: Final = "_ergbook_callers"


def callers(*who: str) -> Callable[[View], View]:
    """Say who may call a view: "anyone", or "lead" and/or "phone" (of the survey in the path)."""
    if not who or not set(who) <= CALLERS or ("anyone" in who and len(who) > 1):
        raise ValueError(f"callers are anyone, or lead and/or phone, not {who}")

    def mark(view: View) -> View:
        setattr(view, _MARK, frozenset(who))
        return view

    return mark


def callers_of(view: Callable[..., Any]) -> frozenset[str] | None:
    """Who may call the view; None where nobody said."""
    found: frozenset[str] | None = getattr(view, _MARK, None)
    return found
