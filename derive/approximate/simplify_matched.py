"""Matched parts, and neighbouring values at which an assumption has to hold as well."""

from __future__ import annotations

import re
from collections.abc import Sequence

import numpy as np

from derive.approximate.simplify_network import Network, Stamp
from derive.approximate.simplify_trials import Floats

# What a name begins with, before its index: matched parts are alike in it.
STEM = re.compile(r"^(.*?)_?\d*$")
# By how much values are moved, up or down, to tell a mechanism from a coincidence.
SPREAD = 0.2
GOLDEN = (5**0.5 - 1) / 2


def matched(network: Network, stamps: Sequence[Stamp]) -> dict[str, str]:
    """Give, for symbols of one kind and exactly one value, the first of them: r_pi1 for r_pi2."""
    dimensions = {symbol.name: symbol.dimension for symbol in network.circuit.symbols}
    first: dict[object, str] = {}
    ties: dict[str, str] = {}
    for name in dict.fromkeys(name for stamp in stamps for name in stamp.symbols):
        if name in dimensions:
            key = (_stem(name), dimensions[name], network.values[name])
            leader = first.setdefault(key, name)
            if leader != name:
                ties[name] = leader
    return ties


def _stem(name: str) -> str:
    found = STEM.match(name)
    return found.group(1) if found else name


def varied(network: Network, turn: int) -> Floats:
    """Give a factor for every stamp: each symbol moved by up to SPREAD, matched ones alike.

    The same factors come out each time: they are spread by multiples of the golden section.
    """
    ties = matched(network, network.stamps)
    names = list(dict.fromkeys(ties.get(n, n) for stamp in network.stamps for n in stamp.symbols))
    factors = {
        name: 1 + SPREAD * (2 * ((place + 1) * (turn + 1) * GOLDEN % 1) - 1)
        for place, name in enumerate(names)
    }
    found = np.ones(len(network.stamps))
    for place, stamp in enumerate(network.stamps):
        for name in stamp.symbols:
            factor = factors[ties.get(name, name)]
            found[place] *= 1 / factor if stamp.inverted else factor
    return found
