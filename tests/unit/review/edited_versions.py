"""Revisions of one stage, each by one edit of its text, with what a redline must name: the edit, and its effect.

What is expected follows from the edit by hand. The stage is two dividers about a buffer of gain A:
A_v = A·R_2/(R_1 + R_2)/(1 + s·C_2·R_3), and Z_o = R_3/(1 + s·C_2·R_3).
"""

from __future__ import annotations

from dataclasses import dataclass

STAGE = """[sheet]
title    = "Buffered divider"
revision = "A"
prepared = "J. Example"

[nodes]
out = "load"

[drives]
V_s = { voltage = ["in", "gnd"] }

[parts]
R_1 = { resistor     = "1k",   between = ["in", "a"], tol = "1 %" }
R_2 = { resistor     = "3k",   between = ["a", "gnd"] }
A   = { voltage_gain = "2",    output = ["b", "gnd"], senses = ["a", "gnd"] }
R_3 = { resistor     = "10k",  between = ["b", "out"] }
C_2 = { capacitor    = "10n",  between = ["out", "gnd"], role = "parasitic" }

[find.A_v]
voltage = "out"
per     = "V_s"

[find.Z_o]
impedance = "out"
"""
# (sign, group, subject, aspect); a group "A_v" stands for both of its bands.
Named = tuple[str, str, str, str]


@dataclass(frozen=True)
class Edit:
    """One edit: what is exchanged for what, and what must be named: the edit, and all that follows from it.

    Where `effect` is None only the edit itself is foretold.
    """

    name: str
    old: str
    new: str
    edit: tuple[Named, ...]
    effect: tuple[Named, ...] | None = ()
    says: tuple[str, ...] = ()

    @property
    def text(self) -> str:
        """The edited stage."""
        assert STAGE.count(self.old) == 1, self.name
        return STAGE.replace(self.old, self.new)


MID, HIGH = "A_v, mid band", "A_v, high band"
Z_MID, Z_HIGH = "Z_o, mid band", "Z_o, high band"


def changed(group: str, subject: str, aspect: str) -> Named:
    """Name a change."""
    return ("changed", group, subject, aspect)


def circuit(subject: str, aspect: str, sign: str = "changed") -> Named:
    """Name a change in the circuit."""
    return (sign, "Circuit", subject, aspect)


GAIN = tuple(changed(group, "gain", "value") for group in (MID, HIGH))
Z_GAIN = tuple(changed(group, "gain", "value") for group in (Z_MID, Z_HIGH))
POLES = tuple(changed(group, "poles", "at nominal values") for group in (HIGH, Z_HIGH))
EDGES = tuple(changed(group, "bandwidth", "high −3 dB frequency") for group in (HIGH, Z_HIGH))
MULTIPLIED = tuple(changed(group, "gain", "multiplied") for group in (MID, HIGH))
EXPRESSION = tuple(changed(group, "gain", "expression") for group in (MID, HIGH))


def terms(sign: str, place: str, groups: tuple[str, ...], subject: str = "gain") -> tuple[Named, ...]:
    """Name a term that came in or went out."""
    return tuple((sign, group, subject, f"term {place} the bar") for group in groups)


BOTH, BOTH_Z = (MID, HIGH), (Z_MID, Z_HIGH)
LOAD = 'R_4 = { resistor = "10k", between = ["out", "gnd"] }'
C_2_LINE = 'C_2 = { capacitor    = "10n",  between = ["out", "gnd"], role = "parasitic" }'

