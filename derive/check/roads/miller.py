"""Miller's views against the circuit's own tableau: gains, admittances, factors, errors and judgement.

The gain between the capacitor's nodes and the currents that it takes from them are held against the
circuit's solution modulo a random prime. The circuit with both halves in the capacitor's place is solved
anew for all s.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from fractions import Fraction

from derive.check.excitation import excite
from derive.check.marks import Marks, marks_of, roots_of
from derive.check.merged import with_merged_exact, with_merged_modulo
from derive.check.points import Stream, stream, values_modulo
from derive.check.reading import series, value_exact, value_modulo
from derive.check.roads.nominal import nominal_values
from derive.check.solve import NoSolutionError, solve_modulo
from derive.check.stamp import assemble
from derive.check.verdict import Solution, Verdict
from derive.check.words import count
from derive.devices.elements import Capacitor, SmallSignal
from derive.reactances.miller import MillerError, MillerView
from derive.topology.topology import GROUND

NAME = "Miller's theorem"
METHOD = (
    "each gain and the current through each bridging capacitor at random points modulo a random 61-bit "
    "prime; the circuit with both halves in its place solved anew at nominal values"
)
ORDER = 76
LIMIT = "equal at every point, errors to 9 digits"
POINTS, TRIES = 2, 12
TOLERANCE = 1e-9
# What the sheet promises of an approximation that may be used.
NEAR_ONE, GAIN_LIMIT, POLE_LIMIT, DECADE = Fraction(1, 4), 0.01, 0.10, 10.0
# A pole that moves by less than a hundredth of what the capacitor does is none to judge it by.
STEP, FOLLOWS = Fraction(1, 10**6), 0.01
NAMES = tuple(
    f"{word} pole"
    for word in ("first", "second", "third", "fourth", "fifth", "sixth", "seventh", "eighth")
)
HALVES = ("its half at the near node", "its half at the far node")


class WrongError(ValueError):
    """Raised for a view that is not true of the circuit."""


def judge(solution: Solution) -> Verdict:
    """Judge whether every view is true of the circuit, in symbols and at the nominal values."""
    if not solution.miller:
        nothing = "no view of a bridging capacitor is printed"
        return Verdict(NAME, METHOD, None, nothing, LIMIT, applies=False)
    values = nominal_values(solution.judged)
    compared = 0
    for view in solution.miller:
        try:
            _judge_symbols(solution, view)
            if values is not None:
                compared += _judge_numbers(solution, view, values)
            elif view.errors or view.halves or view.usable is not None:
                raise WrongError("it has numbers, and a value is left open")
        except WrongError as error:
            return Verdict(NAME, METHOD, False, f"{view.symbol}: {error}", LIMIT)
        except (NoSolutionError, ZeroDivisionError) as error:
            return Verdict(NAME, METHOD, None, f"{view.symbol}: not finished: {error}", LIMIT)
    capacitors = count(len(solution.miller), "capacitor")
    return Verdict(NAME, METHOD, True, f"{capacitors}, {count(compared, 'error')} found again", LIMIT)


def _judge_symbols(solution: Solution, view: MillerView) -> None:
    """Hold gain, factors and admittances against the circuit's solution at random points."""
    numbers = stream(solution, f"miller {view.element}")
    prime = numbers.prime()
    agreed, why = 0, ""
    for _ in range(TRIES):
        try:
            _judge_point(solution, view, numbers, prime)
        except (NoSolutionError, ZeroDivisionError) as error:
            why = str(error)
            continue
        agreed += 1
        if agreed == POINTS:
            return
    raise NoSolutionError(f"no point could be worked: {why}")


def _judge_point(solution: Solution, view: MillerView, numbers: Stream, prime: int) -> None:
    circuit = solution.judged
    symbols = values_modulo(circuit, numbers, prime)
    s = symbols["s"] = numbers.below(prime)
    state = solve_modulo(
        assemble(circuit, excite(solution.derivation.system), symbols.__getitem__), s, prime
    )
    known = with_merged_modulo(solution, symbols, prime, view.definitions)
    try:
        near, far = state.nodes[view.near], state.nodes[view.far]
    except KeyError as error:
        raise WrongError(f"the circuit does not settle node {error.args[0]}") from None
    if not near % prime or not far % prime:
        raise ZeroDivisionError("a node's voltage is zero at this point")
    top, bottom = (
        [value_modulo(part, known, prime) for part in parts]
        for parts in (view.gain_numerator, view.gain_denominator)
    )
    if top[0] != 1 or bottom[0] != 1:
        raise WrongError("the gain's polynomials do not begin with 1")
    at_zero = value_modulo(view.gain, known, prime)
    gain = at_zero * series(top, s) * pow(series(bottom, s) % prime, -1, prime) % prime
    if (far - gain * near) % prime:
        raise WrongError(f"the gain is not that from {view.near} to {view.far}")
    if (value_modulo(view.input_factor, known, prime) - 1 + at_zero) % prime:
        raise WrongError("the input factor is not 1 − A_0")
    if (value_modulo(view.output_factor, known, prime) * at_zero - at_zero + 1) % prime:
        raise WrongError("the output factor is not 1 − 1/A_0")
    current = _current(circuit, view, state.branches, s * known[view.symbol] * (near - far))
    admittance = s * known[view.symbol]
    if (current - admittance * (1 - gain) * near) % prime:
        raise WrongError("s·C·(1 − A) is not what it draws from the near node")
    if (current + admittance * (1 - pow(gain, -1, prime)) * far) % prime:
        raise WrongError("s·C·(1 − 1/A) is not what it draws from the far node")


