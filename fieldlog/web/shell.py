"""The phone's page, its service worker, and the shell's files. Open to everyone: they hold no data."""

from __future__ import annotations

import gzip
import json
import mimetypes
from pathlib import Path
from typing import Any, Final

from flask import Blueprint, Flask, Response, abort, current_app, redirect, request
from flask.blueprints import BlueprintSetupState

from fieldlog import __version__
from fieldlog.people.access import callers
from fieldlog.web.folders import static_folder, template_folder
from fieldlog.web.security import CONTENT_SECURITY_POLICY
from fieldlog.web.shell_files import PAGE, Shell, collect, publish, read_published

blueprint = Blueprint("shell", __name__)

TEMPLATE: Final = "phone/shell.html"
TYPES: Final = {
    ".js": "text/javascript; charset=utf-8",
    ".css": "text/css; charset=utf-8",
    ".html": "text/html; charset=utf-8",
    ".svg": "image/svg+xml",
    ".webmanifest": "application/manifest+json",
}


@blueprint.record_once
def _publish(state: BlueprintSetupState) -> None:
    app: Any = state.app
    shell = _collect(app)
    publish(shell, _shells_folder(app))
    app.extensions["ergbook_shell"] = shell


def _collect(app: Flask) -> Shell:
    def render(name: str, modules: Any) -> str:
        start = {"app": __version__, "shell": name}
        template = app.jinja_env.get_template(TEMPLATE)
        return template.render(hash=name, modules=modules, start=start)

    source = (template_folder() / TEMPLATE).read_text(encoding="utf-8")
    return collect(static_folder(), source, __version__, render)


def _shells_folder(app: Flask) -> Path:
    return Path(app.config["ERGBOOK"].data_dir) / "shells"


def _current() -> Shell:
    shell: Shell = current_app.extensions["ergbook_shell"]
    return shell


@blueprint.get("/phone/")
@callers("anyone")
def phone() -> Response:
    """The app. The same bytes lie in the shell, from where the service worker serves them offline."""
    return _answer(PAGE, _current().files[PAGE], cache="no-cache")


@blueprint.get("/phone")
@callers("anyone")
def phone_without_slash() -> Any:
    """Relative links need the slash."""
    return redirect("phone/", code=308)


@blueprint.get("/shell/<name>/<path:path>")
@callers("anyone")
def shell_file(name: str, path: str) -> Response:
    """A file of this shell or of an earlier one."""
    shell = _current()
    content = shell.files.get(path) if name == shell.hash else None
    if content is None:
        content = read_published(_shells_folder(current_app), name, path)
    if content is None:
        abort(404)
    return _answer(path, content, cache="public, max-age=31536000, immutable")


@blueprint.get("/sw.js")
@callers("anyone")
def service_worker() -> Response:
    """The worker, told which shell it keeps."""
    shell = _current()
    told = json.dumps({"hash": shell.hash, "files": sorted(shell.files)})
    text = (static_folder() / "sw.js").read_text(encoding="utf-8")
    return _answer("sw.js", f"const SHELL = {told};\n{text}".encode(), cache="no-cache")


def _answer(path: str, content: bytes, *, cache: str) -> Response:
    suffix = Path(path).suffix
    kind = TYPES.get(suffix) or mimetypes.guess_type(path)[0] or "application/octet-stream"
    response = Response(content, content_type=kind)
    response.headers["Cache-Control"] = cache
    response.headers["Content-Security-Policy"] = CONTENT_SECURITY_POLICY
    response.headers["X-Content-Type-Options"] = "nosniff"
    response.headers["Referrer-Policy"] = "no-referrer"
    response.headers["Vary"] = "Accept-Encoding"
    if suffix in TYPES and request.accept_encodings["gzip"] > 0:
        response.set_data(gzip.compress(content, 6, mtime=0))
        response.headers["Content-Encoding"] = "gzip"
    response.add_etag()
    response.make_conditional(request)
    return response
