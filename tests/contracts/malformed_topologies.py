"""Topology files that must be refused: one table for every road into the program.

Each row says on which line the fault stands, and words that the message must hold. The line is marked
in the text by the comment `#<`, so that it does not depend on counting.
"""

from __future__ import annotations

from typing import NamedTuple

MARK = "#<"


class Row(NamedTuple):
    """One file that must be refused."""

    name: str
    text: str
    line: int
    words: tuple[str, ...]


SHEET = '[sheet]\ntitle = "Stage"\n'
DRIVES = '[drives]\nV_s = { voltage = ["in", "gnd"] }\n'
R_1 = 'R_1 = { resistor = "1k", between = ["in", "out"] }\n'
C_1 = 'C_1 = { capacitor = "1n", between = ["out", "gnd"] }\n'
FIND = '[find.A_v]\nvoltage = "out"\nper = "V_s"\n'
GOOD = SHEET + DRIVES + "[parts]\n" + R_1 + C_1 + FIND


def row(name: str, text: str, *words: str, line: int | None = None) -> Row:
    """Give the row whose line is the marked one, unless the line is told."""
    if line is None:
        marked = [n for n, one in enumerate(text.split("\n"), start=1) if MARK in one]
        (line,) = marked
    return Row(name, text, line, words)


def parts(*lines: str, drives: str = DRIVES, find: str = FIND, more: str = "") -> str:
    """Give a file with these parts."""
    return SHEET + drives + "[parts]\n" + "\n".join(lines) + "\n" + find + more


def also(line: str, **rest: str) -> str:
    """Give a sound file with one more part."""
    return parts(R_1 + C_1 + line, **rest)


def finds(text: str) -> str:
    """Give a file with this find."""
    return parts(R_1 + C_1, find=text)


def value(kind: str, text: str) -> str:
    """Give a file in which the part between in and out has this value."""
    return parts(f'X_1 = {{ {kind} = {text}, between = ["in", "out"] }} {MARK}', C_1)


GM = 'flows = ["out", "gnd"], senses = ["in", "gnd"]'

TOML = (
    row("empty file", "", "[sheet]", line=1),
    row("no closing quote", '[sheet]\ntitle = "Stage\n', "TOML", line=2),
    row("no value", "[sheet]\ntitle =\n", "TOML", line=2),
    row("no equals sign", '[sheet]\ntitle "Stage"\n', "TOML", line=2),
    row("bare code", GOOD + "[nodes]\nout = 4k7\n", "TOML", line=12),
    row("open list", SHEET + '[drives]\nV_s = { voltage = ["in", "gnd" }\n', "TOML", line=4),
    row("open header", "[sheet\n", "TOML", line=1),
    row(
        "part written twice",
        parts(R_1 + C_1 + 'R_1 = { resistor = "2k", between = ["in", "out"] } #<'),
        '"R_1"',
        "twice",
        "line 6",
    ),
    row("table written twice", GOOD + "[parts] #<\n", '"parts"', "twice"),
    row(
        "key written twice in a part",
        parts('R_1 = { resistor = "1k", resistor = "2k", between = ["in", "out"] } #<', C_1),
        '"resistor"',
        "twice",
    ),
    row("drive written twice", SHEET + DRIVES + "V_s = { voltage = [] } #<\n", '"V_s"', "twice"),
    row("nul character", SHEET + 'number = "\0" #<\n', "NUL"),
    row("control character", SHEET + 'number = "\x07"\n', "TOML", line=3),
    row("lone carriage return", '[sheet]\rtitle = "Stage"\n', "TOML", line=1),
    row("endless line", SHEET + "number = '" + "9" * 30_000 + "' #<\n", "longer than 20000"),
    row("huge file", "# " + ("x" * 98 + "\n# ") * 11_000, "larger than 1 MB", line=0),
    row("deep lists", SHEET + "number = " + "[" * 9000 + " #<", "deeply"),
    row("deep keys", SHEET + "number" + ".a" * 9000 + " = 1 #<\n", "deeply"),
    row(
        "crowd of parts",
        SHEET + DRIVES + "[parts] #<\n" + "".join(f"R_{n} = {{}}\n" for n in range(2001)),
        "2001 parts",
    ),
    row("huge integer", SHEET + "number = " + "9" * 5000, "number or date", line=0),
)

