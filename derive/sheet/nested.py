"""What is said of a result in nested form: why it is, and where its coefficients are written out."""

from __future__ import annotations

from derive.expressions.tree import (
    Elided,
    Equation,
    Expression,
    Name,
    Negative,
    Product,
    Quotient,
    Sum,
)
from derive.expressions.walk import children_of, with_children
from derive.normalise import normalise
from derive.quantities.words import rounded_count
from derive.sheet.document import Line, Maths, Text
from derive.sheet.view import View

# Of longer polynomials the first terms and the last are shown: the others have the same pattern.
FULL_TERMS, FIRST_TERMS = 7, 4
POINTER = "values below"


def is_nested(view: View) -> bool:
    """Whether a result was derived in nested form."""
    return view.result.solution.derivation.nested is not None


def why_nested(view: View) -> Line:
    """Say why the form is nested, with the count of terms; () for another form."""
    nested = view.result.solution.derivation.nested
    if nested is None:
        return ()
    if nested.terms is None:
        count = "more terms than can be counted"
    else:
        count = f"{'' if nested.exact else 'up to '}{rounded_count(nested.terms)} terms"
    asked = ", as asked" if nested.asked else ""
    head = f"D has {count}: nested form used{asked} (D being the denominator of "
    return Text(head), Maths(Name(view.name)), Text(", multiplied out).")


def where_written(view: View) -> Line:
    """Say where gain and coefficients stand in full, and what top and bottom share; () for another form."""
    solution = view.result.solution
    form = solution.form
    if solution.derivation.nested is None or form.is_zero:
        return ()
    line: Line = (
        Text("Gain and coefficients are exact: ratios of sums that "),
        Text(f"{len(form.definitions):,} short definitions give, in the ledger under definitions."),
    )
    if form.at_points:
        words = (
            " They hold the lines of the elimination at whole values of s, and what follows from these "
        )
        line = (*line, Text(words), Text("by interpolation: to be worked in exact numbers only."))
    if form.shared:
        which = "a factor" if form.shared == 1 else f"a factor of degree {form.shared} in s"
        line = (
            *line,
            Text(f" Numerator and denominator have {which} in common for all values, which this form "),
            Text("keeps: as many of the poles and zeros cancel."),
        )
    return line


def short_equation(view: View) -> Equation:
    """Give the normal form with names for gain and coefficients, long polynomials by their ends."""
    step = view.step(normalise.NORMAL)
    if step is None:
        return Equation(Name(view.name), Name(view.name))
    return Equation(step.equation.left, _shortened(step.equation.right))


def _shortened(expression: Expression) -> Expression:
    """Elide the middle of long sums."""
    if isinstance(expression, Sum) and len(expression.terms) > FULL_TERMS:
        terms = expression.terms
        left_out = len(terms) - FIRST_TERMS - 1
        return Sum((*terms[:FIRST_TERMS], Elided(left_out, POINTER), terms[-1]))
    if isinstance(expression, Product | Quotient | Negative):
        return with_children(expression, tuple(map(_shortened, children_of(expression))))
    return expression
