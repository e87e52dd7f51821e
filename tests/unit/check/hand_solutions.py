"""Small circuits with their responses worked by hand, as the values that a derivation hands on."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from derive.algebra.ring import ring
from derive.check.verdict import Solution
from derive.devices.elements import (
    Capacitor,
    Coupling,
    CurrentDrive,
    CurrentGain,
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
from derive.eliminate.derivation import Certificate, Derivation, Plan, Step
from derive.expressions.parse import parse_expression
from derive.expressions.tree import (
    ONE,
    Equation,
    Expression,
    Name,
    Power,
    Product,
    Quotient,
    Sum,
)
from derive.nodal.system import NodalSystem, Unknown
from derive.normalise.form import CertifiedRoot, NominalNumbers, NormalForm
from derive.quantities.dimension import (
    CAPACITANCE,
    CONDUCTANCE,
    FREQUENCY,
    INDUCTANCE,
    RATIO,
    RESISTANCE,
)
from derive.quantities.symbol import Symbol
from derive.topology.topology import Find, Place, TitleBlock, Topology

PLACE = Place("hand.toml", 1)
DIMENSIONS = {
    "R": RESISTANCE,
    "r": RESISTANCE,
    "C": CAPACITANCE,
    "L": INDUCTANCE,
    "M": INDUCTANCE,
    "g": CONDUCTANCE,
    "w": FREQUENCY,
    "A": RATIO,
    "k": RATIO,
}


@dataclass(frozen=True)
class Circuit:
    """A circuit, what is wanted of it, and the answer in the user's language."""

    elements: tuple
    drives: tuple
    values: dict[str, str]
    find: Find
    gain: str
    power: int = 0
    numerator: tuple[str, ...] = ("1",)
    denominator: tuple[str, ...] = ("1",)
    input: str = "V_s"
    corners_rad_per_s: tuple[float, ...] = ()


def R(name, a, b):
    return Resistor(name, name, (a, b), name)


def C(name, a, b):
    return Capacitor(name, name, (a, b), name)


def L(name, a, b):
    return Inductor(name, name, (a, b), name)


def voltage(*nodes, per=(("V_s", Fraction(1)),)):
    pair = (nodes[0], nodes[1] if len(nodes) > 1 else "gnd")
    return Find("H", PLACE, "voltage", nodes=pair, per=per)


def current(part, per=(("V_s", Fraction(1)),)):
    return Find("H", PLACE, "current", part=part, per=per)


def impedance(*nodes):
    return Find("Z", PLACE, "impedance", nodes=(nodes[0], nodes[1] if len(nodes) > 1 else "gnd"))


V_S = VoltageDrive("V_s", ("in", "gnd"))
HALVES = (("V_1", Fraction(1, 2)), ("V_2", Fraction(-1, 2)))
FOLLOWER_D0 = "((1 + g_m*r_pi)*R_E + r_pi + R_S)"