TABLES = (
    row("no sheet", DRIVES + "[parts]\n" + R_1 + C_1 + FIND, "[sheet]", "title", line=1),
    row("no title", '[sheet] #<\nnumber = "1"\n', "title is missing"),
    row("empty title", '[sheet]\ntitle = " " #<\n', "title is empty"),
    row("title is a number", "[sheet]\ntitle = 5 #<\n", "title", "number 5"),
    row("revision is a number", SHEET + "revision = 2 #<\n", "revision", "number 2"),
    row("title of two lines", '[sheet]\ntitle = "a\\nb" #<\n', "line end"),
    row("title turns writing about", '[sheet]\ntitle = "a\\u202Eb" #<\n', "control character"),
    row("endless title", f'[sheet]\ntitle = "{"x" * 300}" #<\n', "longer than 200"),
    row("unknown key of the sheet", SHEET + 'titel = "x" #<\n', '"titel"', 'did you mean "title"'),
    row("sheet is a text", 'sheet = "x" #<\n', "sheet", "table"),
    row("unknown table", GOOD + "[part] #<\n", '"part"', 'did you mean "parts"'),
    row("unknown key at the top", 'author = "x" #<\n' + GOOD, '"author"', "sheet"),
    row("no parts", SHEET + DRIVES + FIND, "[parts]", line=1),
    row("empty parts", SHEET + DRIVES + "[parts] #<\n" + FIND, "names no part"),
    row("parts as a list", SHEET + DRIVES + "[[parts]] #<\n" + FIND, "parts", "a list"),
    row("nothing wanted", SHEET + DRIVES + "[parts]\n" + R_1 + C_1, "no quantity", line=1),
    row("empty find", finds("[find] #<\n"), "no quantity"),
    row("find without a name", finds('[find]\nvoltage = "out" #<\n'), "find voltage", "table"),
    row("find as a list", finds('[[find.A_v]] #<\nvoltage = "out"\n'), "find A_v", "a list"),
    row("nodes word is a number", GOOD + "[nodes]\nout = 5 #<\n", "nodes: out", "number 5"),
    row(
        "no hand file",
        SHEET + 'hand = "none.toml" #<\n' + GOOD.removeprefix(SHEET),
        "none.toml",
        "no such file",
    ),
    row(
        "hand file is a folder", SHEET + 'hand = "." #<\n' + GOOD.removeprefix(SHEET), "hand", "directory"
    ),
    row(
        "hand file by a whole path",
        SHEET + 'hand = "/h.toml" #<\n' + GOOD.removeprefix(SHEET),
        "hand",
        "beside",
    ),
    row("hand is a number", SHEET + "hand = 5 #<\n" + GOOD.removeprefix(SHEET), "hand", "number 5"),
    row("words for no node", GOOD + '[nodes]\nouy = "cable" #<\n', '"ouy"', 'did you mean "out"'),
)

LATER = (row("return ratio", finds('[find.T]\nreturn_ratio = "R_1" #<\n'), "return_ratio", "not yet"),)

NAMES = (
    row("name begins with a digit", also('1R = { resistor = "1k" } #<'), '"1R"', "not a name"),
    row("name with a dash", also('R-1 = { resistor = "1k" } #<'), '"R-1"', "not a name"),
    row("quoted name", also('"R 1" = { resistor = "1k" } #<'), '"R 1"', "not a name"),
    row("empty name", also('"" = { resistor = "1k" } #<'), '""', "not a name"),
    row("Greek name", also('"Ω" = { resistor = "1k" } #<'), '"Ω"', "not a name"),
    row("endless name", also(f"{'R' * 60} = {{}} #<"), "longer than 40"),
    row("part named s", also('s = { resistor = "1k" } #<'), '"s"', "reserved"),
    row("part named gnd", also('gnd = { resistor = "1k" } #<'), '"gnd"', "reserved"),
    row("drive named s", SHEET + '[drives]\ns = { voltage = ["in", "gnd"] } #<\n', "reserved"),
    row("find named gnd", finds('[find.gnd] #<\nvoltage = "out"\nper = "V_s"\n'), "reserved"),
    row(
        "node named s",
        also('R_2 = { resistor = "1k", between = ["out", "s"] } #<'),
        "R_2",
        '"s"',
        "reserved",
    ),
    row("node with a dash", also('R_2 = { resistor = "1k", between = ["out", "a-b"] } #<'), '"a-b"'),
    row("node is a number", also('R_2 = { resistor = "1k", between = ["out", 5] } #<'), "number 5"),
    row("ground as 0", also('R_2 = { resistor = "1k", between = ["out", "0"] } #<'), '"0"', "gnd"),
    row(
        "ground in capitals",
        also('R_2 = { resistor = "1k", between = ["out", "GND"] } #<'),
        '"GND"',
        'write "gnd"',
    ),
    row(
        "drive and part of one name",
        parts('V_s = { resistor = "1k", between = ["in", "out"] } #<', C_1),
        '"V_s"',
        "drive",
        "part",
    ),
    row(
        "find named like a part",
        finds('[find.R_1] #<\nvoltage = "out"\nper = "V_s"\n'),
        "find R_1",
        "part",
    ),
    row(
        "find named like a drive",
        finds('[find.V_s] #<\nvoltage = "out"\nper = "V_s"\n'),
        "find V_s",
        "drive",
    ),
    row(
        "part named like a node voltage",
        also('v_out = { resistor = "1k", between = ["out", "gnd"] } #<'),
        '"v_out"',
        "voltage at node",
    ),
)

