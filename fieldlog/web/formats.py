"""How numbers and times are written on pages: with their unit, and no more digits than they bear."""

from __future__ import annotations

from datetime import datetime
from typing import Any
from zoneinfo import ZoneInfo

from flask import Flask
from flask_wtf.csrf import generate_csrf
from markupsafe import Markup

from fieldlog.sheet.fields import ABSENCES, Field
from fieldlog.sheet.observation import OBSERVATION
from fieldlog.sheet.subjects import SITE
from fieldlog.sheet.vocabulary import VOCABULARIES, label_of

DASH = "–"


def bearing(value: float | None, decimals: int = 0) -> str:
    """214° ; 360 is written 000."""
    if value is None:
        return DASH
    rounded = round(value, decimals) % 360
    width = 3 + (decimals + 1 if decimals else 0)
    return f"{rounded:0{width}.{decimals}f}°"


def degrees(value: float | None, decimals: int = 0) -> str:
    """A difference or a spread: ±7 is written 7°."""
    return DASH if value is None else f"{value:.{decimals}f}°"


def probability(value: float | None) -> str:
    """A p-value: 0.034, below a thousandth <0.001."""
    if value is None:
        return DASH
    return "<0.001" if value < 0.001 else f"{value:.3f}"


def ratio(value: float | None) -> str:
    """A number between 0 and 1, two decimals."""
    return DASH if value is None else f"{value:.2f}"


def number(value: float | None, decimals: int = 0) -> str:
    """A plain number with thin spaces between thousands."""
    return DASH if value is None else f"{value:,.{decimals}f}".replace(",", "\u202f")


def local_time(when: datetime | None, zone: str, form: str = "%Y-%m-%d %H:%M") -> str:
    """A time in the survey's zone."""
    return DASH if when is None else when.astimezone(ZoneInfo(zone)).strftime(form)


def field_value(field: Field, value: Any, absent: str | None = None) -> str:
    """One field of a record as the pages show it."""
    if absent:
        return ABSENCES.get(absent, absent)
    if value is None:
        return DASH
    if field.vocabulary:
        return label_of(field.vocabulary, value)
    if field.type == "flag":
        return "yes" if value else "no"
    if field.is_angle:
        return bearing(value, 0 if float(value).is_integer() else 1)
    if isinstance(value, float):
        text = f"{value:.{field.decimals if field.decimals is not None else 2}f}"
        return f"{text} {field.unit}".strip()
    return f"{value} {field.unit}".strip()


def plain(value: Any) -> str:
    """A value as an input holds it: no trailing zeros, nothing for nothing."""
    if value is None:
        return ""
    return f"{value:.10g}" if isinstance(value, float) else str(value)


def said_value(field: Field | None, value: Any) -> str:
    """A value as an entry says it."""
    if isinstance(value, dict) and "absent" in value:
        return ABSENCES.get(value["absent"], str(value["absent"]))
    if value is None:
        return "nothing"
    return field_value(field, value) if field else str(value)


def needed(result: Any) -> str:
    """What is still needed at a site for its target, in a few words; "" where nothing can be said."""
    summary = result.summary
    target = f"±{result.target_deg:g}°"
    for noun, wanted, taken in (
        ("dune", summary.bedforms_needed, summary.bedforms),
        ("reading", summary.readings_needed if summary.bedforms is None else None, summary.n),
    ):
        if wanted is not None and taken is not None and wanted > taken:
            more = wanted - taken
            return f"{more} more {noun}{'s' if more > 1 else ''} for {target}."
    return ""


def set_up_formats(app: Flask) -> None:
    """Make the formats known to the templates."""
    for function in (bearing, degrees, probability, ratio, number, local_time, field_value, plain, said_value):
        app.jinja_env.filters[function.__name__] = function
    app.jinja_env.globals.update(
        token=_token, needed=needed, vocabularies=VOCABULARIES, site_sheet=SITE, observation_sheet=OBSERVATION,
    )


def _token() -> Markup:
    """The hidden input that every form carries."""
    return Markup('<input type="hidden" name="csrf_token" value="{}">').format(generate_csrf())
