"""The steps of a bias derivation replayed: each from those it uses, and each at the operating point."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

from derive.algebra.modular import PRIME, residues
from derive.bias.operating_point import CurrentDerivation
from derive.eliminate.derivation import Certificate, Step
from derive.errors import DeriveError
from derive.expressions.tree import Equation, Expression, Name
from derive.expressions.walk import evaluate, names_of
from derive.quantities.rounding import square_root

# Values are exact but for square roots, which have 40 digits.
CLOSE = Fraction(1, 10**30)
TRIES = 40


class Residue:
    """A whole number modulo PRIME, with the arithmetic that an expression needs."""

    __slots__ = ("value",)

    def __init__(self, value: int) -> None:
        self.value = value % PRIME

    @staticmethod
    def of(number: Fraction) -> Residue:
        """Give the residue of a rational number."""
        return Residue(number.numerator) / Residue(number.denominator)

    def __add__(self, other: Residue) -> Residue:
        return Residue(self.value + other.value)

    def __mul__(self, other: Residue) -> Residue:
        return Residue(self.value * other.value)

    def __neg__(self) -> Residue:
        return Residue(-self.value)

    def __pow__(self, exponent: int) -> Residue:
        return Residue(pow(self.value, exponent, PRIME))

    def __truediv__(self, other: Residue) -> Residue:
        if other.value == 0:
            raise ZeroDivisionError("a divisor vanishes")
        return Residue(self.value * pow(other.value, -1, PRIME))

    def root(self) -> Residue:
        """Give a square root; a ZeroDivisionError where this point has none."""
        # PRIME is 3 modulo 4, so that a square's root is this power of it.
        found = pow(self.value, (PRIME + 1) // 4, PRIME)
        if found * found % PRIME != self.value:
            raise ZeroDivisionError("no square root at this point")
        return Residue(found)


def broken_steps(
    derivation: CurrentDerivation, values: Mapping[str, Fraction]
) -> tuple[tuple[int, str], ...]:
    """Give the steps that do not hold, by their numbers, each with what is wrong.

    Given: the value at the operating point of every symbol and unknown that the steps name.
    """
    broken = dict(_without_reason(derivation.steps, derivation.symbol))
    for number, why in (*_not_following(derivation.steps), *_not_true(derivation.steps, values)):
        broken.setdefault(number, why)
    return tuple(sorted(broken.items()))


def _without_reason(steps: tuple[Step, ...], symbol: str) -> list[tuple[int, str]]:
    found = []
    for place, step in enumerate(steps, 1):
        if step.number != place:
            found.append((step.number, "its number is out of order"))
        if step.certificate is None and step.row is None and step.defines is None:
            found.append((step.number, "it gives no reason"))
        if step.defines is not None and step.equation.left != Name(step.defines):
            found.append((step.number, f"it does not define {step.defines}"))
    if steps and steps[-1].equation.left != Name(symbol):
        found.append((steps[-1].number, f"it does not give {symbol}"))
    return found


def _not_following(steps: tuple[Step, ...]) -> list[tuple[int, str]]:
    """Judge the certificates at a random point modulo a prime, where all roots exist."""
    names = sorted({name for step in steps for name in _all_names(step)})
    for turn in range(TRIES):
        point = dict(zip(names, map(Residue, residues(len(names), f"bias {turn}")), strict=True))
        try:
            return _judged_at(steps, point)
        except ZeroDivisionError:
            continue
        except DeriveError as error:
            return [(steps[-1].number, str(error))]
    return [(steps[-1].number, "no point could be worked")] if steps else []


def _judged_at(steps: tuple[Step, ...], point: dict[str, Residue]) -> list[tuple[int, str]]:
    found = []
    done: dict[int, Step] = {}
    for step in steps:
        if step.defines is not None:
            point[step.defines] = _value(step.equation.right, point)
        if step.certificate is not None:
            why = _judge(step, step.certificate, done, point)
            if why:
                found.append((step.number, why))
        done[step.number] = step
    return found


def _judge(step: Step, proof: Certificate, done: dict[int, Step], point: dict[str, Residue]) -> str:
    total = Residue(0)
    for number, multiplier in proof.uses:
        if number not in done:
            return f"it uses step {number}, which does not come before it"
        total = total + _value(multiplier, point) * _gap(done[number].equation, point)
    divisor = _value(proof.divisor, point)
    if divisor.value == 0:
        return "its divisor is zero"
    if (total + -(divisor * _gap(step.equation, point))).value:
        return "does not follow from the steps that it uses"
    return ""


def _not_true(steps: tuple[Step, ...], values: Mapping[str, Fraction]) -> list[tuple[int, str]]:
    """Judge every equation at the operating point."""
    known = dict(values)
    found = []
    for step in steps:
        try:
            right = evaluate(step.equation.right, known, Fraction, square_root)
            if step.defines is not None:
                known.setdefault(step.defines, right)
            left = evaluate(step.equation.left, known, Fraction, square_root)
        except (DeriveError, ValueError, ZeroDivisionError) as error:
            found.append((step.number, str(error)))
            continue
        size = max(abs(left), abs(right), _largest_term(step.equation, known))
        if abs(left - right) > CLOSE * size:
            found.append((step.number, "not true at the operating point"))
    return found


def _largest_term(equation: Equation, known: Mapping[str, Fraction]) -> Fraction:
    """Give the size of the largest term, against which a sum that vanishes is held."""
    terms = [getattr(side, "terms", (side,)) for side in (equation.left, equation.right)]
    values: list[Fraction] = [
        evaluate(term, known, Fraction, square_root) for side in terms for term in side
    ]
    return max(map(abs, values), default=Fraction(0))


def _value(expression: Expression, point: Mapping[str, Residue]) -> Residue:
    return evaluate(expression, point, Residue.of, Residue.root)


def _gap(equation: Equation, point: Mapping[str, Residue]) -> Residue:
    return _value(equation.left, point) + -_value(equation.right, point)


def _all_names(step: Step) -> list[str]:
    names = [*names_of(step.equation)]
    if step.certificate is not None:
        names += names_of(step.certificate.divisor)
        for _, multiplier in step.certificate.uses:
            names += names_of(multiplier)
    return names