KINDS = (
    row("part is a text", also('R_2 = "4k7" #<'), "part R_2", "table", "4k7"),
    row("part is a number", also("R_2 = 4700 #<"), "part R_2", "number 4700"),
    row("part without kind", also('R_2 = { between = ["out", "gnd"] } #<'), "R_2", "no kind"),
    row(
        "misspelt kind",
        also('R_2 = { resitor = "1k", between = ["out", "gnd"] } #<'),
        '"resitor"',
        'did you mean "resistor"',
    ),
    row("foreign kind", also('X_2 = { thyristor = "1k" } #<'), '"thyristor"', "not a kind"),
    row(
        "two kinds",
        also('R_2 = { resistor = "1k", capacitor = "1n", between = ["out", "gnd"] } #<'),
        "resistor and capacitor",
    ),
    row("between is missing", also('R_2 = { resistor = "1k" } #<'), "between", "missing"),
    row(
        "senses is missing",
        also('g = { transconductance = "1 mS", flows = ["out", "gnd"] } #<'),
        "senses",
        "missing",
    ),
    row(
        "misspelt key",
        also('R_2 = { resistor = "1k", betwen = ["out", "gnd"] } #<'),
        '"betwen"',
        'did you mean "between"',
    ),
    row(
        "key of another kind",
        also('R_2 = { resistor = "1k", between = ["out", "gnd"], coils = ["a", "b"] } #<'),
        '"coils"',
    ),
    row(
        "misspelt key in a table of its own",
        also('[parts.R_2]\nresistor = "1k"\nbetwen = ["out", "gnd"] #<\n'),
        '"betwen"',
    ),
    row("three nodes", also('R_2 = { resistor = "1k", between = ["out", "a", "b"] } #<'), "3 nodes"),
    row("one node", also('R_2 = { resistor = "1k", between = "out" } #<'), "two nodes"),
    row(
        "both ends on one node",
        also('R_2 = { resistor = "1k", between = ["out", "out"] } #<'),
        "R_2",
        '"out"',
        "twice",
    ),
    row(
        "flows from a node to itself",
        also('g = { transconductance = "1 mS", flows = ["out", "out"], senses = ["in", "gnd"] } #<'),
        "flows",
        "twice",
    ),
    row(
        "senses one node twice",
        also('g = { transconductance = "1 mS", flows = ["out", "gnd"], senses = ["in", "in"] } #<'),
        "senses",
        "twice",
    ),
    row("drive is neither", SHEET + "[drives]\nV_s = {} #<\n", "neither voltage nor current"),
    row(
        "drive is both",
        SHEET + '[drives]\nV_s = { voltage = ["in", "gnd"], current = ["in", "gnd"] } #<\n',
        "voltage and current",
    ),
    row("drive on one node", SHEET + '[drives]\nV_s = { voltage = ["in", "in"] } #<\n', "twice"),
    row("drive with a single node", SHEET + '[drives]\nV_s = { voltage = "in" } #<\n', "two nodes"),
    row("drive is a text", SHEET + '[drives]\nV_s = "in" #<\n', "drive V_s", "table"),
    row(
        "misspelt key of a drive",
        SHEET + '[drives]\nV_s = { volts = ["in", "gnd"] } #<\n',
        '"volts"',
        'did you mean "voltage"',
    ),
)

