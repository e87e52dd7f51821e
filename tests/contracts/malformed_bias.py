"""Topology files whose operating point cannot be worked: each is refused with line and cure.

The rows of `BIASED` are read without complaint and refused as the operating point is sought; those of
`CONTRADICTED` are of the same circuits, and refused already as they are read.
"""

from __future__ import annotations

from malformed_topologies import SHEET, Row, row

V_CC = 'V_CC = { node = "vcc", dc = "12 V" }'
R_1 = 'R_1 = { resistor = "68k", between = ["vcc", "b"] }'
R_2 = 'R_2 = { resistor = "12k", between = ["b", "gnd"] }'
R_C = 'R_C = { resistor = "4k7", between = ["vcc", "c"] }'
R_E = 'R_E = { resistor = "1k", between = ["e", "gnd"] }'
RESISTORS = (R_1, R_2, R_C, R_E)
Q1 = 'Q1 = { bipolar = "npn", base = "b", collector = "c", emitter = "e" }'
M1 = 'M1 = { mosfet = "nmos", gate = "g", drain = "d", source = "x" }'
J1 = 'J1 = { jfet = "n_jfet", gate = "g", drain = "d", source = "x" }'
R_D = 'R_D = { resistor = "1k", between = ["vcc", "d"] }'
R_S = 'R_S = { resistor = "1k", between = ["x", "gnd"] }'
MODELS = {
    "npn": '[models.npn]\nbeta = 100\nV_BE = "0.7 V"\n',
    "pnp": '[models.pnp]\npolarity = "pnp"\nbeta = 100\nV_BE = "0.7 V"\n',
    "nmos": '[models.nmos]\nk = "2 mA/V²"\nV_t = "1 V"\n',
    "n_jfet": '[models.n_jfet]\nI_DSS = "8 mA"\nV_P = "-4 V"\n',
}


def line(kind: str, name: str, value: str, one: str, other: str, more: str = "") -> str:
    """Write a part between two nodes."""
    return f'{name} = {{ {kind} = "{value}", between = ["{one}", "{other}"] }}{more}'


def stage(*lines: str, supplies: str = V_CC, drives: str = "", find: str = "c", more: str = "") -> str:
    """Give a file with these parts and the models that they name."""
    parts = "\n".join(lines)
    models = "".join(text for name, text in MODELS.items() if f'"{name}"' in parts and not more)
    head = f"[drives]\n{drives}\n" if drives else ""
    powered = f"[supplies]\n{supplies}\n" if supplies else ""
    return f'{SHEET}{powered}{head}[parts]\n{parts}\n{more}{models}\n[find.Z_out]\nimpedance = "{find}"\n'


GOOD_STAGE = stage(*RESISTORS, Q1)
GOOD_MOSFET = stage(
    line("resistor", "R_1", "1M", "vcc", "g"),
    line("resistor", "R_2", "1M", "g", "gnd"),
    M1,
    R_S,
    R_D,
    find="d",
)

