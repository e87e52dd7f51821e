"""Closed forms and sensitivities of poles and zeros, judged by determinants of the tableau."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from fractions import Fraction
from typing import Any

from flint import acb, ctx, fmpq

from derive.check.excitation import excite
from derive.check.merged import with_merged_exact
from derive.check.points import stream, values_exact
from derive.check.roads.nominal import nominal_values
from derive.check.solve import NoSolutionError
from derive.check.stamp import assemble
from derive.check.tableau_ratio import determinant, exact_ratio
from derive.check.verdict import Solution
from derive.errors import DeriveError
from derive.estimates.estimates import ClosedForm, Estimates, RootSensitivity
from derive.expressions.tree import Expression
from derive.expressions.walk import evaluate

BITS = 256
# What a value that should vanish may leave of the sum of its terms' sizes.
LEFT_OVER = 2.0**-120
VALUE_ERROR = 1e-9
TRIES = 4
# Steps of this size leave a central difference wrong by its square, far below what is compared.
STEP = Fraction(1, 2**40)
SENSITIVITY_ERROR = 1e-6
MOST_SENSITIVITIES = 16


def judge_closed_forms(solution: Solution, said: Estimates) -> str:
    """Say which closed form is wrong; "" where none is."""
    if not said.closed_forms:
        return ""
    if wrong := _judge_at_generic(solution, said):
        return wrong
    nominal = nominal_values(solution.judged)
    if nominal is None:
        return next(
            (f"{f.name} has a value, while one is open" for f in said.closed_forms if f.value), ""
        )
    known = known_values(solution, said, nominal)
    for form in said.closed_forms:
        for place, expression in enumerate(_ways(form)):
            value = in_balls(expression, known)
            if place and not value.is_finite():
                continue  # a part such as 1/(g_1 − g_2) at equal values; judged where no two are alike
            if form.value is None or not _near(value, form.value):
                return f"{form.name}: its value is not what its formula gives"
    return ""


def known_values(
    solution: Solution, said: Estimates, values: Mapping[str, Fraction]
) -> dict[str, Fraction]:
    """Give the values with those of merged names and of the names that the formulas define."""
    return with_merged_exact(solution, values, said.definitions)


def in_balls(expression: Expression, known: Mapping[str, Fraction]) -> Any:
    """Give an expression's value as a ball, square roots included."""
    with ctx.workprec(BITS):
        balls = {name: _ball(value) for name, value in known.items()}
        return evaluate(expression, balls, _ball, lambda value: value.sqrt())


def _judge_at_generic(solution: Solution, said: Estimates) -> str:
    """Put every closed form into the circuit at whole values, no two alike."""
    numbers, why = stream(solution, "estimates"), "no values were found"
    for _ in range(TRIES):
        values = values_exact(solution.judged, numbers)
        tableau = assemble(solution.judged, excite(solution.derivation.system), values.__getitem__)
        try:
            top, bottom = exact_ratio(tableau)
            known = known_values(solution, said, values)
            sides = {"pole": bottom.coeffs(), "zero": top.coeffs()}
            with ctx.workprec(BITS):
                for name, of, readings in _roots(said.closed_forms, known):
                    if not any(all(_vanishes(sides[of], root) for root in roots) for roots in readings):
                        return f"{name} is no {of} of the circuit"
            return ""
        except (NoSolutionError, ZeroDivisionError) as error:
            why = str(error)
        except DeriveError as error:
            return f"a closed form cannot be read: {error}"
    raise NoSolutionError(why)


def _roots(
    forms: Sequence[ClosedForm], known: Mapping[str, Fraction]
) -> Iterator[tuple[str, str, tuple[tuple[Any, ...], ...]]]:
    """Give the roots that the closed forms claim, raw and readable ones alike, in every possible reading.

    A form without a Q beside it is a real root on the side that its words say; with a Q it is ω_0.
    """
    for index, form in enumerate(forms):
        if _is_quality(form):
            continue
        partner = forms[index + 1] if index + 1 < len(forms) and _is_quality(forms[index + 1]) else None
        if partner is None and "imaginary axis" in form.says:
            continue  # damping that vanishes at the nominal values alone cannot be tried at others
        for way in (0, 1):
            omega = in_balls(_ways(form)[way], known)
            if partner is None:
                yield form.name, form.of, ((omega if "right half-plane" in form.says else -omega,),)
                continue
            half = 1 / (2 * in_balls(_ways(partner)[way], known))
            swing = (half * half - 1).sqrt()
            readings = [(omega * (swing - half), omega * (-swing - half))]
            if abs(complex(omega).real) < 0.5 * abs(complex(omega)):
                # Roots of opposite sign: √z·√(1/z) is −1 for negative z, and Q comes out with either sign.
                readings.append((omega * (swing + half), omega * (half - swing)))
            yield form.name, form.of, tuple(readings)


