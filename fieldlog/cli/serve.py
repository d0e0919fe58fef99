"""`ergbook serve`: one process, one fixed port."""

from __future__ import annotations

import signal
import ssl
import sys
from types import FrameType
from typing import Any

import click

from fieldlog.errors import Refusal


class _Stop(KeyboardInterrupt):
    """Somebody asked the server to stop."""


@click.command()
@click.option("--host", help="Address to listen on (ERGBOOK_HOST; only this machine by default).")
@click.option("--port", type=click.IntRange(1, 65535), help="Port (ERGBOOK_PORT).")
def serve(host: str | None, port: int | None) -> None:
    """Serve the desk and the phones. At first start it prints the first lead's one-time link."""
    from fieldlog.people.service import first_lead_link
    from fieldlog.store.transaction import write
    from fieldlog.web.app import create_app
    from fieldlog.web.settings import Settings

    settings = Settings.from_environment(host=host, port=port)
    app = create_app(settings)
    with app.app_context(), write() as session:
        token = first_lead_link(session)
    lines = [f"Ergbook serves at {settings.address}"]
    if token:
        lines.append(f"First lead, once: {settings.address}/way-in/{token}")
    run(app, settings, lines)


def run(app: Any, settings: Any, lines: list[str]) -> None:
    """Listen, print `lines` once the port is ours, serve until stopped; exit 1 where the port is busy."""
    from cheroot.ssl.builtin import BuiltinSSLAdapter
    from cheroot.wsgi import Server

    server = Server((settings.host, settings.port), app, numthreads=16, request_queue_size=128)
    server.max_request_body_size = max(settings.request_bytes_max, settings.notebook_bytes_max)
    if settings.tls_certificate:
        try:
            server.ssl_adapter = BuiltinSSLAdapter(str(settings.tls_certificate), str(settings.tls_key))
        except ssl.SSLError as error:
            raise Refusal(
                "they are not a certificate and its key", "ERGBOOK_TLS_CERTIFICATE, ERGBOOK_TLS_KEY", "Give PEM files"
            ) from error
    try:
        server.prepare()
    except OSError as error:
        server.stop()
        where = f"{settings.host}:{settings.port}"
        raise click.ClickException(
            f"{where} cannot be had ({error.__class__.__name__}: it is in use, or not an address of this machine). "
            "Stop what listens there or set ERGBOOK_PORT"
        ) from error
    for line in lines:
        click.echo(line)
    click.echo("Ctrl-C stops it.")
    sys.stdout.flush()
    for name in ("SIGTERM", "SIGINT"):
        signal.signal(getattr(signal, name), _stop)
    try:
        server.serve()
    except _Stop:
        click.echo("Stopping: requests under way are answered first.")
    finally:
        server.stop()


def _stop(number: int, frame: FrameType | None) -> None:
    raise _Stop
