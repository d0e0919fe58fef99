"""A store as a real server, and a line to it that can be cut, swallow answers, or be answered by strangers.

The line is a reverse proxy that looks at one request at a time. Pages come through it too, so
that page and store share an origin.
"""

from __future__ import annotations

import http.client
import re
import socket
import threading
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from dataclasses import dataclass, field
from http.server import BaseHTTPRequestHandler, ThreadingHTTPServer
from typing import Any

BLANK = b"<!doctype html><meta charset=utf-8><title>Blank</title><p id=said></p>"
PORTAL = b"<!doctype html><title>Welcome</title><p>Please sign in to use this network.</p>"
STRANGER = b'{"status": "ok", "received_through": 9, "results": [{"n": 1, "status": "stored", "seq": 9}]}'
CSP = (
    "default-src 'none'; script-src 'self'; style-src 'self'; connect-src 'self'; img-src 'self' blob:; "
    "require-trusted-types-for 'script'"
)


@dataclass
class Fault:
    """What happens to requests that fit, and to how many of them."""

    method: str
    path: re.Pattern[str]
    action: str
    times: float
    share: float
    released: threading.Event = field(default_factory=threading.Event)


@dataclass(frozen=True)
class Seen:
    """A request that came down the line; `status` is 0 where nobody answered it."""

    method: str
    path: str
    body: bytes
    encoding: str
    status: int


class Line:
    """The line. `faults` are looked at in order; the first that fits and is not used up happens."""

    def __init__(self, store_port: int) -> None:
        self.store_port = store_port
        self.faults: list[Fault] = []
        self.seen: list[Seen] = []
        self.lock = threading.Lock()
        handler = type("Handler", (_Handler,), {"line": self})
        self.server = ThreadingHTTPServer(("127.0.0.1", 0), handler)
        self.server.daemon_threads = True
        self.thread = threading.Thread(target=self.server.serve_forever, kwargs={"poll_interval": 0.02}, daemon=True)
        self.thread.start()

    @property
    def address(self) -> str:
        return f"http://127.0.0.1:{self.server.server_address[1]}"

    def fault(
        self, action: str, method: str = "POST", path: str = r"/entries$", *, times: float = 1, share: float = 0.5
    ) -> Fault:
        """Let something go wrong with requests that fit.

        refuse; cut or cut_answer (after `share` of the bytes); swallow (the whole answer); hang
        (until healed); portal and stranger (somebody else's page or JSON instead of an answer).
        """
        fault = Fault(method, re.compile(path), action, times, share)
        self.faults.append(fault)
        return fault

    def heal(self) -> None:
        """No fault any more; what hung is let go."""
        for fault in self.faults:
            fault.released.set()
        self.faults.clear()

    def take(self, method: str, path: str) -> Fault | None:
        with self.lock:
            for fault in self.faults:
                fits = fault.method in (method, "*") and fault.path.search(path.partition("?")[0])
                if fits and fault.times > 0:
                    fault.times -= 1
                    return fault
        return None

    def requests(self, method: str, path: str = r"/entries$") -> list[Seen]:
        """The requests that fit, in order."""
        return [s for s in self.seen if s.method == method and re.search(path, s.path.partition("?")[0])]

    def close(self) -> None:
        self.heal()
        self.server.shutdown()
        self.server.server_close()


class _Handler(BaseHTTPRequestHandler):
    line: Line
    protocol_version = "HTTP/1.1"

    def handle_request(self) -> None:
        self.close_connection = True
        body = self.rfile.read(int(self.headers.get("Content-Length") or 0))
        if self.path == "/blank":
            self._answer(200, {"Content-Type": "text/html", "Content-Security-Policy": CSP}, BLANK)
            return
        fault = self.line.take(self.command, self.path)
        action = fault.action if fault else "pass"
        if fault and action == "hang":
            fault.released.wait(60)
            action = "refuse"
        status = 0
        if action in ("pass", "swallow", "cut_answer"):
            status, headers, answer = self._ask(body)
        elif fault and action == "cut":
            self._ask_part(body, fault.share)
        self.line.seen.append(
            Seen(self.command, self.path, body, self.headers.get("Content-Encoding", ""), status if action == "pass" else 0)
        )
        if action == "pass":
            self._answer(status, headers, answer)
        elif action == "portal":
            self._answer(200, {"Content-Type": "text/html"}, PORTAL)
        elif action == "stranger":
            self._answer(200, {"Content-Type": "application/json"}, STRANGER)
        elif fault and action == "cut_answer":
            self._answer(status, headers, answer, share=fault.share)
        else:
            with suppress(OSError):
                self.connection.shutdown(socket.SHUT_RDWR)

    do_GET = do_POST = do_PATCH = do_HEAD = handle_request  # noqa: N815  the standard library's names

    def _ask(self, body: bytes) -> tuple[int, dict[str, str], bytes]:
        store = http.client.HTTPConnection("127.0.0.1", self.line.store_port, timeout=60)
        try:
            headers = {key: value for key, value in self.headers.items() if key.lower() != "connection"}
            store.request(self.command, self.path, body=body or None, headers=headers)
            response = store.getresponse()
            return response.status, dict(response.getheaders()), response.read()
        except OSError:
            return 0, {}, b""
        finally:
            store.close()

    def _ask_part(self, body: bytes, share: float) -> None:
        with suppress(OSError), socket.create_connection(("127.0.0.1", self.line.store_port), timeout=10) as store:
            head = f"{self.command} {self.path} HTTP/1.1\r\n" + "".join(f"{k}: {v}\r\n" for k, v in self.headers.items())
            whole = head.encode() + b"\r\n" + body
            store.sendall(whole[: int(len(whole) * share)])

    def _answer(self, status: int, headers: dict[str, Any], body: bytes, *, share: float = 1) -> None:
        if status == 0:
            return
        with suppress(OSError):
            self.send_response_only(status)
            for key, value in headers.items():
                if key.lower() not in ("content-length", "connection", "transfer-encoding", "keep-alive"):
                    self.send_header(key, value)
            length = headers.get("Content-Length", str(len(body))) if self.command == "HEAD" else str(len(body))
            self.send_header("Content-Length", length)
            # On a connection that was used before, browsers repeat a request that nobody answered.
            self.send_header("Connection", "close")
            self.end_headers()
            if self.command != "HEAD":
                self.wfile.write(body[: int(len(body) * share)])

    def log_message(self, format: str, *args: Any) -> None:  # noqa: A002  the standard library's name
        return


@contextmanager
def serving(app: Any) -> Iterator[int]:
    """Serve a WSGI application on a free port as `ergbook serve` does; yields the port."""
    from cheroot.wsgi import Server

    server = Server(("127.0.0.1", 0), app, numthreads=8)
    server.prepare()
    thread = threading.Thread(target=server.serve, daemon=True)
    thread.start()
    try:
        yield server.bind_addr[1]
    finally:
        server.stop()
        thread.join(timeout=10)
