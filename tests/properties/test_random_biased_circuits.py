"""Random biased circuits: bias and small-signal results against what is worked here on its own.

Each circuit is written twice: with devices and supplies for the product, and with the primitive parts of
the hybrid-π and the supplies' nodes at ground for the independent solver.
"""

from __future__ import annotations

import random
from collections import Counter
from dataclasses import dataclass
from fractions import Fraction
from functools import cache

import pytest
from ledger_arithmetic import PRIME, RESIDUES, LedgerResult
from modular_solver import Circuit

from derive.bias.operating_point import OperatingPoint
from derive.errors import InputError, TooLargeError
from derive.pipeline import derive
from derive.reading.read import parse

COUNT, BATCH, SEED = 60, 15, 9_100_000
SUPPLY, V_BE = Fraction(12), Fraction(13, 20)
CHARGE, BOLTZMANN = Fraction("1.602176634e-19"), Fraction("1.380649e-23")
HEAD = '[sheet]\ntitle = "Stage"\n'
DRIVES = '[drives]\nV_s = { voltage = ["in", "gnd"] }\n[parts]\n'


@dataclass(frozen=True)
class Drawn:
    """A circuit both ways, and what it is made of: (name, ohms, node, node) and devices by name."""

    text: str
    primitive: str
    resistors: tuple[tuple[str, Fraction, str, str], ...]
    devices: tuple[dict, ...]


@dataclass(frozen=True)
class Worked:
    """A circuit with the product's results."""

    drawn: Drawn
    ledger: dict
    point: OperatingPoint


def two(kind: str, name: str, value: str, one: str, other: str) -> str:
    return f'{name} = {{ {kind} = "{value}", between = ["{one}", "{other}"] }}\n'


def draw(seed: int) -> Drawn:  # noqa: C901 - the drawing of one circuit is read in one piece
    """Draw one to three stages in a row, each fed by a divider or by the stage before it."""
    chance = random.Random(seed)
    count = chance.randint(1, 3)
    resistors, capacitors, devices = [], [], []
    before, fed_by = "in", None
    # What makes the expressions long is shared out, so that three stages are worked as fast as one.
    extras = {1: 5, 2: 2, 3: 0}[count]

    def has(odds):
        nonlocal extras
        if extras and chance.random() < odds:
            extras -= 1
            return True
        return False

    def resistor(name, ohms, one, other):
        resistors.append((name, Fraction(ohms), one, other))

    for number in range(1, count + 1):
        b, c, e = f"b{number}", f"c{number}", f"e{number}"
        npn = count == 3 or chance.random() < 0.65
        direct = fed_by == "npn" and npn and (count == 3 or chance.random() < 0.6)
        top, bottom = ("vcc", "gnd") if npn else ("gnd", "vcc")
        if direct:
            b = before
            resistor(f"R_E{number}", chance.choice((2200, 3300, 4700)), e, bottom)
            c = "vcc" if chance.random() < 0.4 else c
        else:
            resistor(f"R_A{number}", chance.choice((56000, 68000, 82000)), top, b)
            resistor(f"R_B{number}", chance.choice((12000, 15000, 22000)), b, bottom)
            resistor(f"R_E{number}", chance.choice((1000, 1500, 2200)), e, bottom)
            capacitors.append((f"C_{number}", "1u", before, b))
        if c != "vcc":
            resistor(f"R_C{number}", chance.choice((1500, 2200, 3300)), top, c)
        if has(0.2):
            capacitors.append((f"C_E{number}", "47u", e, "gnd"))
        values = {"beta": chance.choice(("50", "120", "300"))}
        for key, value, odds in (("V_A", "80 V", 0.4), ("f_T", "300 MHz", 0.5), ("r_b", "60R", 0.25)):
            if has(odds):
                values[key] = value
        if "f_T" in values and has(0.6):
            values["C_mu"] = "0.5 pF"
        devices.append(
            {"name": f"Q{number}", "npn": npn, "base": b, "collector": c, "emitter": e, "values": values}
        )
        fed_by = "npn" if npn else "pnp"
        before = c if c != "vcc" else e
    capacitors.append(("C_9", "1u", before, "out"))
    resistor("R_L", chance.choice((10000, 47000)), "out", "gnd")
    nodes = sorted(
        {node for *_, one, other in resistors for node in (one, other)} - {"gnd", "vcc", "out"}
    )
    if len(nodes) > 1 and has(0.4):
        one, other = chance.sample(nodes, 2)
        capacitors.append(("C_F", "10p", one, other))
    if has(0.3):
        resistor("R_F", 1000000, *chance.sample(nodes, 2))
    return written(chance, resistors, capacitors, devices)