VALUES = (
    row("bare integer", value("resistor", "4700"), "X_1", "a resistance", "number 4700"),
    row("bare float", value("resistor", "4.7e3"), "X_1", "number 4.7e3"),
    row("bare infinity", value("resistor", "inf"), "X_1", "number inf"),
    row("bare nan", value("capacitor", "nan"), "X_1", "number nan"),
    row("truth value", value("resistor", "true"), "X_1", "bare word true"),
    row("plain number", value("resistor", '"4700"'), '"4700"', "no unit"),
    row("wrong unit", value("resistor", '"10 nF"'), '"10 nF"', "a capacitance", "a resistance"),
    row("resistor code for a capacitor", value("capacitor", '"2R2"'), "a resistance"),
    row("wrong case of a unit", value("capacitor", '"10 uf"'), '"uf"', 'did you mean "uF"'),
    row("unknown unit", value("resistor", '"10 furlong"'), "unknown unit", "furlong"),
    row("decimal comma", value("resistor", '"4,7k"'), "4,7k", "decimal point"),
    row("not a number", value("resistor", '"nan"'), '"nan"', "a resistance"),
    row("infinity", value("resistor", '"inf Ω"'), "inf"),
    row("empty value", value("resistor", '""'), "a resistance"),
    row("program text", value("resistor", "\"__import__('os').system('x')\""), "__import__"),
    row("huge exponent", value("resistor", '"1e999999999 Ω"'), "exponent"),
    row("endless value", value("resistor", f'"{"9" * 5000}"'), "longer than 60"),
    row("foreign digits", value("resistor", '"٤k٧"'), "a resistance"),
    row("zero resistor", value("resistor", '"0R0"'), "is zero", "wire"),
    row("zero inductor", value("inductor", '"0 H"'), "is zero", "wire"),
    row("zero capacitor", value("capacitor", '"0 F"'), "is zero"),
    row("negative resistor", value("resistor", '"-1k"'), "is negative"),
    row("negative with a true minus", value("inductor", '"−1 uH"'), "is negative"),
    row(
        "zero transconductance",
        also(f'g = {{ transconductance = "0 S", {GM} }} #<'),
        "part g",
        "is zero",
    ),
    row(
        "transconductance in ohms",
        also(f'g = {{ transconductance = "1k", {GM} }} #<'.replace('"1k"', '"1 kΩ"')),
        "a resistance",
        "a conductance",
    ),
    row(
        "gain in volts",
        also('E = { voltage_gain = "10 V", output = ["a", "gnd"], senses = ["in", "gnd"] } #<'),
        "a voltage",
        "a pure ratio",
    ),
    row(
        "gain divided by zero",
        also('E = { voltage_gain = "1/0", output = ["a", "gnd"], senses = ["in", "gnd"] } #<'),
        "divides by zero",
    ),
    row(
        "huge bare integer as a gain",
        also(f'E = {{ voltage_gain = 1{"0" * 80}, output = ["a", "gnd"], senses = ["in", "gnd"] }} #<'),
        "too large",
    ),
    row(
        "value on its own line",
        also('[parts.R_2]\nbetween = [\n  "out",\n  "gnd",\n]\nresistor = "1 nF" #<\n'),
        "R_2",
        "a capacitance",
    ),
    row(
        "odd tolerance",
        also('R_2 = { resistor = "1k", between = ["out", "gnd"], tol = "Z" } #<'),
        '"Z"',
        "tolerance",
    ),
    row(
        "tolerance is a number",
        also('R_2 = { resistor = "1k", between = ["out", "gnd"], tol = 5 } #<'),
        "tol",
        "number 5",
    ),
    row(
        "tolerance beyond the value",
        also('R_2 = { resistor = "1k", between = ["out", "gnd"], tol = "150 %" } #<'),
        "150 %",
    ),
    row(
        "tolerance of nothing",
        also('U1 = { ideal_opamp = true, output = "a", inputs = ["in", "a"], tol = "5 %" } #<'),
        "tolerance",
    ),
)

INTEGRATOR = 'U1 = { opamp = %s, output = "o", inputs = ["in", "o"]%s } #<'

