"""Random stages with their entries expanded and for reading, and what is wrong with a readable form.

The forms are read back from their own text. Identity is decided at two random points modulo the Mersenne
prime 2^61 - 1 by arithmetic of this folder; for polynomials of degree below 100 a difference would pass by a
chance of 1e-32 (Schwartz and Zippel, from memory).
"""

from __future__ import annotations

import random
from dataclasses import dataclass

from ledger_arithmetic import PRIME, RESIDUES, calculate, read_user_text

from derive.devices.linearise import linearise
from derive.eliminate.eliminate import eliminate
from derive.eliminate.plan import plan
from derive.errors import DeriveError
from derive.expressions.ledger_text import to_ledger
from derive.expressions.text import to_text
from derive.nodal.write import write_equations
from derive.normalise.normalise import normalise
from derive.readable.measure import leaves
from derive.readable.readable import read_form
from derive.readable.vocabulary import vocabulary_of
from derive.reading.read import parse

POINTS = 2


@dataclass(frozen=True)
class Read:
    """A circuit's expanded entries and the same for reading, as text, with the definitions."""

    text: str
    raw: tuple[str, ...]
    readable: tuple[str, ...]
    leaves: tuple[tuple[int, int], ...]
    definitions: tuple[tuple[str, str], ...]
    symbols: tuple[str, ...]


def stage_text(chance, size):
    """Give a stage of resistors, capacitors and transistors (r_pi and g_m) between so many nodes."""
    nodes = [f"n{index}" for index in range(1, size + 1)]
    lines = []
    for index, node in enumerate(nodes, 1):
        lines.append(
            _passive(f"R_{index}", "resistor", node, chance.choice(["gnd", "in", *nodes[: index - 1]]))
        )
    for index in range(chance.randint(0, 2)):
        lines.append(_passive(f"R_{index + 11}", "resistor", *chance.sample(["gnd", "in", *nodes], 2)))
    for index in range(chance.randint(0, 2) if size < 4 else 2):
        lines.append(_passive(f"C_{index + 1}", "capacitor", *chance.sample(["gnd", *nodes], 2)))
    for index in range(chance.choice((0, 1, 1) if size < 4 else (1, 2))):
        base, collector, emitter = (
            chance.sample(["gnd", *nodes], 3) if len(nodes) > 1 else ("n1", "n1", "gnd")
        )
        lines.append(_passive(f"r_pi{index + 1}", "resistor", base, emitter))
        lines.append(
            f'g_m{index + 1} = {{ transconductance = "{chance.choice((12, 20, 37))} mS", '
            f'flows = ["{collector}", "{emitter}"], senses = ["{base}", "{emitter}"] }}'
        )
    out = chance.choice(nodes)
    sought = f'voltage = "{out}"\nper = "V_s"' if chance.random() < 0.7 else f'impedance = "{out}"'
    return (
        '[sheet]\ntitle = "Stage"\n[drives]\nV_s = { voltage = ["in", "gnd"] }\n[parts]\n'
        + "\n".join(lines)
        + f"\n[find.H]\n{sought}\n"
    )


def _passive(name, kind, first, second):
    value = {"resistor": "4k7", "capacitor": "10p"}[kind]
    return f'{name} = {{ {kind} = "{value}", between = ["{first}", "{second}"] }}'


def read_one(chance, size):
    """Draw circuits until one has a solution, and give its entries in both forms."""
    while True:
        text = stage_text(chance, size)
        try:
            circuit = linearise(parse(text, "random.toml"), {})
            system = write_equations(circuit, circuit.topology.finds[0])
            form, derivation = normalise(eliminate(system, plan(system)))
        except DeriveError:
            continue
        vocabulary = vocabulary_of(circuit)
        readable = read_form(form, derivation.system.ring.plain(), vocabulary)
        raw = (form.gain, *form.numerator, *form.denominator)
        other = (readable.gain, *readable.numerator, *readable.denominator)
        return Read(
            text,
            tuple(map(to_ledger, raw)),
            tuple(map(to_text, other)),
            tuple((leaves(one), leaves(two)) for one, two in zip(raw, other, strict=True)),
            tuple((name, to_ledger(value)) for name, value in readable.definitions),
            tuple(symbol.name for symbol in circuit.symbols),
        )


def value_of(text, values):
    """Work text in the user's language modulo the prime."""
    return calculate(read_user_text(text), values, RESIDUES)


def faults(found, chance):
    """Say which readable entries are longer than the expanded ones or differ from them; [] where none."""
    wrong = []
    entries = list(zip(found.raw, found.readable, found.leaves, strict=True))
    for raw, readable, (before, after) in entries:
        if after > before or len(readable) > len(raw.replace("**", "^")):
            wrong.append(f"longer: {readable}")
    for _ in range(POINTS):
        values = {name: chance.randrange(2, PRIME - 1) for name in found.symbols}
        known = dict(values)
        for name, text in found.definitions:
            known[name] = value_of(text, known)
        wrong += [f"differs: {r}" for raw, r, _ in entries if value_of(raw, values) != value_of(r, known)]
    return wrong


def stages(seed, count, larger):
    """Give so many random stages, every `larger`-th one of four or five nodes, the others of two or three."""
    chance = random.Random(seed)
    for number in range(count):
        size = chance.randint(4, 5) if number % larger == 0 else chance.randint(2, 3)
        found = read_one(chance, size)
        yield found, faults(found, chance)
