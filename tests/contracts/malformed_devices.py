"""Topology files with devices, supplies, roles and bands that must be refused.

The rows of `READ` are refused as they are read, those of `WORKED` when the devices' parameters are
worked out.
"""

from __future__ import annotations

from malformed_topologies import DRIVES, GOOD, R_1, Row, also, parts, row

Q1 = 'Q1 = {{ bipolar = {0}, base = "in", collector = "out", emitter = "gnd"{1} }} #<'
M1 = 'M1 = {{ mosfet = true, gate = "in", drain = "out", source = "gnd"{0} }} #<'
J1 = 'J1 = {{ jfet = true, gate = "in", drain = "out", source = "gnd"{0} }} #<'
D1 = 'D1 = {{ diode = true, anode = "out", cathode = "gnd"{0} }} #<'
MODEL = '[models.small_npn]\npolarity = "npn"\nbeta = 180\n'
SUPPLY = '[supplies]\nV_CC = {{ node = "vcc", dc = "12 V" }}\n{0}'
R_V = 'R_v = { resistor = "1k", between = ["vcc", "out"] }\n'


def bipolar(more: str, model: str = "true") -> str:
    """Give a file with a transistor that carries these keys."""
    return also(Q1.format(model, more))


def modelled(entries: str) -> str:
    """Give a file whose transistor names a model of these lines."""
    mine = Q1.format('"npn"', "").removesuffix(" #<")
    return parts(R_1, mine, more=f"[models.npn]\n{entries}\n")


def supplied(supplies: str) -> str:
    """Give a file with these supplies and a resistor at vcc."""
    return parts(R_1, R_V, more=supplies)


DEVICES = (
    row("model that is missing", bipolar("", '"small_npn"'), "Q1", '"small_npn"', "[models.small_npn]"),
    row(
        "mistyped model",
        parts(R_1, Q1.format('"smal_npn"', ""), more=MODEL),
        '"smal_npn"',
        'did you mean "small_npn"',
    ),
    row("model that is no name", bipolar("", '"small npn"'), '"small npn"', "[models.NAME]"),
    row("model as a number", bipolar("", "3"), "true or the name of a model"),
    row("tolerance of a transistor", bipolar(', I_C = "1 mA", tol = "5 %"'), "tolerance"),
    row("role of a transistor", bipolar(', role = "bypass"'), "bipolar has no role"),
    row("collector missing", also('Q1 = { bipolar = true, base = "in" } #<'), "collector is missing"),
    row("gate missing", also('M1 = { mosfet = true, drain = "out" } #<'), "gate is missing"),
    row("anode of a transistor", bipolar(', anode = "in"'), '"anode"', "not known"),
    row("bulk of a jfet", also(J1.format(', bulk = "gnd"')), '"bulk"', "not known"),
    row(
        "emitter at the base",
        also('Q1 = { bipolar = true, base = "in", collector = "out", emitter = "in" } #<'),
        "base and emitter are both at node",
        '"in"',
    ),
    row(
        "emitter at the collector",
        also('Q1 = { bipolar = true, base = "in", collector = "out", emitter = "out" } #<'),
        "collector and emitter are both at node",
    ),
    row(
        "drain at the source",
        also('M1 = { mosfet = true, gate = "in", drain = "out", source = "out" } #<'),
        "drain and source are both",
    ),
    row(
        "diode with itself",
        also('D1 = { diode = true, anode = "out", cathode = "out" } #<'),
        "anode and cathode",
    ),
    row("two bases", also(Q1.format("true", "").replace('"in"', '["in", "b"]')), "a node is wanted"),
    row("unknown polarity", modelled('polarity = "nnp" #<'), '"nnp"', "polarity", '"npn" or "pnp"'),
    row("polarity of the other kind", also(M1.format(', polarity = "npn"')), '"n-channel"'),
    row("polarity as a number", modelled("polarity = 1 #<"), "polarity wants"),
    row("polarity of a diode", also(D1.format(', polarity = "npn"')), '"polarity"', "not known"),
    row("key that no kind has", modelled("betta = 180 #<"), '"betta"', 'did you mean "beta"'),
    row("model key of another kind", modelled('V_ov = "0.2 V" #<'), "npn of a bipolar", '"V_ov"'),
    row("current gain with a unit", modelled('beta = "180 Ω" #<'), "a resistance", "a pure ratio"),
    row("current gain of zero", modelled("beta = 0 #<"), "beta", "not positive"),
    row("Early voltage in ohms", modelled('V_A = "80 Ω" #<'), "a voltage is wanted"),
    row("transit frequency in rad/s", modelled('f_T = "1 Grad/s" #<'), "Hz is wanted"),
    row("negative current", bipolar(', I_C = "-1 mA"'), "I_C", "not positive"),
    row("current without unit", bipolar(', I_C = "0.001"'), "no unit", "a current is wanted"),
    row("slope without unit", also(M1.format(', lambda = "0.02"')), "no unit", "1/V"),
    row("pinch-off of zero", also(J1.format(', V_P = "0 V"')), "V_P", "other than zero"),
    row("square law in S", also(M1.format(', k = "2 mS"')), "a transconductance factor is wanted"),
    row(
        "op amp alone without feedback",
        also('U1 = { opamp = true, output = "out", inputs = ["in", "gnd"] } #<'),
        "no feedback",
    ),
    row(
        "gate that floats",
        parts(
            R_1,
            'M1 = { mosfet = true, gate = "g", drain = "out", source = "gnd", g_m = "1 mS" } #<',
            'R_L = { resistor = "1k", between = ["out", "gnd"] }',
            'J1 = { jfet = true, gate = "g", drain = "out", source = "gnd", g_m = "1 mS" }',
        ),
        '"g"',
        "nothing is wired",
    ),
    row(
        "collector that floats",
        parts(
            'R_1 = { resistor = "1k", between = ["in", "b"] }',
            Q1.format("true", ', g_m = "1 mS", beta = 9').replace('"in"', '"b"'),
        ),
        '"out" floats',
    ),
    row(
        "collector on a mistyped node",
        also('Q1 = { bipolar = true, base = "in", collector = "ouy", emitter = "gnd" } #<'),
        '"ouy"',
        'did you mean "out"',
    ),
    row(
        "current of a transistor wanted",
        parts(
            R_1,
            Q1.format("true", ', I_C = "1 mA"').removesuffix(" #<"),
            find='[find.I]\ncurrent = "Q1" #<\nper = "V_s"\n',
        ),
        "Q1 is a bipolar",
    ),
)