OPAMPS = (
    row(
        "both unity frequencies",
        also(INTEGRATOR % ("true", ', f_unity = "1 MHz", w_unity = "1 Mrad/s"')),
        "both f_unity and w_unity",
    ),
    row("Hz for rad/s", also(INTEGRATOR % ("true", ', w_unity = "1 MHz"')), "Hz", "rad/s"),
    row("rad/s for Hz", also(INTEGRATOR % ("true", ', f_unity = "1 Mrad/s"')), "rad/s", "Hz"),
    row("frequency without unit", also(INTEGRATOR % ("true", ', f_unity = "10"')), "no unit"),
    row("zero gain", also(INTEGRATOR % ("true", ', A_0 = "0"')), "A_0", "not positive"),
    row(
        "op amp is false",
        also(INTEGRATOR % ("false", ', A_0 = "10"')),
        "true",
        "bare word false",
    ),
    row(
        "missing model",
        also(INTEGRATOR % ('"tl72"', ""), more='[models.tl072]\nA_0 = "200k"\n'),
        '"tl72"',
        'did you mean "tl072"',
    ),
    row("model not used", GOOD + '[models.tl072] #<\nA_0 = "200k"\n', "tl072", "not used"),
    row(
        "unknown parameter of a model",
        GOOD + '[models.tl072]\nf_unit = "3 MHz" #<\n',
        '"f_unit"',
        'did you mean "f_unity"',
    ),
    row("model is a text", GOOD + '[models]\ntl072 = "x" #<\n', "model tl072", "table"),
    row(
        "ideal op amp with a model",
        also('U1 = { ideal_opamp = "x", output = "a", inputs = ["in", "a"] } #<'),
        "ideal_opamp",
        "true",
    ),
    row(
        "ideal op amp with a gain",
        also('U1 = { ideal_opamp = true, output = "a", inputs = ["in", "a"], A_0 = "5" } #<'),
        '"A_0"',
    ),
    row(
        "output is a list",
        also('U1 = { ideal_opamp = true, output = ["a", "gnd"], inputs = ["in", "a"] } #<'),
        "a node is wanted",
    ),
    row(
        "inputs on one node",
        also('U1 = { ideal_opamp = true, output = "out", inputs = ["in", "in"] } #<'),
        "inputs",
        "twice",
    ),
    row(
        "output on ground",
        also('U1 = { ideal_opamp = true, output = "gnd", inputs = ["in", "out"] } #<'),
        "U1",
        "cannot be ground",
    ),
    row(
        "no feedback",
        also(
            'U1 = { ideal_opamp = true, output = "o", inputs = ["out", "m"] } #<\n'
            'R_2 = { resistor = "1k", between = ["m", "gnd"] }\n'
            'R_3 = { resistor = "1k", between = ["o", "gnd"] }'
        ),
        "U1 has no feedback",
    ),
    row(
        "feedback that ends at a drive",
        also(
            'U1 = { ideal_opamp = true, output = "o", inputs = ["out", "gnd"] } #<\n'
            'R_2 = { resistor = "1k", between = ["o", "in"] }'
        ),
        "U1 has no feedback",
    ),
    row(
        "op amps share an output",
        also(
            'U1 = { ideal_opamp = true, output = "o", inputs = ["out", "o"] }\n'
            'U2 = { ideal_opamp = true, output = "o", inputs = ["in", "o"] } #<'
        ),
        "U1 and U2 share the output",
    ),
)

SENSED = 'B = { current_gain = "10", flows = ["out", "gnd"], senses = %s } #<'
COILS = (
    'L_1 = { inductor = "1 mH", between = ["in", "out"] }\n'
    'L_2 = { inductor = "1 mH", between = ["out", "gnd"] }\n'
    "K_1 = { coupling = %s, coils = %s } #<"
)

