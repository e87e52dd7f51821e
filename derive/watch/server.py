"""Serves one page to browsers on this machine, and tells them when there is a newer one."""

from __future__ import annotations

import json
import threading
from http.server import BaseHTTPRequestHandler, ThreadingHTTPServer

from derive.errors import OutputError
from derive.watch.page import listening

ADDRESS = "127.0.0.1"
# A browser that has gone is noticed when nothing can be sent to it.
HEARTBEAT_SECONDS = 10.0


class Shown:
    """The page that is shown, its number, and whether the next one is being made."""

    def __init__(self, page: bytes) -> None:
        self._changed = threading.Condition()
        self._page = page
        self._number = 0
        self._working = False
        self._ended = False

    def replace(self, page: bytes) -> None:
        """Show another page from now on."""
        with self._changed:
            self._page, self._number, self._working = page, self._number + 1, False
            self._changed.notify_all()

    def begin(self) -> None:
        """Say that the next page is being made."""
        with self._changed:
            self._working = True
            self._changed.notify_all()

    def end(self) -> None:
        """Let all that wait for a change go."""
        with self._changed:
            self._ended = True
            self._changed.notify_all()

    def page(self) -> bytes:
        """Give the page as it is served now."""
        with self._changed:
            return listening(self._page, self._number)

    def state(self) -> tuple[int, bool]:
        """Give the number of the page, and whether the next is being made."""
        with self._changed:
            return self._number, self._working

    def wait(self, known: tuple[int, bool] | None, seconds: float) -> tuple[int, bool] | None:
        """Wait for a state other than the one known, and give the state; None when all has ended."""
        with self._changed:
            self._changed.wait_for(
                lambda: self._ended or (self._number, self._working) != known, timeout=seconds
            )
            return None if self._ended else (self._number, self._working)


class Server(ThreadingHTTPServer):
    """Serves what is shown, to this machine alone."""

    daemon_threads = True

    def __init__(self, port: int, shown: Shown) -> None:
        self.shown = shown
        try:
            super().__init__((ADDRESS, port), Handler)
        except (OSError, OverflowError) as error:
            reason = getattr(error, "strerror", None) or str(error)
            raise OutputError(
                f"port {port} cannot be used: {reason}", cure="choose another with --port, or 0 for any"
            ) from None

    @property
    def port(self) -> int:
        """The port that it listens on."""
        return int(self.server_address[1])

    @property
    def url(self) -> str:
        """What to type into the browser."""
        return f"http://{ADDRESS}:{self.port}/"

    def handle_error(self, request: object, client_address: object) -> None:
        """Keep quiet about browsers that go away in the middle of an answer."""


class Handler(BaseHTTPRequestHandler):
    """Answers a browser: the page, or the stream of changes; nothing else."""

    server: Server

    def do_GET(self) -> None:
        """Answer one request."""
        # A page from elsewhere may point a name of its own at this machine: it is not answered.
        allowed = {f"{name}:{self.server.port}" for name in (ADDRESS, "localhost")}
        if self.headers.get("Host") not in allowed:
            self.send_error(403)
        elif self.path == "/":
            self._send_page()
        elif self.path == "/changes":
            self._send_changes()
        else:
            self.send_error(404)

    def _send_page(self) -> None:
        page = self.server.shown.page()
        self.send_response(200)
        self.send_header("Content-Type", "text/html; charset=utf-8")
        self.send_header("Content-Length", str(len(page)))
        self.send_header("Cache-Control", "no-store")
        self.end_headers()
        self.wfile.write(page)

    def _send_changes(self) -> None:
        self.send_response(200)
        self.send_header("Content-Type", "text/event-stream")
        self.send_header("Cache-Control", "no-store")
        self.end_headers()
        known: tuple[int, bool] | None = None
        while True:
            state = self.server.shown.wait(known, HEARTBEAT_SECONDS)
            if state is None:
                return
            data = json.dumps({"number": state[0], "working": state[1]})
            self.wfile.write(b": still here\n\n" if state == known else f"data: {data}\n\n".encode())
            self.wfile.flush()
            known = state

    def log_message(self, format: str, *args: object) -> None:
        """Say nothing: the terminal tells of the topology, not of requests."""
