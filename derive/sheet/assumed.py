"""A result under its assumptions, as the sheet and the summary word it."""

from __future__ import annotations

from derive.approximate.register import Entry, Register
from derive.check.verdict import Result
from derive.expressions.tree import Equation, Expression, Name
from derive.readable.measure import leaves
from derive.sheet.document import Block, Display, Inline, Line, Mark, Maths, Text
from derive.sheet.final import explicit
from derive.sheet.view import View
from derive.topology.topology import Assumption

# Up to so many names and numbers a reduced result is read in one line, and stands at a glance.
ONE_LINE = 40
PASSED: dict[str, bool | None] = {
    "holds": True,
    "fails at a corner": False,
    "fails": False,
    "not checked": None,
}
SIGNS = {"much_greater": "≫", "much_less": "≪", "equal": "="}


def failed_assumptions(result: Result) -> list[str]:
    """Name the assumptions on a result that fail."""
    register = result.solution.register
    return [
        f"assumption {entry.number} ({entry.assumption.that}) {entry.status}"
        for entry in (register.entries if register else ())
        if PASSED[entry.status] is False
    ]


def statement(assumption: Assumption) -> Line:
    """Give what is assumed as maths: "R_B → ∞", "β ≫ 1"."""
    left = Maths(assumption.left)
    if assumption.right is None:
        return (left, Text(" → ∞" if assumption.form == "to_inf" else " → 0"))
    if assumption.form == "equal":
        return (Maths(Equation(assumption.left, assumption.right)),)
    return (left, Text(f" {SIGNS[assumption.form]} "), Maths(assumption.right))


def written(entry: Entry) -> Expression:
    """Give the reduced result in one expression."""
    return explicit(entry.reduced.readable, entry.reduced.form.power_of_s)


def assumed(view: View) -> list[Block]:
    """Give the short result under all assumptions for the first page; nothing where it is long."""
    register = view.result.solution.register
    if register is None or not register.entries:
        return []
    found = written(register.entries[-1])
    if leaves(found) > ONE_LINE:
        return []
    return [
        Display(
            Equation(Name(view.name), found, "~"), (*_lead(view, register), Text("; "), *_mark(register))
        )
    ]


def _lead(view: View, register: Register) -> Line:
    line: list[Inline] = [Text("With ")]
    for place, entry in enumerate(register.entries):
        last = place == len(register.entries) - 1
        line += [Text("" if not place else " and " if last else ", "), *statement(entry.assumption)]
    return tuple(line)


def _mark(register: Register) -> Line:
    failed = [entry for entry in register.entries if PASSED[entry.status] is False]
    if failed:
        numbers = ", ".join(str(entry.number) for entry in failed)
        return (
            Mark(
                False,
                f"assumption{'' if len(failed) == 1 else 's'} {numbers} fail{'s' * (len(failed) == 1)}",
            ),
        )
    if any(entry.status == "not checked" for entry in register.entries):
        return (Mark(None, "not checked"),)
    return (Mark(True, "within the limits"),)
