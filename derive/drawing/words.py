"""A circuit in words, read off its drawing, for those who do not see it."""

from __future__ import annotations

from derive.drawing.drawing import Drawing
from derive.drawing.netlist import Netlist, netlist_of
from derive.quantities.words import listed
from derive.topology.topology import GROUND

_ENDS = frozenset({"1", "2"})


def words_of(drawing: Drawing) -> str:
    """Say which symbols a drawing has and how they are connected, part by part."""
    netlist = netlist_of(drawing)
    looks = {symbol.name: symbol.look for symbol in drawing.symbols}
    supplies = [f"supply {name} at {node}" for name, node in drawing.supplies]
    said = [f"{looks[name]} {name} {_ends(pins)}" for name, pins in netlist.parts]
    said = [words + _follows(name, netlist) for words, (name, _) in zip(said, netlist.parts, strict=True)]
    return f"{'; '.join([*supplies, *said])}."


def _node(node: str) -> str:
    return "ground" if node == GROUND else node


def _ends(pins: tuple[tuple[str, str], ...]) -> str:
    """Say where pins are: between two nodes, or each with its name."""
    if {pin for pin, _ in pins} == _ENDS:
        return f"between {_node(pins[0][1])} and {_node(pins[1][1])}"
    return f"with {listed(f'{pin} at {_node(node)}' for pin, node in pins)}"


def _follows(name: str, netlist: Netlist) -> str:
    signs = {sign: what for source, sign, what in netlist.follows if source == name}
    if "arrow" in signs:
        return f", following the current of {signs['arrow']}"
    if signs:
        return f", following the voltage from {_node(signs['+'])} to {_node(signs['-'])}"
    return ""
