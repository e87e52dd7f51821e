"""Topologies with devices and supplies, built by hand in a few words, for the tests of the bias."""

from __future__ import annotations

from fractions import Fraction

from derive.quantities.dimension import RATIO
from derive.quantities.symbol import Value
from derive.quantities.value import read_value
from derive.reading.kinds import KINDS
from derive.topology.topology import Drive, Part, Place, Supply, TitleBlock, Topology


def value(text, dimension=RATIO):
    return read_value(text, dimension, where="test.toml")


def resistor(name, text, first, second):
    return simple("resistor", name, text, first, second)


def simple(kind, name, text, first, second):
    return (name, kind, {"between": (first, second)}, {}, {}, value(text, KINDS[kind].dimension))


def device(kind, name, polarity=None, values=None, **wires):
    words = {"polarity": polarity} if polarity else {}
    nodes = {key: (node,) for key, node in wires.items()}
    return (name, kind, nodes, dict(values or {}), words, None)


def npn(name, base, collector, emitter, polarity="npn", **values):
    """A transistor with beta 100 and V_BE 0.7 V unless other values are given; None leaves one out."""
    given = {"beta": "100", "V_BE": "0.7 V", **values}
    given = {key: text for key, text in given.items() if text is not None}
    return device("bipolar", name, polarity, given, base=base, collector=collector, emitter=emitter)


def pnp(name, base, collector, emitter, **values):
    return npn(name, base, collector, emitter, "pnp", **values)


def fet(kind, name, gate, drain, source, polarity="n-channel", **values):
    return device(kind, name, polarity, values, gate=gate, drain=drain, source=source)


def other(kind, name, text=None, senses_part=None, parameters=None, **wires):
    dimension = KINDS[kind].dimension
    found = value(text, dimension) if text else None
    return (name, kind, wires, dict(parameters or {}), {}, found, senses_part)


def topology(parts, supplies=(("V_CC", "vcc", "12"),), drives=(), temperature=Fraction("300.15")):
    """Give a topology; part n stands in line n, the supplies in lines from 101, drives from 201."""
    made = []
    for line, (name, kind, wires, values, words, own, *sensed) in enumerate(parts, 1):
        dimensions = {p.name: p.dimension for p in KINDS[kind].parameters}
        made.append(
            Part(
                name,
                kind,
                Place("test.toml", line),
                value=own,
                wires=tuple(wires.items()),
                senses_part=sensed[0] if sensed else None,
                parameters=tuple((key, value(text, dimensions[key])) for key, text in values.items()),
                words=tuple(words.items()),
            )
        )
    return Topology(
        file="test.toml",
        text="",
        title_block=TitleBlock("Test"),
        node_words=(),
        drives=tuple(
            Drive(name, Place("test.toml", 201 + k), quantity, nodes)
            for k, (name, quantity, nodes) in enumerate(drives)
        ),
        parts=tuple(made),
        finds=(),
        supplies=tuple(
            Supply(name, Place("test.toml", 101 + k), node, Value(Fraction(volts), f"{volts} V"))
            for k, (name, node, volts) in enumerate(supplies)
        ),
        temperature=temperature,
    )
