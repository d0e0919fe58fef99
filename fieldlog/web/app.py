"""The application factory: it only assembles."""

from __future__ import annotations

from datetime import timedelta
from importlib import import_module
from typing import Any, Final

from flask import Flask
from flask_limiter import Limiter
from flask_limiter.util import get_remote_address
from flask_login import LoginManager
from flask_wtf import CSRFProtect

from fieldlog.people.access import callers
from fieldlog.people.views import load_session
from fieldlog.store.db import db, engine_url, set_up_engine
from fieldlog.store.identity import ensure_identity
from fieldlog.store.migrate import upgrade
from fieldlog.store.rebuild import rebuild_all
from fieldlog.store.transaction import write
from fieldlog.web.folders import static_folder, template_folder
from fieldlog.web.formats import set_up_formats
from fieldlog.web.gate import check_views, set_up_gate
from fieldlog.web.problems import set_up_problems
from fieldlog.web.secret import secret_key
from fieldlog.web.security import set_up_headers
from fieldlog.web.settings import Settings

BLUEPRINTS: Final = (
    "fieldlog.people.views:blueprint",
    "fieldlog.people.views:joining",
    "fieldlog.surveys.views:blueprint",
    "fieldlog.handover.views:blueprint",
    "fieldlog.review.views:blueprint",
    "fieldlog.exports.views:blueprint",
    "fieldlog.imports.views:blueprint",
    "fieldlog.web.pages:blueprint",
    "fieldlog.web.shell:blueprint",
)
WITHOUT_FORMS: Final = ("joining", "handover")
"""Blueprints whose callers show a token or a code with every request: no cookie, nothing to forge."""

TRIES: Final = {
    "people.sign_in": "10 per minute",
    "people.way_in": "10 per minute",
    "joining.look": "30 per minute",
    "joining.join": "30 per minute",
}


def create_app(settings: Settings) -> Flask:
    """Bring the database up to date and assemble the application."""
    settings.data_dir.mkdir(parents=True, exist_ok=True)
    changed = upgrade(settings.database_url)
    app = Flask("fieldlog", static_folder=str(static_folder()), template_folder=str(template_folder()))
    app.config.update(
        ERGBOOK=settings,
        SECRET_KEY=secret_key(settings.data_dir),
        SQLALCHEMY_DATABASE_URI=engine_url(settings.database_url),
        MAX_CONTENT_LENGTH=settings.request_bytes_max,
        SESSION_COOKIE_HTTPONLY=True,
        SESSION_COOKIE_SAMESITE="Lax",
        SESSION_COOKIE_SECURE=settings.address.startswith("https:"),
        PERMANENT_SESSION_LIFETIME=timedelta(days=14),
        WTF_CSRF_TIME_LIMIT=None,
        RATELIMIT_STORAGE_URI="memory://",
    )
    app.jinja_options = {"trim_blocks": True, "lstrip_blocks": True}
    db.init_app(app)
    with app.app_context():
        set_up_engine(db.engine)
        with write() as session:
            ensure_identity(session)
            if changed:  # new columns of derived fields are filled from the ledger
                rebuild_all(session)
    _set_up_people(app)
    set_up_problems(app)
    set_up_headers(app)
    set_up_formats(app)
    _register(app)
    check_views(app)
    return app


def _set_up_people(app: Flask) -> None:
    logins = LoginManager(app)
    logins.user_loader(load_session)
    set_up_gate(app)


def _register(app: Flask) -> None:
    csrf = CSRFProtect(app)
    callers("anyone")(app.view_functions["static"])
    for place in BLUEPRINTS:
        module, name = place.split(":")
        blueprint: Any = getattr(import_module(module), name)
        app.register_blueprint(blueprint)
        if blueprint.name in WITHOUT_FORMS:
            csrf.exempt(blueprint)
    limiter = Limiter(get_remote_address, app=app)
    for endpoint, limit in TRIES.items():
        limited: Any = limiter.limit(limit)(app.view_functions[endpoint])
        app.view_functions[endpoint] = limited
