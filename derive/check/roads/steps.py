"""The derivation replayed: every step from those it claims to follow from, and in the circuit."""

from __future__ import annotations

from derive.check.points import stream
from derive.check.reading import form_modulo, value_modulo
from derive.check.settled import Point, draw
from derive.check.solve import NoSolutionError
from derive.check.verdict import Solution, Verdict
from derive.check.words import count
from derive.eliminate.derivation import Step
from derive.errors import DeriveError
from derive.expressions.tree import Equation, Name
from derive.nodal.system import MatrixForm
from derive.normalise.form import NormalForm

NAME = "every step"
METHOD = (
    "each step from the earlier ones by its own certificate; each step and the matrix at the circuit's "
    "true solution, at a random point modulo a random 61-bit prime"
)
ORDER = 60
LIMIT = "every step holds, and the last gives the result"
TRIES = 12


class StepError(ValueError):
    """Raised for a step that does not hold, or a derivation that does not give the result."""


def judge(solution: Solution) -> Verdict:
    """Judge whether every step follows and is true, and whether the last ones give the result."""
    try:
        broken = broken_steps(solution)
    except StepError as error:
        return Verdict(NAME, METHOD, False, str(error), LIMIT)
    total = len(solution.derivation.steps)
    if broken:
        number, why = broken[0]
        return Verdict(NAME, METHOD, False, f"step {number}: {why}", LIMIT)
    return Verdict(NAME, METHOD, True, f"{count(total, 'step')} of {total}", LIMIT)


def broken_steps(solution: Solution) -> tuple[tuple[int, str], ...]:
    """Give the steps that do not hold, by their numbers, each with what is wrong.

    Raises: StepError where the fault is in no single step.
    """
    numbers = stream(solution, "steps")
    prime = numbers.prime()
    why = ""
    for _ in range(TRIES):
        try:
            point = draw(solution, numbers, prime)
            _judge_matrix(solution.derivation.system.matrix, point)
            return _replay(solution, point)
        except (NoSolutionError, ZeroDivisionError) as error:
            why = str(error)
    raise StepError(f"no point could be worked: {why}")


def _judge_matrix(matrix: MatrixForm | None, point: Point) -> None:
    """Hold every row of the printed matrix against the circuit's solution."""
    if matrix is None:
        return
    prime = point.prime
    unknowns = [value_modulo(unknown, point.settled, prime) for unknown in matrix.unknowns]
    for number, (row, right) in enumerate(zip(matrix.rows, matrix.right, strict=True), 1):
        entries = [value_modulo(entry, point.settled, prime) for entry in row]
        total = sum(a * b for a, b in zip(entries, unknowns, strict=True))
        if (total - value_modulo(right, point.settled, prime)) % prime:
            raise StepError(f"row {number} of the matrix is not true of the circuit")


def _replay(solution: Solution, point: Point) -> tuple[tuple[int, str], ...]:
    system, form = solution.derivation.system, solution.form
    stated = {system.find.name, *(drive.name for drive in system.small_signal.drives)}
    done: dict[int, Step] = {}
    broken: list[tuple[int, str]] = []
    reached = False
    for step in solution.derivation.steps:
        try:
            if step.number in done:
                raise StepError("its number stands twice")
            if step.defines is not None:
                _define(step, point, stated)
            _judge_step(step, done, point)
            if step.defines not in stated:
                _judge_definition(step, form, point)
            if step.equation.left == Name(system.find.name) and step.defines is None:
                reached = _gives_form(step, form, point)
        except (StepError, DeriveError) as error:
            broken.append((step.number, str(error)))
        done[step.number] = step
    if not reached and not broken:
        raise StepError(f"no step gives the result for {system.find.name}")
    return tuple(broken)


def _define(step: Step, point: Point, stated: set[str]) -> None:
    """Take the name's value from its definition; what the circuit settles is left to be judged."""
    name = step.defines or ""
    if step.equation.left != Name(name):
        raise StepError(f"it does not define {name}")
    if name in point.free and name not in stated:
        raise StepError(f"it defines {name}, which already has a meaning")
    for values in (point.free, point.settled):
        if name in stated and values is point.settled:
            continue  # the circuit itself gives this one: the definition is judged against it
        values[name] = value_modulo(step.equation.right, values, point.prime)


def _difference(equation: Equation, values: dict[str, int], prime: int) -> int:
    left = value_modulo(equation.left, values, prime)
    return (left - value_modulo(equation.right, values, prime)) % prime


def _judge_step(step: Step, done: dict[int, Step], point: Point) -> None:
    prime = point.prime
    if _difference(step.equation, point.settled, prime):
        raise StepError("not true of the circuit")
    if step.nonzero is not None and value_modulo(step.nonzero, point.free, prime) == 0:
        raise StepError("what it says is not zero is zero")
    certificate = step.certificate
    if certificate is None:
        if step.row is None and step.defines is None:
            raise StepError("it gives no reason")
        return
    divisor = value_modulo(certificate.divisor, point.free, prime)
    if divisor == 0:
        raise StepError("its divisor is zero")
    total = 0
    for number, multiplier in certificate.uses:
        if number not in done:
            raise StepError(f"it uses step {number}, which does not come before it")
        used = _difference(done[number].equation, point.free, prime)
        total += value_modulo(multiplier, point.free, prime) * used
    if (total - divisor * _difference(step.equation, point.free, prime)) % prime:
        raise StepError("does not follow from the steps that it uses")


def _judge_definition(step: Step, form: NormalForm, point: Point) -> None:
    """Hold a definition of K, a_k or b_k against the coefficient printed under that name."""
    if step.defines is None:
        return
    printed = {"K": form.gain}
    printed.update({f"a_{k}": a for k, a in enumerate(form.numerator)})
    printed.update({f"b_{k}": b for k, b in enumerate(form.denominator)})
    tree = printed.get(step.defines)
    if tree is not None and value_modulo(tree, point.free, point.prime) != point.free[step.defines]:
        raise StepError(f"it defines {step.defines} otherwise than the result does")


def _gives_form(step: Step, form: NormalForm, point: Point) -> bool:
    return value_modulo(step.equation.right, point.free, point.prime) == form_modulo(
        form, point.free, point.prime
    )
