"""What a drawing has to show, told from the circuit itself, and where its lines and letters really are."""

from __future__ import annotations

from functools import cache
from pathlib import Path

from fontTools.ttLib import TTFont

from derive.devices.elements import Coupling, SmallSignal, VoltageDrive
from derive.drawing.drawing import Box, Drawing, Label, Placed, Ring
from derive.topology.topology import Topology

FONTS = Path(__file__).parents[2] / "report_templates" / "fonts"
SIZES = {"part": 12.0, "value": 10.5, "node": 10.5, "note": 10.5}

Parts = dict[str, dict[str, str]]


def parts_of_topology(topology: Topology) -> Parts:
    """Give the node of every pin of every part and drive."""
    found: Parts = {}
    for drive in topology.drives:
        ends = ("plus", "minus") if drive.quantity == "voltage" else ("from", "to")
        found[drive.name] = dict(zip(ends, drive.nodes, strict=True))
    for part in topology.parts:
        if part.coils:
            continue
        wires = dict(part.wires)
        if part.kind in ("opamp", "ideal_opamp"):
            plus, minus = wires["inputs"]
            found[part.name] = {"plus": plus, "minus": minus, "output": wires["output"][0]}
        elif part.kind in ("bipolar", "mosfet", "jfet", "diode"):
            found[part.name] = {key: nodes[0] for key, nodes in wires.items()}
        else:
            key = next(k for k in ("between", "flows", "output") if k in wires)
            found[part.name] = dict(zip("12", wires[key], strict=True))
    return found


def parts_of_circuit(circuit: SmallSignal) -> Parts:
    """Give the node of every pin of every element and drive."""
    found: Parts = {}
    for drive in circuit.drives:
        ends = ("plus", "minus") if isinstance(drive, VoltageDrive) else ("from", "to")
        found[drive.name] = dict(zip(ends, drive.nodes, strict=True))
    for element in circuit.elements:
        if isinstance(element, Coupling):
            continue
        if hasattr(element, "inputs"):
            plus, minus = element.inputs
            found[element.name] = {"plus": plus, "minus": minus, "output": element.output}
            continue
        ends = next(
            getattr(element, key) for key in ("between", "flows", "output") if hasattr(element, key)
        )
        found[element.name] = dict(zip("12", ends, strict=True))
    return found


def senses_of(parts: Topology | SmallSignal) -> set[tuple[str, str, str]]:
    """Give (source, sign, node) or (source, "arrow", part) of every controlled source."""
    found: set[tuple[str, str, str]] = set()
    if isinstance(parts, Topology):
        pairs = [(p.name, dict(p.wires).get("senses") or p.senses_part) for p in parts.parts]
    else:
        pairs = [(e.name, getattr(e, "senses", None)) for e in parts.elements]
    for name, what in pairs:
        if isinstance(what, str):
            found.add((name, "arrow", what))
        elif what:
            found |= {(name, "+", what[0]), (name, "-", what[1])}
    return found


@cache
def _font(slanted: bool) -> tuple[dict[int, str], dict[str, tuple[int, int]], int]:
    font = TTFont(FONTS / f"STIXTwoText-{'Italic' if slanted else 'Regular'}.ttf")
    return font.getBestCmap(), font["hmtx"].metrics, font["head"].unitsPerEm


def letters_width(text: str, size: float, *, slanted: bool = False) -> float:
    """Give how wide the font itself sets a text."""
    letters, advances, em = _font(slanted)
    return sum(advances[letters[ord(letter)]][0] for letter in text) * size / em


def written_box(label: Label) -> Box:
    """Give the box of a label by the font's own widths, from capitals' height to a subscript's foot."""
    size = SIZES[label.kind]
    width = sum(
        letters_width(run.text, size * (0.74 if run.lowered else 1), slanted=run.slanted)
        for run in label.words
    )
    x, y = label.at
    left = x - {"start": 0.0, "middle": width / 2, "end": width}[label.side]
    return Box(left, y - 0.7 * size, left + width, y + 0.24 * size)


def drawn_box(symbol: Placed) -> Box:
    """Give the extent of the lines that a symbol is drawn with."""
    xs: list[float] = []
    ys: list[float] = []
    for shape in symbol.shapes:
        if isinstance(shape, Ring):
            (x, y), r = shape.centre, shape.radius
            xs += [x - r, x + r]
            ys += [y - r, y + r]
        else:
            xs += [x for x, _ in shape.points]
            ys += [y for _, y in shape.points]
    return Box(min(xs), min(ys), max(xs), max(ys))


def overlaps(drawing: Drawing) -> list[str]:
    """Name what lies on something else, by lines and letters as they are drawn."""
    found = []
    symbols = [(symbol.name, drawn_box(symbol)) for symbol in drawing.symbols]
    words = [(label.of or "note", label.kind, written_box(label)) for label in drawing.labels]
    signs = [(mark.source, "sign", mark.box.grown(-1)) for mark in drawing.marks]
    thin = [Box(*map(min, w.start, w.end), *map(max, w.start, w.end)).grown(0.6) for w in drawing.wires]
    for place, (name, box) in enumerate(symbols):
        found += [f"{name} on {other}" for other, second in symbols[:place] if box.meets(second)]
        found += [f"wire through {name}" for wire in thin if wire.grown(-0.55).meets(box.grown(-1))]
    for place, (name, kind, box) in enumerate([*words, *signs]):
        found += [
            f"{kind} {name} on {o} {k}" for o, k, second in [*words, *signs][:place] if box.meets(second)
        ]
        found += [f"{kind} {name} on a wire" for wire in thin if box.meets(wire)]
        for symbol in drawing.symbols:
            # An op amp bears its name; a transistor's stands between its lines.
            if symbol.name != name and box.meets(drawn_box(symbol)):
                found.append(f"{kind} {name} on {symbol.name}")
    return found
