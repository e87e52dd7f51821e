"""All roads driven, in their order; the one in another process works meanwhile."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from derive.check.protocol import Road, find_roads
from derive.check.verdict import NOT_ASKED, Solution, Verdict


@dataclass(frozen=True, slots=True)
class Handle:
    """What was begun: the solutions, and the handle of each road that works beside the others."""

    solutions: tuple[Solution, ...]
    roads: tuple[Road, ...]
    begun: tuple[tuple[str, Any], ...]


def start(solutions: Sequence[Solution], *, lcapy: bool = True, lcapy_seconds: float = 10.0) -> Handle:
    """Begin what can go on in another process; `finish` gives the verdicts and must be called.

    Given: how many seconds the other engine may take for each solution.
    """
    roads, chosen = find_roads(), tuple(solutions)
    begun: list[tuple[str, Any]] = []
    for road in roads:
        if road.start is not None and lcapy and chosen:
            try:
                begun.append((road.key, road.start(chosen, lcapy_seconds)))
            except Exception as error:  # noqa: BLE001 - a check that breaks is a failed check
                begun.append((road.key, _broken(road, error)))
    return Handle(chosen, roads, tuple(begun))


def finish(handle: Handle) -> tuple[tuple[Verdict, ...], ...]:
    """Give, for each solution, the verdict of every road in order; one that breaks has failed."""
    begun = dict(handle.begun)
    columns: dict[str, Sequence[Verdict]] = {}
    # Those in place first: the others work on meanwhile.
    for road in sorted(handle.roads, key=lambda road: road.start is not None):
        if road.start is None:
            columns[road.key] = [_judge(road, solution) for solution in handle.solutions]
        else:
            columns[road.key] = _fetch(road, len(handle.solutions), begun)
    return tuple(
        tuple(columns[road.key][index] for road in handle.roads) for index in range(len(handle.solutions))
    )


def _judge(road: Road, solution: Solution) -> Verdict:
    try:
        return road.judge(solution)
    except Exception as error:  # noqa: BLE001 - a check that breaks is a failed check
        return _broken(road, error)


def _fetch(road: Road, count: int, begun: dict[str, Any]) -> Sequence[Verdict]:
    if road.finish is None or road.key not in begun:
        return [Verdict(road.name, road.method, None, NOT_ASKED, "")] * count
    handle = begun[road.key]
    if isinstance(handle, Verdict):
        return [handle] * count
    try:
        return road.finish(handle)
    except Exception as error:  # noqa: BLE001 - as above
        return [_broken(road, error)] * count


def _broken(road: Road, error: Exception) -> Verdict:
    words = str(error).strip("'\"") or type(error).__name__
    return Verdict(road.name, road.method, False, f"could not be worked: {words}", "")


def check_all(
    solutions: Sequence[Solution], *, lcapy: bool = True, lcapy_seconds: float = 10.0
) -> tuple[tuple[Verdict, ...], ...]:
    """Judge every solution by every road; the other engine is started once for all of them."""
    return finish(start(solutions, lcapy=lcapy, lcapy_seconds=lcapy_seconds))


def check(solution: Solution, *, lcapy: bool = True, lcapy_seconds: float = 10.0) -> tuple[Verdict, ...]:
    """Judge one solution by every road."""
    return check_all((solution,), lcapy=lcapy, lcapy_seconds=lcapy_seconds)[0]
