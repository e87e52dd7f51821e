"""Printed trees read back: their values under given names, modulo a prime or exactly."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from typing import TypeVar

from derive.check.excitation import Excitation
from derive.check.solve import State, residue
from derive.check.verdict import Solution
from derive.expressions.tree import Expression
from derive.expressions.walk import evaluate, evaluate_modulo
from derive.normalise.form import NormalForm
from derive.topology.topology import GROUND

T = TypeVar("T")


def value_modulo(expression: Expression, values: Mapping[str, int], prime: int) -> int:
    """Give the tree's value modulo the prime.

    Raises: DeriveError for a name that is not known; ZeroDivisionError for a division by zero.
    """
    return evaluate_modulo(expression, values, prime)


def value_exact(expression: Expression, values: Mapping[str, Fraction]) -> Fraction:
    """Give the tree's exact value.

    Raises: DeriveError for a name that is not known; ZeroDivisionError for a division by zero.
    """
    return evaluate(expression, values, Fraction)


def form_modulo(form: NormalForm, values: Mapping[str, int], prime: int) -> int:
    """Give the value of the normal form at `values`, which hold `s` too, modulo the prime.

    Raises: DeriveError for a name that is not known; ZeroDivisionError at a pole.
    """
    top = series([value_modulo(a, values, prime) for a in form.numerator], values["s"]) % prime
    bottom = series([value_modulo(b, values, prime) for b in form.denominator], values["s"])
    if bottom % prime == 0:
        raise ZeroDivisionError("the denominator is zero at this point")
    gain = value_modulo(form.gain, values, prime)
    shift = pow(values["s"], int(form.power_of_s), prime)
    return gain * shift * top * pow(bottom, -1, prime) % prime


def form_exact(form: NormalForm, values: Mapping[str, Fraction]) -> Fraction:
    """Give the exact value of the normal form at `values`, which hold `s` too.

    Raises: DeriveError for a name that is not known; ZeroDivisionError at a pole.
    """
    top = series([value_exact(a, values) for a in form.numerator], values["s"])
    bottom = series([value_exact(b, values) for b in form.denominator], values["s"])
    return value_exact(form.gain, values) * values["s"] ** int(form.power_of_s) * top / bottom


def series(coefficients: list[T], s: T) -> T:
    """Give the sum of coefficient[k]·s^k."""
    total = coefficients[-1]
    for coefficient in reversed(coefficients[:-1]):
        total = total * s + coefficient  # type: ignore[operator]
    return total


def names_of_circuit(
    solution: Solution,
    excitation: Excitation,
    state: State,
    symbols: Mapping[str, int],
    input_value: int,
    prime: int,
) -> dict[str, int]:
    """Give the value of every name that a step may hold, at one solution of the circuit.

    An unknown that the circuit leaves open has no value here.
    """
    system = solution.derivation.system
    values = dict(symbols)
    for drive in system.small_signal.drives:
        values[drive.name] = residue(excitation.level(drive.name), prime) * input_value % prime
    values[system.input] = input_value
    for unknown in system.unknowns:
        known = state.nodes if unknown.quantity == "voltage" else state.branches
        if unknown.name == system.wanted:
            values[unknown.name] = state.response * input_value % prime
        elif unknown.quantity == "voltage" and unknown.subject == GROUND:
            values[unknown.name] = 0
        elif unknown.subject in known:
            values[unknown.name] = known[unknown.subject] * input_value % prime
    values.setdefault(system.find.name, state.response)
    return values