CIRCUITS: dict[str, Circuit] = {
    "low-pass": Circuit(
        (R("R_1", "in", "out"), C("C_1", "out", "gnd")),
        (V_S,),
        {"R_1": "1000", "C_1": "1/1000000"},
        voltage("out"),
        "1",
        denominator=("1", "R_1*C_1"),
        corners_rad_per_s=(1000.0,),
    ),
    "emitter follower at high frequency": Circuit(
        (
            R("R_S", "in", "b"),
            Resistor("r_pi", "Q1", ("b", "out"), "r_pi"),
            Capacitor("C_pi", "Q1", ("b", "out"), "C_pi"),
            Capacitor("C_mu", "Q1", ("b", "gnd"), "C_mu"),
            Transconductance("g_m", "Q1", ("gnd", "out"), ("b", "out"), "g_m"),
            R("R_E", "out", "gnd"),
        ),
        (V_S,),
        {
            "R_S": "600",
            "r_pi": "4500",
            "C_pi": "22/1000000000000",
            "C_mu": "3/1000000000000",
            "g_m": "1/25",
            "R_E": "2200",
        },
        voltage("out"),
        f"(1 + g_m*r_pi)*R_E/{FOLLOWER_D0}",
        numerator=("1", "r_pi*C_pi/(1 + g_m*r_pi)"),
        denominator=(
            "1",
            f"(r_pi*C_pi*(R_E + R_S) + R_S*C_mu*((1 + g_m*r_pi)*R_E + r_pi))/{FOLLOWER_D0}",
            f"R_E*r_pi*C_pi*R_S*C_mu/{FOLLOWER_D0}",
        ),
        corners_rad_per_s=(5e8, 2e10),
    ),
    "amplifier with a filter before and a load behind": Circuit(
        (
            R("R_1", "in", "a"),
            C("C_1", "a", "gnd"),
            VoltageGain("A", "A", ("o", "gnd"), ("a", "gnd"), "A"),
            R("R_2", "o", "out"),
            R("R_L", "out", "gnd"),
        ),
        (V_S,),
        {"R_1": "1000", "C_1": "1/1000000", "A": "10", "R_2": "50", "R_L": "600"},
        voltage("out"),
        "A*R_L/(R_2 + R_L)",
        denominator=("1", "R_1*C_1"),
        corners_rad_per_s=(1000.0,),
    ),
    "coupled coils": Circuit(
        (
            R("R_1", "in", "p"),
            L("L_1", "p", "gnd"),
            L("L_2", "out", "gnd"),
            Coupling("k", "k", ("L_1", "L_2"), "k", "M"),
            R("R_2", "out", "gnd"),
        ),
        (V_S,),
        {"R_1": "50", "L_1": "1/1000", "L_2": "3/1000", "k": "9/10", "R_2": "600"},
        voltage("out"),
        "M/R_1",
        1,
        denominator=("1", "L_1/R_1 + L_2/R_2", "L_1*L_2*(1 - k^2)/(R_1*R_2)"),
        corners_rad_per_s=(4e4, 1e6),
    ),
    "two coupling capacitors with a floating node between": Circuit(
        (C("C_1", "in", "x"), C("C_2", "x", "out"), R("R_L", "out", "gnd")),
        (V_S,),
        {"C_1": "1/1000000", "C_2": "1/1000000", "R_L": "1000"},
        voltage("out"),
        "R_L*C_1*C_2/(C_1 + C_2)",
        1,
        denominator=("1", "R_L*C_1*C_2/(C_1 + C_2)"),
        corners_rad_per_s=(2000.0,),
    ),
    "capacitive divider, a loop of capacitors and the source": Circuit(
        (C("C_1", "in", "out"), C("C_2", "out", "gnd"), R("R_2", "out", "gnd")),
        (V_S,),
        {"C_1": "1/1000000", "C_2": "3/1000000", "R_2": "1000"},
        voltage("out"),
        "R_2*C_1",
        1,
        denominator=("1", "R_2*(C_1 + C_2)"),
        corners_rad_per_s=(250.0,),
    ),
    "integrator with an ideal op amp": Circuit(
        (R("R_1", "in", "m"), C("C_1", "m", "out"), VirtualShort("U1", "U1", "out", ("gnd", "m"))),
        (V_S,),
        {"R_1": "1000", "C_1": "1/1000000"},
        voltage("out"),
        "-1/(R_1*C_1)",
        -1,
    ),
    "unity follower with a one-pole op amp": Circuit(
        (OnePoleGain("U1", "U1", "out", ("in", "out"), "A_0", "w_u"), R("R_L", "out", "gnd")),
        (V_S,),
        {"A_0": "100000", "w_u": "6000000", "R_L": "1000"},
        voltage("out"),
        "A_0/(1 + A_0)",
        denominator=("1", "A_0/(w_u*(1 + A_0))"),
        corners_rad_per_s=(6e6,),
    ),
    "inverting stage with an integrating op amp": Circuit(
        (
            R("R_1", "in", "m"),
            R("R_2", "m", "out"),
            OnePoleGain("U1", "U1", "out", ("gnd", "m"), None, "w_u"),
        ),
        (V_S,),
        {"R_1": "1000", "R_2": "10000", "w_u": "6000000"},
        voltage("out"),
        "-R_2/R_1",
        denominator=("1", "(R_1 + R_2)/(R_1*w_u)"),
        corners_rad_per_s=(5e5,),
    ),
    "comparator stage with a flat op amp": Circuit(
        (OnePoleGain("U1", "U1", "out", ("gnd", "in"), "A_0", None), R("R_L", "out", "gnd")),
        (V_S,),
        {"A_0": "100000", "R_L": "1000"},
        voltage("out"),
        "-A_0",
    ),
    "current mirror into a load": Circuit(
        (
            R("R_1", "in", "gnd"),
            CurrentGain("k_1", "k_1", ("gnd", "out"), "R_1", "k_1"),
            R("R_L", "out", "gnd"),
        ),
        (V_S,),
        {"R_1": "1000", "k_1": "2", "R_L": "4700"},
        voltage("out"),
        "k_1*R_L/R_1",
    ),
    "transresistance that senses the current of a coil": Circuit(
        (
            R("R_1", "in", "a"),
            L("L_1", "a", "gnd"),
            Transresistance("r_t", "r_t", ("out", "gnd"), "L_1", "r_t"),
            R("R_L", "out", "gnd"),
        ),
        (V_S,),
        {"R_1": "1000", "L_1": "1/100", "r_t": "500", "R_L": "50"},
        current("R_L"),
        "r_t/(R_1*R_L)",
        denominator=("1", "L_1/R_1"),
        corners_rad_per_s=(1e5,),
    ),
    "impedance of a resistor with a capacitor across": Circuit(
        (R("R_1", "a", "b"), C("C_1", "b", "a"), R("R_2", "b", "gnd")),
        (),
        {"R_1": "1000", "C_1": "1/1000000", "R_2": "100"},
        impedance("a", "b"),
        "R_1",
        denominator=("1", "R_1*C_1"),
        input="I_t",
        corners_rad_per_s=(1000.0,),
    ),
    "difference of two drives": Circuit(
        (R("R_1", "p", "x"), R("R_2", "m", "y"), C("C_1", "x", "y"), R("R_3", "x", "gnd")),
        (VoltageDrive("V_1", ("p", "gnd")), VoltageDrive("V_2", ("m", "gnd"))),
        {"R_1": "1000", "R_2": "2000", "C_1": "1/1000000", "R_3": "3000"},
        voltage("x", "y", per=HALVES),
        "(R_1 + 2*R_3)/(2*(R_1 + R_3))",
        denominator=("1", "C_1*(R_2 + R_1*R_3/(R_1 + R_3))"),
        input="v",
        corners_rad_per_s=(360.0,),
    ),
    "current drive into a resistor": Circuit(
        (R("R_1", "a", "gnd"), C("C_1", "a", "gnd")),
        (CurrentDrive("I_s", ("gnd", "a")),),
        {"R_1": "1000", "C_1": "1/1000000"},
        voltage("a", per=(("I_s", Fraction(1)),)),
        "R_1",
        denominator=("1", "R_1*C_1"),
        input="I_s",
        corners_rad_per_s=(1000.0,),
    ),
    "node that the drive does not reach": Circuit(
        (R("R_1", "in", "gnd"), R("R_2", "out", "gnd"), C("C_1", "out", "gnd")),
        (V_S,),
        {"R_1": "1000", "R_2": "1000", "C_1": "1/1000000"},
        voltage("out"),
        "0",
    ),
    "balanced bridge, whose output vanishes at its nominal values only": Circuit(
        (R("R_1", "in", "x"), R("R_2", "x", "gnd"), R("R_3", "in", "y"), R("R_4", "y", "gnd")),
        (V_S,),
        {"R_1": "1000", "R_2": "3000", "R_3": "2000", "R_4": "6000"},
        voltage("x", "y"),
        "(R_2*R_3 - R_1*R_4)/((R_1 + R_2)*(R_3 + R_4))",
    ),
    "twin-T notch with its null inside the band": Circuit(
        (
            R("R_1", "in", "x"),
            R("R_2", "x", "out"),
            C("C_3", "x", "gnd"),
            C("C_1", "in", "y"),
            C("C_2", "y", "out"),
            R("R_3", "y", "gnd"),
        ),
        (V_S,),
        {
            "R_1": "1000",
            "R_2": "1000",
            "R_3": "500",
            "C_1": "1/1000000",
            "C_2": "1/1000000",
            "C_3": "2/1000000",
        },
        voltage("out"),
        "1",
        numerator=(
            "1",
            "R_3*(C_1 + C_2)",
            "(R_1 + R_2)*R_3*C_1*C_2",
            "R_1*R_2*R_3*C_1*C_2*C_3",
        ),
        denominator=(
            "1",
            "(R_1 + R_2)*C_2 + R_3*(C_1 + C_2) + R_1*C_3",
            "R_1*C_3*(R_2*C_2 + R_3*(C_1 + C_2)) + (R_1 + R_2)*R_3*C_1*C_2",
            "R_1*R_2*R_3*C_1*C_2*C_3",
        ),
        corners_rad_per_s=(1000.0, 1000.0),
    ),
}