SUPPLIES = (
    row("supply that is no table", supplied('[supplies]\nV_CC = "12 V" #<\n'), "a table is wanted"),
    row("supply without a node", supplied('[supplies]\nV_CC = { dc = "12 V" } #<\n'), "node is missing"),
    row(
        "supply without a voltage", supplied('[supplies]\nV_CC = { node = "vcc" } #<\n'), "dc is missing"
    ),
    row(
        "supply in ohms",
        supplied('[supplies]\nV_CC = { node = "vcc", dc = "12 Ω" } #<\n'),
        "a resistance",
    ),
    row("supply of zero", supplied('[supplies]\nV_CC = { node = "vcc", dc = "0 V" } #<\n'), "zero"),
    row(
        "supply at ground",
        supplied('[supplies]\nV_CC = { node = "gnd", dc = "12 V" } #<\n'),
        "shorts itself",
    ),
    row(
        "supply with tolerance",
        supplied('[supplies]\nV_CC = { node = "vcc", dc = "5 V", tol = "F" } #<\n'),
        '"tol"',
    ),
    row(
        "two supplies at one node",
        supplied(SUPPLY.format('V_DD = { node = "vcc", dc = "5 V" } #<\n')),
        "V_DD",
        "already",
        "shorts",
    ),
    row(
        "supply at a node of its own",
        parts(
            R_1,
            'C_1 = { capacitor = "1n", between = ["out", "gnd"] }',
            more=SUPPLY.format("").replace(" }", " } #<"),
        ),
        "V_CC",
        '"vcc"',
        "one part only",
    ),
    row(
        "drive across a supply",
        parts(
            R_1, R_V, drives=DRIVES + 'V_t = { voltage = ["vcc", "gnd"] } #<\n', more=SUPPLY.format("")
        ),
        "V_CC and V_t",
        "loop",
    ),
    row(
        "op amp against a supply",
        parts(
            R_1,
            R_V,
            'U1 = { ideal_opamp = true, output = "vcc", inputs = ["out", "vcc"] } #<',
            more=SUPPLY.format(""),
        ),
        "V_CC and U1",
        "loop",
    ),
    row(
        "supply by a part's name",
        supplied('[supplies]\nR_1 = { node = "vcc", dc = "12 V" } #<\n'),
        "supply R_1",
        "that of a part",
    ),
)

BANDS = (
    row("bands as a text", 'bands = "low" #<\n' + GOOD, "a list of bands"),
    row("bands of none", "bands = [] #<\n" + GOOD, "an empty list"),
    row("unknown band", 'bands = ["low", "audio"] #<\n' + GOOD, '"audio"', "the bands are"),
    row("mistyped band", 'bands = ["hihg"] #<\n' + GOOD, 'did you mean "high"'),
    row("band as a number", "bands = [1] #<\n" + GOOD, "bare number 1"),
    row("band twice", 'bands = ["mid", "mid"] #<\n' + GOOD, '"mid"', "twice"),
    row("bands in no order", 'bands = ["high", "low"] #<\n' + GOOD, "order", '["low", "high"]'),
    row(
        "unknown role",
        parts(R_1 + 'C_1 = { capacitor = "1n", between = ["out", "gnd"], role = "bypas" } #<'),
        '"bypas"',
        'did you mean "bypass"',
    ),
    row(
        "role as a list",
        parts(R_1 + 'C_1 = { capacitor = "1n", between = ["out", "gnd"], role = [] } #<'),
        "role wants a word",
    ),
    row(
        "role of a resistor",
        also('R_2 = { resistor = "1k", between = ["out", "gnd"], role = "coupling" } #<'),
        "resistor has no role",
        "capacitors and inductors",
    ),
)

