"""The road in a few words, for tests: parts as lines of TOML in, the value at a station out."""

from __future__ import annotations

from fractions import Fraction

from derive.devices.linearise import linearise
from derive.eliminate.eliminate import eliminate
from derive.eliminate.plan import plan
from derive.expressions.parse import parse_expression
from derive.expressions.tree import Equation
from derive.expressions.walk import evaluate, names_of
from derive.nodal.write import write_equations
from derive.normalise.normalise import normalise
from derive.reading.read import parse

DRIVE = 'V_s = { voltage = ["in", "gnd"] }'
FIND = 'voltage = "out"\nper = "V_s"'


def topology_of(parts, find=FIND, drives=DRIVE, name="H"):
    """Read a topology with these parts."""
    text = f"[sheet]\ntitle = 'Test'\n[drives]\n{drives}\n[parts]\n{parts}\n[find.{name}]\n{find}\n"
    return parse(text, "test.toml")


def circuit_of(parts, **more):
    return linearise(topology_of(parts, **more))


def system_of(parts, **more):
    circuit = circuit_of(parts, **more)
    return write_equations(circuit, circuit.topology.finds[0])


def derivation_of(parts, **more):
    system = system_of(parts, **more)
    return eliminate(system, plan(system))


def solution_of(parts, **more):
    """Give the normal form and the whole derivation."""
    return normalise(derivation_of(parts, **more))


def equation(text):
    """Read an equation in the user's language."""
    left, right = text.split(" = ")
    return Equation(parse_expression(left), parse_expression(right))


def points(names, count=3):
    """Give values of unlike size for the names: the same names have the same values everywhere."""
    spread = [sum(map(ord, name)) * 37 + len(name) for name in names]
    for turn in range(count):
        yield {
            name: Fraction(seed % (89 + 12 * turn) + 2, seed % (53 + turn) + 3)
            for name, seed in zip(names, spread, strict=True)
        }


def says_the_same(one: Equation, other: Equation) -> bool:
    """Whether the differences of two equations' sides are equal, sign and factor included."""
    names = sorted({*names_of(one), *names_of(other)})
    return all(_gap(one, values) == _gap(other, values) for values in points(names))


def equal(one, other) -> bool:
    """Whether two expressions have equal values at several points; text is read first."""
    first, second = (parse_expression(side) if isinstance(side, str) else side for side in (one, other))
    names = sorted({*names_of(first), *names_of(second)})
    return all(
        evaluate(first, values, Fraction) == evaluate(second, values, Fraction)
        for values in points(names)
    )


def _gap(stated: Equation, values: dict[str, Fraction]) -> Fraction:
    return evaluate(stated.left, values, Fraction) - evaluate(stated.right, values, Fraction)
