"""The response under assumptions, worked anew modulo a prime: what each assumption must leave of it.

A response is a function of the values of the circuit's own symbols, and of s. At first it is the circuit's,
solved from its tableau. A part that is assumed away is taken out of the tableau, or given the value zero
there. What no tableau can hold, a gain without limit or a part that was tied or struck before, is dealt with
by its law: at several values λ of it the response is a ratio of polynomials in λ, which for λ → ∞ is that of
the leading coefficients. A tie puts one value for another. Once terms are struck there is no circuit that
has the response; from there on the printed result, which has been judged by then, takes its place.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from typing import Any

from flint import nmod_mat, nmod_poly

from derive.check.excitation import excite
from derive.check.reading import form_modulo, value_modulo
from derive.check.solve import NoSolutionError, solve_modulo
from derive.check.stamp import assemble
from derive.check.verdict import Solution
from derive.devices.elements import (
    Capacitor,
    Coupling,
    CurrentGain,
    Inductor,
    Resistor,
    SmallSignal,
    Transresistance,
)
from derive.expressions.tree import Expression, Name, Parallel, Quotient, Sum
from derive.expressions.walk import names_of
from derive.normalise.form import NormalForm
from derive.readable.vocabulary import Vocabulary, vocabulary_of
from derive.topology.topology import Assumption

Values = Mapping[str, int]
At = Callable[[Values], int]
# A part stands in a response to the first power; a name that took the place of others may stand higher.
MOST_DEGREE = 4


@dataclass(frozen=True, slots=True)
class Stage:
    """A response, and the circuit that has it as long as there is one with nothing but parts taken out."""

    at: At
    circuit: SmallSignal | None


class Anew:
    """One solution's responses modulo one prime."""

    def __init__(self, solution: Solution, prime: int) -> None:
        self.solution = solution
        self.prime = prime
        band = solution.band
        self.merged = {each.name: each for each in band.definitions} if band else {}
        circuit = band.circuit if band else solution.judged
        self.words: Vocabulary = vocabulary_of(circuit)

    def begin(self) -> Stage:
        """Give the exact response, from the circuit."""
        return Stage(self._solved(self.solution.judged), self.solution.judged)

    def printed(self, form: NormalForm) -> Stage:
        """Give a printed form as a response."""
        return Stage(lambda values: form_modulo(form, self.known(values), self.prime), None)

    def known(self, values: Values) -> dict[str, int]:
        """Give the values with those of merged names and of words such as beta, from their definitions."""
        found = dict(values)
        for merged in self.merged.values():
            found[merged.name] = value_modulo(merged.definition, found, self.prime)
        for name, definition in self.words.definitions:
            if set(names_of(definition)) <= found.keys():
                found[name] = value_modulo(definition, found, self.prime)
        return found

    def value(self, expression: Expression, values: Values) -> int:
        """Give an expression's value."""
        return value_modulo(expression, self.known(values), self.prime)

    def after(self, stage: Stage, assumption: Assumption) -> Stage:
        """Give the response after a limit or a tie.

        Raises: ValueError for another assumption.
        """
        if assumption.form == "equal" and assumption.right is not None:
            return Stage(self._tied(stage.at, assumption.left, assumption.right), None)
        weights = self.weights(assumption)
        if stage.circuit is not None:
            left = without(stage.circuit, weights)
            if left is not None:
                return Stage(self._solved(left), left)
        return Stage(limit_of(stage.at, weights, self.prime), None)

    def weights(self, assumption: Assumption) -> dict[str, int]:
        """Give the circuit's own symbols that go to infinity (+1) or to zero (−1).

        Raises: ValueError where the assumption is no limit of names.
        """
        upward = assumption.form == "to_inf"
        left = assumption.left
        if isinstance(left, Name):
            names: list[Expression] = [left]
        elif isinstance(left, Parallel) and upward:
            names = list(left.branches)
        else:
            names = list(left.terms) if isinstance(left, Sum) and not upward else []
        found: dict[str, int] = {}
        for name in names:
            if not isinstance(name, Name):
                raise ValueError("no limit of names")
            found |= self._weights(name.text, 1 if upward else -1)
        if assumption.form not in ("to_inf", "to_zero") or not found:
            raise ValueError("no limit of names")
        return found

    def _weights(self, name: str, sign: int) -> dict[str, int]:
        for junction in self.words.junctions:
            if name == junction.beta and sign > 0:
                return {junction.r_pi: 1}
            if name == junction.r_e and sign < 0:
                return {junction.g_m: 1, junction.r_pi: -1}
        return dict.fromkeys(self.parts_of(name), sign)

    def parts_of(self, name: str) -> list[str]:
        """Give the circuit's own symbols that a name stands for: itself, or the parts of a merged one."""
        if name not in self.merged:
            return [name]
        return [part for own in self.merged[name].parts for part in self.parts_of(own)]

    def _solved(self, circuit: SmallSignal) -> At:
        excitation = excite(self.solution.derivation.system)

        def respond(values: Values) -> int:
            values = {"": 0, **values}
            tableau = assemble(circuit, excitation, values.__getitem__)
            return int(solve_modulo(tableau, values["s"], self.prime).response)

        return respond

    def _tied(self, before: At, left: Expression, right: Expression) -> At:
        name, by = self._tie(left, right)

        def respond(values: Values) -> int:
            known = self.known(values)
            # A merged part takes a value as its parts are all scaled alike: combinations are of degree one.
            factor = self.value(by, values) * pow(known[name], -1, self.prime)
            changed = {part: values[part] * factor % self.prime for part in self.parts_of(name)}
            return before({**values, **changed})

        return respond

    def _tie(self, left: Expression, right: Expression) -> tuple[str, Expression]:
        symbols = {symbol.name for symbol in self.solution.judged.symbols} | self.merged.keys()
        betas = {junction.beta: junction for junction in self.words.junctions}
        for one, other in ((left, right), (right, left)):
            if not isinstance(one, Name) or one.text in names_of(other):
                continue
            if one.text in symbols:
                return one.text, other
            if one.text in betas and betas[one.text].r_pi not in names_of(other):
                return betas[one.text].r_pi, Quotient(other, Name(betas[one.text].g_m))
        raise ValueError("neither side is a part by itself")