EDITS = (
    # Values: A_v(0) = A·R_2/(R_1 + R_2) = 2·3/4 = 1.5; the pole is 1/(R_3·C_2) = 10⁴ rad/s.
    Edit("R_1 doubled", '"1k"', '"2k"', (circuit("R_1", "value"),), GAIN, ("1 kΩ → 2 kΩ", "1.5 → 1.2")),
    Edit("R_2 changed", '"3k"', '"1k"', (circuit("R_2", "value"),), GAIN, ("1.5 → 1",)),
    Edit("gain changed", '"2",  ', '"3",  ', (circuit("A", "value"),), GAIN, ("1.5 → 2.25",)),
    Edit("gain turned", '"2",  ', '"-2",  ', (circuit("A", "value"),), GAIN, ("1.5 → −1.5",)),
    Edit(
        "R_3 doubled",
        '"10k"',
        '"20k"',
        (circuit("R_3", "value"),),
        (*Z_GAIN, *POLES, *EDGES),
        ("10 kΩ → 20 kΩ",),
    ),
    Edit(
        "C_2 halved",
        '"10n"',
        '"5n"',
        (circuit("C_2", "value"),),
        (*POLES, *EDGES),
        ("−10 krad/s → −20 krad/s",),
    ),
    # Written otherwise is no change.
    Edit("R_1 as a code", '"1k"', '"1.0 kΩ"', ()),
    Edit("C_2 in picofarads", '"10n"', '"10000 pF"', ()),
    Edit("a comment", "[nodes]", "# what they are\n[nodes]", ()),
    Edit(
        "a part moved",
        'R_2 = { resistor     = "3k",   between = ["a", "gnd"] }\n',
        "",
        (circuit("R_2", "part", "removed"),),
        (
            # Without R_2 no current flows in R_1, which drops out: A_v = A.
            *GAIN,
            *EXPRESSION,
            *MULTIPLIED,
            *terms("removed", "below", BOTH),
        ),
        ("1.5 → 2",),
    ),
    # Tolerances, roles and words change no result at the nominal values.
    Edit("tolerance", '"1 %"', '"5 %"', (circuit("R_1", "tolerance"),), (), ("±1 % → ±5 %",)),
    Edit("tolerance as a letter", '"1 %"', '"F"', ()),
    Edit("tolerance gone", ', tol = "1 %"', "", (circuit("R_1", "tolerance", "removed"),)),
    Edit(
        "tolerance new",
        '["a", "gnd"] }\nA',
        '["a", "gnd"], tol = "J" }\nA',
        (circuit("R_2", "tolerance", "added"),),
    ),
    Edit("words of a node", '"load"', '"cable"', (circuit("", "node out stands for"),)),
    Edit("new words", "[nodes]", '[nodes]\na = "tap"', (circuit("", "node a stands for", "added"),)),
    # Title block.
    Edit("revision", '"A"\nprepared', '"B"\nprepared', (changed("Title block", "", "revision"),)),
    Edit("who prepared", '"J. Example"', '"A. Other"', (changed("Title block", "", "prepared"),)),
    Edit(
        "number",
        'revision = "A"',
        'revision = "A"\nnumber = "X-1"',
        (("added", "Title block", "", "number"),),
    ),
    # Wiring.
    Edit("R_1 turned round", '["in", "a"]', '["a", "in"]', (circuit("R_1", "nodes"),)),
    Edit(
        "R_2 to the input",
        '"3k",   between = ["a", "gnd"]',
        '"3k",   between = ["a", "in"]',
        (circuit("R_2", "nodes"),),
        # Then nothing loads the input: the buffer sees it whole, A_v = A.
        (*GAIN, *EXPRESSION, *MULTIPLIED, *terms("removed", "below", BOTH)),
        ("a – gnd → a – in",),
    ),
    Edit(
        "the buffer senses the input",
        'senses = ["a", "gnd"]',
        'senses = ["in", "gnd"]',
        (circuit("A", "senses"),),
        (*GAIN, *EXPRESSION, *MULTIPLIED, *terms("removed", "below", BOTH)),
    ),
    # Parts that come in. A load makes a divider R_4/(R_3 + R_4) of the output.
    Edit(
        "a load",
        C_2_LINE,
        f"{C_2_LINE}\n{LOAD}",
        (circuit("R_4", "part", "added"),),
        (
            *GAIN,
            *Z_GAIN,
            *POLES,
            *EDGES,
            *EXPRESSION,
            *(changed(group, "gain", "expression") for group in BOTH_Z),
            *(changed(group, "gain", "multiplied") for group in (*BOTH, *BOTH_Z)),
            # (R_1 + R_2)·(R_3 + R_4) has two terms more than (R_1 + R_2)·R_4.
            *terms("added", "below", (*BOTH, *BOTH, *BOTH_Z)),
            *(changed(group, "b_1", "multiplied") for group in (HIGH, Z_HIGH)),
            *terms("added", "below", (HIGH, Z_HIGH), "b_1"),
        ),
        ("1.5 → 0.75", "10 kΩ → 5 kΩ"),
    ),
    Edit(
        "a second capacitor",
        C_2_LINE,
        f'{C_2_LINE}\nC_3 = {{ capacitor = "10n", between = ["out", "gnd"], role = "parasitic" }}',
        (circuit("C_3", "part", "added"),),
        # b_1 = R_3·C_2 gains the term R_3·C_3.
        (*POLES, *EDGES, *terms("added", "above", (HIGH, Z_HIGH), "b_1")),
        ("R_3·C_3", "−10 krad/s → −5 krad/s"),
    ),
    Edit(
        "no capacitor",
        C_2_LINE + "\n",
        "",
        (circuit("C_2", "part", "removed"),),
        # No role is left: the one band is the full one.
        (
            *(("removed", group, group[:3], "result") for group in (MID, HIGH, Z_MID, Z_HIGH)),
            *(("added", f"{name}, full band", name, "result") for name in ("A_v", "Z_o")),
        ),
    ),
    Edit(
        "role gone",
        ', role = "parasitic"',
        "",
        (circuit("C_2", "role", "removed"),),
        (
            *(("removed", group, group[:3], "result") for group in (MID, HIGH, Z_MID, Z_HIGH)),
            *(("added", f"{name}, full band", name, "result") for name in ("A_v", "Z_o")),
        ),
    ),
    Edit(
        "R_3 is a capacitor now",
        'R_3 = { resistor     = "10k"',
        'R_3 = { inductor     = "10 mH"',
        (circuit("R_3", "kind"), circuit("R_3", "value")),
        None,
    ),
    # What is asked for.
    Edit(
        "one quantity less",
        '[find.Z_o]\nimpedance = "out"\n',
        "",
        (("removed", "What is asked for", "Z_o", "quantity"),),
        (
            ("removed", Z_MID, "Z_o", "result"),
            ("removed", Z_HIGH, "Z_o", "result"),
        ),
    ),
    Edit(
        "one quantity more",
        "[find.Z_o]",
        '[find.Z_b]\nimpedance = "b"\n\n[find.Z_o]',
        (("added", "What is asked for", "Z_b", "quantity"),),
        (
            ("added", "Z_b, mid band", "Z_b", "result"),
            ("added", "Z_b, high band", "Z_b", "result"),
        ),
    ),
    Edit(
        "another node",
        'voltage = "out"',
        'voltage = "b"',
        (changed("What is asked for", "A_v", "nodes"),),
        (
            changed(HIGH, "poles", "at nominal values"),
            ("removed", HIGH, "bandwidth", "high −3 dB frequency"),
            ("removed", HIGH, "b_1", "coefficient"),
        ),
    ),
    Edit(
        "one band",
        "[sheet]",
        'bands = ["high"]\n\n[sheet]',
        (changed("What is asked for", "", "bands"),),
        (
            ("removed", MID, "A_v", "result"),
            ("removed", Z_MID, "Z_o", "result"),
        ),
    ),
    Edit(
        "an assumption",
        "[find.Z_o]",
        '[[assume]]\nthat = "R_2 >> R_1"\nbecause = "it is 3 times it"\n[find.Z_o]',
        (("added", "Assumptions", "R_2 >> R_1", "assumption"),),
        None,
    ),
)
