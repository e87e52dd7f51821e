"""Runs as a process of its own: reads a PDF within limits of memory and time, and says what is in it.

Given as arguments: megabytes, seconds, and the numbers of the pages to be read out, with commas, or "". Given on
standard input: the PDF. Gives on standard output, as JSON: what it carries, a digest of everything that can be
reached in it by its place, and the items of the pages asked for; or the words of an error.
"""

from __future__ import annotations

import json
import sys
from pathlib import Path

try:
    import resource
except ImportError:  # a system without limits: the asking process ends this one when time is up
    resource = None  # type: ignore[assignment]


def limit(megabytes: int, seconds: int) -> None:
    """Let the system refuse memory and time beyond the limits."""
    if resource is not None:
        size = megabytes * 1024 * 1024
        resource.setrlimit(resource.RLIMIT_AS, (size, size))
        resource.setrlimit(resource.RLIMIT_CPU, (seconds, seconds))
        resource.setrlimit(resource.RLIMIT_CORE, (0, 0))


def main() -> None:
    """Answer for the one file on standard input."""
    limit(int(sys.argv[1]), int(sys.argv[2]))
    # The script is started by its path, so that the package is not on the search path.
    sys.path.insert(0, str(Path(__file__).resolve().parents[2]))
    from derive.review.pdf_contents import read
    from derive.review.pdf_objects import DamagedError

    asked = [int(number) for number in sys.argv[3].split(",") if number]
    try:
        answer = read(sys.stdin.buffer.read(), asked)
    except DamagedError as error:
        answer = {"error": str(error)}
    except (MemoryError, RecursionError):
        answer = {"error": "it unfolds to more than a sheet can hold"}
    sys.stdout.write(json.dumps(answer))
    sys.stdout.flush()


if __name__ == "__main__":
    main()
