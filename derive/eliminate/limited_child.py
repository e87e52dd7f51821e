"""Runs as a process of its own: eliminates within limits of memory and time, and gives the steps.

Given as arguments: megabytes and seconds. Given on standard input, pickled by the process that started
this one: the circuit, the quantity wanted and the plan. Gives on standard output, pickled: the steps and the
terms of numerator and denominator, or the words of a refusal.
"""

from __future__ import annotations

import pickle
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
    """Answer the one question on standard input."""
    limit(int(sys.argv[1]), int(sys.argv[2]))
    # The script is started by its path, so that the package is not on the search path.
    sys.path.insert(0, str(Path(__file__).resolve().parents[2]))
    from derive.eliminate.eliminate import eliminate
    from derive.errors import TooLargeError
    from derive.nodal.write import write_equations

    circuit, find, plan = pickle.load(sys.stdin.buffer)
    try:
        found = eliminate(write_equations(circuit, find), plan)
        answer: object = (found.steps, *(_terms(side) for side in (found.numerator, found.denominator)))
    except TooLargeError as error:
        answer = error.what
    sys.stdout.buffer.write(pickle.dumps(answer, protocol=pickle.HIGHEST_PROTOCOL))
    sys.stdout.buffer.flush()


def _terms(polynomial: object) -> dict[tuple[int, ...], int]:
    terms = polynomial.to_dict()  # type: ignore[attr-defined]
    return {tuple(map(int, powers)): int(value) for powers, value in terms.items()}


if __name__ == "__main__":
    main()
