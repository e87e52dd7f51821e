"""The forks that a diagram is made of, and the one way in which they are worked out."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any, NamedTuple


class Fork(NamedTuple):
    """The value: bundle times the value of fork `taken`, plus `sign` times that of fork `left`."""

    bundle: int
    taken: int
    left: int
    sign: int


def fold(
    forks: Sequence[Fork],
    wanted: Sequence[int],
    zero: Any,
    one: Any,
    combined: Callable[[Fork, Sequence[Any]], Any],
) -> list[Any]:
    """Give the values of the wanted forks; what is needed no more is let go on the way.

    Given: the values of forks 0 and 1, and how a fork's value comes from those of all before it.
    """
    uses = [0] * (len(forks) + 2)
    for number in wanted:
        uses[number] += 1
    for _, taken, left, _ in forks:
        uses[taken] += 1
        uses[left] += 1
    values: list[Any] = [zero, one]
    for fork in forks:
        values.append(combined(fork, values))
        for child in (fork.taken, fork.left):
            uses[child] -= 1
            if child > 1 and not uses[child]:
                values[child] = None
    return [values[number] for number in wanted]
