"""The normal form of what a line says a response is, modulo the prime: K, a_k and b_k to compare with."""

from __future__ import annotations

from collections.abc import Mapping

from flint import nmod_poly

from derive.algebra.modular import PRIME
from derive.algebra.unreduced import Unreduced
from derive.check.solve import residue
from derive.errors import DeriveError
from derive.expressions.tree import Expression, Name, Power, Product, Quotient, Sum
from derive.expressions.walk import evaluate
from derive.normalise.form import NormalForm

# A response of a higher degree in s is not compared.
HIGHEST = 60


class _Pair(Unreduced):
    """A fraction of polynomials in s, up to a degree that is still compared."""

    __slots__ = ()

    def __post_init__(self) -> None:
        if max(self.top.degree(), self.bottom.degree()) > HIGHEST:
            raise DeriveError("the degree in s is too high")

    def __pow__(self, exponent: int) -> _Pair:
        if exponent * max(self.top.degree(), self.bottom.degree()) > HIGHEST:
            raise DeriveError("the degree in s is too high")
        return Unreduced.__pow__(self, exponent)


def coefficients_modulo(response: Expression, values: Mapping[str, int]) -> dict[str, int] | None:
    """Give K, a_1, …, b_1, … of a response in symbols and s; None where it has none.

    Given: values of the symbols modulo the prime; that of s is not looked at.
    """
    one = nmod_poly([1], PRIME)
    lookup = {name: _Pair(nmod_poly([value], PRIME), one) for name, value in values.items()}
    lookup["s"] = _Pair(nmod_poly([0, 1], PRIME), one)
    try:
        pair = evaluate(response, lookup, lambda v: _Pair(nmod_poly([residue(v, PRIME)], PRIME), one))
    except (DeriveError, ZeroDivisionError):
        return None
    if pair.top == 0 or pair.bottom == 0:
        return None
    shared = pair.top.gcd(pair.bottom)
    top, bottom = ([int(c) for c in (p / shared).coeffs()] for p in (pair.top, pair.bottom))
    found: dict[str, int] = {}
    lowest = []
    for letter, row in (("a", top), ("b", bottom)):
        first = next(k for k, value in enumerate(row) if value)
        scale = pow(row[first], -1, PRIME)
        lowest.append(row[first])
        for k, value in enumerate(row[first:]):
            found[f"{letter}_{k}"] = value * scale % PRIME
    found["K"] = lowest[0] * pow(lowest[1], -1, PRIME) % PRIME
    return found


def response_expression(form: NormalForm) -> Expression:
    """Give the whole response as one expression."""

    def row(entries: tuple[Expression, ...]) -> Expression:
        terms = [Product((entry, Power(Name("s"), k))) if k else entry for k, entry in enumerate(entries)]
        return Sum(tuple(terms)) if len(terms) > 1 else terms[0]

    top = Product((form.gain, Power(Name("s"), int(form.power_of_s)), row(form.numerator)))
    return Quotient(top, row(form.denominator))
