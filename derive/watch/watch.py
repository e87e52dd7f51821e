"""Watches a topology file: on every save it is derived again, and the browser shows the new sheet."""

from __future__ import annotations

import os
import threading
import time
from collections.abc import Callable
from pathlib import Path

from derive.batch import sheet_names
from derive.errors import DeriveError
from derive.pipeline import Results, derive
from derive.reading.read import read
from derive.render.html import to_html
from derive.sheet.compose import compose
from derive.watch.page import message_page, waiting_page
from derive.watch.server import Server, Shown

POLL_SECONDS = 0.3
Stamp = tuple[int, int, int] | None
Say = Callable[[str], None]


def watch(
    file: str, port: int, say: Say, *, ended: threading.Event | None = None, poll: float = POLL_SECONDS
) -> None:
    """Serve a topology's sheet and keep it new, until Ctrl-C or until `ended` is set.

    Given: what to `say` is told in the terminal.
    Raises: OutputError where the port cannot be used. What is wrong with the file is shown, and watching goes on.
    """
    read_names(file)
    shown = Shown(waiting_page(Path(file).name))
    server = Server(port, shown)
    serving = threading.Thread(target=server.serve_forever, kwargs={"poll_interval": poll}, daemon=True)
    serving.start()
    try:
        say(f"{file}: {server.url} (Ctrl-C ends)")
        _follow(file, shown, say, ended or threading.Event(), poll)
    except KeyboardInterrupt:
        say("ended")
    finally:
        shown.end()
        server.shutdown()
        server.server_close()


def read_names(file: str) -> str:
    """Give the name of the sheet of a file."""
    return sheet_names([file])[0]


def _follow(file: str, shown: Shown, say: Say, ended: threading.Event, poll: float) -> None:
    known: Stamp = None
    first = True
    while not ended.is_set():
        stamp = _stamp(file)
        if first or stamp != known:
            # An editor may take the file away for a moment while it saves.
            if stamp is None and not first:
                time.sleep(poll)
                stamp = _stamp(file)
            known, first = stamp, False
            shown.begin()
            page, words = sheet_page(file)
            shown.replace(page)
            say(words)
        ended.wait(poll)


def _stamp(file: str) -> Stamp:
    try:
        found = os.stat(file)
    except (OSError, ValueError):
        return None
    return found.st_mtime_ns, found.st_size, found.st_ino


def sheet_page(file: str) -> tuple[bytes, str]:
    """Give the sheet of a file as a page, or the page of what is wrong; and the same in a line of words."""
    try:
        # The other engine takes longest and is asked when the sheet is issued.
        results = derive(read(file), other_engine=False)
        return to_html(compose(results.outcome, read_names(file))), f"{file}: {_verdict(results)}"
    except DeriveError as error:
        message = str(error)
    except (RecursionError, MemoryError):
        message = f"{file}: the circuit is too large to be worked on this machine"
    except Exception as error:  # noqa: BLE001 - a defect of ours must not end the watch
        message = f"{file}: internal error: {type(error).__name__}: {error}"
    return message_page(Path(file).name, message), message


def _verdict(results: Results) -> str:
    count = len(results.outcome.results)
    derived = f"derived, {count} result{'s' if count != 1 else ''}"
    return f"{derived}, all checks passed" if results.passed else f"{derived}; ✗ a check failed"