def _current(circuit: SmallSignal, view: MillerView, branches: Mapping[str, int], merged: int) -> int:
    """Give the current from the near node through the capacitor; `merged` where it stands for several."""
    for element in circuit.elements:
        if element.name == view.element:
            if not isinstance(element, Capacitor) or {*element.between} != {view.near, view.far}:
                raise WrongError(f"it does not lie between {view.near} and {view.far}")
            if (element.capacitance, element.part) != (view.symbol, view.part):
                raise WrongError(f"{view.element} has another name or part")
            return branches[element.name] if element.between[0] == view.near else -branches[element.name]
    return merged


def _judge_numbers(solution: Solution, view: MillerView, values: Mapping[str, Fraction]) -> int:
    """Hold halves, errors and judgement against the circuits solved anew; give the number of errors."""
    if view.halves is None or view.usable is None:
        if view.errors or view.usable is not None:
            raise WrongError("it has errors without halves or judgement")
        return 0
    known = with_merged_exact(solution, values, view.definitions)
    factors = (value_exact(view.input_factor, known), value_exact(view.output_factor, known))
    for words, factor, half in zip(HALVES, factors, view.halves, strict=True):
        if abs(half - known[view.symbol] * factor) > abs(half) * Fraction(TOLERANCE):
            raise WrongError(f"{words} is not C times the factor")
    there = any(element.name == view.element for element in solution.judged.elements)
    circuit = solution.judged if there else solution.derivation.system.small_signal
    excitation = excite(solution.derivation.system)
    exact = marks_of(circuit, excitation, known)
    if exact is None:
        raise WrongError("there is no response to compare with")
    halved, halved_values = _with_halves(circuit, view, known, factors)
    guess = marks_of(halved, excitation, halved_values)
    moved = marks_of(circuit, excitation, {**known, view.symbol: known[view.symbol] * (1 + STEP)})
    judged = _judged(exact, moved)
    _judge_errors(view, exact, guess, judged)
    own = [
        root
        for parts in (view.gain_numerator, view.gain_denominator)
        for root in roots_of([value_exact(part, known) for part in parts])
    ]
    may_be_used = _may_be_used(view, exact, guess, value_exact(view.gain, known), own, judged)
    if may_be_used != view.usable:
        raise WrongError(f"by its numbers it may {'' if may_be_used else 'not '}be used")
    if not view.reasons:
        raise WrongError("no reason is given")
    return len(view.errors)


def _with_halves(
    circuit: SmallSignal,
    view: MillerView,
    known: Mapping[str, Fraction],
    factors: tuple[Fraction, Fraction],
) -> tuple[SmallSignal, dict[str, Fraction]]:
    """Put the two halves to ground in the capacitor's place; give the circuit and its values."""
    values = dict(known)
    elements = [element for element in circuit.elements if element.name != view.element]
    for node, factor in zip((view.near, view.far), factors, strict=True):
        name = f"half at {node}"
        elements.append(Capacitor(name, name, (node, GROUND), name))
        values[name] = known[view.symbol] * factor
    return replace(circuit, elements=tuple(elements)), values


def _judged(exact: Marks, moved: Marks | None) -> int:
    """Give the place of the pole to judge by: the first, or the one that moves most where that one does not."""
    poles, others = _upper(exact, exact), _upper(exact, moved) if moved else []
    if not poles or len(poles) != len(others):
        return 0
    pairs = zip(poles, others, strict=True)
    shifts = [abs(other - pole) / (abs(pole) * float(STEP)) for pole, other in pairs]
    place = max(range(len(shifts)), key=shifts.__getitem__)
    return 0 if shifts[0] >= FOLLOWS or shifts[place] < FOLLOWS or place >= len(NAMES) else place


