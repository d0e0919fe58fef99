"""A relay that counts every byte of a TCP connection, both ways."""

from __future__ import annotations

import socket
import threading
from contextlib import suppress


class Relay:
    """Listens on a port of its own and passes everything on."""

    def __init__(self, port: int) -> None:
        self.target = port
        self.counted = 0
        self.lock = threading.Lock()
        self.listener = socket.create_server(("127.0.0.1", 0))
        self.port = int(self.listener.getsockname()[1])
        threading.Thread(target=self._accept, daemon=True).start()

    def _accept(self) -> None:
        with suppress(OSError):
            while True:
                caller, _ = self.listener.accept()
                store = socket.create_connection(("127.0.0.1", self.target))
                for here, there in ((caller, store), (store, caller)):
                    threading.Thread(target=self._pass_on, args=(here, there), daemon=True).start()

    def _pass_on(self, here: socket.socket, there: socket.socket) -> None:
        with suppress(OSError):
            while data := here.recv(65536):
                with self.lock:
                    self.counted += len(data)
                there.sendall(data)
        with suppress(OSError):
            there.shutdown(socket.SHUT_WR)

    def close(self) -> None:
        self.listener.close()