def without(circuit: SmallSignal, weights: Mapping[str, int]) -> SmallSignal | None:
    """Give the circuit with parts taken out or made wires; None where a part cannot be that.

    A wire is a resistor of the symbol "", whose value is zero.
    """
    left = list(circuit.elements)
    for name, sign in weights.items():
        own = [element for element in left if _symbol(element) == name]
        if len(own) != 1 or _is_needed(circuit, own[0].name, own[0].part):
            return None
        element: Any = own[0]
        place = left.index(element)
        if isinstance(element, Capacitor) == (sign > 0):
            left[place] = Resistor(element.name, element.part, element.between, "")
        else:
            del left[place]
    return replace(circuit, elements=tuple(left))


def _symbol(element: object) -> str:
    for field in ("resistance", "capacitance", "inductance"):
        if isinstance(element, Resistor | Capacitor | Inductor) and hasattr(element, field):
            return str(getattr(element, field))
    return ""


def _is_needed(circuit: SmallSignal, name: str, part: str) -> bool:
    """Whether something refers to an element by its name: it is coupled, or its current sensed or wanted."""
    for other in circuit.elements:
        if isinstance(other, Coupling) and name in other.coils:
            return True
        if isinstance(other, CurrentGain | Transresistance) and other.senses == name:
            return True
    return any(find.part in (name, part) for find in circuit.topology.finds)


def limit_of(response: At, weights: Mapping[str, int], prime: int) -> At:
    """Give what a response becomes as every name is multiplied by λ to its weight and λ grows without limit.

    The degree in λ is the lowest that all points agree with.
    """

    def found(values: Values) -> int:
        points = []
        for turn in range(2, 2 + 2 * MOST_DEGREE + 4):
            scaled = dict(values)
            for name, weight in weights.items():
                scaled[name] = values[name] * pow(turn, weight, prime) % prime
            points.append((turn, response(scaled)))
        for degree in range(MOST_DEGREE + 1):
            ratio = _through(points, degree, prime)
            if ratio is not None:
                return _at_infinity(*ratio, prime)
        raise NoSolutionError("a limit could not be found")

    return found


def _through(points: list[tuple[int, int]], degree: int, prime: int) -> tuple[Any, Any] | None:
    """Give polynomials of a degree, top and bottom, with top(x) = y·bottom(x) at all points; None if none."""
    width = 2 * degree + 2
    flat: list[int] = []
    for x, y in points:
        powers = [pow(x, k, prime) for k in range(degree + 1)]
        flat += [*powers, *(-y * power % prime for power in powers)]
    matrix, nullity = nmod_mat(len(points), width, flat, prime).nullspace()
    if nullity < 1:
        return None
    entries = [int(matrix[k, 0]) for k in range(width)]
    top, bottom = nmod_poly(entries[: degree + 1], prime), nmod_poly(entries[degree + 1 :], prime)
    return (top, bottom) if bottom.degree() >= 0 else None


def _at_infinity(top: Any, bottom: Any, prime: int) -> int:
    degree = bottom.degree()
    if top.degree() > degree:
        raise NoSolutionError("the response grows without limit")
    return int(top[degree]) * pow(int(bottom[degree]), -1, prime) % prime
