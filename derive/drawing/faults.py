"""What is wrong with a drawing, if anything: things that lie on each other, and wires that touch what they pass."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import combinations

from derive.drawing.drawing import Box, Drawing, Placed, Wire
from derive.drawing.naming import wire_box
from derive.drawing.netlist import lies_on


def faults_of(drawing: Drawing) -> tuple[str, ...]:
    """Give a sentence for each fault: symbols, words and signs that overlap, or that a wire runs through."""
    return (
        *_symbols(drawing),
        *_words(drawing),
        *_wires(drawing),
        *_dots(drawing),
        *_outside(drawing),
    )


def _symbols(drawing: Drawing) -> Iterator[str]:
    for one, other in combinations(drawing.symbols, 2):
        if one.box.meets(other.box):
            yield f"{one.name} overlaps {other.name}"


def _written(drawing: Drawing) -> list[tuple[str, Box]]:
    labels = [(f"the {label.kind} label {label.of}", label.box) for label in drawing.labels]
    return labels + [(f"the sign {mark.sign} of {mark.source}", mark.box) for mark in drawing.marks]


def _words(drawing: Drawing) -> Iterator[str]:
    written = _written(drawing)
    for (name, box), (other, second) in combinations(written, 2):
        if box.meets(second):
            yield f"{name} overlaps {other}"
    inside = {label.of for label in drawing.labels if label.kind == "part"}
    for name, box in written:
        for symbol in drawing.symbols:
            own = symbol.look == "opamp" and symbol.name in inside and name.endswith(f" {symbol.name}")
            if box.meets(_body(symbol, name)) and not own:
                yield f"{name} lies on {symbol.name}"
        for wire in drawing.wires:
            if box.meets(wire_box(wire)):
                yield f"{name} lies on a wire"


def _body(symbol: Placed, name: str) -> Box:
    """Give what a symbol takes up: a transistor's own name may stand beside its lines within its box."""
    if name.endswith(f" {symbol.name}"):
        middle = (symbol.box.left + symbol.box.right) / 2
        return Box(middle, symbol.box.top, middle, symbol.box.top)
    return symbol.box


def _wires(drawing: Drawing) -> Iterator[str]:
    for symbol in drawing.symbols:
        box = symbol.box.grown(-0.5)
        for wire in drawing.wires:
            if _line(wire).meets(box):
                yield f"a wire runs through {symbol.name}"
    for one, other in combinations(drawing.wires, 2):
        if _alongside(one, other):
            yield f"two wires lie on each other at {one.start}"


def _line(wire: Wire) -> Box:
    return wire_box(wire).grown(-1.1)


def _alongside(one: Wire, other: Wire) -> bool:
    """Say whether two parallel wires share a piece of one line, or nearly do."""
    level = one.start[1] == one.end[1]
    if level != (other.start[1] == other.end[1]):
        return False
    return _line(one).grown(1.5).meets(_line(other)) and _overlap(one, other, 0 if level else 1) > 1e-6


def _overlap(one: Wire, other: Wire, axis: int) -> float:
    a, b = sorted((one.start[axis], one.end[axis]))
    c, d = sorted((other.start[axis], other.end[axis]))
    return min(b, d) - max(a, c)


def _dots(drawing: Drawing) -> Iterator[str]:
    """Find points where three ends meet without a dot, and dots where fewer do."""
    pins = [at for symbol in drawing.symbols for _, at in symbol.pins]
    ends = [end for wire in drawing.wires for end in (wire.start, wire.end)]
    for point in dict.fromkeys([*pins, *ends, *drawing.dots]):
        through = sum(lies_on(point, w) and point not in (w.start, w.end) for w in drawing.wires)
        meeting = pins.count(point) + ends.count(point) + 2 * through
        if (meeting > 2) != (point in drawing.dots):
            yield f"{meeting} ends meet {'at a dot' if point in drawing.dots else 'without a dot'} at {point}"


def _outside(drawing: Drawing) -> Iterator[str]:
    page = Box(0, 0, drawing.width, drawing.height)
    boxes = [(symbol.name, symbol.box) for symbol in drawing.symbols] + _written(drawing)
    for name, box in boxes:
        if (
            box.left < page.left
            or box.top < page.top
            or box.right > page.right
            or box.bottom > page.bottom
        ):
            yield f"{name} lies outside the drawing"
