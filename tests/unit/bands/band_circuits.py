"""Amplifier stages as small-signal circuits put together by hand, with the roles of their parts."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

from derive.bands.band_circuit import BandCircuit
from derive.bands.restrict import find_in, restrict
from derive.check.verdict import Solution
from derive.devices.elements import (
    Capacitor,
    Inductor,
    Resistor,
    SmallSignal,
    Transconductance,
    VoltageDrive,
)
from derive.eliminate.eliminate import eliminate
from derive.eliminate.plan import plan
from derive.expressions.parse import parse_expression
from derive.expressions.walk import evaluate, substitute
from derive.nodal.write import write_equations
from derive.normalise.normalise import normalise
from derive.normalise.numbers import nominal_numbers
from derive.quantities.dimension import CAPACITANCE, CONDUCTANCE, INDUCTANCE, RESISTANCE
from derive.quantities.symbol import Symbol, Value
from derive.topology.topology import Find, Merge, Part, Place, Supply, TitleBlock, Topology

PLACE = Place("hand.toml", 7)
DIMENSIONS = {
    "R": RESISTANCE,
    "r": RESISTANCE,
    "C": CAPACITANCE,
    "L": INDUCTANCE,
    "g": CONDUCTANCE,
}
DRIVE = VoltageDrive("V_s", ("gen", "gnd"))


def R(name, a, b, part=None):
    return Resistor(f"{part}.{name}" if part else name, part or name, (a, b), name)


def C(name, a, b, part=None):
    return Capacitor(f"{part}.{name}" if part else name, part or name, (a, b), name)


def L(name, a, b):
    return Inductor(name, name, (a, b), name)


def gm(name, flows, senses, part):
    return Transconductance(f"{part}.{name}", part, flows, senses, name)


def gain(*nodes, name="A_v"):
    pair = (*nodes, "gnd")[:2]
    return Find(name, PLACE, "voltage", nodes=pair, per=(("V_s", Fraction(1)),))


def current(part, name="I"):
    return Find(name, PLACE, "current", part=part, per=(("V_s", Fraction(1)),))


def impedance(*nodes, name="Z"):
    return Find(name, PLACE, "impedance", nodes=(*nodes, "gnd")[:2])


OUTPUT = (gain("out"),)


def circuit(elements, values, roles=(), finds=OUTPUT, merges=(), supplies=(), bands=(), drives=(DRIVE,)):
    """Put a circuit together; symbols take their kind from their first letter."""
    symbols = tuple(
        Symbol(name, DIMENSIONS[name[0]], None if text == "?" else Fraction(text), f"part {name}")
        for name, text in values.items()
    )
    parts = tuple(
        Part(element.name, "resistor", PLACE) for element in elements if element.name == element.part
    )
    topology = Topology(
        "hand.toml",
        repr((elements, roles)),
        TitleBlock("Test"),
        (),
        (),
        parts,
        tuple(finds),
        supplies=tuple(Supply(name, PLACE, node, Value(Fraction(12), "12 V")) for name, node in supplies),
        bands=tuple(bands),
        merges=tuple(Merge(name, PLACE, tuple(parts)) for name, parts in merges),
    )
    return SmallSignal(topology, tuple(elements), tuple(drives), symbols, tuple(roles))


# Values of the usual size for a stage at 1 mA; no two alike.
CE_VALUES = {
    "R_S": "1000",
    "C_1": "1/1000000",
    "R_1": "68000",
    "R_2": "12000",
    "r_pi": "3900",
    "g_m": "385/10000",
    "r_o": "80000",
    "C_pi": "22/1000000000000",
    "C_mu": "3/1000000000000",
    "R_C": "3300",
    "R_E": "820",
    "C_E": "47/1000000",
    "C_2": "10/1000000",
    "R_L": "10000",
}
CE_ELEMENTS = (
    R("R_S", "gen", "x"),
    C("C_1", "x", "b"),
    R("R_1", "vcc", "b"),
    R("R_2", "b", "gnd"),
    R("r_pi", "b", "e", "Q1"),
    gm("g_m", ("c", "e"), ("b", "e"), "Q1"),
    R("r_o", "c", "e", "Q1"),
    C("C_pi", "b", "e", "Q1"),
    C("C_mu", "b", "c", "Q1"),
    R("R_C", "vcc", "c"),
    R("R_E", "e", "gnd"),
    C("C_E", "e", "gnd"),
    C("C_2", "c", "out"),
    R("R_L", "out", "gnd"),
)
CE_ROLES = (
    ("C_1", "coupling"),
    ("Q1.C_pi", "parasitic"),
    ("Q1.C_mu", "parasitic"),
    ("C_E", "bypass"),
    ("C_2", "coupling"),
)


def common_emitter(**more):
    """Give the common-emitter stage with coupling and bypass capacitors, biased from a supply."""
    return circuit(CE_ELEMENTS, CE_VALUES, **{"roles": CE_ROLES, "supplies": (("V_CC", "vcc"),), **more})


def solve(band: BandCircuit, find: Find) -> Solution:
    """Derive a quantity in a band."""
    system = write_equations(band.circuit, find_in(band, find))
    form, derivation = normalise(eliminate(system, plan(system)))
    return Solution(derivation, form, nominal_numbers(derivation), band)


def solution_in(
    stage: SmallSignal, name: str, *, merge: bool = True, find: Find | None = None
) -> Solution:
    """Derive the first find of a stage in the band of this name."""
    return solve(restrict(stage, name, merge=merge), find or stage.topology.finds[0])


def value(expression, values, definitions=()):
    """Give the exact value of an expression, or of text, merged names expanded."""
    tree = parse_expression(expression) if isinstance(expression, str) else expression
    known = {}
    for merged in definitions:
        known[merged.name] = substitute(merged.definition, known)
    exact = {name: Fraction(number) for name, number in values.items()}
    return evaluate(substitute(tree, known), exact, Fraction)


def printed(solution: Solution, values) -> tuple[Fraction, int, list[Fraction], list[Fraction]]:
    """Give the value of every coefficient of a solution's normal form, merged names expanded."""
    form = solution.form
    definitions = solution.band.definitions
    worked = [
        [value(entry, values, definitions) for entry in side]
        for side in (form.numerator, form.denominator)
    ]
    return value(form.gain, values, definitions), form.power_of_s, *worked


def with_value(stage: SmallSignal, name: str, exact: Fraction | None) -> SmallSignal:
    """Give the circuit with another value for a symbol."""
    symbols = tuple(replace(s, value=exact) if s.name == name else s for s in stage.symbols)
    return replace(stage, symbols=symbols)
