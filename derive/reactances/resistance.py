"""The resistance that a capacitor or inductor sees, by a short exact derivation of its own."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

from derive.algebra.ring import Polynomial, moved
from derive.devices.elements import Capacitor, Inductor, SmallSignal
from derive.eliminate.derivation import Derivation
from derive.eliminate.eliminate import eliminate
from derive.eliminate.plan import plan
from derive.errors import InputError
from derive.nodal.voltages import fresh
from derive.nodal.write import ring_of, write_equations
from derive.reactances.expansion import determinants
from derive.reactances.states import port_find, seen_from

# The terms that the determinants may have: a derivation of longer ones explains nothing.
DERIVED_LIMIT = 300
INFINITE = "infinite"
NOT_FIXED = "not fixed by the circuit"
TOO_LONG = "too long to be read"


@dataclass(frozen=True, slots=True, eq=False)
class Resistance:
    """numerator/denominator over the ring of the whole circuit, without reciprocals.

    Both are None where `why` says that there is no such number; `derivation` is None where the part's
    nodes are one, or there is nothing to derive.
    """

    derivation: Derivation | None
    numerator: Polynomial
    denominator: Polynomial
    why: str = ""


@lru_cache(maxsize=128)
def resistance_seen(
    circuit: SmallSignal, subject: Capacitor | Inductor, turned: frozenset[str]
) -> Resistance:
    """Give the resistance between a part's nodes, the states named in `turned` turned and others at rest."""
    ring = ring_of(circuit)
    try:
        seen = seen_from(circuit, subject, turned)
        if seen.port is None:
            return Resistance(None, None, None, INFINITE)
        if seen.port[0] == seen.port[1]:
            return Resistance(None, ring.zero, ring.one)
        derivation = _derive(seen.circuit, seen.port, _name(circuit, subject))
    except InputError:
        return Resistance(None, None, None, NOT_FIXED)
    if derivation is None:
        return Resistance(None, None, None, TOO_LONG)
    own = derivation.system.ring
    return Resistance(
        derivation, moved(derivation.numerator, own, ring), moved(derivation.denominator, own, ring)
    )


def _derive(circuit: SmallSignal, port: tuple[str, str], name: str) -> Derivation | None:
    system = write_equations(circuit, port_find(circuit, port, name))
    order = plan(system)
    if determinants(system, order, DERIVED_LIMIT) is None:
        return None
    return eliminate(system, order)


def _name(circuit: SmallSignal, subject: Capacitor | Inductor) -> str:
    """Give the resistance a name of its own: R_C_mu is what C_mu sees."""
    symbol = subject.capacitance if isinstance(subject, Capacitor) else subject.inductance
    taken = {*ring_of(circuit).names, *(drive.name for drive in circuit.drives)}
    return fresh(taken, f"R_{symbol}")
