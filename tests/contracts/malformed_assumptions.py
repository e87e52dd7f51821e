"""Files whose assumptions or budget must be refused: as they are read, and once the circuit is worked."""

from __future__ import annotations

from malformed_topologies import GOOD, Row, row


def assume(line: str, more: str = "") -> str:
    """Give a sound file with one assumption."""
    return f"{GOOD}[[assume]]\n{line}\n{more}"


def that(statement: str) -> str:
    """Give a sound file in which this is assumed."""
    return assume(f'that = "{statement}" #<')


def budget(line: str) -> str:
    """Give a sound file with this line in its budget."""
    return f"{GOOD}[budget]\n{line} #<\n"


READ: tuple[Row, ...] = (
    row("assume as a table", GOOD + '[assume] #<\nthat = "R_1 -> 0"\n', "assume", "list of tables"),
    row("assume as a text", 'assume = "R_1 -> 0" #<\n' + GOOD, "assume", "list of tables"),
    row("assumption that is a text", 'assume = ["R_1 -> 0"] #<\n' + GOOD, "assumption 1", "table"),
    row(
        "nothing assumed",
        GOOD + '[[assume]] #<\nbecause = "it is small"\n',
        "assumption 1",
        "what is assumed",
    ),
    row("unknown key of an assumption", assume('that = "R_1 -> 0"\nwhy = "small" #<'), '"why"', "that"),
    row("assumption is a number", assume("that = 5 #<"), "assumption 1: that", "number 5"),
    row("reason is a number", assume('that = "R_1 -> 0"\nbecause = 5 #<'), "because", "number 5"),
    row("no sign", that("R_1"), "no sign", "->"),
    row("two signs", that("R_1 >> 1 >> C_1"), "more than one sign"),
    row("a chain of equal signs", that("R_1 = R_1 = R_1"), "more than one sign"),
    row("one greater sign", that("R_1 > C_1"), "no sign"),
    row("three greater signs", that("R_1 >>> C_1"), "cannot"),
    row("a sign within parentheses only", that("(R_1 >> C_1)"), "no sign"),
    row("printed double sign", that("R_1 ≫ C_1"), "≫", '">>"'),
    row("printed arrow", that("R_1 → 0"), "→", '"->"'),
    row("about equal", that("R_1 ~ R_1"), "~", '"="'),
    row("goes to a number", that("R_1 -> 5"), "inf or to 0"),
    row("goes to minus infinity", that("R_1 -> -inf"), "inf or to 0"),
    row("goes to infinity in full", that("R_1 -> infinity"), "inf or to 0"),
    row("nothing on the left", that("-> 0"), "missing"),
    row("nothing on the right", that("R_1 >>"), "missing"),
    row("nothing behind the arrow", that("R_1 ->"), "inf or to 0"),
    row("no expression", that("R_1 + -> inf"), "ends too early"),
    row("no multiplication sign", that("2 R_1 >> R_1"), "cannot"),
    row("a call of a function", that("__import__(os) -> 0"), "cannot be read"),
    row("a root in an assumption", that("sqrt(R_1*R_1) >> R_1"), "square root"),
    row("a power of many terms", that("(R_1 + C_1 + 1 + 2*R_1)^64 >> R_1"), "more than 500 terms"),
    row("powers of powers", that("((R_1 + C_1)^8)^8 >> R_1"), "more than 500 terms"),
    row("many sums multiplied", that("*".join(["(R_1 + C_1)"] * 12) + " >> R_1"), "more than 500 terms"),
    row("deep parentheses", that("(" * 150 + "R_1" + ")" * 149 + " -> 0"), "assumption 1"),
    row("a very long statement", that("R_1 + " * 200 + "R_1 -> 0"), "longer than 400"),
    row("assumption for no find", assume('that = "R_1 -> 0"\nfind = "A_i" #<'), '"A_i"', '"A_v"'),
    row("assumption for no band", assume('that = "R_1 -> 0"\nband = "hi" #<'), '"hi"', "band"),
    row("assumption for find 5", assume('that = "R_1 -> 0"\nfind = 5 #<'), "find", "number 5"),
    row("assumption for no band at all", assume('that = "R_1 -> 0"\nband = [] #<'), "empty list"),
    row("budget as a list", GOOD + '[[budget]] #<\ngain = "2 %"\n', "budget", "a list"),
    row("unknown limit", budget('gian = "2 %"'), '"gian"', 'did you mean "gain"'),
    row("limit is a number", budget("gain = 2"), "budget: gain", "number 2"),
    row("limit without a unit", budget('gain = "2"'), '"2"', "2 %"),
    row("limit of gain in decibels", budget('gain = "2 dB"'), '"2 dB"', "2 %"),
    row("limit of magnitude in percent", budget('magnitude = "2 %"'), '"2 %"', "dB"),
    row("limit of phase in radians", budget('phase = "0.1 rad"'), '"0.1 rad"', "deg"),
    row("limit of zero", budget('gain = "0 %"'), "no room"),
    row("limit below zero", budget('phase = "-5 deg"'), "no room"),
    row("limit is a word", budget('gain = "small %"'), "budget: gain", "not a number"),
    row("one frequency", budget('range = ["20 Hz"]'), "two frequencies"),
    row("range as a text", budget('range = "20 Hz"'), "two frequencies"),
    row("range in reverse", budget('range = ["20 kHz", "20 Hz"]'), "ends before"),
    row("range from zero", budget('range = ["0 Hz", "20 Hz"]'), "no frequency"),
    row("range in ohms", budget('range = ["20 ohm", "20 kHz"]'), "range", "frequency"),
    row("range left open", budget('range = ["?", "20 kHz"]'), "no frequency"),
    row("range in radians", budget('range = ["20 rad/s", "20 kHz"]'), "Hz"),
    row("simplify as a text", budget('simplify = "yes"'), "simplify", "true or false"),
    row(
        "too many assumptions",
        GOOD + '[[assume]]\nthat = "R_1 -> 0"\n' * 40 + '[[assume]] #<\nthat = "R_1 -> 0"\n',
        "more than 40",
    ),
)