def written(chance, resistors, capacitors, devices) -> Drawn:
    """Write the circuit both ways, with the same passive parts and the same wanted quantities."""
    passive = "".join(two("resistor", n, f"{ohms} ohm", a, b) for n, ohms, a, b in resistors)
    passive += "".join(two("capacitor", *item) for item in capacitors)
    whole, apart = "", ""
    for device in devices:
        values = ", ".join(f'{key} = "{value}"' for key, value in device["values"].items())
        wires = ", ".join(f'{key} = "{device[key]}"' for key in ("base", "collector", "emitter"))
        polarity = "npn" if device["npn"] else "pnp"
        name = device["name"]
        whole += f'{name} = {{ bipolar = true, polarity = "{polarity}", {wires}, {values} }}\n'
        apart += hybrid_pi(device, "" if len(devices) == 1 else name[1:])
    seen = chance.choice([device["emitter"] for device in devices])
    finds = f'[find.A_v]\nvoltage = "out"\nper = "V_s"\n[find.Z]\nimpedance = "{seen}"\n'
    supply = '[supplies]\nV_CC = { node = "vcc", dc = "12 V" }\n'
    text = f'bands = ["full"]\n{HEAD}{supply}{DRIVES}{passive}{whole}{finds}'
    primitive = f"{HEAD}{DRIVES}{passive}{apart}{finds}".replace('"vcc"', '"gnd"')
    return Drawn(text, primitive, tuple(resistors), tuple(devices))


def hybrid_pi(device: dict, index: str) -> str:
    """Write the primitive parts of one transistor."""
    base, collector, emitter = (device[key] for key in ("base", "collector", "emitter"))
    values = device["values"]
    parts = ""
    if "r_b" in values:
        parts += two("resistor", f"r_b{index}", "1", base, f"inside{device['name']}")
        base = f"inside{device['name']}"
    parts += two("resistor", f"r_pi{index}", "1", base, emitter)
    parts += (
        f'g_m{index} = {{ transconductance = "1", flows = ["{collector}", "{emitter}"], '
        f'senses = ["{base}", "{emitter}"] }}\n'
    )
    if "V_A" in values:
        parts += two("resistor", f"r_o{index}", "1", collector, emitter)
    if "f_T" in values:
        parts += two("capacitor", f"C_pi{index}", "1", base, emitter)
    if "C_mu" in values:
        parts += two("capacitor", f"C_mu{index}", "1", base, collector)
    return parts


@cache
def worked() -> tuple[Worked, ...]:
    """Give the circuits of the first seeds whose transistors conduct, and the product's results."""
    found: list[Worked] = []
    refused, seed = 0, SEED
    while len(found) < COUNT:
        seed += 1
        drawn = draw(seed)
        try:
            topology = parse(drawn.text, "stage.toml")
            results = derive(topology, other_engine=False, explain=len(found) % 15 == 0)
        except TooLargeError:
            continue
        except InputError as error:
            if not any(words in str(error) for words in ("does not conduct", "disagree")):
                raise
            refused += 1
            assert refused < COUNT
            continue
        assert results.outcome.point is not None
        found.append(Worked(drawn, results.ledger(), results.outcome.point))
    return tuple(found)


def batch(index: int) -> tuple[Worked, ...]:
    return worked()[index * BATCH : (index + 1) * BATCH]