def symbols_of(circuit: Circuit, *, open_value: str | None = None) -> tuple[Symbol, ...]:
    return tuple(
        Symbol(
            name,
            DIMENSIONS[name[0]],
            None if name == open_value else Fraction(text),
            f"part {name}",
            positive=name != "k",
        )
        for name, text in circuit.values.items()
    )


def system_of(circuit: Circuit, name: str, *, open_value: str | None = None) -> NodalSystem:
    topology = Topology("hand.toml", name, TitleBlock(name), (), (), (), (circuit.find,))
    small_signal = SmallSignal(
        topology, circuit.elements, circuit.drives, symbols_of(circuit, open_value=open_value)
    )
    find = circuit.find
    if find.quantity == "current":
        wanted = Unknown(f"i_{find.part}", "current", find.part)
    else:
        wanted = Unknown("v_wanted", "voltage", find.nodes[0])
    weights = find.per or (("I_t", Fraction(1)),)
    return NodalSystem(
        small_signal,
        find,
        ring(("s", *circuit.values)),
        (wanted,),
        (),
        circuit.input,
        weights,
        wanted.name,
        (),
    )


def form_of(circuit: Circuit) -> NormalForm:
    return NormalForm(
        parse_expression(circuit.gain),
        circuit.power,
        tuple(parse_expression(text) for text in circuit.numerator),
        tuple(parse_expression(text) for text in circuit.denominator),
    )


