"""What a kind of part looks like in a topology file; each device model states its own."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from derive.quantities.dimension import Dimension

Sign = Literal["positive", "not zero", "coupling", "any"]
# What stands behind the kind's own key: a value, the word true, a model's name, or either of these.
Written = Literal["value", "true", "model", "true or model"]
Keys = tuple[str, str]


@dataclass(frozen=True, slots=True)
class Parameter:
    """A further value of a part or of its model: its dimension, and whether a frequency is in Hz."""

    name: str
    dimension: Dimension
    cycles: bool | None = None
    sign: Sign = "positive"


@dataclass(frozen=True, slots=True)
class Kind:
    """One kind of part.

    `wires` holds (key, number of nodes); `optional_wires` those that may be left out. `choices` holds
    (key, words allowed) for parameters that are words, such as the polarity, the first being the
    default. `two_node_key` names the key whose two nodes carry a current that may be sensed.
    `alternatives` lists pairs of parameters of which one may be given, since they say the same.

    For a device, `joins` lists the pairs of keys between which it lets a current through, `joins_if`
    those where it does so only if one of the parameters named before them is given, and `controls`
    the keys between which a controlled current flows with those that it senses. `apart` lists pairs
    of keys that must be on different nodes. In these, `gnd` is ground, as is a key left out; a pair of
    one key twice stands for its two nodes.
    """

    name: str
    wires: tuple[tuple[str, int], ...]
    example: str
    written: Written = "value"
    dimension: Dimension | None = None
    sign: Sign = "positive"
    senses_part: bool = False
    has_coils: bool = False
    may_have_role: bool = False
    two_node_key: str | None = None
    optional_wires: tuple[tuple[str, int], ...] = ()
    parameters: tuple[Parameter, ...] = ()
    choices: tuple[tuple[str, tuple[str, ...]], ...] = ()
    alternatives: tuple[Keys, ...] = ()
    joins: tuple[Keys, ...] = ()
    joins_if: tuple[tuple[tuple[str, ...], Keys], ...] = ()
    controls: tuple[tuple[Keys, Keys], ...] = ()
    apart: tuple[Keys, ...] = ()

    @property
    def keys(self) -> tuple[str, ...]:
        """Every key that must be written besides the kind itself."""
        more = ("senses",) if self.senses_part else ("coils",) if self.has_coils else ()
        return (*(key for key, _ in self.wires), *more)
