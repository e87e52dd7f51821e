"""Evaluation modulo a prime: quick, exact, and wrong about an identity with a known tiny chance.

Source of the bound: Schwartz, Fast probabilistic algorithms for verification of polynomial
identities, J. ACM 27 (1980) 701-717; Zippel (1979). From memory.
"""

from __future__ import annotations

import random
from collections.abc import Sequence

from flint import nmod_mat

# The largest prime below 2^61: products of two residues stay within FLINT's single-word arithmetic.
PRIME = 2**61 - 1


def residues(count: int, seed: str) -> list[int]:
    """Give `count` pairwise distinct residues, the same for the same seed."""
    source = random.Random(seed)
    found: dict[int, None] = {}
    while len(found) < count:
        found[source.randrange(2, PRIME - 1)] = None
    return list(found)


def matrix(rows: Sequence[Sequence[int]]) -> nmod_mat:
    """Make a FLINT matrix modulo PRIME."""
    flat = [value for row in rows for value in row]
    return nmod_mat(len(rows), len(rows[0]) if rows else 0, flat, PRIME)
