"""Time constants against the circuit's own tableau: every resistance seen, and every sum of products."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass

from derive.check.degree import chance, degree_of_circuit, degrees, weights_of
from derive.check.excitation import excite
from derive.check.merged import definitions_of, with_merged_modulo
from derive.check.nominal_constants import wrong_number
from derive.check.points import Stream, stream, values_modulo
from derive.check.reading import value_modulo
from derive.check.roads import steps
from derive.check.solve import NoSolutionError
from derive.check.turned import Turned, normalised
from derive.check.verdict import Solution, Verdict
from derive.check.words import at_most, count
from derive.devices.elements import Coupling
from derive.errors import DeriveError
from derive.expressions.tree import ONE, Expression, Name, Sum
from derive.normalise.normalise import normalise
from derive.normalise.numbers import values_of
from derive.reactances.time_constants import Coefficient, Product, TimeConstant, TimeConstants

NAME = "time constants"
METHOD = (
    "each resistance seen, each product and their sums against the circuit's own tableau, solved anew with "
    "capacitors and inductors at rest or turned, at random points modulo a random 61-bit prime"
)
ORDER = 74
POINTS = 2
TRIES = 12
LIMIT = "equal at every point"


class WrongError(ValueError):
    """Raised for the first thing found that is not true of the circuit."""


@dataclass(frozen=True, slots=True)
class _Point:
    """The circuit at one random point, and how a printed tree is read there."""

    solution: Solution
    given: TimeConstants
    circuit: Turned
    read: Callable[[Expression], int]

    @property
    def prime(self) -> int:
        return self.circuit.prime


def judge(solution: Solution) -> Verdict:
    """Judge whether every time constant and every coefficient made of them is true of the circuit."""
    given = solution.time_constants
    if given is None or not (given.open_circuit or given.short_circuit or given.coefficients):
        return Verdict(NAME, METHOD, None, "none were given", LIMIT, applies=False)
    numbers = stream(solution, "time constants")
    prime = numbers.prime()
    agreed, why = 0, ""
    try:
        derived = _judge_derivations(given)
        wrong = wrong_number(given, values_of(solution.derivation.system.small_signal))
        if wrong:
            return Verdict(NAME, METHOD, False, wrong, LIMIT)
        for _ in range(TRIES):
            try:
                _judge_at(_point(solution, given, numbers, prime), derived)
            except (NoSolutionError, ZeroDivisionError) as error:
                why = str(error)
                continue
            agreed += 1
            if agreed == POINTS:
                break
    except (WrongError, DeriveError) as error:
        return Verdict(NAME, METHOD, False, str(error), LIMIT)
    if agreed < POINTS:
        # A turned circuit of a response without fault may have no unique solution, as coupled coils may leave it.
        return Verdict(NAME, METHOD, None, f"not decided, no point could be worked: {why}", LIMIT)
    rows = len(given.open_circuit) + len(given.short_circuit)
    products = sum(len(coefficient.products) for coefficient in given.coefficients)
    measured = (
        f"{count(rows, 'time constant')} and {count(products, 'product')}: equal at {POINTS} points"
    )
    degree = _degree(solution, given)
    limit = f"a wrong one passes a point with a chance of {at_most(chance(degree))} at most"
    return Verdict(NAME, METHOD, True, measured, limit)


def _point(solution: Solution, given: TimeConstants, numbers: Stream, prime: int) -> _Point:
    values = with_merged_modulo(solution, values_modulo(solution.judged, numbers, prime), prime)
    rows = (*given.open_circuit, *given.short_circuit)
    for name, meaning in (*given.definitions, *(each for row in rows for each in row.definitions)):
        if name not in values:
            values[name] = value_modulo(meaning, values, prime)
    circuit = Turned(solution.derivation.system.small_signal, values, prime)
    return _Point(solution, given, circuit, lambda tree: value_modulo(tree, values, prime))


def _judge_derivations(given: TimeConstants) -> dict[tuple[str, str], Expression]:
    """Replay the steps by which each resistance was found; give what they come to."""
    found: dict[tuple[str, str], Expression] = {}
    for row in (*given.open_circuit, *given.short_circuit):
        if row.derivation is None:
            continue
        form, _ = normalise(row.derivation)
        try:
            broken = steps.broken_steps(Solution(row.derivation, form, None))
        except steps.StepError as error:
            raise WrongError(f"{_said(row)}: {error}") from None
        if broken:
            raise WrongError(f"{_said(row)}: step {broken[0][0]}: {broken[0][1]}")
        found[row.symbol, row.kind] = form.gain
    return found


def _judge_at(point: _Point, derived: Mapping[tuple[str, str], Expression]) -> None:
    for row in (*point.given.open_circuit, *point.given.short_circuit):
        _judge_row(point, row)
        gain = derived.get((row.symbol, row.kind))
        if gain is not None and (
            row.resistance is None or point.read(gain) != point.read(row.resistance)
        ):
            raise WrongError(f"{_said(row)}: its derivation is that of another resistance")
    top, bottom = point.circuit.polynomials(excite(point.solution.derivation.system))
    own = {"a": normalised(top, point.prime), "b": normalised(bottom, point.prime)}
    _judge_hidden(point, own["b"])
    shown = {letter: _without_hidden(point, found) for letter, found in own.items()}
    for coefficient in point.given.coefficients:
        _judge_coefficient(point, coefficient, shown)
    _judge_open_sum(point, own["b"])
    if len(bottom) > len(point.circuit.names):
        _judge_short_sum(point, own["b"])


def _judge_row(point: _Point, row: TimeConstant) -> None:
    others = point.circuit.names - {row.element} if row.kind == "short-circuit" else frozenset[str]()
    if row.resistance is None or row.readable is None:
        if row.constant is not None and point.circuit.has_resistance(row.element, others):
            raise WrongError(f"{_said(row)}: its resistance is not infinite")
        return
    printed, true = point.read(row.resistance), point.circuit.resistance(row.element, others)
    if printed != true:
        # Beside a state with a pole at zero, a circuit at zero frequency may do what none near it does.
        true = point.circuit.resistance_at_rest(row.element, others)
    if printed != true:
        raise WrongError(f"{_said(row)}: the resistance is not what the circuit shows")
    if point.read(row.readable) != true:
        raise WrongError(f"{_said(row)}: the readable resistance is not what the circuit shows")
    if row.constant is None:
        if true or row.reactance == "capacitor":
            raise WrongError(f"{_said(row)}: its time constant is not infinite")
    elif point.read(row.constant) != point.circuit.constant_of(row.element, true):
        raise WrongError(f"{_said(row)}: the time constant is not made of the resistance")


def _judge_hidden(point: _Point, own: Sequence[int]) -> None:
    """Hold the printed denominator times the hidden factor against the circuit's own polynomial."""
    if not point.given.hidden:
        return
    shown = [point.read(item) for item in point.solution.form.denominator]
    found = [0] * (len(shown) + len(point.given.hidden) - 1)
    for power, value in enumerate(point.read(item) for item in point.given.hidden):
        for place, coefficient in enumerate(shown):
            found[place + power] = (found[place + power] + value * coefficient) % point.prime
    if normalised(found, point.prime) != own:
        raise WrongError("denominator and hidden factor do not make the circuit's own polynomial")
    for raw, readable in zip(point.given.hidden, point.given.hidden_readable, strict=False):
        if point.read(raw) != point.read(readable):
            raise WrongError("the hidden factor for reading is another")
    if bool(point.given.hidden_says) != (len(point.given.hidden) > 1):
        raise WrongError("modes are hidden, or none, and the words say otherwise")


