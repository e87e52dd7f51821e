"""Random circuits as topology files: every kind of part, drive and wanted quantity, from a seed."""

from __future__ import annotations

import random
from collections.abc import Callable

from derive.errors import InputError
from derive.reading.read import parse
from derive.topology.topology import Topology

RESISTANCES = ("100R", "470R", "1k", "2k2", "4.7 kΩ", "33k", "1M")
CAPACITANCES = ("2p2", "10p", "470 pF", "1n", "100n", "4u7")
INDUCTANCES = ("1u", "10 uH", "470u", "1 mH", "22 mH")
TRANSCONDUCTANCES = ("40 mS", "1 mS", "250 uS", "-2 mS")
RATIOS = ("1", "2", "100", "-10", "0.99", "3/7")
COEFFICIENTS = ("1", "0.5", "-0.3", "0.98")
WEIGHTS = ("1", "1/2", "-1/2", "3", "-1", "0.25")


class Draft:
    """A circuit in the making: lines of parts and drives, and what may be sensed or sought."""

    def __init__(self, chance: random.Random) -> None:
        self.chance = chance
        self.nodes = [f"n{index}" for index in range(1, chance.randint(2, 7) + 1)]
        self.lines: list[str] = []
        self.carriers: list[str] = []
        self.coils: list[str] = []
        self.counts: dict[str, int] = {}
        self.drives: dict[str, str] = {}

    def name(self, letter: str) -> str:
        """Give the next name with this letter."""
        self.counts[letter] = self.counts.get(letter, 0) + 1
        return f"{letter}_{self.counts[letter]}" if letter != "U" else f"U{self.counts[letter]}"

    def pair(self) -> tuple[str, str]:
        """Give two different nodes, ground among them."""
        first, second = self.chance.sample([*self.nodes, "gnd"], 2)
        return first, second

    def passive(self, pair: tuple[str, str], kinds: str = "RRRCCL") -> None:
        """Put a resistor, capacitor or inductor between two nodes."""
        letter = self.chance.choice(kinds)
        kind, values = {
            "R": ("resistor", RESISTANCES),
            "C": ("capacitor", CAPACITANCES),
            "L": ("inductor", INDUCTANCES),
        }[letter]
        name = self.name(letter)
        self.part(name, f'{kind} = "{self.chance.choice(values)}", between = {quoted(pair)}')
        if letter == "L":
            self.coils.append(name)

    def part(self, name: str, entries: str, *, carries: bool = True) -> None:
        """Write a part's line."""
        self.lines.append(f"{name} = {{ {entries} }}")
        if carries:
            self.carriers.append(name)


def quoted(nodes: tuple[str, str]) -> str:
    """Write a list of two names."""
    return f'["{nodes[0]}", "{nodes[1]}"]'


def _transconductance(draft: Draft) -> None:
    value = draft.chance.choice(TRANSCONDUCTANCES)
    entries = (
        f'transconductance = "{value}", flows = {quoted(draft.pair())}, senses = {quoted(draft.pair())}'
    )
    draft.part(draft.name("g"), entries)


def _voltage_gain(draft: Draft) -> None:
    value = draft.chance.choice(RATIOS)
    entries = (
        f'voltage_gain = "{value}", output = {quoted(draft.pair())}, senses = {quoted(draft.pair())}'
    )
    draft.part(draft.name("A"), entries)


def _current_gain(draft: Draft) -> None:
    sensed = draft.chance.choice(draft.carriers)
    value = draft.chance.choice(RATIOS)
    entries = f'current_gain = "{value}", flows = {quoted(draft.pair())}, senses = "{sensed}"'
    draft.part(draft.name("F"), entries)


def _transresistance(draft: Draft) -> None:
    sensed = draft.chance.choice(draft.carriers)
    value = draft.chance.choice(RESISTANCES)
    entries = f'transresistance = "{value}", output = {quoted(draft.pair())}, senses = "{sensed}"'
    draft.part(draft.name("H"), entries)


