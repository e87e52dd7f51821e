"""Dimensions, term by term: what is added must be alike, and the whole must be what was asked."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from derive.check.excitation import response_dimension
from derive.check.merged import definitions_of
from derive.check.verdict import Solution, Verdict
from derive.check.words import count
from derive.devices.elements import Coupling
from derive.expressions.tree import (
    Expression,
    Name,
    Negative,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Root,
    Sum,
)
from derive.quantities.dimension import FREQUENCY, INDUCTANCE, RATIO, TIME, Dimension

NAME = "dimensions"
METHOD = "volts, ohms and seconds counted in every term of the gain and of every coefficient"
ORDER = 50
LIMIT = "all terms of a sum alike, coefficient k in seconds to the power k"


class DimensionError(ValueError):
    """Raised where unlike things are added."""


def judge(solution: Solution) -> Verdict:
    """Judge whether every sum adds like to like, and gain and coefficients are what they must be."""
    system, form = solution.derivation.system, solution.form
    if form.at_points:
        return Verdict(
            NAME, METHOD, None, "not tried: the definitions have numbers in the place of s", LIMIT
        )
    try:
        names = _names(solution)
    except DimensionError as error:
        return Verdict(NAME, METHOD, False, str(error), LIMIT)
    expected = response_dimension(system)
    if expected is None and not form.is_zero:
        return Verdict(NAME, METHOD, None, "not tried: the drives are of two kinds", LIMIT)
    claims = [(f"a_{k}", a, TIME**k) for k, a in enumerate(form.numerator)]
    claims += [(f"b_{k}", b, TIME**k) for k, b in enumerate(form.denominator)]
    terms = 0
    for name, expression, wanted in [("gain", form.gain, None), *claims]:
        try:
            found = dimension_of(expression, names)
        except DimensionError as error:
            return Verdict(NAME, METHOD, False, f"{name}: {error}", LIMIT)
        terms += _terms(expression)
        if wanted is None and expected is not None:
            wanted = expected / FREQUENCY**form.power_of_s
        if found is not None and wanted is not None and found != wanted:
            measured = f"{name} is in {in_words(found)}, not in {in_words(wanted)}"
            return Verdict(NAME, METHOD, False, measured, LIMIT)
    return Verdict(NAME, METHOD, True, f"{count(terms, 'term')} agree", LIMIT)


def _names(solution: Solution) -> dict[str, Dimension]:
    """Give the dimension of every name; that of a merged one must be its definition's."""
    names = {symbol.name: symbol.dimension for symbol in solution.judged.symbols}
    for element in solution.judged.elements:
        if isinstance(element, Coupling):
            names[element.mutual] = INDUCTANCE
    merged_symbols = {s.name: s.dimension for s in solution.derivation.system.small_signal.symbols}
    for merged in definitions_of(solution):
        try:
            found = dimension_of(merged.definition, names)
        except DimensionError as error:
            raise DimensionError(f"{merged.name}: {error}") from None
        wanted = merged_symbols.get(merged.name, found)
        if found is None or found != wanted:
            raise DimensionError(f"{merged.name} is not of the kind of its parts")
        names[merged.name] = found
    for name, meaning in solution.form.definitions:
        try:
            of_meaning = dimension_of(meaning, names)
        except DimensionError as error:
            raise DimensionError(f"{name}: {error}") from None
        if of_meaning is None:
            raise DimensionError(f"{name} is defined as nothing")
        names[name] = of_meaning
    return names


def dimension_of(expression: Expression, names: Mapping[str, Dimension]) -> Dimension | None:
    """Give the dimension of the tree; None for a zero, which has every dimension.

    Raises: DimensionError where unlike terms are added, or a name is not known.
    """
    if isinstance(expression, Number):
        return None if expression.value == 0 else RATIO
    if isinstance(expression, Name):
        if expression.text not in names:
            raise DimensionError(f"the name {expression.text} is not one of the circuit's")
        return names[expression.text]
    if isinstance(expression, Negative):
        return dimension_of(expression.operand, names)
    if isinstance(expression, Sum):
        return _alike([dimension_of(term, names) for term in expression.terms])
    if isinstance(expression, Parallel):
        return _alike([dimension_of(branch, names) for branch in expression.branches])
    return _of_product(expression, names)


def _of_product(expression: Expression, names: Mapping[str, Dimension]) -> Dimension | None:
    if isinstance(expression, Product):
        total: Dimension | None = RATIO
        for factor in expression.factors:
            part = dimension_of(factor, names)
            total = None if total is None or part is None else total * part
        return total
    if isinstance(expression, Quotient):
        top = dimension_of(expression.numerator, names)
        bottom = dimension_of(expression.denominator, names)
        return None if top is None or bottom is None else top / bottom
    if isinstance(expression, Power):
        base = dimension_of(expression.base, names)
        return RATIO if expression.exponent == 0 else None if base is None else base**expression.exponent
    if isinstance(expression, Root):
        inside = dimension_of(expression.radicand, names)
        return None if inside is None else _half(inside)
    raise DimensionError("terms are left out")


def _half(dimension: Dimension) -> Dimension:
    powers = (dimension.volt, dimension.ohm, dimension.second)
    if any(power % 2 for power in powers):
        raise DimensionError(f"a root of {in_words(dimension)}")
    return Dimension(*(power // 2 for power in powers))


def _alike(found: Sequence[Dimension | None]) -> Dimension | None:
    first = next((item for item in found if item is not None), None)
    for item in found:
        if item is not None and item != first and first is not None:
            raise DimensionError(f"{in_words(first)} and {in_words(item)} are added")
    return first


def _terms(expression: Expression) -> int:
    if isinstance(expression, Sum):
        return sum(_terms(term) for term in expression.terms)
    if isinstance(expression, Quotient):
        return _terms(expression.numerator) + _terms(expression.denominator)
    if isinstance(expression, Product):
        sums = [factor for factor in expression.factors if isinstance(factor, Sum | Quotient)]
        return sum(_terms(factor) for factor in sums) or 1
    return _terms(expression.operand) if isinstance(expression, Negative) else 1


def in_words(dimension: Dimension) -> str:
    """Give a dimension in signs: "Ω·s", "1/s", "no unit"."""
    powers = (("V", dimension.volt), ("Ω", dimension.ohm), ("s", dimension.second))
    above = "·".join(_raised(sign, power) for sign, power in powers if power > 0)
    below = "·".join(_raised(sign, -power) for sign, power in powers if power < 0)
    if not above and not below:
        return "no unit"
    return above if not below else f"{above or '1'}/{below if '·' not in below else f'({below})'}"


def _raised(sign: str, power: int) -> str:
    return sign if power == 1 else sign + str(power).translate(str.maketrans("0123456789", "⁰¹²³⁴⁵⁶⁷⁸⁹"))