def _without_hidden(point: _Point, own: Sequence[int]) -> list[int]:
    """Divide a polynomial of the circuit by the hidden factor; both begin with 1."""
    factor = [point.read(item) for item in point.given.hidden] or [1]
    rest, found = list(own), []
    for place in range(max(len(own) - len(factor) + 1, 1)):
        found.append(rest[place])
        for power, value in enumerate(factor):
            if place + power < len(rest):
                rest[place + power] = (rest[place + power] - found[-1] * value) % point.prime
    if any(rest):
        raise WrongError("the hidden factor does not divide both polynomials of the circuit")
    return found


def _judge_coefficient(point: _Point, coefficient: Coefficient, own: dict[str, list[int]]) -> None:
    letter, _, power = coefficient.name.partition("_")
    values = own[letter]
    truth = values[int(power)] if int(power) < len(values) else 0
    total = 0
    for product in coefficient.products:
        term = point.read(product.term)
        total += term
        if point.read(product.readable) != term:
            raise WrongError(f"{coefficient.name}: the readable product of {_named(product)} is another")
        by_states = _by_states(point, product, with_response=letter == "a")
        if by_states is not None and by_states != term:
            raise WrongError(
                f"{coefficient.name}: the product of {_named(product)} is not what the circuit shows"
            )
    if total % point.prime != truth:
        raise WrongError(f"the products do not add up to {coefficient.name} of the circuit")


