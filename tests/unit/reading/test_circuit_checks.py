"""Circuits that look odd but are sound, each beside the change that makes it unsound."""

from __future__ import annotations

import pytest

from derive.errors import InputError
from derive.reading.read import parse

VOLTAGE_DRIVE = '[drives]\nV_s = { voltage = ["in", "gnd"] }\n'
CURRENT_DRIVE = '[drives]\nI_s = { current = ["gnd", "in"] }\n'


def stage(*parts: str, drive: str = VOLTAGE_DRIVE, find: str = 'voltage = "out"') -> str:
    per = "" if "impedance" in find else f'per = "{drive.split()[1]}"\n' if drive else ""
    head = '[sheet]\ntitle = "Stage"\n'
    return head + drive + "[parts]\n" + "\n".join(parts) + f"\n[find.X]\n{find}\n{per}"


def resistor(name: str, *between: str) -> str:
    return f'{name} = {{ resistor = "1k", between = ["{between[0]}", "{between[1]}"] }}'


def gm(name: str, flows: tuple[str, str], senses: tuple[str, str]) -> str:
    return (
        f'{name} = {{ transconductance = "1 mS", flows = ["{flows[0]}", "{flows[1]}"], '
        f'senses = ["{senses[0]}", "{senses[1]}"] }}'
    )


def ideal(name: str, output: str, *inputs: str) -> str:
    return (
        f'{name} = {{ ideal_opamp = true, output = "{output}", inputs = ["{inputs[0]}", "{inputs[1]}"] }}'
    )


def opamp(name: str, output: str, inputs: tuple[str, str], more: str) -> str:
    return (
        f'{name} = {{ opamp = true, output = "{output}", '
        f'inputs = ["{inputs[0]}", "{inputs[1]}"], {more} }}'
    )


LOAD = resistor("R_L", "out", "gnd")

SOUND = {
    "gyrator: its port has no part of its own to ground": stage(
        gm("g_1", ("in", "gnd"), ("b", "gnd")),
        gm("g_2", ("gnd", "b"), ("in", "gnd")),
        'C_1 = { capacitor = "1n", between = ["b", "gnd"] }',
        drive="",
        find='impedance = "in"',
    ),
    "cascode: the middle node is held by the upper device alone": stage(
        gm("g_1", ("e", "gnd"), ("in", "gnd")),
        gm("g_2", ("out", "e"), ("gnd", "e")),
        LOAD,
    ),
    "diode-connected device as the load": stage(
        gm("g_1", ("out", "gnd"), ("in", "gnd")),
        gm("g_2", ("out", "gnd"), ("out", "gnd")),
    ),
    "common base with a current gain": stage(
        resistor("r_e", "in", "gnd"),
        'B_1 = { current_gain = "1", flows = ["gnd", "out"], senses = "r_e" }',
        LOAD,
        drive=CURRENT_DRIVE,
    ),
    "voltage follower wired straight back": stage(ideal("U1", "out", "in", "out"), LOAD),
    "voltage follower with nothing at its output": stage(ideal("U1", "out", "in", "out")),
    "feedback through another op amp and a controlled source": stage(
        ideal("U1", "a", "in", "m"),
        opamp("U2", "b", ("a", "gnd"), 'A_0 = "10"'),
        gm("g_1", ("m", "gnd"), ("b", "gnd")),
        resistor("R_1", "m", "gnd"),
        find='voltage = "m"',
    ),
    "feedback through a transformer": stage(
        ideal("U1", "a", "in", "m"),
        'L_1 = { inductor = "1 mH", between = ["a", "gnd"] }',
        'L_2 = { inductor = "1 mH", between = ["m", "gnd"] }',
        'K_1 = { coupling = "0.9", coils = ["L_1", "L_2"] }',
        find='voltage = "m"',
    ),
    "op amps with output resistances on one node": stage(
        opamp("U1", "out", ("in", "gnd"), 'A_0 = "1", R_out = "50 Ω"'),
        opamp("U2", "out", ("in", "gnd"), 'A_0 = "2", R_out = "50 Ω"'),
        LOAD,
    ),
    "op amp with an input resistance as the only path of its input": stage(
        opamp("U1", "out", ("in", "m"), 'A_0 = "1k", R_in = "1 MΩ"'),
        gm("g_1", ("m", "gnd"), ("out", "gnd")),
        LOAD,
    ),
    "op amp input held by a current that answers to the output": stage(
        opamp("U1", "out", ("in", "m"), 'A_0 = "1k"'),
        gm("g_1", ("m", "gnd"), ("out", "gnd")),
        LOAD,
    ),
    "open end of a part that is looked at": stage(
        resistor("R_1", "in", "a"), resistor("R_2", "a", "gnd"), resistor("R_3", "a", "out")
    ),
    "node and part of one name": stage(resistor("out", "in", "out"), LOAD),
    "drive named as the voltage of its own node": stage(
        resistor("R_1", "in", "out"), LOAD, drive=VOLTAGE_DRIVE.replace("V_s", "v_in")
    ),
    "current through a drive": stage(resistor("R_1", "in", "gnd"), find='current = "V_s"'),
    "parts on a floating drive that stands on a grounded one": stage(
        resistor("R_1", "a", "in"),
        LOAD,
        resistor("R_2", "a", "out"),
        drive=VOLTAGE_DRIVE + 'V_t = { voltage = ["a", "in"] }\n',
    ),
}


