"""Short forms as they are printed, each worked anew at the nominal values and held against the circuit solved anew."""

from __future__ import annotations

import cmath
import math
from collections.abc import Iterator, Mapping
from fractions import Fraction

from derive.approximate.questions import Price, Simplified
from derive.check.excitation import excite
from derive.check.pencil import Pencil, pencil_of
from derive.check.points import symbol_names
from derive.check.roads.nominal import nominal_values
from derive.check.solve import NoSolutionError
from derive.check.stamp import assemble
from derive.check.verdict import Solution, Verdict
from derive.check.words import count
from derive.errors import DeriveError
from derive.expressions.parse import parse_expression
from derive.expressions.text import to_text
from derive.expressions.walk import evaluate
from derive.topology.topology import Budget

NAME = "short forms"
METHOD = (
    "each short form read back from its printed text, with its definitions in their order, at the nominal values; "
    "gain, poles and unity-gain frequency of the whole circuit from its tableau in floating point; errors from both"
)
ORDER = 85
LIMIT = "values and errors equal to 6 digits, errors within the budget where a form is said to be"
CLOSE = 1e-6
# The low-frequency gain is read off so far below the lowest pole, where the response is a power of s.
BELOW = 1e-7
# Above the unity-gain frequency the size is looked at so often, up to a thousand times as high.
LOOKS = 60
# Between its own points the worst error over a range may be passed by this much.
BETWEEN = 0.02


def judge(solution: Solution) -> Verdict:
    """Judge whether every short form has the value and the error that are stated."""
    answers = [form for answer in solution.simplified for form in _forms(answer)]
    if not answers:
        why = "none is printed" if solution.simplified else "none were asked for"
        return Verdict(NAME, METHOD, None, why, "", applies=False)
    values = nominal_values(solution.judged)
    if values is None:
        return Verdict(NAME, METHOD, False, "short forms of a circuit with an open value", LIMIT)
    known = {"": Fraction(0), **values}
    pencil = pencil_of(assemble(solution.judged, excite(solution.derivation.system), known.__getitem__))
    taken = set(symbol_names(solution.judged))
    budget = solution.judged.topology.budget
    for answer, beyond in answers:
        title = f"{answer.question.kind}{' beyond the budget' if beyond else ''}"
        try:
            wrong = _wrong(answer, pencil, _printed(solution, answer, taken, values), budget, beyond)
        except (DeriveError, NoSolutionError, ZeroDivisionError, OverflowError, ValueError) as error:
            wrong = f"could not be worked: {error}"
        if wrong:
            return Verdict(NAME, METHOD, False, f"{title}: {wrong}", LIMIT)
    return Verdict(NAME, METHOD, True, f"{count(len(answers), 'form')} and as many errors agree", LIMIT)


def _forms(answer: Simplified) -> Iterator[tuple[Simplified, bool]]:
    if answer.form is not None:
        yield answer, False
    if answer.beyond is not None and answer.beyond.form is not None:
        yield answer.beyond, True


class _Printed:
    """A form as it is read back: its value at the symbols' values, and at values of s where it holds it."""

    def __init__(self, text: str, known: Mapping[str, complex]) -> None:
        self.form = parse_expression(text)
        self.known = known

    def at(self, s: complex = 0j) -> complex:
        return complex(evaluate(self.form, {**self.known, "s": s}, _number))


def _number(value: Fraction) -> complex:
    return complex(float(value))


def _printed(
    solution: Solution, answer: Simplified, taken: set[str], values: Mapping[str, Fraction]
) -> _Printed:
    """Read a form and its definitions back.

    Raises: DeriveError where one needs a name that has no value yet; ValueError for a name used twice.
    """
    merged = {} if solution.band is None else _merged(solution, values)
    known = {name: _number(value) for name, value in {**values, **merged}.items()}
    for name, value in answer.definitions:
        if name in known or name in taken or name == "s":
            raise ValueError(f"{name} is defined, and has a meaning already")
        known[name] = complex(evaluate(parse_expression(to_text(value)), known, _number))
    if answer.form is None:
        raise ValueError("there is no form")
    return _Printed(to_text(answer.form), known)


def _merged(solution: Solution, values: Mapping[str, Fraction]) -> dict[str, Fraction]:
    """Give the values of the symbols that the band's circuit has and the circuit judged has not."""
    own = solution.derivation.system.small_signal.symbols
    return {s.name: s.value for s in own if s.value is not None and s.name not in values}