def _ideal_opamp(draft: Draft) -> None:
    output = draft.chance.choice(draft.nodes)
    entries = f'ideal_opamp = true, output = "{output}", inputs = {quoted(draft.pair())}'
    draft.part(draft.name("O"), entries, carries=False)


def _opamp(draft: Draft) -> None:
    output = draft.chance.choice(draft.nodes)
    entries = f'opamp = true, output = "{output}", inputs = {quoted(draft.pair())}'
    optional = ('A_0 = "100000"', 'f_unity = "1 MHz"', 'R_in = "1M"', 'R_out = "75R"')
    for parameter in optional:
        if draft.chance.random() < 0.5:
            entries += f", {parameter}"
    draft.part(draft.name("U"), entries, carries=False)


def _coupling(draft: Draft) -> None:
    while len(draft.coils) < 2:
        draft.passive(draft.pair(), "L")
    first, second = draft.chance.sample(draft.coils, 2)
    value = draft.chance.choice(COEFFICIENTS)
    draft.part(draft.name("k"), f'coupling = "{value}", coils = {quoted((first, second))}', carries=False)


ACTIVE: tuple[Callable[[Draft], None], ...] = (
    _transconductance,
    _voltage_gain,
    _current_gain,
    _transresistance,
    _ideal_opamp,
    _opamp,
    _coupling,
)


def random_text(chance: random.Random) -> str:
    """Give a topology file that may or may not be accepted."""
    draft = Draft(chance)
    # A tree first, so that most drafts hang together; then parts across it.
    for index, node in enumerate(draft.nodes):
        draft.passive((node, chance.choice(["gnd", *draft.nodes[:index]])))
    for _ in range(chance.randint(0, 4)):
        draft.passive(draft.pair())
    for _ in range(chance.choice((0, 1, 1, 2, 2, 3))):
        chance.choice(ACTIVE)(draft)
    for index in range(chance.choice((1, 1, 2))):
        quantity = chance.choice(("voltage", "voltage", "current"))
        draft.drives[f"{quantity[0].upper()}_s{index + 1}"] = quantity
    drives = [
        f"{name} = {{ {quantity} = {quoted(draft.pair())} }}" for name, quantity in draft.drives.items()
    ]
    chance.shuffle(draft.lines)
    return "\n".join(
        [
            '[sheet]\ntitle = "Random circuit"\n\n[drives]',
            *drives,
            "\n[parts]",
            *draft.lines,
            *(_find(draft, index) for index in range(chance.choice((1, 1, 2)))),
            "",
        ]
    )


def _find(draft: Draft, index: int) -> str:
    chance = draft.chance
    quantity = chance.choice(("node", "node", "pair", "current", "impedance"))
    head = f"\n[find.X_{index + 1}]"
    if quantity == "impedance":
        nodes = f'"{chance.choice(draft.nodes)}"' if chance.random() < 0.5 else quoted(draft.pair())
        return f"{head}\nimpedance = {nodes}"
    if quantity == "current":
        voltages = [name for name, kind in draft.drives.items() if kind == "voltage"]
        wanted = f'current = "{chance.choice([*draft.carriers, *voltages])}"'
    elif quantity == "pair":
        wanted = f"voltage = {quoted(draft.pair())}"
    else:
        wanted = f'voltage = "{chance.choice(draft.nodes)}"'
    return f"{head}\n{wanted}\nper = {_per(draft)}"


def _per(draft: Draft) -> str:
    chance = draft.chance
    names = list(draft.drives)
    if len(set(draft.drives.values())) == 1 and chance.random() < 0.4:
        weights = ", ".join(f'{name} = "{chance.choice(WEIGHTS)}"' for name in names)
        return f"{{ {weights} }}"
    return f'"{chance.choice(names)}"'


def accepted_circuit(chance: random.Random) -> tuple[Topology, int]:
    """Draw until the reader accepts; give the topology and the number of drafts refused before it."""
    refused = 0
    while True:
        try:
            return parse(random_text(chance), "random.toml"), refused
        except InputError:
            refused += 1
