"""Parts in parallel and in series become one, under a name, before the equations are written.

The user's names come first: the parts that a line of [merge] lists are combined if they lie in parallel
or in series, or in parallel and series combinations of each other. Then, by rule, resistors between the
same two nodes, and resistors in series through a node that nothing else touches, senses or asks for, are
combined as far as that goes; what the user named is left as he named it. A part whose current is sensed
or wanted stays by itself, as r_π does, so that β can be read; capacitors are combined only where the user
asks for it.

A name by rule is R with the subscripts of its parts in their order: R_1 ∥ R_2 is R_1_2 (printed with the
subscript 1,2), R_C ∥ R_L ∥ r_o is R_C_L_o. A combination in series ends in s, a mixed one in m: R_1_2_s.
More than four subscripts are shortened to the first and the last: R_1_to_6.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

from derive.bands.band_circuit import BandCircuit, Change, Merged
from derive.bands.combine import Group, Workshop
from derive.bands.rewire import on_node
from derive.bands.wiring import sensed_currents, wanted_currents
from derive.devices.elements import Capacitor, Element, Resistor, SmallSignal, Transconductance
from derive.errors import InputError
from derive.expressions.names import shape_of
from derive.expressions.text import to_text
from derive.expressions.walk import evaluate
from derive.quantities.dimension import CAPACITANCE, RESISTANCE
from derive.quantities.symbol import Symbol
from derive.quantities.words import listed
from derive.topology.topology import GROUND, Find, Merge

MOST_SUBSCRIPTS = 4
NOT_USED = "not used in this band: "


@dataclass(frozen=True, slots=True)
class MergedCircuit:
    """The circuit with merged parts under their names, what was merged, and the definitions."""

    circuit: SmallSignal
    changes: tuple[Change, ...]
    definitions: tuple[Merged, ...]


def suits_merging(circuit: SmallSignal) -> bool:
    """Whether parts are merged: the circuit has supplies, devices with a bias, or lines of [merge].

    A circuit of primitive parts and op amps alone stays part by part as its user wrote it.
    """
    topology = circuit.topology
    kinds = {part.name: part.kind for part in topology.parts}
    devices = [device for device in circuit.devices if kinds.get(device.part) != "opamp"]
    return bool(topology.supplies or topology.merges or devices)


def merge_parts(circuit: SmallSignal, finds: Sequence[Find]) -> MergedCircuit:
    """Merge what the user named, then by rule what is left.

    Given: the finds with their nodes as the circuit names them.
    Raises: InputError where a name of [merge] is also another item's.
    """
    apart = frozenset(sensed_currents(circuit)) | wanted_currents(circuit)
    asked = [node for find in finds for node in find.nodes or ()]
    shop = Workshop.of(circuit, apart, asked)
    changes = _by_user(shop, circuit)
    taken = {symbol.name for symbol in circuit.symbols}
    taken |= {part.name for part in circuit.topology.parts}
    taken |= {drive.name for drive in circuit.topology.drives}
    taken |= {find.name for find in circuit.topology.finds}
    taken |= {merge.name for merge in circuit.topology.merges}
    controls = _control_resistances(circuit)
    chosen = [
        group
        for group in shop.free()
        if isinstance(group.element, Resistor) and not group.name and group.element.name not in controls
    ]
    # A device's own resistances come last: R_C ∥ R_L ∥ r_o.
    chosen.sort(key=lambda group: group.element.name != group.element.part)
    for group in shop.combine(chosen):
        if len(group.parts) > 1:
            name = name_of(group, taken)
            taken.add(name)
            changes.append(_said(shop.rename(group, name)))
    named = [group for group in shop.groups if group.name]
    symbols = _symbols(circuit, named)
    merged = replace(
        circuit, elements=tuple(group.element for group in shop.groups), symbols=tuple(symbols)
    )
    return MergedCircuit(_with_roles_left(merged), tuple(changes), tuple(map(_merged, shop.named)))


def _control_resistances(circuit: SmallSignal) -> set[str]:
    """Give the resistors of devices across which their own controlling voltage stands: r_π of g_m·r_π.

    These stay by themselves, as β and r_e = r_π/(β + 1) are what engineers read.
    """
    controls = {
        (element.part, frozenset(element.senses))
        for element in circuit.elements
        if isinstance(element, Transconductance) and element.part != element.name
    }
    return {
        element.name
        for element in circuit.elements
        if isinstance(element, Resistor) and (element.part, frozenset(element.between)) in controls
    }


def name_of(group: Group, taken: set[str]) -> str:
    """Give the name by rule of a group of resistors; where it is taken, underscore p is added."""
    chunks = [chunk for part in group.parts for chunk in _subscripts(part)]
    if len(chunks) > MOST_SUBSCRIPTS:
        chunks = [chunks[0], "to", chunks[-1]]
    if not group.in_parallel:
        chunks.append("s" if group.in_series else "m")
    name = "_".join(["R", *chunks])
    while name in taken:
        name += "_p"
    return name


def _subscripts(part: str) -> list[str]:
    shape = shape_of(part)
    if shape.subscripts:
        return ["".join(runs) for runs in shape.subscripts]
    return [chunk for chunk in part.split("_") if chunk] or [part]


def _by_user(shop: Workshop, circuit: SmallSignal) -> list[Change]:
    """Apply the lines of [merge], in the order written but that a line may use a later one's name."""
    known = {symbol.name for symbol in circuit.symbols}
    changes: dict[str, Change] = {}
    waiting = list(circuit.topology.merges)
    while waiting:
        left = []
        for merge in waiting:
            if merge.name in known:
                raise InputError(
                    f"merge {merge.name}: its name is also that of another item",
                    where=str(merge.place),
                    cure="give the merged part a name of its own",
                )
            changes[merge.name], done = _one_by_user(shop, merge)
            if not done:
                left.append(merge)
        if len(left) == len(waiting):
            break
        waiting = left
    return [changes[merge.name] for merge in circuit.topology.merges]


