"""By how much the sides of a wrong line differ, as a ratio and as a difference, in words an engineer would use."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import product

from derive.algebra.modular import PRIME
from derive.algebra.ratio import lowest_terms
from derive.errors import DeriveError
from derive.expressions.text import to_text
from derive.expressions.tree import (
    ONE,
    ZERO,
    Expression,
    Name,
    Negative,
    Number,
    Parallel,
    Quotient,
    Sum,
)
from derive.expressions.walk import evaluate_modulo
from derive.handcheck.lexicon import Lexicon, product_of, sum_of
from derive.handcheck.names import NameRefused
from derive.handcheck.solved import Ratio, Solved, TooLarge
from derive.readable.form import Definition
from derive.readable.measure import leaves
from derive.readable.readable import definitions_used, read_ratio
from derive.readable.vocabulary import Vocabulary

# Differences of more terms than these are not written; nor are those that come to more leaves.
MOST_TERMS, MOST_LEAVES = 10, 9


@dataclass(frozen=True, slots=True)
class Finding:
    """How the sides differ: ratio right/left and difference right − left, None where they are not short."""

    says: str
    ratio: Expression | None = None
    difference: Expression | None = None
    definitions: tuple[Definition, ...] = ()


def difference_of(solved: Solved, vocabulary: Vocabulary, left: Expression, right: Expression) -> Finding:
    """Say how the sides of a line differ, with every unknown replaced by its solution."""
    try:
        first, second = solved.ratios(left, right)
    except (TooLarge, NameRefused, DeriveError, ZeroDivisionError):
        return Finding("")
    ring = solved.ring
    (a, b), (c, d) = first, second
    away = lowest_terms(ring, c * b - a * d, b * d)
    difference = _short(solved, vocabulary, away)
    ratio = None
    if a != 0 and c != 0:
        ratio = _short(solved, vocabulary, lowest_terms(ring, c * b, d * a))
    if difference == ZERO:
        return Finding("")
    if ZERO in (left, right):
        return Finding("")  # what is put in brackets against zero differs by all of itself
    if a == 0 or c == 0:
        zero, other = ("left", "right") if a == 0 else ("right", "left")
        return Finding(f"the {zero} side is zero, the {other} side is not")
    says = _said(ratio, difference)
    shown = [e for e in (ratio, difference) if e is not None]
    return Finding(says, ratio, difference, definitions_used(shown, vocabulary))


def _short(solved: Solved, vocabulary: Vocabulary, ratio: Ratio) -> Expression | None:
    top, bottom = ratio
    if len(top) + len(bottom) > MOST_TERMS:
        return None
    written = read_ratio(solved.ring, top, bottom, vocabulary)
    return written if leaves(written) <= MOST_LEAVES else None


def looked_up(
    left: Expression,
    right: Expression,
    values: Mapping[str, int],
    lexicon: Lexicon,
    unknowns: Sequence[str],
    proves: Callable[[Expression, Expression], bool],
) -> Finding:
    """Say how the sides differ where that is a short expression, perhaps times an unknown of the line.

    Given: a point; short expressions by value; the unknowns of the line; what proves a line. For lines that would be
    long in the symbols alone.
    """
    try:
        first, second = (evaluate_modulo(side, values, PRIME) for side in (left, right))
    except (DeriveError, ZeroDivisionError):
        return Finding("")
    ratio = difference = None
    if first and second:
        found = _entry(lexicon, second * pow(first, -1, PRIME))
        if found is not None and proves(product_of(left, found), right):
            ratio = found
    scales: list[tuple[Expression, int]] = [(ONE, 1)]
    scales += [(Name(name), values[name]) for name in unknowns if values.get(name)]
    twice: list[tuple[Expression, int]] = [(ONE, 1), (Number(Fraction(2)), 2)]
    for (unknown, value), (number, times) in product(scales, twice):
        found = _entry(lexicon, (second - first) * pow(value * times, -1, PRIME))
        if found is None:
            continue
        bare = found.operand if isinstance(found, Negative) else found
        whole = product_of(number, unknown, bare)
        difference = Negative(whole) if bare is not found else whole
        if proves(sum_of(left, difference), right):
            break
        difference = None
    return Finding(_said(ratio, difference), ratio, difference)


def _entry(lexicon: Lexicon, value: int) -> Expression | None:
    """Look a value up, or its opposite; None for what is not there or is long."""
    for sign in (1, -1):
        entry = lexicon.get(sign * value)
        if entry is not None and leaves(entry[1]) <= MOST_LEAVES:
            return entry[1] if sign == 1 else Negative(entry[1])
    return None


def _said(ratio: Expression | None, difference: Expression | None) -> str:
    if ratio is not None and (number := _number(ratio)) is not None:
        if number == -1:
            return "the sides differ in sign: their ratio is −1"
        return f"the right side is {to_text(ratio)} times the left side"
    if difference is not None and (ratio is None or leaves(difference) <= leaves(ratio)):
        if isinstance(difference, Negative):
            return f"the right side is too small by exactly {to_text(difference.operand)}"
        if not isinstance(difference, Sum):
            return f"the right side is too large by exactly {to_text(difference)}"
        return f"right side minus left side is {to_text(difference)}"
    if ratio is not None:
        text = to_text(ratio)
        if isinstance(ratio, Sum | Quotient | Parallel):
            text = f"({text})"
        return f"the right side is {text} times the left side"
    return ""


def _number(expression: Expression) -> Fraction | None:
    if isinstance(expression, Number):
        return expression.value
    if isinstance(expression, Negative):
        inner = _number(expression.operand)
        return None if inner is None else -inner
    if isinstance(expression, Quotient):
        above, below = _number(expression.numerator), _number(expression.denominator)
        return above / below if above is not None and below else None
    return None
