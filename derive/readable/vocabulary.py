"""What the names in a circuit's formulas mean: their dimensions, sizes, and the words of its transistors."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from fractions import Fraction

from derive.devices.elements import (
    CurrentGain,
    OnePoleGain,
    Resistor,
    SmallSignal,
    Transconductance,
    VoltageGain,
)
from derive.eliminate.scribe import rank_of
from derive.expressions.tree import ONE, Expression, Name, Product, Quotient, Sum
from derive.quantities.dimension import RATIO, RESISTANCE, Dimension
from derive.readable.form import Definition
from derive.topology.topology import GROUND


@dataclass(frozen=True, slots=True)
class Junction:
    """A bipolar transistor's g_m and r_π, with the names of β = g_m·r_π, r_e = r_π/(1 + β), α = β/(1 + β)."""

    g_m: str
    r_pi: str
    beta: str
    r_e: str
    alpha: str


@dataclass(frozen=True, slots=True)
class Vocabulary:
    """The names that formulas of one circuit may use.

    `order` lists names as factors are to stand; `values` holds None for a value left open. `output_side` holds the
    resistances into which a transconductance's current flows, `amplifiers` the gains of op amps.
    """

    order: tuple[str, ...]
    dimensions: Mapping[str, Dimension]
    values: Mapping[str, Fraction | None]
    definitions: tuple[Definition, ...] = ()
    junctions: tuple[Junction, ...] = ()
    output_side: Mapping[str, frozenset[str]] | None = None
    amplifiers: frozenset[str] = frozenset()

    @property
    def key(self) -> str:
        """A text that is the same for vocabularies that say the same."""
        sides = sorted((gain, sorted(side)) for gain, side in (self.output_side or {}).items())
        values = [(name, self.dimensions[name], self.values[name]) for name in self.order]
        return repr((values, self.junctions, sides, sorted(self.amplifiers)))


def vocabulary_of(circuit: SmallSignal, taken: Iterable[str] = ()) -> Vocabulary:
    """Give the vocabulary of a circuit; `taken` are names that it must not use for its own words."""
    symbols = {symbol.name: symbol for symbol in circuit.symbols}
    topology = circuit.topology
    used = {*symbols, *taken, "s", GROUND}
    used |= {part.name for part in topology.parts} | {drive.name for drive in topology.drives}
    used |= {find.name for find in topology.finds} | {merge.name for merge in topology.merges}
    junctions = _junctions(circuit, used)
    dimensions = {name: symbol.dimension for name, symbol in symbols.items()}
    values: dict[str, Fraction | None] = {name: symbol.value for name, symbol in symbols.items()}
    definitions: list[Definition] = []
    for junction in junctions:
        definitions += _defined(junction)
        dimensions |= {junction.beta: RATIO, junction.r_e: RESISTANCE, junction.alpha: RATIO}
        values |= _values(junction, values)
    words = [name for junction in junctions for name in (junction.beta, junction.alpha)]
    names = [*words, *symbols, *(junction.r_e for junction in junctions)]
    order = sorted(names, key=lambda name: rank_of(dimensions[name]))
    return Vocabulary(
        tuple(order),
        dimensions,
        values,
        tuple(definitions),
        junctions,
        _output_side(circuit),
        _amplifiers(circuit),
    )


def _junctions(circuit: SmallSignal, taken: set[str]) -> tuple[Junction, ...]:
    """Give the transistors whose r_π stands by itself across the voltage that their g_m senses."""
    found = []
    for source in circuit.elements:
        if not isinstance(source, Transconductance) or len(set(source.flows) & set(source.senses)) != 1:
            continue
        for resistor in circuit.elements:
            if not isinstance(resistor, Resistor) or set(resistor.between) != set(source.senses):
                continue
            index = _index(resistor.resistance)
            # By its name: a bias resistor across base and emitter makes no β.
            if index is not None and (resistor.part == source.part or resistor.part == resistor.name):
                names = [_free(f"{word}{index}", taken) for word in ("beta", "r_e", "alpha")]
                taken.update(names)
                found.append(Junction(source.transconductance, resistor.resistance, *names))
                break
    return tuple(found)


def _index(name: str) -> str | None:
    """Give what follows r_pi in a name; None for another name."""
    for stem in ("r_pi", "rpi", "r_π"):
        if name.startswith(stem):
            return name[len(stem) :]
    return None


def _free(name: str, taken: set[str]) -> str:
    while name in taken:
        name += "_j"
    return name


def _defined(junction: Junction) -> list[Definition]:
    beta, r_pi = Name(junction.beta), Name(junction.r_pi)
    one_more: Expression = Sum((ONE, beta))
    return [
        (junction.beta, Product((Name(junction.g_m), r_pi))),
        (junction.r_e, Quotient(r_pi, one_more)),
        (junction.alpha, Quotient(beta, one_more)),
    ]


def _values(junction: Junction, values: Mapping[str, Fraction | None]) -> dict[str, Fraction | None]:
    g_m, r_pi = values[junction.g_m], values[junction.r_pi]
    if g_m is None or r_pi is None or g_m * r_pi == -1:
        return {junction.beta: None, junction.r_e: None, junction.alpha: None}
    beta = g_m * r_pi
    return {junction.beta: beta, junction.r_e: r_pi / (1 + beta), junction.alpha: beta / (1 + beta)}


def _output_side(circuit: SmallSignal) -> dict[str, frozenset[str]]:
    """Give the resistances that meet the node a transconductance draws from, and not one that it senses."""
    sides: dict[str, frozenset[str]] = {}
    for source in circuit.elements:
        if isinstance(source, Transconductance):
            outside = set(source.flows) - set(source.senses) - {GROUND}
            sides[source.transconductance] = frozenset(
                element.resistance
                for element in circuit.elements
                if isinstance(element, Resistor)
                and outside & set(element.between)
                and not (set(element.between) - outside - {GROUND}) & set(source.senses)
            )
    return sides


def _amplifiers(circuit: SmallSignal) -> frozenset[str]:
    opamps = {part.name for part in circuit.topology.parts if part.kind == "opamp"}
    gains = {e.dc_gain for e in circuit.elements if isinstance(e, OnePoleGain) and e.dc_gain}
    gains |= {
        e.gain for e in circuit.elements if isinstance(e, VoltageGain | CurrentGain) and e.part in opamps
    }
    return frozenset(gains)
