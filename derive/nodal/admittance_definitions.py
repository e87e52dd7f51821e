"""The coefficients of a response by nested definitions, as trees."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from derive.algebra.diagram import Diagram
from derive.algebra.diagram_definitions import Sum, definitions
from derive.expressions.polynomials import add, divide, multiply
from derive.expressions.tree import ONE, Expression, Name, Negative, Number
from derive.nodal.admittance_terms import AdmittanceTerms


@dataclass(frozen=True, slots=True)
class NestedCoefficients:
    """H(s) = numerator/denominator, each a tuple of coefficients by rising power of s.

    The coefficients are written with the circuit's symbols and the names in `definitions`, each of which
    stands for an expression in symbols and in names defined before it.
    """

    definitions: tuple[tuple[str, Expression], ...]
    numerator: tuple[Expression, ...]
    denominator: tuple[Expression, ...]


def nested_coefficients(
    response: AdmittanceTerms, diagram: Diagram, prefix: str, variable: str | None = None
) -> NestedCoefficients:
    """Give a response's coefficients by definitions named prefix1, prefix2 and so on.

    Given: the diagram of the response's terms, and a prefix such that no symbol has one of these names.
    With a `variable` (s, as a rule) numerator and denominator are not split by its powers: each is one
    expression, and there are a good deal fewer definitions.
    """
    nested = definitions(diagram, prefix, variable)
    named = tuple((item.name, written(item.value, response.inverted)) for item in nested.definitions)
    bottom = tuple(written(value, response.inverted) for value in nested.coefficients[0])
    top: list[list[Expression]] = []
    for part, sums in zip(response.parts, nested.coefficients[1:], strict=True):
        lifted = 0 if variable else part.degree
        factors = (variable,) * part.degree + part.factors if variable else part.factors
        for power, value in enumerate(sums, lifted):
            top += [[] for _ in range(power + 1 - len(top))]
            widened = tuple((sign, (*factors, *own)) for sign, own in value)
            top[power].append(_times(part.weight, written(widened, response.inverted)))
    return NestedCoefficients(named, tuple(add(terms) for terms in top), bottom)


def written(value: Sum, inverted: frozenset[str] = frozenset()) -> Expression:
    """Write a sum of products of names as a tree; names in `inverted` stand below the fraction bar."""
    terms = []
    for sign, factors in value:
        above = multiply([Name(name) for name in factors if name not in inverted])
        below = multiply([Name(name) for name in factors if name in inverted])
        term = divide(above, below)
        terms.append(term if sign > 0 else Negative(term))
    return add(terms)


def _times(weight: Fraction, expression: Expression) -> Expression:
    """Multiply by a weight, its sign in front."""
    product = multiply([Number(abs(weight)) if abs(weight) != 1 else ONE, expression])
    if weight >= 0:
        return product
    return product.operand if isinstance(product, Negative) else Negative(product)
