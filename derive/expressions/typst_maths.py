"""Writes an expression as Typst maths source; breaking lines is left to the renderer."""

from __future__ import annotations

import re
from collections.abc import Callable
from functools import lru_cache

from derive.expressions.names import GREEK, shape_of
from derive.expressions.signs import split_sign
from derive.expressions.text import more_terms
from derive.expressions.tree import (
    Elided,
    Equation,
    Expression,
    Name,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Root,
    Struck,
    Sum,
)

# How tightly the set maths holds together to the eye. A fraction bar holds as well as a letter does
# beside its neighbours, but not under an exponent.
SUM, PRODUCT, FRACTION, ATOM = range(4)
_Set = tuple[str, int]


def to_typst(content: Expression | Equation) -> str:
    """Write an expression or an equation as the source of Typst maths, without dollar signs."""
    if isinstance(content, Equation):
        sign = "=" if content.relation == "=" else "approx"
        return f"{_set(content.left)[0]} {sign} {_set(content.right)[0]}"
    return _set(content)[0]


def term_sources(expression: Expression) -> list[tuple[str, str]]:
    """Give the terms of a sum as pairs of sign ("+" or "-") and source; another expression is one.

    The sign of the first term is given too: a "+" there is not printed.
    """
    terms = expression.terms if isinstance(expression, Sum) else (expression,)
    sources = []
    for term in terms:
        negative, term = split_sign(term)
        sources.append(("-" if negative else "+", _enclosed(_set(term), PRODUCT)))
    return sources


def factor_sources(expression: Expression) -> list[str]:
    """Give the factors of a product as sources, each with the dot or space it may need in front."""
    factors = expression.factors if isinstance(expression, Product) else (expression,)
    sources: list[str] = []
    for index, factor in enumerate(factors):
        source = _enclosed(_set(factor), PRODUCT)
        if index and _needs_dot(factors[index - 1], factor):
            source = f"dot {source}"
        elif index and (_is_word(factors[index - 1]) or _is_word(factor)):
            source = f"thin {source}"
        sources.append(source)
    return sources


def text_to_typst(text: str) -> str:
    """Give plain text as a Typst string, which maths sets upright."""
    escaped = text.replace("\\", "\\\\").replace('"', '\\"')
    return '"' + re.sub(r"\s", " ", escaped) + '"'


@lru_cache(maxsize=4096)
def name_to_typst(name: str) -> str:
    """Give a name as maths: `R_E` as R with subscript E, `C_pi` with a Greek subscript."""
    shape = shape_of(name)
    base = _letters(shape.base)
    if not shape.subscripts:
        return base
    chunks = [" ".join(map(_letters, runs)) for runs in shape.subscripts]
    return f"{base}_({' thin '.join(chunks)})"


def _letters(run: str) -> str:
    if len(run) == 1 or run in GREEK or run.isdigit():
        return run
    return f"upright({text_to_typst(run)})"


def _enclosed(source: _Set, needed: int) -> str:
    text, level = source
    return text if level >= needed else f"({text})"


def _set(node: Expression) -> _Set:
    negative, node = split_sign(node)
    if negative:
        return f"-{_enclosed(_set(node), PRODUCT)}", SUM
    return _SETTERS[type(node)](node)


def _sum(node: Sum) -> _Set:
    if len(node.terms) == 1:
        return _set(node.terms[0])
    pieces: list[str] = []
    for sign, source in term_sources(node):
        if pieces:
            pieces.append(f" {sign} ")
        elif sign == "-":
            pieces.append(sign)
        pieces.append(source)
    return "".join(pieces) or "0", SUM


def _product(node: Product) -> _Set:
    if len(node.factors) == 1:
        return _set(node.factors[0])
    return " ".join(factor_sources(node)) or "1", PRODUCT


def _needs_dot(left: Expression, right: Expression) -> bool:
    """Say whether two factors side by side would read as one number, or two fraction bars as one."""
    if _starts_with_digit(right) or (isinstance(left, Quotient) and isinstance(right, Quotient)):
        return True
    # 2 frac(1, 3) would read as two and a third.
    return (
        isinstance(left, Number)
        and isinstance(right, Quotient)
        and _starts_with_digit(left)
        and _starts_with_digit(right.numerator)
    )


def _starts_with_digit(node: Expression) -> bool:
    if isinstance(node, Number):
        return node.value >= 0
    if isinstance(node, Power):
        return isinstance(node.base, Number) and _is_whole(node.base)
    if isinstance(node, Product):
        return bool(node.factors) and _starts_with_digit(node.factors[0])
    return isinstance(node, Quotient) and isinstance(node.numerator, Number)


def _is_word(node: Expression) -> bool:
    """Say whether a factor is set as an upright word, which would run into its neighbours."""
    if isinstance(node, Power):
        node = node.base
    return isinstance(node, Name) and _is_set_upright(node.text)


@lru_cache(maxsize=4096)
def _is_set_upright(name: str) -> bool:
    base = shape_of(name).base
    return len(base) > 1 and base not in GREEK


def _is_whole(node: Number) -> bool:
    return node.value >= 0 and node.value.denominator == 1


def _number(node: Number) -> _Set:
    above, below = node.value.numerator, node.value.denominator
    return (str(above), ATOM) if below == 1 else (f"frac({above}, {below})", FRACTION)


def _quotient(node: Quotient) -> _Set:
    return f"frac({_set(node.numerator)[0]}, {_set(node.denominator)[0]})", FRACTION


def _power(node: Power) -> _Set:
    base = _enclosed(_set(node.base), ATOM)
    # A power under an exponent gets parentheses: two exponents on one letter read as one.
    return f"{base}^({node.exponent})", FRACTION


def _parallel(node: Parallel) -> _Set:
    if len(node.branches) == 1:
        return _set(node.branches[0])
    branches = []
    for branch in node.branches:
        branches.append(_enclosed(_set(branch), FRACTION))
    return " parallel ".join(branches), SUM


def _root(node: Root) -> _Set:
    return f"sqrt({_set(node.radicand)[0]})", ATOM


def _elided(node: Elided) -> _Set:
    return f"dots.h thin {text_to_typst(f'({more_terms(node)})')}", ATOM


_SETTERS: dict[type, Callable[..., _Set]] = {
    Name: lambda node: (name_to_typst(node.text), ATOM),
    Number: _number,
    Sum: _sum,
    Product: _product,
    Quotient: _quotient,
    Power: _power,
    Parallel: _parallel,
    Root: _root,
    Elided: _elided,
    Struck: lambda node: (f"cancel({_set(node.operand)[0]})", ATOM),
}