def series(coefficients: tuple[Expression, ...]) -> Expression:
    return Sum(tuple(Product((a, Power(Name("s"), k))) for k, a in enumerate(coefficients)))


def short_steps(system: NodalSystem, form: NormalForm) -> tuple[Step, ...]:
    """State the circuit's answer, name the ratio, and divide: three steps, the least there can be."""
    wanted, source, sought = Name(system.wanted), Name(system.input), Name(system.find.name)
    top = Product((form.gain, Power(Name("s"), form.power_of_s), series(form.numerator)))
    bottom = series(form.denominator)
    ratio = Quotient(top, bottom)
    divisor = Product((source, bottom))
    return (
        Step(1, "circuit", Equation(Product((wanted, bottom)), Product((top, source))), row=0),
        Step(2, "name", Equation(sought, Quotient(wanted, source)), defines=system.find.name),
        Step(
            3,
            "divide",
            Equation(sought, ratio),
            certificate=Certificate(((1, ONE), (2, divisor)), divisor),
        ),
    )


def equation(text: str) -> Equation:
    left, right = text.split("=")
    return Equation(parse_expression(left), parse_expression(right))


def certificate(divisor: str, *uses: tuple[int, str]) -> Certificate:
    return Certificate(
        tuple((number, parse_expression(text)) for number, text in uses), parse_expression(divisor)
    )


LOW_PASS_STEPS = (
    Step(1, "current law", equation("(v_wanted - V_s)/R_1 + s*C_1*v_wanted = 0"), row=0),
    Step(
        2,
        "multiply by R_1",
        equation("v_wanted - V_s + s*R_1*C_1*v_wanted = 0"),
        certificate("1", (1, "R_1")),
        factor=Name("R_1"),
    ),
    Step(3, "collect", equation("(1 + s*R_1*C_1)*v_wanted = V_s"), certificate("1", (2, "1"))),
    Step(
        4,
        "divide",
        equation("v_wanted = V_s/(1 + s*R_1*C_1)"),
        certificate("1 + s*R_1*C_1", (3, "1")),
        nonzero=parse_expression("1 + s*R_1*C_1"),
    ),
    Step(5, "name", equation("H = v_wanted/V_s"), defines="H"),
    Step(
        6,
        "form the ratio",
        equation("H = 1/(1 + s*R_1*C_1)"),
        certificate("V_s", (4, "1"), (5, "V_s")),
    ),
    Step(7, "name", equation("K = 1"), defines="K"),
    Step(8, "name", equation("b_1 = R_1*C_1"), defines="b_1"),
    Step(9, "normal form", equation("H = K/(1 + s*b_1)"), certificate("1", (6, "1"))),
)


def numbers_of(circuit: Circuit) -> NominalNumbers:
    poles = tuple(CertifiedRoot(-corner, 0.0, 0.0, 1) for corner in circuit.corners_rad_per_s)
    return NominalNumbers(None, (), (), (), poles, ())


def solution_of(
    name: str,
    *,
    form: NormalForm | None = None,
    steps: tuple[Step, ...] | None = None,
    open_value: str | None = None,
) -> Solution:
    """Give the solution of the circuit of that name, with its form or steps exchanged if given."""
    circuit = CIRCUITS[name]
    system = system_of(circuit, name, open_value=open_value)
    result = form or form_of(circuit)
    if steps is None:
        steps = LOW_PASS_STEPS if name == "low-pass" else short_steps(system, result)
    derivation = Derivation(system, Plan(()), steps, system.ring.one, system.ring.one)
    return Solution(derivation, result, None if open_value else numbers_of(circuit))
