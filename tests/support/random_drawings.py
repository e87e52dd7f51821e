"""Random circuits of every kind of part, up to eight nodes, for drawings to be held against."""

from __future__ import annotations

import random

from derive.bands.restrict import restrict
from derive.devices.elements import SmallSignal
from derive.devices.linearise import linearise
from derive.errors import InputError
from derive.reading.read import parse
from derive.topology.topology import Topology

_TWO = {"resistor": ("R", "4k7"), "capacitor": ("C", "10 nF"), "inductor": ("L", "1 mH")}
_PARTS = (*_TWO, "resistor", "resistor", "capacitor", "transconductance", "voltage_gain", "current_gain")
_DEVICES = ("bipolar", "mosfet", "jfet", "diode", "opamp", "ideal_opamp", "transresistance")


def random_topology(chance: random.Random) -> Topology:
    """Give a circuit that the reader takes, with two to eight nodes besides ground."""
    while True:
        try:
            return parse(_text(chance), "random.toml")
        except InputError:
            continue


def random_circuit(chance: random.Random) -> SmallSignal:
    """Give the small-signal circuit of a random topology, its supplies at signal ground."""
    while True:
        try:
            return small_signal_of(random_topology(chance))
        except InputError:
            continue


def small_signal_of(topology: Topology) -> SmallSignal:
    """Give the whole small-signal circuit of a topology, its supplies at signal ground."""
    return restrict(linearise(topology), "full").circuit


def _text(chance: random.Random) -> str:
    nodes = [f"n{k}" for k in range(1, chance.randint(2, 8) + 1)]
    railed = chance.random() < 0.5
    places = [*nodes, "gnd", "gnd", *(["vcc"] if railed else [])]
    drive = "voltage" if chance.random() < 0.7 else "current"
    ends = '["n1", "gnd"]' if drive == "voltage" else '["gnd", "n1"]'
    lines = ['[sheet]\ntitle = "Random"', f"[drives]\nV_s = {{ {drive} = {ends} }}", "[parts]"]
    joined = [("n1", "n2"), *((chance.choice(nodes[:k]), nodes[k]) for k in range(1, len(nodes)))]
    for k, pair in enumerate([*joined, *((node, chance.choice(places)) for node in nodes)]):
        if pair[0] != pair[1]:
            lines.append(_two(chance, f"{k}", chance.choice(list(_TWO)), pair))
    for k in range(chance.randint(0, 2)):
        lines.append(_any(chance, f"{50 + k}", places))
    if len(nodes) < 7 and chance.random() < 0.3:
        first, second, third = (chance.sample(places, 2) for _ in range(3))
        lines += [_two(chance, "91", "inductor", first), _two(chance, "92", "inductor", second)]
        lines.append('K_1 = { coupling = "0.9", coils = ["L_91", "L_92"] }')
        lines.append(_two(chance, "93", "resistor", third))
    if railed:
        lines.insert(1, '[supplies]\nV_CC = { node = "vcc", dc = "12 V" }')
    return "\n".join([*lines, f'[find.H]\nvoltage = "{nodes[-1]}"\nper = "V_s"'])


def _two(chance: random.Random, name: str, kind: str, pair: tuple[str, ...] | list[str]) -> str:
    letter, value = _TWO[kind]
    return f'{letter}_{name} = {{ {kind} = "{value}", between = {_list(pair)} }}'


def _any(chance: random.Random, name: str, places: list[str]) -> str:
    kind = chance.choice([*_PARTS, *_DEVICES])
    if kind in _TWO:
        return _two(chance, name, kind, chance.sample(places, 2))
    ends, senses = (_list(chance.sample(places, 2)) for _ in range(2))
    a, b, c, d = (f'"{chance.choice(places)}"' for _ in range(4))
    return {
        "transconductance": f'G_{name} = {{ transconductance = "1 mS", flows = {ends}, senses = {senses} }}',
        "voltage_gain": f'A_{name} = {{ voltage_gain = "10", output = {ends}, senses = {senses} }}',
        "current_gain": f'B_{name} = {{ current_gain = "50", flows = {ends}, senses = "R_0" }}',
        "transresistance": f'H_{name} = {{ transresistance = "1k", output = {ends}, senses = "R_0" }}',
        "bipolar": f"Q{name} = {{ bipolar = true, base = {a}, collector = {b}, emitter = {c}, "
        f'polarity = "{chance.choice(["npn", "pnp"])}", g_m = "40 mS", r_pi = "4k7", C_mu = "3 pF" }}',
        "mosfet": f"M{name} = {{ mosfet = true, gate = {a}, drain = {b}, source = {c}, bulk = {d}, "
        f'polarity = "{chance.choice(["n-channel", "p-channel"])}", g_m = "4 mS", g_mb = "1 mS" }}',
        "jfet": f"J{name} = {{ jfet = true, gate = {a}, drain = {b}, source = {c}, "
        f'polarity = "{chance.choice(["n-channel", "p-channel"])}", g_m = "4 mS", C_gs = "5 pF" }}',
        "diode": f'D{name} = {{ diode = true, anode = {a}, cathode = {b}, r_d = "26 Ω" }}',
        "opamp": f'U{name} = {{ opamp = true, output = {a}, inputs = {ends}, f_unity = "1 MHz" }}',
        "ideal_opamp": f"U{name} = {{ ideal_opamp = true, output = {a}, inputs = {ends} }}",
    }[kind]


def _list(pair: tuple[str, ...] | list[str]) -> str:
    return "[" + ", ".join(f'"{node}"' for node in pair) + "]"
