"""The nouns of a band: its circuit, every change that led to it, and the names of merged parts."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from derive.devices.elements import SmallSignal
from derive.expressions.tree import Expression
from derive.topology.topology import BandName


@dataclass(frozen=True, slots=True)
class Change:
    """One thing that was done to the circuit for this band, and why.

    `subject` is the part, supply or merged name; `says` a sentence such as "short: coupling capacitor,
    its reactance is small from mid-band up".
    """

    kind: Literal["short", "open", "signal ground", "merge", "left out"]
    subject: str
    says: str


@dataclass(frozen=True, slots=True)
class Merged:
    """A name for parts in parallel or in series: R_B = R_1 ∥ R_2."""

    name: str
    definition: Expression
    parts: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class BandCircuit:
    """The circuit of one band.

    `circuit` has the merged parts under their names; `unmerged` is the same circuit without merging,
    which checks use. `definitions` are in an order in which each needs earlier ones only. `nodes`
    holds (node, its name in this band) of every node that became one with another.
    """

    band: BandName
    circuit: SmallSignal
    unmerged: SmallSignal
    changes: tuple[Change, ...]
    definitions: tuple[Merged, ...]
    nodes: tuple[tuple[str, str], ...] = ()