def _ways(form: ClosedForm) -> tuple[Expression, Expression]:
    return form.expression, form.readable


def _is_quality(form: ClosedForm) -> bool:
    return form.name.startswith("Q")


def _vanishes(coefficients: Sequence[Any], root: Any) -> bool:
    total, size = acb(0), acb(0)
    for power, value in enumerate(coefficients):
        term = acb(value) * root**power
        total += term
        size += abs(term)
    return bool(abs(complex(total / size)) < LEFT_OVER)


def _near(ball: Any, value: float) -> bool:
    if value == 0:
        return bool(ball.contains(0))
    found = complex(ball)
    return abs(found - value) <= VALUE_ERROR * abs(value)


def judge_sensitivities(solution: Solution, said: Estimates) -> str:
    """Say which root or sensitivity is wrong, of a sample; "" where none is."""
    circuit = solution.derivation.system.small_signal
    values = nominal_values(circuit)
    if values is None or not said.sensitivities:
        return ""
    pairs = [(root, name) for root in said.sensitivities for name, _ in root.by_symbol]
    stride = max(1, -(-len(pairs) // MOST_SENSITIVITIES))
    chosen = pairs[::stride]
    for root in said.sensitivities:
        own = [name for other, name in chosen if other is root]
        if wrong := _judge_root(solution, root, own, values):
            return wrong
    return ""


def _judge_root(
    solution: Solution, root: RootSensitivity, names: Sequence[str], values: Mapping[str, Fraction]
) -> str:
    """Compare with −(x·∂f/∂x)/(p·∂f/∂p) by central differences of the determinant f that vanishes at p."""
    circuit, excitation = solution.derivation.system.small_signal, excite(solution.derivation.system)
    bordered = root.of == "zero"
    stated = dict(root.by_symbol)
    with ctx.workprec(BITS):
        p, step = acb(root.root.real, root.root.imag), _ball(STEP)
        tableau = assemble(circuit, excitation, values.__getitem__)
        above, here, below = (
            determinant(tableau, p * (1 + side * step), bordered=bordered) for side in (1, 0, -1)
        )
        slope = above - below
        if slope.contains(0):
            return ""  # a mode that this response does not show lies in the same place
        if abs(complex(2 * step * here / slope)) > VALUE_ERROR:
            return f"{root.of} {root.index + 1} is no {root.of} of the circuit"
        for name in names:
            ends = []
            for side in (1, -1):
                moved = {**values, name: values[name] * (1 + side * STEP)}
                changed = assemble(circuit, excitation, moved.__getitem__)
                ends.append(determinant(changed, p, bordered=bordered))
            found = complex(-(ends[0] - ends[1]) / slope)
            if not abs(found - stated[name]) <= SENSITIVITY_ERROR * max(1.0, abs(found)):
                return f"{root.of} {root.index + 1} follows {name} otherwise than stated"
            if not _is_quality_right(root, name, found):
                return f"Q of {root.of} {root.index + 1} follows {name} otherwise than stated"
    return ""


def _is_quality_right(root: RootSensitivity, name: str, found: complex) -> bool:
    """Whether Q = |p|/(2·|Re p|) follows a part as stated; a root without a Q states nothing."""
    p, stated = root.root, dict(root.quality)
    if not p.imag or not p.real:
        return not stated
    true = found.real - (found * p).real / p.real
    scale = max(1.0, abs(p.imag / p.real))
    return name in stated and abs(stated[name] - true) <= SENSITIVITY_ERROR * scale * max(1.0, abs(found))


def _ball(value: Fraction | int) -> Any:
    exact = Fraction(value)
    return acb(fmpq(exact.numerator, exact.denominator))
