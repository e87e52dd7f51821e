"""The response that the road derives, as a number at values of the test's own choosing."""

from __future__ import annotations

from fractions import Fraction

from derive.devices.linearise import linearise
from derive.eliminate.eliminate import eliminate
from derive.eliminate.plan import plan
from derive.nodal.write import write_equations
from derive.reading.read import parse


def derivation_of(text, points=None):
    """Derive the first quantity that a topology asks for."""
    circuit = linearise(parse(text, "test.toml"), points or {})
    system = write_equations(circuit, circuit.topology.finds[0])
    return eliminate(system, plan(system))


def value_at(derivation, values):
    """Give numerator over denominator, exactly; `values` holds every symbol and s."""
    names = derivation.system.ring.names
    top, bottom = (
        _polynomial(polynomial, names, values)
        for polynomial in (derivation.numerator, derivation.denominator)
    )
    return top / bottom


def _polynomial(polynomial, names, values):
    total = Fraction(0)
    for exponents, coefficient in polynomial.to_dict().items():
        term = Fraction(int(coefficient))
        for name, exponent in zip(names, exponents, strict=False):
            if exponent:
                term *= Fraction(values[name]) ** int(exponent)
        total += term
    return total