STAGE = """[sheet]
title = "Stage"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_1 = { resistor = "1k", between = ["in", "b"] }
R_2 = { resistor = "47k", between = ["b", "gnd"] }
C_1 = { capacitor = "1n", between = ["b", "gnd"] }
r_pi = { resistor = "2k5", between = ["b", "gnd"] }
g_m = { transconductance = "40 mS", flows = ["out", "gnd"], senses = ["b", "gnd"] }
R_L = { resistor = "4k7", between = ["out", "gnd"] }
[find.A_v]
voltage = "out"
per = "V_s"
"""


def made(*statements: str) -> str:
    """Give the stage with these assumptions; the last one is to be refused."""
    lines = [f'[[assume]]\nthat = "{statement}"' for statement in statements]
    lines[-1] = lines[-1].replace("[[assume]]", "[[assume]] #<")
    return STAGE + "\n".join(lines) + "\n"


WORKED: tuple[Row, ...] = (
    row("assumption on no part", made("R_9 -> inf"), "assumption 1", '"R_9"', "did you mean"),
    row("assumption on a drive", made("V_s -> 0"), '"V_s"'),
    row("assumption on s", made("s*R_1*C_1 >> 1"), "s is no part"),
    row("limit that shorts the output", made("R_L -> 0"), "removes the whole response", "A_v"),
    row("limit that cuts the input", made("R_1 -> inf"), "removes the whole response"),
    row("gain taken away", made("g_m -> 0"), "removes the whole response"),
    row("gain without limit", made("g_m -> inf"), "infinite"),
    row(
        "first to infinity then to zero",
        made("R_2 -> inf", "R_2 -> 0"),
        "contradicts assumption 1",
        "line 15",
    ),
    row("made twice", made("R_2 -> inf", "R_2 -> inf"), "says the same"),
    row("larger and smaller", made("R_2 >> R_1", "R_1 >> R_2"), "contradicts assumption 1"),
    row("larger and smaller by the other sign", made("R_2 >> R_1", "R_2 << R_1"), "contradicts"),
    row("a ring of three", made("R_2 >> r_pi", "r_pi >> R_1", "R_1 >> R_2"), "contradicts"),
    row("large and then zero", made("R_2 >> R_1", "R_2 -> 0"), "contradicts"),
    row("small and then infinite", made("R_2 >> R_1", "R_1 -> inf"), "contradicts"),
    row("much larger and then equal", made("R_2 >> R_1", "R_1 = R_2"), "contradicts"),
    row("one part on both sides", made("R_1 >> R_1"), "the same"),
    row("unlike sides", made("R_1 >> C_1"), "different kinds"),
    row("a resistance against a number", made("R_1 >> 1"), "different kinds"),
    row("sum of unlike quantities", made("R_1 + C_1 >> R_2"), "unlike"),
    row("product of parts to infinity", made("R_1*C_1 -> 0"), "pure number", ">>"),
    row("removed before", made("R_2 -> inf", "R_2 >> R_1"), "changes nothing"),
    row("nothing to strike", made("R_L >> R_1"), "changes nothing"),
    row("sums made equal", made("R_1 + R_2 = r_pi + R_L"), "neither side"),
    row("tied to itself", made("R_1 = R_1 + R_2"), "neither side"),
    row("divides by zero", made("R_1/(R_2 - R_2) >> 1"), "zero"),
    row("compared with zero", made("R_1 >> R_2 - R_2"), "zero"),
    row("alpha to a limit", made("alpha -> 0"), "several ways"),
)