BIASED: tuple[Row, ...] = (
    row(
        "no supplies",
        stage(*RESISTORS, Q1 + " #<", supplies=""),
        "part Q1",
        "operating point",
        "[supplies]",
    ),
    row(
        "base behind a capacitor",
        stage(
            line("capacitor", "C_1", "1u", "in", "b"),
            line("resistor", "R_9", "1k", "in", "gnd"),
            R_C,
            R_E,
            Q1 + " #<",
        ),
        "part Q1: its base (node b) has no DC path",
    ),
    row(
        "gate of a mosfet behind a capacitor",
        stage(
            line("capacitor", "C_1", "1u", "in", "g"),
            line("resistor", "R_9", "1k", "in", "gnd"),
            R_S,
            R_D,
            M1 + " #<",
            find="d",
        ),
        "part M1: its gate (node g) has no DC path",
    ),
    row(
        "gate of a jfet behind a capacitor",
        stage(
            line("capacitor", "C_1", "1u", "in", "g"),
            line("resistor", "R_9", "1k", "in", "gnd"),
            R_S,
            R_D,
            J1 + " #<",
            find="d",
        ),
        "part J1: its gate (node g) has no DC path",
    ),
    row(
        "two bases joined and nothing else",
        stage(
            'Q1 = { bipolar = "npn", base = "b", collector = "vcc", emitter = "e" } #<',
            'Q2 = { bipolar = "npn", base = "b", collector = "vcc", emitter = "e2" }',
            R_E,
            line("resistor", "R_E2", "2k", "e2", "gnd"),
            find="e",
        ),
        "part Q1: its base (node b) has no DC path",
    ),
    row(
        "collector beyond capacitors",
        stage(
            *RESISTORS,
            Q1,
            line("capacitor", "C_1", "1u", "gnd", "q"),
            'Q2 = { bipolar = "npn", base = "b", collector = "q", emitter = "gnd" } #<',
        ),
        "part Q2: the operating point does not exist",
        "node q",
    ),
    row(
        "diode beyond capacitors",
        stage(
            *RESISTORS,
            Q1,
            line("capacitor", "C_1", "1u", "gnd", "q"),
            'D1 = { diode = true, anode = "q", cathode = "r" } #<',
            line("resistor", "R_9", "1k", "q", "r"),
        ),
        "part D1: its anode (node q) has no DC path",
    ),
    row(
        "collector fed by nothing",
        stage(R_1, R_2, R_E, Q1 + " #<", line("capacitor", "C_1", "1u", "c", "gnd")),
        "part Q1: the operating point does not exist",
        "node c",
    ),
    row(
        "supply shorted by inductors",
        stage(
            *RESISTORS,
            Q1,
            line("inductor", "L_1", "1m", "vcc", "q"),
            line("inductor", "L_2", "1m", "q", "gnd"),
            supplies=V_CC + " #<",
        ),
        "supply V_CC is shorted to ground through L_1 and L_2",
    ),
    row(
        "two supplies shorted by an inductor",
        stage(
            *RESISTORS,
            Q1,
            line("inductor", "L_1", "1m", "vcc", "vee"),
            supplies=V_CC + '\nV_EE = { node = "vee", dc = "-12 V" } #<',
        ),
        "supply V_EE is shorted to supply V_CC through L_1",
    ),
    row(
        "pnp with an npn's bias",
        stage(*RESISTORS, Q1.replace('"npn"', '"pnp"') + " #<"),
        "part Q1: the operating point does not exist",
        "the pnp transistor does not conduct",
    ),
    row(
        "npn with a pnp's bias",
        stage(
            line("resistor", "R_1", "12k", "vcc", "b"),
            line("resistor", "R_2", "68k", "b", "gnd"),
            Q1 + " #<",
            line("resistor", "R_C", "4k7", "c", "gnd"),
            line("resistor", "R_E", "1k", "vcc", "e"),
        ),
        "part Q1: the operating point does not exist",
        "the npn",
    ),
    row(
        "base bias below V_BE",
        stage(R_1, R_2.replace("12k", "1k"), R_C, R_E, Q1 + " #<"),
        "does not conduct (I_C would be −",
    ),
    row(
        "diode the wrong way round",
        stage(
            line("resistor", "R_1", "1k", "vcc", "a"),
            'D1 = { diode = true, anode = "gnd", cathode = "a" } #<',
            find="a",
        ),
        "part D1: the operating point does not exist",
        "conduct backwards",
    ),
    row(
        "gate below threshold",
        stage(
            line("resistor", "R_1", "1M", "vcc", "g"),
            line("resistor", "R_2", "50k", "g", "gnd"),
            R_S,
            R_D,
            M1 + " #<",
            find="d",
        ),
        "part M1: the operating point does not exist",
        "does not reach",
    ),
    row(
        "pair of gates below threshold",
        stage(
            'M1 = { mosfet = "nmos", gate = "gnd", drain = "vcc", source = "x" } #<',
            'M2 = { mosfet = "nmos", gate = "g", drain = "vcc", source = "x" }',
            line("resistor", "R_G", "1k", "g", "gnd"),
            line("resistor", "R_T", "1k", "x", "gnd"),
            find="x",
        ),
        "part M1: the operating point does not exist",
    ),
    row(
        "quadratic without a real root",
        stage(
            line("resistor", "R_1", "1M", "vcc", "p"),
            line("resistor", "R_2", "1M", "p", "gnd"),
            line("resistor", "R_D", "10k", "vcc", "d"),
            'A = { voltage_gain = "-1", output = ["g", "q"], senses = ["d", "vcc"] }',
            'B = { voltage_gain = "1", output = ["q", "gnd"], senses = ["p", "gnd"] }',
            'M1 = { mosfet = "nmos", gate = "g", drain = "d", source = "gnd" } #<',
            supplies='V_CC = { node = "vcc", dc = "10 V" }',
            find="d",
        ),
        "part M1: the operating point does not exist",
        "no voltage in common",
    ),
    row(
        "junction across a supply",
        stage('Q1 = { bipolar = "npn", base = "vcc", collector = "c", emitter = "gnd" } #<', R_C),
        "part Q1: the operating point does not exist",
        "whose voltage V_CC fixes already",
    ),
    row(
        "unlike junctions in parallel",
        stage(
            *RESISTORS,
            Q1,
            'Q2 = { bipolar = "npn", base = "b", collector = "vcc", emitter = "e", V_BE = "0.6 V" } #<',
        ),
        "part Q2: the operating point does not exist",
        "V_BE1 fixes already",
    ),
    row(
        "base and emitter on one inductor",
        stage(*RESISTORS, Q1 + " #<", line("inductor", "L_1", "1m", "b", "e")),
        "part Q1",
        "L_1 fixes already",
    ),
    row(
        "current gain missing",
        stage(*RESISTORS, Q1.replace('"npn"', "true") + " #<"),
        "part Q1: the operating point needs",
        '"beta"',
    ),
    row(
        "threshold missing",
        stage(
            line("resistor", "R_1", "1M", "vcc", "g"),
            line("resistor", "R_2", "1M", "g", "gnd"),
            'M1 = { mosfet = true, gate = "g", drain = "d", source = "x", k = "2 mA/V²" } #<',
            R_S,
            R_D,
            find="d",
        ),
        "part M1: the operating point needs",
        '"V_t"',
    ),
    row(
        "resistor of a bias left open",
        stage(R_1.replace("68k", "?") + " #<", R_2, R_C, R_E, Q1),
        "part R_1: the value of R_1 is left open",
    ),
    row(
        "supply of a bias left open",
        stage(*RESISTORS, Q1, supplies=V_CC.replace("12 V", "?") + " #<"),
        "supply V_CC: the value of V_CC is left open",
    ),
    row(
        "op amp that senses a node behind a capacitor",
        stage(
            *RESISTORS,
            Q1,
            'U1 = { ideal_opamp = true, output = "o", inputs = ["p", "o"] } #<',
            line("capacitor", "C_1", "1u", "e", "p"),
            line("resistor", "R_O", "1k", "o", "gnd"),
        ),
        "part U1: it answers to node p, which has no DC path",
    ),
    row(
        "symbol of a biased transistor is a part",
        stage(*RESISTORS, Q1 + " #<", line("resistor", "beta", "1k", "vcc", "gnd")),
        "part Q1: its symbol beta is also the name of another item",
    ),
    row(
        "transit frequency too high for the operating point",
        stage(*RESISTORS, Q1.replace(" }", ', f_T = "5 GHz", C_mu = "10 pF" }') + " #<"),
        "C_pi",
        "f_T = 5 GHz",
        "disagree",
    ),
)

CONTRADICTED: tuple[Row, ...] = (
    row(
        "biased transistor of a model that is missing",
        stage(*RESISTORS, Q1.replace('"npn"', '"bc547"') + " #<"),
        'there is no model "bc547"',
        "[models.bc547]",
    ),
    row(
        "biased transistor wired to itself",
        stage(*RESISTORS, 'Q1 = { bipolar = "npn", base = "b", collector = "e", emitter = "e" } #<'),
        "collector and emitter are both at node",
    ),
    row(
        "supply shorted to another supply",
        stage(*RESISTORS, Q1, supplies=V_CC + '\nV_DD = { node = "vcc", dc = "5 V" } #<'),
        "V_DD",
        "V_CC",
        "shorts",
    ),
    row(
        "drive across two rails",
        stage(
            *RESISTORS,
            Q1,
            line("resistor", "R_9", "1k", "vee", "gnd"),
            supplies=V_CC + '\nV_EE = { node = "vee", dc = "-12 V" }',
            drives='V_s = { voltage = ["vcc", "vee"] } #<',
        ),
        "loop",
    ),
)
