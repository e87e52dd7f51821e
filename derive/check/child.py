"""A second engine in a process of its own, with a limit on its time and its memory."""

from __future__ import annotations

import contextlib
import json
import subprocess
import sys
import time
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

MEGABYTES = 3000
GRACE_SECONDS = 2.0  # the process keeps the limits itself; this is for one that does not answer
SCRIPT = Path(__file__).with_name("lcapy_child.py")
LATE = {"late": True}
SILENT = {"error": "the engine ended without an answer"}


@dataclass(frozen=True, slots=True)
class Child:
    """A running process, how many answers it owes, and the moment at which its time is up."""

    process: subprocess.Popen[str]
    owes: int
    deadline: float


def ask(questions: Sequence[dict[str, Any]], seconds: float) -> Child:
    """Start the process and put the questions to it; it works on its own from here."""
    deadline = time.monotonic() + seconds * len(questions) + GRACE_SECONDS
    process = subprocess.Popen(
        # -P: the folder of the script must not shadow modules of the libraries.
        [sys.executable, "-P", str(SCRIPT)],
        stdin=subprocess.PIPE,
        stdout=subprocess.PIPE,
        stderr=subprocess.DEVNULL,
        text=True,
        encoding="utf-8",
    )
    asked = {"questions": list(questions), "seconds": seconds, "megabytes": MEGABYTES}
    pipe = process.stdin
    if pipe is not None:
        with contextlib.suppress(BrokenPipeError):
            pipe.write(json.dumps(asked))
            pipe.flush()
        with contextlib.suppress(BrokenPipeError):
            pipe.close()
        process.stdin = None
    return Child(process, len(questions), deadline)


def answers_of(child: Child) -> list[dict[str, Any]]:
    """Wait for the answers until the time is up; one that did not come is LATE or SILENT."""
    process = child.process
    missing: dict[str, Any] = SILENT
    # One that has ended has its answers waiting, however late they are fetched.
    ended = process.poll() is not None
    left = None if ended else max(0.0, child.deadline - time.monotonic())
    try:
        text, _ = process.communicate(timeout=left)
    except subprocess.TimeoutExpired:
        process.kill()
        text, _ = process.communicate()
        missing = LATE
    answers = [_parsed(line) for line in text.splitlines()]
    return answers + [missing] * (child.owes - len(answers))


def _parsed(line: str) -> dict[str, Any]:
    try:
        answer: dict[str, Any] = json.loads(line)
    except ValueError:
        return SILENT
    return answer