CONDITIONS = (
    row("condition that is none", GOOD + '[conditions]\nhumidity = "40 %" #<\n', '"humidity"'),
    row("temperature as a number", GOOD + "[conditions]\ntemperature = 27 #<\n", "wants a text"),
    row("temperature without unit", GOOD + '[conditions]\ntemperature = "27" #<\n', "not a temperature"),
    row(
        "temperature in Fahrenheit",
        GOOD + '[conditions]\ntemperature = "80 °F" #<\n',
        "not a temperature",
    ),
    row("temperature of words", GOOD + '[conditions]\ntemperature = "warm °C" #<\n', "not a temperature"),
    row("below absolute zero", GOOD + '[conditions]\ntemperature = "-300 °C" #<\n', "absolute zero"),
    row("absolute zero", GOOD + '[conditions]\ntemperature = "0 K" #<\n', "absolute zero"),
    row("temperature of a furnace", GOOD + '[conditions]\ntemperature = "2000 K" #<\n', "no junction"),
    row("conditions as a text", 'conditions = "warm" #<\n' + GOOD, "a table is wanted"),
)

MERGES = (
    row("merge of one", GOOD + '[merge]\nR_B = ["R_1"] #<\n', "fewer than two"),
    row("merge as a text", GOOD + '[merge]\nR_B = "R_1" #<\n', "a list is wanted"),
    row("merge of a number", GOOD + "[merge]\nR_B = [1, 2] #<\n", "name of a part"),
    row("merge of nothing", GOOD + '[merge]\nR_B = ["R_1", "R_9"] #<\n', '"R_9"', 'did you mean "R_1"'),
    row("merge of one twice", GOOD + '[merge]\nR_B = ["R_1", "R_1"] #<\n', "twice"),
    row(
        "merge of two kinds",
        GOOD + '[merge]\nR_B = ["R_1", "C_1"] #<\n',
        "mixes resistors and capacitors",
    ),
    row("merge by a part's name", GOOD + '[merge]\nR_1 = ["R_1", "C_1"] #<\n', "that of a part"),
    row("merge by a find's name", GOOD + '[merge]\nA_v = ["R_1", "R_1"] #<\n', "twice"),
    row(
        "merged twice",
        parts(
            R_1,
            'R_2 = { resistor = "1k", between = ["out", "gnd"] }',
            'R_3 = { resistor = "1k", between = ["out", "gnd"] }',
            more='[merge]\nR_A = ["R_2", "R_3"]\nR_B = ["R_1", "R_3"] #<\n',
        ),
        "R_3 is merged already, in R_A",
    ),
)

READ: tuple[Row, ...] = (*DEVICES, *SUPPLIES, *BANDS, *CONDITIONS, *MERGES)

# Where a device's data disagree, or do not suffice, it shows once they are worked out.
WORKED: tuple[Row, ...] = (
    row(
        "current and transconductance", bipolar(', I_C = "1 mA", g_m = "20 mS"'), "g_m", "20 mS", "38.66"
    ),
    row(
        "three that do not agree",
        bipolar(', g_m = "40 mS", beta = 100, r_pi = "3k"'),
        "40 mS",
        "33.3333 mS",
        "beta",
    ),
    row("Early voltage and r_o", bipolar(', I_C = "1 mA", V_A = "80 V", r_o = "100k"'), "r_o", "80 kΩ"),
    row(
        "transit frequency too high",
        bipolar(', I_C = "0.1 mA", f_T = "5 GHz", C_mu = "3 pF"'),
        "C_pi",
        "f_T = 5 GHz",
        "C_mu = 3 pF",
        "disagree",
    ),
    row(
        "C_pi and f_T", bipolar(', I_C = "1 mA", f_T = "250 MHz", C_mu = "3 pF", C_pi = "30 pF"'), "C_pi"
    ),
    row(
        "mosfet current and g_m", also(M1.format(', I_D = "1 mA", V_ov = "0.2 V", g_m = "5 mS"')), "10 mS"
    ),
    row("mosfet square law", also(M1.format(', I_D = "1 mA", V_ov = "0.2 V", k = "2 mA/V²"')), "g_m"),
    row(
        "mosfet transit frequency", also(M1.format(', g_m = "1 mS", f_T = "1 THz", C_gd = "1p"')), "C_gs"
    ),
    row(
        "jfet square law",
        also(J1.format(', I_D = "2 mA", I_DSS = "8 mA", V_P = "-4 V", g_m = "3 mS"')),
        "g_m",
        "2 mS",
    ),
    row("diode current and r_d", also(D1.format(', I_D = "1 mA", r_d = "50R"')), "r_d", "25.86"),
    row(
        "symbol of a transistor is a part",
        also(
            'g_m = { resistor = "1k", between = ["out", "gnd"] }\n' + Q1.format("true", ', I_C = "1 mA"')
        ),
        "g_m",
        "also the name",
    ),
)