@pytest.mark.parametrize("name", SOUND)
def test_sound_circuit_is_accepted(name):
    assert parse(SOUND[name], "a.toml").parts


UNSOUND = [
    (
        "gyrator: its port has no part of its own to ground",
        'flows = ["gnd", "b"], senses = ["in", "gnd"]',
        'flows = ["gnd", "b"], senses = ["b", "gnd"]',
        '"in" floats',
    ),
    (
        "cascode: the middle node is held by the upper device alone",
        'senses = ["gnd", "e"]',
        'senses = ["gnd", "in"]',
        '"e" floats',
    ),
    (
        "diode-connected device as the load",
        'senses = ["out", "gnd"]',
        'senses = ["in", "gnd"]',
        '"out" floats',
    ),
    (
        "feedback through another op amp and a controlled source",
        'senses = ["b", "gnd"]',
        'senses = ["in", "gnd"]',
        'node "b" meets one part only',
    ),
    (
        "feedback through a transformer",
        'K_1 = { coupling = "0.9", coils = ["L_1", "L_2"] }',
        "",
        "U1 has no feedback",
    ),
    (
        "op amps with output resistances on one node",
        ', R_out = "50 Ω"',
        "",
        "U1 and U2 share the output",
    ),
    (
        "drive named as the voltage of its own node",
        'v_in = { voltage = ["in", "gnd"] }',
        'v_in = { voltage = ["gnd", "in"] }',
        "voltage at node",
    ),
    (
        "parts on a floating drive that stands on a grounded one",
        'V_t = { voltage = ["a", "in"] }',
        'V_t = { voltage = ["a", "in"] }\nV_u = { voltage = ["gnd", "a"] }',
        "V_s, V_t and V_u form a loop",
    ),
]


@pytest.mark.parametrize(("name", "old", "new", "words"), UNSOUND)
def test_the_check_sees_the_change_that_makes_it_unsound(name, old, new, words):
    assert old in SOUND[name]
    changed = SOUND[name].replace(old, new)
    with pytest.raises(InputError) as caught:
        parse(changed, "a.toml")
    assert words in str(caught.value)


def test_many_floating_nodes_are_named_in_a_short_message():
    chain = [resistor(f"R_{n}", f"n{n}", f"n{n + 1}") for n in range(200)]
    ring = resistor("R_end", "n200", "n0")
    with pytest.raises(InputError, match="195 more") as caught:
        parse(stage(resistor("R_a", "in", "out"), LOAD, *chain, ring), "a.toml")
    assert '"n0", "n1"' in caught.value.what
    assert len(str(caught.value)) < 500
