"""Runs as a process of its own: solves netlists with lcapy and answers in JSON, a line each.

Given on standard input: {"questions": [{"lines": netlist, "node": name}, ...], "seconds": limit of
each, "megabytes": limit}. Gives on standard output, in their order, {"top": [...], "bottom": [...]},
the coefficients of the node's voltage by rising powers of s as exact rationals, {"late": true} where
the time was up, or {"error": words}. The netlists hold numbers only: no text of a user ever comes
this way. It imports nothing of its own package, so that it starts fast.
"""

from __future__ import annotations

import json
import sys
import warnings
from typing import Any

try:
    import resource
    import signal
except ImportError:  # a system without limits: the asking process ends this one when time is up
    LIMITS = False
else:
    LIMITS = hasattr(signal, "setitimer")


class LateError(BaseException):
    """Raised inside a solution when its time is up; no handler for mere errors may swallow it."""


def _ring(signal_number: int, frame: Any) -> None:
    raise LateError


def limit_memory(megabytes: int) -> None:
    """Let the system refuse memory beyond the limit."""
    if LIMITS:
        size = megabytes * 1024 * 1024
        resource.setrlimit(resource.RLIMIT_AS, (size, size))
        signal.signal(signal.SIGALRM, _ring)


def set_alarm(seconds: float) -> None:
    """Ring after so many seconds, and go on ringing; 0 to cancel."""
    # Once is not enough: the engine has handlers that catch everything and try another way.
    if LIMITS:
        signal.setitimer(signal.ITIMER_REAL, seconds, 0.5)


def solve(lines: list[str], node: str) -> dict[str, Any]:
    """Solve the netlist for the voltage of one node, as a ratio of polynomials in s."""
    import sympy
    from lcapy import Circuit

    circuit = Circuit()
    for line in lines:
        circuit.add(line)
    voltage = circuit[node].V.laplace().sympy
    free = sorted(voltage.free_symbols, key=str)
    if len(free) > 1 or any(str(symbol) != "s" for symbol in free):
        raise ValueError("the answer is no function of s alone")
    s = free[0] if free else sympy.Symbol("s")
    top, bottom = sympy.fraction(sympy.cancel(voltage))
    return {
        "top": [str(value) for value in sympy.Poly(top, s).all_coeffs()[::-1]],
        "bottom": [str(value) for value in sympy.Poly(bottom, s).all_coeffs()[::-1]],
    }


def answer(question: dict[str, Any], seconds: float) -> dict[str, Any]:
    """Answer one question within its time; whatever goes wrong is an answer too."""
    try:
        try:
            set_alarm(seconds)
            return solve(question["lines"], question["node"])
        finally:
            set_alarm(0)
    except LateError:
        set_alarm(0)
        return {"late": True}
    except Exception as error:  # noqa: BLE001 - whatever went wrong over here is reported, not raised
        words = f"{type(error).__name__}: {error}".splitlines()[0]
        return {"error": words.rstrip(": ")}


def main() -> None:
    """Answer the questions that stand on standard input."""
    asked: dict[str, Any] = json.load(sys.stdin)
    limit_memory(asked["megabytes"])
    warnings.simplefilter("ignore")
    for question in asked["questions"]:
        sys.stdout.write(json.dumps(answer(question, asked["seconds"])) + "\n")
        sys.stdout.flush()


if __name__ == "__main__":
    main()
