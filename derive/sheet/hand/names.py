"""The names under which the sheet of a hand derivation carries its two files."""

from __future__ import annotations

from pathlib import PurePath


def stems(hand_file: str, topology_file: str) -> tuple[str, str]:
    """Give the stems of the derivation and of the topology, each its own where they are called alike."""
    first, second = PurePath(hand_file).stem, PurePath(topology_file).stem
    return first, f"{second}_topology" if first == second else second