def _one_by_user(shop: Workshop, merge: Merge) -> tuple[Change, bool]:
    groups, why = shop.pick(merge.parts)
    if not why:
        combined = shop.combine(groups, keep=len(groups))
        if len(combined) == 1 and len(groups) > 1:
            return _said(shop.rename(combined[0], merge.name)), True
        why = f"{listed(merge.parts)} are neither in parallel nor in series"
    return Change("merge", merge.name, f"{NOT_USED}{why}"), False


def _said(group: Group) -> Change:
    # Ground is named last.
    first, second = map(on_node, sorted(group.nodes, key=lambda node: node == GROUND))
    how = "in series" if group.in_series else "in parallel" if group.in_parallel else "combined"
    where = f"between {first} and {second}"
    return Change("merge", group.name, f"merged: {listed(group.parts)} {how}, {where}")


def refuse_unused_merges(merges: Sequence[Merge], bands: Sequence[BandCircuit]) -> None:
    """Refuse a name of [merge] that no band can use; what one band cannot use is said there.

    Raises: InputError at the line of the merge, with the reason that the last band gives.
    """
    for merge in merges:
        unused = [
            change.says.removeprefix(NOT_USED)
            for band in bands
            for change in band.changes
            if change.subject == merge.name and change.says.startswith(NOT_USED)
        ]
        if bands and len(unused) == len(bands):
            raise InputError(
                f"merge {merge.name}: it is used in no band: {unused[-1]}",
                where=str(merge.place),
                cure="list parts that lie in parallel or in series, or take the line out",
            )


def _merged(group: Group) -> Merged:
    return Merged(group.name, group.expression, group.parts)


def _symbols(circuit: SmallSignal, named: Sequence[Group]) -> list[Symbol]:
    """Put each merged symbol in the place of the first symbol that it stands for."""
    values = {symbol.name: symbol.value for symbol in circuit.symbols}
    gone = {part: group for group in named for part in group.base}
    result: dict[str, Symbol] = {}
    for symbol in circuit.symbols:
        group = gone.get(symbol.name)
        if group is None:
            result[symbol.name] = symbol
        elif group.name not in result:
            result[group.name] = _symbol(group, values)
    return list(result.values())


def _symbol(group: Group, values: dict[str, Fraction | None]) -> Symbol:
    known = {part: value for part in group.base if (value := values[part]) is not None}
    exact = evaluate(group.expanded, known, Fraction) if len(known) == len(group.base) else None
    dimension = CAPACITANCE if isinstance(group.element, Capacitor) else RESISTANCE
    return Symbol(group.name, dimension, exact, f"merged: {to_text(group.expression)}")


def _with_roles_left(circuit: SmallSignal) -> SmallSignal:
    there: dict[str, Element] = {element.name: element for element in circuit.elements}
    return replace(circuit, roles=tuple(item for item in circuit.roles if item[0] in there))