def _wrong(answer: Simplified, pencil: Pencil, printed: _Printed, budget: Budget, beyond: bool) -> str:
    """Say what of an answer is not so; "" where all is."""
    price, kind = answer.price, answer.question.kind
    if price is None:
        return "it has no error"
    if kind == "response in a band":
        return _wrong_in_band(answer, price, pencil, printed, budget, beyond)
    value = printed.at()
    if answer.value is None or answer.original is None or price.relative is None:
        return "it has no value"
    if abs(value - answer.value) > CLOSE * abs(answer.value):
        return f"what is printed has the value {value.real:.6g}, not {answer.value:.6g}"
    true = _true(answer, pencil)
    if true is None:
        return f"the circuit does not have it at {answer.original:.6g}"
    if abs(true - answer.original) > CLOSE * abs(true):
        return f"the circuit has {true:.6g}, not {answer.original:.6g}"
    error = value.real / true - 1
    if abs(error - price.relative) > CLOSE:
        return f"it is off by {100 * error:.4g} %, not by {100 * price.relative:.4g} %"
    limit = budget.gain if kind == "low-frequency gain" else answer.question.corner_limit
    if not beyond and abs(error) > float(limit) + CLOSE:
        return f"it is off by {100 * error:.4g} %, which is beyond the budget"
    return ""


def _true(answer: Simplified, pencil: Pencil) -> float | None:
    """Give what the whole circuit has, near what is stated; None where it has it not."""
    stated, kind = answer.original or 0.0, answer.question.kind
    if kind == "low-frequency gain":
        return _low_gain(pencil)
    if kind == "unity-gain frequency":
        return stated if _is_unity(pencil, stated) else None
    # Of a pair of poles the distance is stated: where on its circle they stand is looked up.
    start = complex(stated) if stated < 0 else _on_circle(pencil, stated)
    poles = pencil.poles_up_to(start)
    place = 0 if kind == "dominant pole" else 1
    if len(poles) != place + 1:
        return None
    return poles[place].real if poles[place].imag == 0 else abs(poles[place])


def _on_circle(pencil: Pencil, radius: float) -> complex:
    """Give the natural frequency above the axis whose distance from the origin is nearest to a radius."""
    found = [root for root in pencil.natural(complex(1e-3 * radius)) if root.imag >= 0]
    return min(found, key=lambda root: abs(abs(root) - radius), default=complex(radius))


def _low_gain(pencil: Pencil) -> float:
    try:
        gain = pencil.response(0j)
        if gain and math.isfinite(abs(gain)):
            return gain.real
    except NoSolutionError:
        pass
    lowest = min((abs(root) for root in pencil.natural(1 + 0j) if abs(root) > 1e-9), default=1.0)
    s = BELOW * lowest
    one, other = pencil.response(complex(s)), pencil.response(complex(2 * s))
    power = round(math.log2(abs(other / one)))
    return (one / s**power).real


def _is_unity(pencil: Pencil, omega: float) -> bool:
    """Whether the size of the response falls through one there, and is below it from there on."""
    before, at, after = (abs(pencil.response(1j * omega * step)) for step in (1 - 1e-4, 1, 1 + 1e-4))
    if not (abs(at - 1) < CLOSE and before > at > after):
        return False
    beyond = (1j * omega * 1000 ** (look / LOOKS) for look in range(1, LOOKS + 1))
    return all(abs(pencil.response(s)) < 1 for s in beyond)


def _wrong_in_band(
    answer: Simplified, price: Price, pencil: Pencil, printed: _Printed, budget: Budget, beyond: bool
) -> str:
    """Say what of the errors over a range is not so."""

    def off(hertz: float) -> tuple[float, float]:
        s = 2j * math.pi * hertz
        ratio = printed.at(s) / pencil.response(s)
        return 20 * math.log10(abs(ratio)), math.degrees(cmath.phase(ratio))

    if price.magnitude_db is None or price.phase_deg is None or answer.question.range_hz is None:
        return "it has no errors"
    worst = price.magnitude_db, price.phase_deg
    decibels = off(price.magnitude_at_hz or 1.0)[0]
    degrees = off(price.phase_at_hz or 1.0)[1]
    if abs(decibels - worst[0]) > 1e-5 or abs(degrees - worst[1]) > 1e-4:
        return f"it is off by {decibels:.4g} dB and {degrees:.4g}° where it is said to be off most"
    low, high = answer.question.range_hz
    limits = float(budget.magnitude_db), float(budget.phase_deg)
    for look in range(LOOKS + 1):
        hertz = low * (high / low) ** (look / LOOKS)
        for found, most, limit in zip(off(hertz), worst, limits, strict=True):
            if abs(found) > abs(most) + BETWEEN * limit:
                return f"at {hertz:.4g} Hz it is off by more than is said"
    if not beyond and any(
        abs(most) > limit * (1 + CLOSE) for most, limit in zip(worst, limits, strict=True)
    ):
        return "its errors are beyond the budget"
    return ""