REFERENCES = (
    row("sensed part is missing", also(SENSED % '"R_11"'), '"R_11"', 'did you mean "R_1"'),
    row("part senses itself", also(SENSED % '"B"'), "own current"),
    row("senses a pair of nodes", also(SENSED % '["in", "out"]'), "name of a part"),
    row(
        "senses an op amp",
        also(SENSED % '"U1"' + '\nU1 = { ideal_opamp = true, output = "a", inputs = ["in", "a"] }'),
        "U1",
        "an ideal_opamp",
    ),
    row(
        "senses a current drive",
        also(SENSED % '"I_s"', drives=DRIVES + 'I_s = { current = ["gnd", "out"] }\n'),
        "I_s",
        "current drive",
    ),
    row("coupling above one", also(COILS % ('"1.2"', '["L_1", "L_2"]')), "1.2", "outside"),
    row("no coupling", also(COILS % ('"0"', '["L_1", "L_2"]')), "is zero"),
    row("coil is missing", also(COILS % ('"0.9"', '["L_1", "L_3"]')), '"L_3"', "did you mean"),
    row("coil is a resistor", also(COILS % ('"0.9"', '["L_1", "R_1"]')), "R_1 is a resistor"),
    row("coil with itself", also(COILS % ('"0.9"', '["L_1", "L_1"]')), "with itself"),
    row("three coils", also(COILS % ('"0.9"', '["L_1", "L_2", "L_3"]')), "two inductors"),
    row(
        "coupled twice",
        also(
            (COILS % ('"0.9"', '["L_1", "L_2"]')).replace("#<", "")
            + '\nK_2 = { coupling = "0.5", coils = ["L_2", "L_1"] } #<'
        ),
        "coupled already by K_1",
    ),
    row("find of nothing", finds('[find.A_v] #<\nper = "V_s"\n'), "does not say"),
    row(
        "find of two things",
        finds('[find.A_v] #<\nvoltage = "out"\nimpedance = "out"\n'),
        "voltage and impedance",
    ),
    row("find without per", finds('[find.A_v] #<\nvoltage = "out"\n'), "per is missing"),
    row("impedance with per", finds('[find.Z]\nimpedance = "out"\nper = "V_s" #<\n'), "per"),
    row(
        "unknown key of a find",
        finds('[find.A_v]\nvolts = "out" #<\nper = "V_s"\n'),
        '"volts"',
        'did you mean "voltage"',
    ),
    row(
        "unknown drive",
        finds('[find.A_v]\nvoltage = "out"\nper = "V_x" #<\n'),
        '"V_x"',
        'did you mean "V_s"',
    ),
    row(
        "unknown drive among weights",
        finds('[find.A_v]\nvoltage = "out"\nper = { V_s = "1", V_t = "1" } #<\n'),
        '"V_t"',
    ),
    row(
        "weights are zero",
        finds('[find.A_v]\nvoltage = "out"\nper = { V_s = "0" } #<\n'),
        "all zero",
    ),
    row(
        "weight left open",
        finds('[find.A_v]\nvoltage = "out"\nper = { V_s = "?" } #<\n'),
        "left open",
    ),
    row(
        "weight with a unit",
        finds('[find.A_v]\nvoltage = "out"\nper = { V_s = "1 V" } #<\n'),
        "a voltage",
        "a pure ratio",
    ),
    row("per is a number", finds('[find.A_v]\nvoltage = "out"\nper = 1 #<\n'), "number 1"),
    row(
        "weights mix the kinds of drive",
        also(
            "",
            drives=DRIVES + 'I_s = { current = ["gnd", "out"] }\n',
            find='[find.A_v]\nvoltage = "out"\nper = { V_s = "1", I_s = "1" } #<\n',
        ),
        "mixes",
    ),
    row(
        "find at no node",
        finds('[find.A_v]\nvoltage = "ouy" #<\nper = "V_s"\n'),
        '"ouy"',
        'did you mean "out"',
    ),
    row("impedance at no node", finds('[find.Z]\nimpedance = ["out", "x9"] #<\n'), '"x9"'),
    row("voltage of ground", finds('[find.A_v]\nvoltage = "gnd" #<\nper = "V_s"\n'), "ground"),
    row(
        "voltage between one node",
        finds('[find.A_v]\nvoltage = ["out", "out"] #<\nper = "V_s"\n'),
        "twice",
    ),
    row(
        "current of no part",
        finds('[find.A_i]\ncurrent = "R_l" #<\nper = "V_s"\n'),
        '"R_l"',
        'did you mean "R_1"',
    ),
    row("current of a node list", finds('[find.A_i]\ncurrent = ["in"] #<\nper = "V_s"\n'), "a list"),
)