def _by_states(point: _Point, product: Product, *, with_response: bool) -> int | None:
    """Give a product from solutions of the tableau; None where a state sees nothing or no end on the way."""
    circuit, found, turned = point.circuit, 1, frozenset[str]()
    try:
        for symbol in product.symbols:
            name = circuit.element_of[symbol]
            found = found * circuit.constant(name, turned) % point.prime
            turned |= {name}
        if with_response:
            excitation = excite(point.solution.derivation.system)
            rest = circuit.response(excitation, frozenset())
            found = (
                found * circuit.response(excitation, turned) * pow(rest, -1, point.prime) % point.prime
            )
    except (NoSolutionError, ZeroDivisionError, ValueError, KeyError):
        return None
    return found


def _judge_open_sum(point: _Point, own: Sequence[int]) -> None:
    """Hold the sum of the open-circuit time constants against b_1, op amps' own terms added."""
    rows, first = point.given.open_circuit, _coefficient(point.given, "b_1")
    op_amps = point.circuit.op_amp_symbols
    total = sum(point.read(row.constant) for row in rows if row.constant is not None)
    if point.given.hidden_says:
        coupled = any(isinstance(element, Coupling) for element in point.circuit.circuit.elements)
        if coupled or op_amps or any(row.constant is None for row in rows):
            return
    elif first is None:
        return
    else:
        total += sum(point.read(p.term) for p in first.products if {*p.symbols} & op_amps)
    if total % point.prime != (own[1] if len(own) > 1 else 0):
        raise WrongError("the open-circuit time constants do not add up to b_1 of the circuit")


def _judge_short_sum(point: _Point, own: Sequence[int]) -> None:
    """Hold the sum of reciprocals against b_(n-1)/b_n, where every state has its row."""
    rows = point.given.short_circuit
    elements = point.circuit.circuit.elements
    if not rows or any(isinstance(element, Coupling) for element in elements):
        return
    if {row.element for row in rows} != point.circuit.names or len(own) < 2:
        return
    prime = point.prime
    total = sum(pow(point.read(row.constant), -1, prime) for row in rows if row.constant is not None)
    if (total - own[-2] * pow(own[-1], -1, prime)) % prime:
        raise WrongError("the short-circuit time constants' reciprocals do not add up")


def _coefficient(given: TimeConstants, name: str) -> Coefficient | None:
    return next((each for each in given.coefficients if each.name == name), None)


def _said(row: TimeConstant) -> str:
    return f"{row.symbol}, {row.kind}"


def _named(product: Product) -> str:
    return " and ".join(product.symbols)


def _trees(given: TimeConstants) -> Iterator[Expression]:
    for row in (*given.open_circuit, *given.short_circuit):
        yield from (tree for tree in (row.resistance, row.readable, row.constant) if tree is not None)
    for coefficient in given.coefficients:
        yield Sum(tuple(product.term for product in coefficient.products) or (ONE,))
        yield from (product.readable for product in coefficient.products)
    yield Sum((*given.hidden, *given.hidden_readable) or (ONE,))


def _degree(solution: Solution, given: TimeConstants) -> int:
    weights = weights_of(solution.judged, definitions_of(solution))
    rows = (*given.open_circuit, *given.short_circuit)
    for name, meaning in (*given.definitions, *(each for row in rows for each in row.definitions)):
        weights.setdefault(name, degrees(meaning, weights))
    largest = max(max(degrees(tree, weights)) for tree in (*_trees(given), Name("s")))
    # A product of four time constants and two responses: each is a ratio of determinants of the tableau.
    return largest + 12 * degree_of_circuit(solution.judged)