def _upper(exact: Marks, marks: Marks) -> list[complex]:
    """Give the poles from the exact response's first on, a pair once."""
    return [pole for pole in marks.poles[max(exact.power, 0) :] if pole.imag >= 0]


def _judge_errors(view: MillerView, exact: Marks, guess: Marks | None, judged: int) -> None:
    expected = _expected(exact, guess, judged) if guess else {}
    zeros = [error for error in view.errors if error.name.startswith("zero")]
    for error in view.errors:
        given = (error.approximate, error.exact)
        if error in zeros:
            if guess is None or not (_among(given[0], guess.zeros) and _among(given[1], exact.zeros)):
                raise WrongError(f"the {error.name} is none of the response's")
        elif error.name not in expected or not all(map(_close, given, expected[error.name])):
            raise WrongError(f"the {error.name} is another")
        _judge_error(error)
    if missing := expected.keys() - {error.name for error in view.errors}:
        raise WrongError(f"the {min(missing)} is not compared")
    shown = [*view.missing_zeros, *(error.exact for error in zeros)]
    if len(shown) != len(exact.zeros) or not all(_among(zero, exact.zeros) for zero in shown):
        raise WrongError("the zeros shown and missing are not the response's")


def _judge_error(error: MillerError) -> None:
    """Hold an error against its two values; there is none where these cannot be compared."""
    true = None if error.exact is None else _relative(error.approximate, error.exact)
    if error.name == "gain" and error.exact is not None:
        true = (error.approximate.real - error.exact.real) / error.exact.real
    if true is None and error.error is None and error.says:
        return
    if true is None or error.error is None:
        raise WrongError(f"the {error.name} has an error, or none, against the rule")
    if abs(error.error - true) > TOLERANCE * max(1.0, abs(true)):
        raise WrongError(f"the error of the {error.name} is another")


def _expected(exact: Marks, guess: Marks, judged: int) -> dict[str, tuple[complex, complex | None]]:
    """Give the pairs to be compared by name: approximate and exact."""
    found: dict[str, tuple[complex, complex | None]] = {}
    if exact.power == guess.power:
        found["gain"] = (complex(guess.gain), complex(exact.gain))
    poles: list[complex | None] = [*_upper(exact, exact)]
    own = _upper(exact, guess)
    poles += [None] * max(0, len(own) - len(poles))
    stable = all(pole.real <= 0 for pole in exact.poles)
    for place, (name, approximate, true) in enumerate(zip(NAMES, own, poles, strict=False)):
        if (true is not None and place <= max(judged, 1)) or (approximate.real > 0 and stable):
            found[name] = approximate, true
    return found


def _may_be_used(
    view: MillerView,
    exact: Marks,
    guess: Marks | None,
    gain: Fraction,
    own: Sequence[complex],
    judged: int,
) -> bool:
    """Say by the numbers alone whether the approximation may be used, if only for the pole that is judged."""
    if guess is None or guess.power != exact.power:
        return False
    if exact.ratio[0] * guess.ratio[1] == guess.ratio[0] * exact.ratio[1]:
        return True
    upper = _upper(exact, exact)
    if not upper or abs(1 - gain) < NEAR_ONE or abs(guess.gain / exact.gain - 1) > GAIN_LIMIT:
        return False
    near = DECADE * abs(upper[judged])
    shared = [error.approximate for error in view.errors if error.name.startswith("zero")]
    further = [zero for zero in guess.zeros if not _among(zero, shared)]
    if any(abs(root) < near for root in (*own, *view.missing_zeros, *further)):
        return False
    stable = all(pole.real <= 0 for pole in exact.poles)
    if stable and any(pole.real > 0 and abs(pole) < near for pole in guess.poles):
        return False
    within = [
        sum(abs(pole) < near for pole in poles[max(exact.power, 0) :])
        for poles in (guess.poles, exact.poles)
    ]
    if len(guess.poles) != len(exact.poles) and within[0] != within[1]:
        return False
    pair = _expected(exact, guess, judged).get(NAMES[judged])
    if pair is None or pair[1] is None:
        return True
    error = _relative(pair[0], pair[1])
    return error is not None and abs(error) <= POLE_LIMIT


def _relative(approximate: complex, exact: complex) -> float | None:
    """Give the relative error; None between half-planes, and between a real root and a pair."""
    if approximate.real * exact.real < 0 or bool(approximate.imag) != bool(exact.imag):
        return None
    if exact.imag:
        return abs(approximate) / abs(exact) - 1
    return (approximate.real - exact.real) / exact.real


def _among(root: complex | None, roots: Sequence[complex]) -> bool:
    return root is not None and any(_close(root, other) for other in roots)


def _close(one: complex | None, other: complex | None) -> bool:
    if one is None or other is None:
        return one is other
    return abs(one - other) <= TOLERANCE * abs(other)