CIRCUITS = (
    row(
        "end on a mistyped node",
        also('R_2 = { resistor = "1k", between = ["ouy", "gnd"] } #<'),
        "R_2",
        '"ouy"',
        "one part only",
        'did you mean "out"',
    ),
    row(
        "end that goes nowhere",
        also('R_2 = { resistor = "1k", between = ["out", "q7"] } #<'),
        '"q7"',
        "one part only",
    ),
    row(
        "node that is only sensed",
        also('g = { transconductance = "1 mS", flows = ["out", "gnd"], senses = ["b", "gnd"] } #<'),
        '"b"',
        "nothing is wired",
    ),
    row(
        "output that feeds nothing",
        also('E = { voltage_gain = "2", output = ["y", "gnd"], senses = ["in", "gnd"] } #<'),
        '"y"',
        "one part only",
    ),
    row(
        "op amp output that feeds nothing",
        also('U1 = { opamp = true, output = "y", inputs = ["in", "gnd"], A_0 = "10" } #<'),
        '"y"',
        "one part only",
    ),
    row(
        "drive that feeds nothing",
        SHEET + DRIVES + 'V_t = { voltage = ["far", "gnd"] } #<\n' + "[parts]\n" + R_1 + C_1 + FIND,
        "drive V_t",
        '"far"',
    ),
    row(
        "two drives side by side",
        SHEET + DRIVES + 'V_t = { voltage = ["in", "gnd"] } #<\n' + "[parts]\n" + R_1 + C_1 + FIND,
        "V_s and V_t",
        "loop of voltage sources",
    ),
    row(
        "gain against a drive",
        also('E = { voltage_gain = "2", output = ["in", "gnd"], senses = ["out", "gnd"] } #<'),
        "V_s and E",
        "loop",
    ),
    row(
        "op amp against a drive",
        also('U1 = { ideal_opamp = true, output = "in", inputs = ["out", "in"] } #<'),
        "V_s and U1",
        "loop",
    ),
    row(
        "loop of three sources",
        also(
            'E_1 = { voltage_gain = "2", output = ["in", "a"], senses = ["out", "gnd"] }\n'
            'E_2 = { voltage_gain = "2", output = ["a", "gnd"], senses = ["out", "gnd"] } #<'
        ),
        "V_s, E_1 and E_2",
        "loop",
    ),
    row(
        "parts off ground",
        also(
            'R_2 = { resistor = "1k", between = ["a", "b"] } #<\n'
            'R_3 = { resistor = "2k", between = ["a", "b"] }'
        ),
        '"a" and "b"',
        "float",
    ),
    row(
        "secondary off ground",
        also(
            'L_1 = { inductor = "1 mH", between = ["out", "gnd"] }\n'
            'L_2 = { inductor = "1 mH", between = ["p", "q"] } #<\n'
            'R_2 = { resistor = "1k", between = ["p", "q"] }\n'
            'K_1 = { coupling = "0.9", coils = ["L_1", "L_2"] }'
        ),
        '"p" and "q"',
        "float",
    ),
    row(
        "controlled current into nothing else",
        parts(
            'g_1 = { transconductance = "1 mS", flows = ["x", "gnd"], senses = ["in", "gnd"] } #<\n'
            'g_2 = { transconductance = "1 mS", flows = ["out", "gnd"], senses = ["x", "gnd"] }\n'
            'R_L = { resistor = "1k", between = ["out", "gnd"] }'
        ),
        '"x" floats',
    ),
    row(
        "current drive into a sensed node",
        parts(
            'E = { voltage_gain = "2", output = ["out", "gnd"], senses = ["x", "gnd"] }\n'
            'R_L = { resistor = "1k", between = ["out", "gnd"] }',
            drives='[drives]\nV_s = { current = ["gnd", "x"] } #<\n',
        ),
        '"x" floats',
    ),
    row(
        "wanted node at a current source",
        also(
            'g = { transconductance = "1 mS", flows = ["y", "gnd"], senses = ["in", "gnd"] } #<',
            find='[find.A_v]\nvoltage = "y"\nper = "V_s"\n',
        ),
        '"y" floats',
    ),
    row("fault after line ends of two letters", GOOD.replace("\n", "\r\n") + "[part] #<\r\n", "part"),
    row(
        "fault after a text of many lines",
        SHEET + 'notes = """\n[parts]\nR_1 = "#"\n"""\n' + "number = 5 #<\n",
        "number 5",
    ),
)

ROWS: tuple[Row, ...] = (
    *TOML,
    *TABLES,
    *LATER,
    *NAMES,
    *KINDS,
    *VALUES,
    *OPAMPS,
    *REFERENCES,
    *CIRCUITS,
)
