"""A device with given small-signal values is the same circuit as the primitive parts of its model."""

from __future__ import annotations

import random
from collections import Counter
from functools import cache

import pytest
from circuits import CAPACITANCES, RESISTANCES
from road_response import derivation_of, value_at

from derive.errors import InputError, SingularError
from derive.reading.read import parse

COUNT, BATCH, SEED = 150, 25, 8_300_000
GIVEN = {
    "bipolar": {"g_m": "40 mS", "r_pi": "2k5", "r_o": "80k", "r_b": "50R"}
    | {"C_pi": "20p", "C_mu": "3p", "C_cs": "1p"},
    "mosfet": {"g_m": "5 mS", "r_o": "50k", "g_mb": "1 mS"}
    | {"C_gs": "1p", "C_gd": "200 fF", "C_db": "300 fF", "C_sb": "400 fF"},
    "jfet": {"g_m": "3 mS", "r_o": "50k", "C_gs": "5p", "C_gd": "2p"},
}
ALWAYS = {"bipolar": {"g_m", "r_pi"}, "mosfet": {"g_m"}, "jfet": {"g_m"}}
TERMINALS = {
    "bipolar": ("base", "collector", "emitter"),
    "mosfet": ("gate", "drain", "source", "bulk"),
    "jfet": ("gate", "drain", "source"),
}
# Each parameter as a primitive part: its kind, and the terminals at its ends (`+` flows and senses).
PRIMITIVE = {
    "r_pi": ("resistor", "inner", "emitter"),
    "r_b": ("resistor", "base", "inner"),
    "C_pi": ("capacitor", "inner", "emitter"),
    "C_mu": ("capacitor", "inner", "collector"),
    "C_cs": ("capacitor", "collector", "ground"),
    "C_gs": ("capacitor", "gate", "source"),
    "C_gd": ("capacitor", "gate", "drain"),
    "C_db": ("capacitor", "drain", "bulk"),
    "C_sb": ("capacitor", "source", "bulk"),
}


def primitive(kind, key, symbol, value, at):
    """Write one parameter as the part that it is; nothing where both its ends are one node."""
    out, common = ("collector", "emitter") if kind == "bipolar" else ("drain", "source")
    if key in ("g_m", "g_mb"):
        control = {"g_mb": "bulk", "g_m": "inner" if kind == "bipolar" else "gate"}[key]
        if at[control] == at[common]:
            return ""
        flows, senses = f'["{at[out]}", "{at[common]}"]', f'["{at[control]}", "{at[common]}"]'
        return f'{symbol} = {{ transconductance = "{value}", flows = {flows}, senses = {senses} }}\n'
    part, *ends = PRIMITIVE.get(key, ("resistor", out, common))
    first, second = (at[end] for end in ends)
    if first == second:
        return ""
    return f'{symbol} = {{ {part} = "{value}", between = ["{first}", "{second}"] }}\n'


def draw(seed):
    """Draw one circuit twice: with devices, and with their parts."""
    chance = random.Random(seed)
    nodes = ["in", "out", *(f"n{i}" for i in range(chance.randint(1, 3)))]
    common = ""
    for i, node in enumerate(nodes[1:]):
        common += (
            f'R_a{i} = {{ resistor = "{chance.choice(RESISTANCES)}", between = ["{node}", "gnd"] }}\n'
        )
    for i in range(chance.randint(1, 3)):
        first, second = chance.sample(nodes, 2)
        kind, values = chance.choice((("resistor", RESISTANCES), ("capacitor", CAPACITANCES)))
        common += f'X_{i} = {{ {kind} = "{chance.choice(values)}", between = ["{first}", "{second}"] }}\n'
    count = chance.randint(1, 3)
    kinds = [chance.choice(sorted(GIVEN)) for _ in range(count)]
    devices = parts = ""
    for number, kind in enumerate(kinds, start=1):
        name = f"Q{number}"
        wired = list(TERMINALS[kind])
        if kind == "mosfet" and chance.random() < 0.4:
            wired.remove("bulk")
        at = {key: chance.choice([*nodes, "gnd"]) for key in wired}
        if at[wired[1]] == at[wired[2]] or (kind == "bipolar" and at["base"] == at["emitter"]):
            return None
        given = [item for item in GIVEN[kind].items() if item[0] in ALWAYS[kind] or chance.random() < 0.4]
        wires = ", ".join(f'{key} = "{node}"' for key, node in at.items())
        values = ", ".join(f'{key} = "{value}"' for key, value in given)
        polarity = chance.choice({"bipolar": ("npn", "pnp")}.get(kind, ("n-channel", "p-channel")))
        devices += f'{name} = {{ {kind} = true, polarity = "{polarity}", {wires}, {values} }}\n'
        has_rb = any(key == "r_b" for key, _ in given)
        at |= {"ground": "gnd", "bulk": at.get("bulk", "gnd"), "inner": at.get("base", "")}
        if has_rb:
            at["inner"] = f"{name}_i"
        for key, value in given:
            shared = sum(key in GIVEN[other] for other in kinds) > 1
            parts += primitive(kind, key, f"{key}{number}" if shared else key, value, at)
    head = '[sheet]\ntitle = "Stage"\n[drives]\nV_s = { voltage = ["in", "gnd"] }\n[parts]\n'
    find = '[find.A_v]\nvoltage = "out"\nper = "V_s"\n'
    return head + common + devices + find, head + common + parts + find, tuple(kinds)


@cache
def circuits():
    """Give the first circuits of the seeds that the reader accepts, either way they are written."""
    found = []
    seed = SEED
    while len(found) < COUNT:
        seed += 1
        drawn = draw(seed)
        if drawn is None:
            continue
        whole, apart, kinds = drawn
        try:
            parse(whole, "whole.toml")
            parse(apart, "apart.toml")
        except InputError:
            continue
        try:
            found.append((derivation_of(whole), derivation_of(apart), kinds, whole))
        except SingularError:
            for text in (whole, apart):
                with pytest.raises(SingularError):
                    derivation_of(text)
    return tuple(found)


@pytest.mark.parametrize("batch", range(COUNT // BATCH))
def test_the_response_is_identical_whichever_way_the_circuit_is_written(batch):
    for whole, apart, _, text in circuits()[batch * BATCH : (batch + 1) * BATCH]:
        symbols = [
            {symbol.name: symbol.value for symbol in one.system.small_signal.symbols}
            for one in (whole, apart)
        ]
        assert symbols[0] == symbols[1], text
        chance = random.Random(text)
        for _ in range(2):
            values = {name: chance.randint(2, 10**6) for name in sorted({*symbols[0], "s"})}
            assert value_at(whole, values) == value_at(apart, values), text


def test_the_circuits_have_one_to_three_devices_of_every_kind():
    drawn = circuits()
    assert len(drawn) == COUNT
    assert min(Counter(len(kinds) for _, _, kinds, _ in drawn).values()) >= 20
    assert min(Counter(kind for _, _, kinds, _ in drawn for kind in kinds).values()) >= 40
    assert sum(whole.numerator != 0 for whole, *_ in drawn) >= 120


def test_another_value_of_a_device_would_be_seen():
    seen = 0
    for whole, apart, *_ in circuits():
        names = {symbol.name for symbol in whole.system.small_signal.symbols}
        values = {name: 3 + i for i, name in enumerate(sorted({*names, "s"}))}
        changed = values | {name: 7777 for name in names if name.startswith("g_m")}
        seen += value_at(whole, values) != value_at(apart, changed)
    assert seen >= COUNT // 2
