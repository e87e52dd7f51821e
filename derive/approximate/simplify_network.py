"""A circuit as a sum of stamps, each the value of one element between a pair of rows and a pair of columns.

matrix(s) = Σ sign·value·s^power·(row pair)·(column pair)ᵀ over node voltages and, where an element needs
one, branch currents. So that taking an element out, or shorting it, is a change of rank one.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from fractions import Fraction
from math import prod

from derive.devices.elements import (
    Capacitor,
    Coupling,
    CurrentGain,
    Element,
    Inductor,
    OnePoleGain,
    Resistor,
    SmallSignal,
    Transconductance,
    Transresistance,
    VirtualShort,
    VoltageDrive,
    VoltageGain,
)
from derive.errors import InputError
from derive.nodal.ports import port
from derive.nodal.write import nodes_of
from derive.normalise.numbers import values_of
from derive.topology.topology import GROUND, Find

NOWHERE = -1
Pair = tuple[int, int]


@dataclass(frozen=True, slots=True)
class Stamp:
    """sign·(product of symbols)·s^power between a pair of rows and a pair of columns.

    A symbol in `inverted` enters as its reciprocal. `owner` is the element; `removable` says whether its
    value may go to zero, `shortable` whether it may grow without limit, which makes the two columns one.
    """

    owner: str
    symbols: tuple[str, ...]
    power: int
    rows: Pair
    columns: Pair
    sign: int = 1
    inverted: bool = False
    removable: bool = False
    shortable: bool = False


@dataclass(frozen=True, slots=True)
class Network:
    """matrix(s)·x = right, for an input of 1; the response is x at the first of `wanted` less the second.

    `labels` are the unknowns: ("node", name) or ("branch", element); NOWHERE stands for ground. `sizes` are the
    stamps' values at s = 1. `right` holds (row, value). `values` gives every symbol's nominal value; `kept` the
    elements that stay as they are, with the reason.
    """

    circuit: SmallSignal
    find: Find
    labels: tuple[tuple[str, str], ...]
    stamps: tuple[Stamp, ...]
    sizes: tuple[float, ...]
    right: tuple[tuple[int, Fraction], ...]
    wanted: Pair
    values: Mapping[str, Fraction]
    kept: tuple[tuple[str, str], ...] = ()

    @property
    def size(self) -> int:
        """The number of unknowns."""
        return len(self.labels)


def network_of(circuit: SmallSignal, find: Find) -> Network:
    """Write a circuit as stamps, for one wanted quantity.

    Raises: InputError where a value is open or zero, for then there is no size to go by.
    """
    values = values_of(circuit)
    if values is None:
        raise InputError(
            "nothing can be judged small while a value is left open",
            where=circuit.topology.file,
            cure='give every "?" a value',
        )
    taken = {drive.name for drive in circuit.drives} | set(values)
    at_work = port(circuit, find, taken)
    desk = _Desk(circuit, find, values)
    for element in circuit.elements:
        desk.write(element)
    weights = dict(at_work.weights)
    for drive in at_work.voltage_drives:
        row = desk.branch[drive.name]
        desk.tie(drive.name, drive.nodes)
        desk.push(row, weights.get(drive.name, Fraction(0)))
    for source in at_work.current_drives:
        start, end = desk.pair(source.nodes)
        desk.push(start, -weights.get(source.name, Fraction(0)))
        desk.push(end, weights.get(source.name, Fraction(0)))
    labels = sorted(desk.index, key=desk.index.__getitem__)
    right = tuple(sorted(desk.right.items()))
    kept = tuple(sorted(desk.kept.items()))
    sizes = tuple(_size(stamp, values) for stamp in desk.stamps)
    return Network(
        circuit, find, tuple(labels), tuple(desk.stamps), sizes, right, desk.wanted(), values, kept
    )


def _size(stamp: Stamp, values: Mapping[str, Fraction]) -> float:
    value = float(prod((values[name] for name in stamp.symbols), start=Fraction(1)))
    return stamp.sign * (1 / value if stamp.inverted else value)


@dataclass(slots=True)
class _Desk:
    circuit: SmallSignal
    find: Find
    values: Mapping[str, Fraction]
    index: dict[tuple[str, str], int] = field(default_factory=dict)
    branch: dict[str, int] = field(default_factory=dict)
    stamps: list[Stamp] = field(default_factory=list)
    right: dict[int, Fraction] = field(default_factory=dict)
    kept: dict[str, str] = field(default_factory=dict)
    coupled: frozenset[str] = frozenset()

    def __post_init__(self) -> None:
        for node in nodes_of(self.circuit):
            self.index["node", node] = len(self.index)
        elements = self.circuit.elements
        sensed = {e.senses for e in elements if isinstance(e, CurrentGain | Transresistance)}
        wanted = {self.find.part} if self.find.quantity == "current" else set()
        self.coupled = frozenset(coil for e in elements if isinstance(e, Coupling) for coil in e.coils)
        own = (Inductor, VoltageGain, Transresistance, VirtualShort, OnePoleGain, VoltageDrive)
        for item in (*elements, *self.circuit.drives):
            if isinstance(item, own) or item.name in sensed | wanted:
                self.branch[item.name] = self.index["branch", item.name] = len(self.index)
        self.kept |= dict.fromkeys(sorted(sensed & set(self.branch)), "its current is sensed")
        self.kept |= {name: "its current is wanted" for name in wanted if name in self.branch}

    def pair(self, nodes: Iterable[str]) -> Pair:
        first, second = (NOWHERE if n == GROUND else self.index["node", n] for n in nodes)
        return first, second

    def push(self, row: int, value: Fraction) -> None:
        if row != NOWHERE and value:
            self.right[row] = self.right.get(row, Fraction(0)) + value

    def tie(self, owner: str, output: tuple[str, str]) -> None:
        """Let a branch current flow between two nodes, and begin its row with their voltage."""
        row, nodes = (self.branch[owner], NOWHERE), self.pair(output)
        self.stamps.append(Stamp(owner, (), 0, nodes, row))
        self.stamps.append(Stamp(owner, (), 0, row, nodes))

    def write(self, element: Element) -> None:
        """Write the stamps of one element."""
        match element:
            case Resistor():
                self._refuse_zero(element.name, element.resistance)
                pair = element.between
                self._admittance(element.name, element.resistance, 0, pair, pair, inverted=True)
            case Capacitor():
                self._admittance(element.name, element.capacitance, 1, element.between, element.between)
            case Transconductance():
                self._admittance(element.name, element.transconductance, 0, element.flows, element.senses)
            case Inductor():
                self._inductor(element)
            case Coupling():
                one, other = ((self.branch[coil], NOWHERE) for coil in element.coils)
                for rows, columns in ((one, other), (other, one)):
                    self.stamps.append(Stamp(element.name, (element.mutual,), 1, rows, columns, -1))
            case CurrentGain():
                self._current_gain(element)
            case VoltageGain() | Transresistance() | VirtualShort() | OnePoleGain():
                self._tied(element)

    def _refuse_zero(self, name: str, symbol: str) -> None:
        if not self.values[symbol]:
            raise InputError(
                f"nothing can be judged small against {name}, whose value is zero",
                where=self.circuit.topology.file,
                cure="leave the part out, or give it a value",
            )

    def _admittance(
        self,
        name: str,
        symbol: str,
        power: int,
        flows: tuple[str, str],
        senses: tuple[str, str],
        *,
        inverted: bool = False,
    ) -> None:
        rows, columns = self.pair(flows), self.pair(senses)
        if name in self.branch:
            # Its current gets a name: value·(voltage) - I = 0, and I flows through it.
            own = (self.branch[name], NOWHERE)
            self.stamps.append(Stamp(name, (symbol,), power, own, columns, 1, inverted))
            self.stamps.append(Stamp(name, (), 0, own, own, -1))
            self.stamps.append(Stamp(name, (), 0, rows, own))
            return
        self.stamps.append(
            Stamp(name, (symbol,), power, rows, columns, 1, inverted, True, rows == columns)
        )

    def _inductor(self, element: Inductor) -> None:
        own = (self.branch[element.name], NOWHERE)
        free = element.name not in self.coupled and element.name not in self.kept
        if element.name in self.coupled:
            self.kept[element.name] = "it is coupled to another"
        self.tie(element.name, element.between)
        self.stamps.append(Stamp(element.name, (element.inductance,), 1, own, own, -1, False, free, free))

    def _current_gain(self, element: CurrentGain) -> None:
        sensed = (self.branch[element.senses], NOWHERE)
        flows = self.pair(element.flows)
        if element.name not in self.branch:
            self.stamps.append(Stamp(element.name, (element.gain,), 0, flows, sensed, removable=True))
            return
        own = (self.branch[element.name], NOWHERE)
        self.stamps.append(Stamp(element.name, (element.gain,), 0, own, sensed))
        self.stamps.append(Stamp(element.name, (), 0, own, own, -1))
        self.stamps.append(Stamp(element.name, (), 0, flows, own))

    def _tied(self, element: VoltageGain | Transresistance | VirtualShort | OnePoleGain) -> None:
        own = (self.branch[element.name], NOWHERE)
        free = element.name not in self.kept
        if isinstance(element, VoltageGain):
            self.tie(element.name, element.output)
            senses = self.pair(element.senses)
            self.stamps.append(Stamp(element.name, (element.gain,), 0, own, senses, -1, removable=free))
            return
        if isinstance(element, Transresistance):
            self.tie(element.name, element.output)
            sensed = (self.branch[element.senses], NOWHERE)
            gain = (element.transresistance,)
            self.stamps.append(Stamp(element.name, gain, 0, own, sensed, -1, removable=free))
            return
        output, inputs = self.pair((element.output, GROUND)), self.pair(element.inputs)
        self.kept[element.name] = "op amps are left as they are"
        self.stamps.append(Stamp(element.name, (), 0, output, own))
        if isinstance(element, VirtualShort):
            self.stamps.append(Stamp(element.name, (), 0, own, inputs))
            return
        # w_u·V_out + s·A_0·V_out = A_0·w_u·V_in, with what is absent left out.
        dc_gain = (element.dc_gain,) if element.dc_gain else ()
        unity = (element.unity,) if element.unity else ()
        if unity:
            self.stamps.append(Stamp(element.name, dc_gain, 1, own, output))
        if dc_gain:
            self.stamps.append(Stamp(element.name, unity, 0, own, output))
        self.stamps.append(Stamp(element.name, (*dc_gain, *unity), 0, own, inputs, -1))

    def wanted(self) -> Pair:
        """Give what the response is read off."""
        if self.find.quantity == "current":
            return self.branch[self.find.part or ""], NOWHERE
        return self.pair(self.find.nodes or (GROUND, GROUND))
