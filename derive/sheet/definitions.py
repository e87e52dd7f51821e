"""The definitions of words such as β and r_e, as the sheet states them."""

from __future__ import annotations

from collections.abc import Iterable

from derive.check.verdict import Solution
from derive.expressions.tree import Equation, Name
from derive.readable.form import Definition
from derive.readable.form import used_in as used_in
from derive.sheet.document import Inline, Line, Maths, Text
from derive.sheet.view import View


def known_definitions(view: View) -> tuple[Definition, ...]:
    """Give every definition that a result's forms use, each once, in an order in which it can be read."""
    return definitions_of(view.result.solution)


def definitions_of(solution: Solution) -> tuple[Definition, ...]:
    """Give every definition that the forms of a solution use."""
    sources: list[tuple[Definition, ...]] = []
    if solution.readable:
        sources.append(solution.readable.definitions)
    if solution.time_constants:
        constants = solution.time_constants
        sources += [found.definitions for found in (*constants.open_circuit, *constants.short_circuit)]
        sources.append(constants.definitions)
    sources += [miller.definitions for miller in solution.miller]
    if solution.estimates:
        sources.append(solution.estimates.definitions)
    if solution.register:
        sources.append(solution.register.definitions)
    return tuple(dict.fromkeys(entry for source in sources for entry in source))


def with_words(definitions: Iterable[Definition]) -> Line:
    """Say "Here β = g_m·r_π and r_e = r_π/(1 + β)."; () where there is nothing to define."""
    equations = [Maths(Equation(Name(name), value)) for name, value in definitions]
    line: list[Inline] = []
    for place, equation in enumerate(equations):
        before = "Here " if not place else " and " if place == len(equations) - 1 else ", "
        line += [Text(before), equation]
    return (*line, Text(".")) if line else ()
