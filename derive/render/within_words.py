"""Formulas within words: quotients on one line, and parentheses wherever that needs them."""

from __future__ import annotations

from derive.expressions.signs import split_sign
from derive.expressions.tree import (
    Equation,
    Expression,
    Name,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Root,
    Sum,
)
from derive.expressions.typst_maths import to_typst

# How tightly a formula on one line holds together.
_SUM, _PRODUCT, _ATOM = range(3)
_Set = tuple[str, int]
# Between the sides of an equation, as maths.
SIGNS = {"=": "=", "~": "approx"}


def slashed(content: Expression | Equation) -> str:
    """Return Typst source for use among words: quotients as a/b, so that all stays at full size."""
    if isinstance(content, Equation):
        return f"{_set(content.left)[0]} {SIGNS[content.relation]} {_set(content.right)[0]}"
    return _set(content)[0]


def run_on(content: Expression | Equation) -> list[str]:
    """Cut a formula within words where a line may end: before = and before the signs of a sum."""
    if isinstance(content, Equation):
        right = run_on(content.right)
        return [*run_on(content.left), f"{SIGNS[content.relation]} med {right[0]}", *right[1:]]
    if not isinstance(content, Sum) or len(content.terms) < 2:
        return [slashed(content)]
    made: list[str] = []
    for term in content.terms:
        negative, rest = split_sign(term)
        source = _enclosed(rest, _PRODUCT)
        if made:
            made.append(f"{'-' if negative else '+'} med {source}")
        else:
            made.append(f"-{source}" if negative else source)
    return made


def _enclosed(expression: Expression, needed: int) -> str:
    source, level = _set(expression)
    return source if level >= needed else f"({source})"


def _set(expression: Expression) -> _Set:
    negative, rest = split_sign(expression)
    if negative:
        return f"-{_enclosed(rest, _PRODUCT)}", _SUM
    match rest:
        case Sum(terms) if len(terms) > 1:
            return _sum(terms)
        case Product(factors) if len(factors) > 1:
            return _product(factors)
        case Parallel(branches) if len(branches) > 1:
            return " parallel ".join(_enclosed(branch, _ATOM) for branch in branches), _SUM
        case Quotient(numerator, denominator):
            above = _enclosed(numerator, _ATOM if _is_fraction(numerator) else _PRODUCT)
            return f"{above} \\/ {_enclosed(denominator, _ATOM)}", _PRODUCT
        case Power(base, exponent):
            inner = _set(base)[0]
            # One exponent on another would read as one.
            bare = isinstance(base, Name) or (isinstance(base, Number) and not _is_fraction(base))
            return f"{inner if bare else f'({inner})'}^({exponent})", _ATOM
        case Root(radicand):
            return f"sqrt({_set(radicand)[0]})", _ATOM
        case Number(value) if value.denominator != 1:
            return f"{value.numerator} \\/ {value.denominator}", _PRODUCT
        case _:
            return to_typst(rest), _ATOM


def _sum(terms: tuple[Expression, ...]) -> _Set:
    made = ""
    for term in terms:
        negative, rest = split_sign(term)
        sign = ("-" if negative else "") if not made else (" - " if negative else " + ")
        made += sign + _enclosed(rest, _PRODUCT)
    return made, _SUM


def _product(factors: tuple[Expression, ...]) -> _Set:
    made = _enclosed(factors[0], _ATOM)
    for factor in factors[1:]:
        # Two numbers side by side would read as one.
        dot = "dot " if isinstance(factor, Number) or _number_to_power(factor) else ""
        made += f" {dot}{_enclosed(factor, _ATOM)}"
    return made, _PRODUCT


def _number_to_power(factor: Expression) -> bool:
    return isinstance(factor, Power) and isinstance(factor.base, Number)


def _is_fraction(expression: Expression) -> bool:
    return isinstance(expression, Quotient) or (
        isinstance(expression, Number) and expression.value.denominator != 1
    )
