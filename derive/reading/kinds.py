"""The kinds of part that a topology may name, as the device models state them."""

from __future__ import annotations

from derive.devices.registry import models
from derive.topology.kind import Kind


def _in_order() -> dict[str, Kind]:
    """Give every kind by its name: those with a value of their own first, resistors before all."""
    kinds = [model.SPEC for model in models().values()]
    kinds.sort(key=lambda kind: (kind.name != "resistor", kind.dimension is None))
    return {kind.name: kind for kind in kinds}


KINDS: dict[str, Kind] = _in_order()

# Kinds whose current may be named, by `senses` or by a find.
TWO_NODE_KINDS = tuple(kind.name for kind in KINDS.values() if kind.two_node_key)
