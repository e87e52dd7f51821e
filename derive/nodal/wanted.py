"""The unknown that is sought, and the equation that defines it where it is not an unknown already."""

from __future__ import annotations

from typing import Literal

from derive.expressions.tree import Equation, Name
from derive.nodal.branches import Branches
from derive.nodal.linear_form import LinearForm, combine
from derive.nodal.system import NodalEquation, Unknown
from derive.nodal.voltages import fresh
from derive.topology.topology import GROUND, Find

Extra = tuple[Unknown, NodalEquation]


def wanted_quantity(find: Find, branches: Branches, taken: set[str]) -> tuple[str, Extra | None]:
    """Give the name of the unknown sought, with what must be added to the system for it."""
    if find.quantity == "current":
        part = find.part or ""
        form = branches.through(part)
        subject, name = part, f"i_{part}"
        meaning = f"current through {part}"
    else:
        plus, minus = find.nodes or (GROUND, GROUND)
        form = branches.voltages.between(plus, minus)
        subject = plus
        name = f"v_{plus}" if minus == GROUND else f"v_{plus}_{minus}"
        meaning = f"voltage of node {plus}" + (f" against node {minus}" if minus != GROUND else "")
    if len(form.row) == 1 and form.row[0][0] in _unknown_names(branches) and form.row[0][1] == 1:
        return form.row[0][0], None
    name = fresh(taken, name)
    own = LinearForm(Name(name), ((name, branches.ring.one),))
    row = combine([own.row, form.negated().row])
    quantity: Literal["voltage", "current"] = "voltage"
    if find.quantity == "current":
        quantity = "current"
    equation = NodalEquation(meaning, (), (), Equation(own.shown, form.shown), row)
    return name, (Unknown(name, quantity, subject), equation)


def _unknown_names(branches: Branches) -> set[str]:
    return {*branches.voltages.name_of.values(), *branches.unknown.values()}
