"""Kirchhoff's current law at a node, or at nodes that a floating source joins."""

from __future__ import annotations

from collections.abc import Sequence

from derive.devices.elements import Capacitor, CurrentDrive, Resistor
from derive.expressions.polynomials import add
from derive.expressions.tree import ZERO, Equation, Name
from derive.nodal.branches import Branches
from derive.nodal.linear_form import LinearForm, combine
from derive.nodal.system import LeavingCurrent, NodalEquation


def node_equation(
    nodes: tuple[str, ...], branches: Branches, drives: Sequence[CurrentDrive]
) -> NodalEquation:
    """Write "the sum of the currents that leave is zero" for one node or one group of nodes."""
    terms: list[LeavingCurrent] = []
    rows = []
    through: list[str] = []
    for name, element in branches.elements.items():
        ends = branches.ends(name)
        if ends is None or (ends[0] in nodes) == (ends[1] in nodes):
            continue
        part = getattr(element, "part", name)
        current = leaving(branches, name, ends[0] in nodes)
        through.append(part)
        if not current.is_zero:
            terms.append(LeavingCurrent(name, part, current.shown))
            rows.append(current.row)
    for drive in drives:
        if (drive.nodes[0] in nodes) == (drive.nodes[1] in nodes):
            continue
        form = LinearForm(Name(drive.name), ((drive.name, branches.ring.one),))
        current = form if drive.nodes[0] in nodes else form.negated()
        through.append(drive.name)
        terms.append(LeavingCurrent(drive.name, drive.name, current.shown))
        rows.append(current.row)
    left = add([term.current for term in terms])
    return NodalEquation(
        meaning(nodes, tuple(dict.fromkeys(through))),
        nodes,
        tuple(terms),
        Equation(left, ZERO),
        combine(rows),
    )


def leaving(branches: Branches, name: str, from_first: bool) -> LinearForm:
    """Give the current that leaves through an element at its first end, or at its second.

    A passive element's current is written with the node's own voltage first, so that every term of
    a law is positive: (v_e − v_b)/r_pi, not −(v_b − v_e)/r_pi.
    """
    if from_first:
        return branches.through(name)
    element = branches.elements[name]
    if isinstance(element, Resistor | Capacitor):
        return branches.admitted(element, *reversed(element.between))
    return branches.through(name).negated()


def meaning(nodes: tuple[str, ...], through: tuple[str, ...]) -> str:
    """Say in words which currents the law adds up."""
    where = f"node {nodes[0]}" if len(nodes) == 1 else f"nodes {listed(nodes)} together"
    return f"currents leaving {where} through {listed(through)}"


def listed(items: Sequence[str]) -> str:
    """Give items as words: "a, b and c"."""
    if len(items) < 2:
        return "".join(items) or "nothing"
    return f"{', '.join(items[:-1])} and {items[-1]}"
