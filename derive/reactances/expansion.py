"""The circuit's own polynomial taken apart: what each set of capacitors and inductors adds to it.

Each of them enters the determinant of the nodal equations to the first power at most, because its law is
one row or one current. So the determinant is a sum over sets of them, D = Σ D_S·(s·C_i)·(s·C_j)·…, and
every time constant is a ratio of two neighbours: R_j with those of S turned is D_{S+j}/D_S.
Source: Cochrun and Grabel, A method for the determination of the transfer function of electronic
circuits, IEEE Trans. Circuit Theory CT-20 (Jan. 1973) 16-20; Hajimiri, Generalized time- and
transfer-constant circuit analysis, IEEE Trans. Circuits Syst. I 57 (June 2010) 1105-1121; from memory.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import reduce

from derive.algebra.exchange import exchange
from derive.algebra.minors import Minors
from derive.algebra.ratio import coefficients, lowest_terms
from derive.algebra.ring import Polynomial, Ring
from derive.devices.elements import Coupling
from derive.eliminate.derivation import Derivation, Plan
from derive.eliminate.rows import input_rows
from derive.errors import TooLargeError
from derive.nodal.system import NodalSystem
from derive.reactances.states import State, states_of

# Determinants longer than this are taken apart by nobody who wants to read the parts.
TERM_LIMIT = 6_000

Ratio = tuple[Polynomial, Polynomial]


@dataclass(frozen=True, slots=True, eq=False)
class Expansion:
    """Numerator and denominator by the set of states in each term, as a mask of bits in their order.

    The groups are over `ring` without s and without the states' own symbols. `base` holds the states
    that every term of the denominator has: each brings a pole at zero and changes nothing else;
    `top_base` is the same of the numerator, zeros at zero. Each is None where the terms of lowest order
    are of several sets, so that there is no one beginning.
    """

    ring: Ring
    states: tuple[State, ...]
    bottom: Mapping[int, Polynomial]
    top: Mapping[int, Polynomial]
    base: int | None
    top_base: int | None

    def ratio(self, above: Polynomial, below: Polynomial) -> Ratio:
        """Give a ratio of two groups in lowest terms, over the ring without reciprocals."""
        (top, bottom), _ = exchange(self.ring, [above, below])
        return lowest_terms(self.ring.plain(), top, bottom)

    def with_symbols(self, group: Polynomial, mask: int) -> Polynomial:
        """Multiply a group by the symbols of its states."""
        return reduce(lambda a, state: a * self.ring.generator(state.symbol), self.among(mask), group)

    def among(self, mask: int) -> tuple[State, ...]:
        """Give the states of a mask, in their order."""
        return tuple(state for place, state in enumerate(self.states) if mask >> place & 1)


def determinants(system: NodalSystem, order: Plan, limit: int = TERM_LIMIT) -> Ratio | None:
    """Give numerator and denominator of Cramer's rule, nothing cancelled; None where they are too long."""
    unknowns = [line.unknown for line in order.lines]
    _, rows = input_rows(system, unknowns, [line.equation for line in order.lines])
    minors = Minors(system.ring, rows, limit)
    every = (1 << len(rows)) - 1
    last = 1 << len(rows) - 1
    try:
        return minors.minor(every, every ^ last | last << 1), minors.minor(every, every)
    except TooLargeError:
        return None


def expand(derivation: Derivation, found: Ratio) -> Expansion | None:
    """Take the determinants apart; None where coils are coupled or a symbol stands for two elements."""
    system = derivation.system
    states = states_of(system.small_signal)
    symbols = [state.symbol for state in states]
    if len(set(symbols)) < len(symbols):
        return None
    if any(isinstance(element, Coupling) for element in system.small_signal.elements):
        return None
    top, bottom = (_grouped(system.ring, polynomial, symbols) for polynomial in found)
    if top is None or bottom is None:
        return None
    return Expansion(system.ring, states, bottom, top, _base(bottom), _base(top))


def _base(groups: Mapping[int, Polynomial]) -> int | None:
    common = reduce(lambda a, b: a & b, groups, -1)
    return common if common in groups else None


def hidden_factor(derivation: Derivation, denominator: Polynomial) -> tuple[Ratio, ...]:
    """Give what the circuit's polynomial has beyond the response's, as 1 + f_1·s + … by its coefficients.

    Powers of s are no part of it.
    """
    ring = derivation.system.ring.plain()
    (own,), _ = exchange(derivation.system.ring, [denominator])
    shown = derivation.denominator
    factor = (own / own.term_content()) / (shown / shown.term_content())
    found = coefficients(ring, factor, "s")
    return tuple(
        lowest_terms(ring, found.get(power, ring.zero), found[0]) for power in range(max(found) + 1)
    )


def _grouped(ring: Ring, polynomial: Polynomial, symbols: Sequence[str]) -> dict[int, Polynomial] | None:
    """Give the polynomial's groups by the symbols in their terms; None where a symbol has a higher power."""
    places = [ring.names.index(symbol) for symbol in symbols]
    degree = ring.names.index("s")
    grouped: dict[int, dict[tuple[int, ...], int]] = {}
    for exponents, coefficient in polynomial.to_dict().items():
        rest = list(exponents)
        powers = [int(exponents[place]) for place in places]
        if max(powers, default=0) > 1 or sum(powers) != int(exponents[degree]):
            return None
        for place in (degree, *places):
            rest[place] = 0
        mask = sum(1 << bit for bit, power in enumerate(powers) if power)
        grouped.setdefault(mask, {})[tuple(rest)] = coefficient
    return {mask: ring.context.from_dict(terms) for mask, terms in sorted(grouped.items())}
