"""From the small-signal circuit to the circuit of one band, each change with its reason."""

from __future__ import annotations

from dataclasses import replace
from typing import Literal

from derive.bands.band_circuit import BandCircuit, Change
from derive.bands.choose import State, states
from derive.bands.merge import merge_parts, suits_merging
from derive.bands.rewire import OTHER_BANDS, label_of, on_node, rewire
from derive.bands.wiring import ends_of
from derive.devices.elements import Element, Inductor, SmallSignal
from derive.errors import InputError
from derive.quantities.words import listed
from derive.topology.topology import GROUND, BandName, Find, Role, Supply


def restrict(circuit: SmallSignal, band: BandName, *, merge: bool = True) -> BandCircuit:
    """Give the circuit of a band: supplies grounded, parts shorted, opened and merged, with reasons.

    Given: `merge` allows parts to be merged; it happens only in a circuit that `suits_merging`.
    Raises: InputError where the band leaves no circuit that can be worked.
    """
    changed = states(circuit, band)
    supplies = circuit.topology.supplies
    rewired = rewire(circuit, changed, [supply.node for supply in supplies])
    changes = [_grounded(supply, circuit) for supply in supplies]
    roles = dict(circuit.roles)
    changes += [
        _changed(element, roles[element.name], changed[element.name], dict(rewired.nodes))
        for element in circuit.elements
        if element.name in changed
    ]
    changes += rewired.left_out
    names = dict(rewired.nodes)
    if not (merge and suits_merging(circuit)):
        return BandCircuit(band, rewired.circuit, rewired.circuit, tuple(changes), (), rewired.nodes)
    merged = merge_parts(rewired.circuit, [_renamed(find, names) for find in circuit.topology.finds])
    changes += merged.changes
    return BandCircuit(
        band, merged.circuit, rewired.circuit, tuple(changes), merged.definitions, rewired.nodes
    )


def find_in(band: BandCircuit, find: Find) -> Find:
    """Give what is wanted with its nodes under the names that they have in this band.

    Raises: InputError where the node or the part is no longer in the band's circuit.
    """
    circuit = band.unmerged
    items = (*circuit.elements, *circuit.drives)
    renamed = _renamed(find, dict(band.nodes))
    there = {node for item in items for node in ends_of(item)} | {GROUND}
    for wanted, node in zip(find.nodes or (), renamed.nodes or (), strict=True):
        if node not in there:
            raise InputError(
                f"{find.name} asks for node {wanted}, to which nothing is connected {_in(band.band)}",
                where=str(find.place),
                cure='choose the bands to work in, such as bands = ["full"]',
            )
    owners = {item.name for item in items} | {element.part for element in circuit.elements}
    if find.quantity == "current" and find.part not in owners:
        said = next((c.says for c in band.changes if c.subject == find.part), "left out")
        raise InputError(
            f"{find.name} asks for the current of {find.part}, which is not in the circuit "
            f"{_in(band.band)} ({said.partition(':')[0]})",
            where=str(find.place),
            cure=OTHER_BANDS.replace("it", "the part", 1),
        )
    return renamed


def _in(band: BandName) -> str:
    return "at mid-band" if band == "mid" else f"of the {band} band" if band != "full" else "in full"


def _renamed(find: Find, names: dict[str, str]) -> Find:
    if find.nodes is None:
        return find
    first, second = find.nodes
    return replace(find, nodes=(names.get(first, first), names.get(second, second)))


def _grounded(supply: Supply, circuit: SmallSignal) -> Change:
    parts = dict.fromkeys(e.part for e in circuit.elements if supply.node in ends_of(e))
    says = f"node {supply.node} is signal ground: a supply holds its voltage"
    if parts:
        says += f"; {listed(parts)} then {'goes' if len(parts) == 1 else 'go'} to ground"
    return Change("signal ground", supply.name, says)


def _changed(element: Element, role: Role, state: State, names: dict[str, str]) -> Change:
    """Say why an element is a short or open, and which nodes a short makes one."""
    what = "inductor" if isinstance(element, Inductor) else "capacitor"
    subject = label_of(element)
    kind: Literal["short", "open"] = "short" if state == "short" else "open"
    if role == "parasitic":
        of_device = element.part != element.name
        name = f"device {'inductance' if what == 'inductor' else 'capacitance'}"
        says = f"{name if of_device else f'parasitic {what}'}, acts at high frequency only"
    else:
        size = "small" if kind == "short" else "large"
        says = f"{role} {what}, its reactance is {size} from mid-band up"
    if kind == "short":
        lost = [node for node in ends_of(element) if node in names]
        says += "".join(f"; node {node} is now {on_node(names[node])}" for node in lost)
    return Change(kind, subject, f"{kind}: {says}")