@pytest.mark.parametrize("index", range(COUNT // BATCH))
def test_small_signal_results_are_those_of_the_primitive_parts(index):
    for one in batch(index):
        circuit = Circuit(one.drawn.primitive)
        names = set(circuit.symbols())
        assert set(one.ledger["symbols"]) == names, one.drawn.text
        chance = random.Random(one.drawn.text)
        for _ in range(2):
            values = {name: chance.randrange(1, PRIME) for name in sorted(names)}
            s = chance.randrange(1, PRIME)
            truth = circuit.solve(values, s)
            assert truth is not None
            for result in one.ledger["results"]:
                found = LedgerResult(result).at(values, RESIDUES).at(s)
                assert found == truth[result["find"]], one.drawn.text


@pytest.mark.parametrize("index", range(COUNT // BATCH))
def test_no_check_fails_on_a_biased_circuit(index):
    for one in batch(index):
        for result in one.ledger["results"]:
            for check in result["checks"]:
                assert check["passed"] is not False, (one.drawn.text, check)
        assert not any(found.broken for found in one.point.derivations)


@pytest.mark.parametrize("index", range(COUNT // BATCH))
def test_currents_balance_exactly_at_every_node_of_the_operating_point(index):
    for one in batch(index):
        volts = {**dict(one.point.nodes), "gnd": Fraction(0)}
        assert volts["vcc"] == SUPPLY
        leaving = dict.fromkeys(volts, Fraction(0))
        for _, ohms, first, second in one.drawn.resistors:
            current = (volts[first] - volts[second]) / ohms
            leaving[first] += current
            leaving[second] -= current
        currents = {device.part: device.current for device in one.point.devices}
        for device in one.drawn.devices:
            sign = 1 if device["npn"] else -1
            assert sign * (volts[device["base"]] - volts[device["emitter"]]) == V_BE, one.drawn.text
            collector = sign * currents[device["name"]]
            base = collector / Fraction(device["values"]["beta"])
            leaving[device["collector"]] += collector
            leaving[device["base"]] += base
            leaving[device["emitter"]] -= collector + base
        for node, total in leaving.items():
            assert total == 0 or node in ("gnd", "vcc"), (node, one.drawn.text)


@pytest.mark.parametrize("index", range(COUNT // BATCH))
def test_parameters_follow_from_the_currents(index):
    thermal = BOLTZMANN * Fraction("300.15") / CHARGE
    for one in batch(index):
        symbols = one.ledger["symbols"]
        for device, point in zip(one.drawn.devices, one.point.devices, strict=True):
            index_of = "" if len(one.drawn.devices) == 1 else device["name"][1:]
            g_m = Fraction(symbols[f"g_m{index_of}"]["value"])
            assert g_m == point.current / thermal
            beta = Fraction(device["values"]["beta"])
            assert Fraction(symbols[f"r_pi{index_of}"]["value"]) == beta / g_m
            if "V_A" in device["values"]:
                assert Fraction(symbols[f"r_o{index_of}"]["value"]) == 80 / point.current


def test_the_circuits_are_of_every_sort():
    drawn = [one.drawn for one in worked()]
    assert min(Counter(len(one.devices) for one in drawn).values()) >= 8
    every = [device for one in drawn for device in one.devices]
    assert min(Counter(device["npn"] for device in every).values()) >= 15
    for key in ("V_A", "f_T", "r_b", "C_mu"):
        assert sum(key in device["values"] for device in every) >= 4
    merged = [result for one in worked() for result in one.ledger["results"] if result["definitions"]]
    assert len(merged) >= 20


def test_another_wiring_would_be_seen():
    seen = 0
    for one in worked():
        apart = one.drawn.primitive.replace('flows = ["c1", "e1"]', 'flows = ["e1", "c1"]')
        if apart == one.drawn.primitive:
            continue
        circuit = Circuit(apart)
        values = {name: 3 + i for i, name in enumerate(sorted(circuit.symbols()))}
        truth = circuit.solve(values, 7)
        result = one.ledger["results"][0]
        seen += truth is None or LedgerResult(result).at(values, RESIDUES).at(7) != truth[result["find"]]
    assert seen >= COUNT // 2
