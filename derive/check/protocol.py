"""What a road of checking is, and how the roads are found: one file each in derive/check/roads.

A road is a module with NAME, METHOD (words for the sheet), ORDER (its place among the verdicts) and
`judge(solution)`. One that works beside the others, in a process of its own, has `start(solutions,
seconds)` too, giving a handle, and `finish(handle)`, giving a verdict for each solution.
"""

from __future__ import annotations

import importlib
import pkgutil
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

from derive.check import roads as package
from derive.check.verdict import Solution, Verdict


@dataclass(frozen=True, slots=True)
class Road:
    """One way to judge a solution; `start` and `finish` are None for one that runs in place."""

    key: str
    name: str
    method: str
    order: int
    judge: Callable[[Solution], Verdict]
    start: Callable[[Sequence[Solution], float], Any] | None
    finish: Callable[[Any], Sequence[Verdict]] | None


def find_roads() -> tuple[Road, ...]:
    """Find every road, by ORDER.

    Raises: ValueError where two roads have one name or one place.
    """
    found = []
    for key in sorted(item.name for item in pkgutil.iter_modules(package.__path__)):
        module = importlib.import_module(f"{package.__name__}.{key}")
        found.append(
            Road(
                key,
                module.NAME,
                module.METHOD,
                module.ORDER,
                module.judge,
                getattr(module, "start", None),
                getattr(module, "finish", None),
            )
        )
    refuse_duplicates(found)
    return tuple(sorted(found, key=lambda road: road.order))


def refuse_duplicates(found: list[Road]) -> None:
    """Refuse roads that share a name or a place.

    Raises: ValueError naming the two files.
    """
    for index, road in enumerate(found):
        for other in found[:index]:
            if road.name == other.name or road.order == other.order:
                raise ValueError(f"roads {other.key} and {road.key} share a name or a place")
