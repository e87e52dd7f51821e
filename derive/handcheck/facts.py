"""What a derivation may use without saying so: the circuit's own equations, and what its names mean."""

from __future__ import annotations

from collections.abc import Iterable
from fractions import Fraction

from derive.devices.elements import Capacitor, CurrentGain, Element, Inductor, Resistor, Transconductance
from derive.expressions.tree import (
    ONE,
    Expression,
    Name,
    Negative,
    Number,
    Power,
    Product,
    Quotient,
    Sum,
)
from derive.expressions.walk import names_of, substitute
from derive.handcheck.follow import Fact
from derive.handcheck.names import NameRefused, Names
from derive.handcheck.points import through
from derive.topology.topology import GROUND

S = Name("s")


def same_nodes(names: Names, expression: Expression) -> Expression:
    """Write node voltages by the names that their nodes have in this band."""
    moved = {
        f"v_{old}": Name(f"v_{new}") if new != GROUND else Number(Fraction(0))
        for old, new in names.moved.items()
    }
    used = {
        name: moved[name] for name in names_of(expression) if name in moved and _is_voltage(names, name)
    }
    return substitute(expression, used) if used else expression


def _is_voltage(names: Names, name: str) -> bool:
    try:
        return names.look(name).kind == "voltage"
    except NameRefused:
        return False


def circuit_facts(names: Names, used: Iterable[str]) -> list[Fact]:
    """Give the circuit's equations, and the meanings of the names that the lines use."""
    used = set(used)
    facts = []
    for equation in names.system.equations:
        law = equation.equation
        facts.append(Fact(0, law.left, law.right, True, free=not equation.terms))
    for name, value in names.system.known:
        facts.append(Fact(0, Name(f"v_{name}"), value, True, free=True))
    for name in sorted(used):
        if name.startswith("i_") and names.look(name).kind == "current":
            meaning = _current(names, names.look(name).subject)
            if meaning is not None:
                facts.append(Fact(0, Name(name), meaning, True, free=True))
    find = names.system.find
    if find.name in used:
        facts.append(
            Fact(0, Name(find.name), Quotient(_wanted(names), Name(names.system.input)), True, free=True)
        )
        if any(names.look(name).kind == "coefficient" for name in used):
            facts.append(Fact(0, Name(find.name), _normal_form(names), True, free=True))
    return facts


def _voltage(node: str) -> Expression:
    return Number(Fraction(0)) if node == GROUND else Name(f"v_{node}")


def _between(pair: tuple[str, str]) -> Expression:
    first, second = (_voltage(node) for node in pair)
    if pair[1] == GROUND:
        return first
    return Negative(second) if pair[0] == GROUND else Sum((first, Negative(second)))


def _wanted(names: Names) -> Expression:
    find = names.system.find
    if find.nodes is not None:
        return _between(find.nodes)
    return Name(f"i_{find.part}")


def _current(names: Names, branch: str) -> Expression | None:
    """Write an element's current by its own law; None where only the circuit gives it."""
    element: Element | None
    element = next((item for item in names.solution.judged.elements if item.name == branch), None)
    merged = element is None
    if merged:
        whole = names.system.small_signal.elements
        element = next((item for item in whole if item.name == branch), None)
    if isinstance(element, Resistor | Capacitor | Inductor):
        voltage = _between(through(element) if merged else element.between)
        if isinstance(element, Resistor):
            return Quotient(voltage, Name(element.resistance))
        if isinstance(element, Capacitor):
            return Product((S, Name(element.capacitance), voltage))
        return Quotient(voltage, Product((S, Name(element.inductance))))
    if isinstance(element, Transconductance):
        return Product((Name(element.transconductance), _between(element.senses)))
    if isinstance(element, CurrentGain):
        return Product((Name(element.gain), Name(f"i_{element.senses}")))
    return None


def _normal_form(names: Names) -> Expression:
    form = names.solution.form

    def row(letter: str, entries: tuple[Expression, ...]) -> Expression:
        terms: list[Expression] = [ONE]
        for k in range(1, len(entries)):
            terms.append(Product((Name(f"{letter}_{k}"), Power(S, k))))
        return Sum(tuple(terms)) if len(terms) > 1 else ONE

    top = Product((Name("K"), Power(S, int(form.power_of_s)), row("a", form.numerator)))
    return Quotient(top, row("b", form.denominator))
