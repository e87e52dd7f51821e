"""Writes ratios of polynomials, and the square roots of second order, raw and for reading."""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction

from derive.algebra.ratio import lowest_terms
from derive.algebra.ring import Polynomial, Ring
from derive.eliminate.derivation import Derivation
from derive.eliminate.scribe import writer_for
from derive.expressions.polynomials import Writer, divide, multiply, negate
from derive.expressions.tree import ONE, Expression, Negative, Quotient, Root
from derive.readable.readable import read_ratio
from derive.readable.vocabulary import Vocabulary

Both = tuple[Expression, Expression]


@dataclass(frozen=True, slots=True, eq=False)
class Pen:
    """Writes what it is given twice: multiplied out, and for reading."""

    ring: Ring
    writer: Writer
    vocabulary: Vocabulary

    @classmethod
    def of(cls, derivation: Derivation, vocabulary: Vocabulary) -> Pen:
        """Give the pen of a derivation's names."""
        return cls(derivation.system.ring.plain(), writer_for(derivation.system), vocabulary)

    def ratio(self, above: Polynomial, below: Polynomial) -> Both:
        """Write a ratio in lowest terms."""
        top, bottom = lowest_terms(self.ring, above, below)
        return self.writer.ratio(top, bottom), read_ratio(self.ring, top, bottom, self.vocabulary)

    def root_of_ratio(self, above: Polynomial, below: Polynomial) -> Both:
        """Write √(above/below), as 1/√(…) where the ratio is a reciprocal."""
        raw, readable = self.ratio(above, below)
        return _root_of_quotient(raw), _root_of_quotient(readable)

    def quality(self, c_0: Polynomial, c_1: Polynomial, c_2: Polynomial) -> Both:
        """Write √(c_0·c_2)/c_1 with what is a square taken out of the root: (1/R)·√(L/C)."""
        under, outside = self._monomials(c_0, c_1, c_2)
        contents = [part.term_content() for part in (c_0, c_1, c_2)]
        rest_0, rest_1, rest_2 = (
            part / content for part, content in zip((c_0, c_1, c_2), contents, strict=True)
        )
        inner = self.ratio(*under)
        sides = [self.ratio(rest, self.ring.one) for rest in (rest_0, rest_2)]
        scale, scale_below = outside
        front = self.ratio(scale, scale_below * rest_1)
        made = []
        for way in (0, 1):
            same = sides[0][way] == sides[1][way]
            out = [sides[0][way]] if same else []
            root = root_of(multiply([inner[way], *([] if same else [side[way] for side in sides])]))
            lead = front[way]
            made.append(_over(multiply([*out, root]), lead))
        return made[0], made[1]

    def _monomials(
        self, c_0: Polynomial, c_1: Polynomial, c_2: Polynomial
    ) -> tuple[tuple[Polynomial, Polynomial], tuple[Polynomial, Polynomial]]:
        """Split the monomials of c_0·c_2/c_1² into what stays under the root and what comes out."""
        parts = [part.term_content() for part in (c_0, c_1, c_2)]
        powers = [part.monoms()[0] for part in parts]
        under: tuple[dict[str, int], dict[str, int]] = ({}, {})
        outside: tuple[dict[str, int], dict[str, int]] = ({}, {})
        for index, name in enumerate(self.ring.names):
            net = int(powers[0][index]) + int(powers[2][index]) - 2 * int(powers[1][index])
            side = 0 if net > 0 else 1
            if abs(net) % 2:
                under[side][name] = 1
            if abs(net) // 2:
                outside[side][name] = abs(net) // 2
        numbers = [int(part.coeffs()[0]) for part in parts]
        product, root = numbers[0] * numbers[2], math.isqrt(abs(numbers[0] * numbers[2]))
        square = root if root * root == product else 1
        lead = self.ring.constant(product // (square * square))
        monomial = self.ring.monomial
        return (
            (monomial(under[0]) * lead, monomial(under[1])),
            (monomial(outside[0]) * square, monomial(outside[1]) * numbers[1]),
        )


def root_of(expression: Expression) -> Expression:
    """Give the square root; that of 1 is 1."""
    return expression if expression == ONE else Root(expression)


def inverse_root(expression: Expression) -> Expression:
    """Give 1/√ of an expression; that of a fraction is the root of the fraction turned over."""
    if isinstance(expression, Quotient):
        return _root_of_quotient(divide(expression.denominator, expression.numerator))
    return divide(ONE, root_of(expression))


def _root_of_quotient(expression: Expression) -> Expression:
    if isinstance(expression, Quotient) and expression.numerator == ONE:
        return Quotient(ONE, Root(expression.denominator))
    return root_of(expression)


def written_value(square: Fraction | None) -> float | None:
    """Give the root of an exact number as a float; None where there is none."""
    return None if square is None or square < 0 else math.sqrt(square)


def _over(root: Expression, front: Expression) -> Expression:
    """Write front·root, with the root over the front's denominator where there is one."""
    if isinstance(front, Negative):
        return negate(_over(root, front.operand))
    if isinstance(front, Quotient):
        return divide(multiply([front.numerator, root]), front.denominator)
    return multiply([front, root])
