"""Progress on standard error: nothing for work of under a second, then a bar or plain lines."""

from __future__ import annotations

import sys
import time
from types import TracebackType
from typing import Any

PATIENCE_SECONDS = 1.0


class Progress:
    """Tells how far the work is; silent when `quiet`, and while the work is short.

    Given: the number of sheets, each of which goes through `stages` stages.
    """

    def __init__(self, sheets: int, stages: int, *, quiet: bool) -> None:
        self.total = sheets * stages
        self.quiet = quiet
        self.done = 0
        self.begun = time.monotonic()
        self.bar: Any = None
        self.task: Any = None

    def __enter__(self) -> Progress:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        if self.bar is not None:
            self.bar.stop()

    def tell(self, sheet: str, stage: str) -> None:
        """Say that a stage of a sheet begins."""
        self.done = min(self.done + 1, self.total)
        if self.quiet or time.monotonic() - self.begun < PATIENCE_SECONDS:
            return
        words = f"{sheet}: {stage}"
        if not sys.stderr.isatty():
            sys.stderr.write(f"{words} ({self.done} of {self.total})\n")
            sys.stderr.flush()
            return
        if self.bar is None:
            self._start()
        self.bar.update(self.task, completed=self.done - 1, description=words)

    def _start(self) -> None:
        # Imported here because most runs are over before a bar is wanted.
        from rich.console import Console
        from rich.progress import BarColumn, TextColumn
        from rich.progress import Progress as Bar

        columns = (TextColumn("{task.description}"), BarColumn(), TextColumn("{task.percentage:.0f} %"))
        self.bar = Bar(*columns, console=Console(stderr=True), transient=True)
        self.task = self.bar.add_task("", total=self.total)
        self.bar.start()
