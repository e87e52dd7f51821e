"""Draws a circuit as SVG, for screen and paper alike: lines as they lie, and words as text."""

from __future__ import annotations

from collections.abc import Iterator

from markupsafe import Markup, escape

from derive.drawing.drawing import Drawing, Label, Mark, Placed, Ring, Stroke
from derive.drawing.labels import size_of
from derive.drawing.letters import DROP, SUBSCRIPT, Run, run_width, width_of
from derive.render.plot import FONT, INK, SOFT

PAGE = 640.0  # the width of a page in these units
# Of what each controlled source follows: told apart without red or green, dark enough on white.
MARKS = ("#a63d03", "#03508e", "#1c7a5b", "#823ba3", "#8a6100", "#4e5a68")


def circuit_svg(drawing: Drawing, words: str, number: int, caption: str = "Circuit") -> Markup:
    """Return a circuit as one `<svg>` element with its title and its words for those who do not see it.

    Given: the figure's number on the page, which makes its identifiers its own.
    """
    head = Markup(
        '<svg xmlns="http://www.w3.org/2000/svg" class="circuit" role="img" viewBox="0 0 {w} {h}" '
        'width="{w}" height="{h}" style="--share:{share}" aria-labelledby="circuit-{n}-title circuit-{n}-words" '
        'font-family="{font}">'
    ).format(
        w=_n(drawing.width),
        h=_n(drawing.height),
        n=number,
        font=FONT,
        share=_n(share_of_page(drawing)),
    )
    marked = {mark.source: mark.colour % len(MARKS) for mark in drawing.marks}
    parts = [
        head,
        Markup('<title id="circuit-{}-title">{}</title>').format(number, caption),
        Markup('<desc id="circuit-{}-words">{}</desc>').format(number, words),
        _lines(drawing),
        *(_solid(symbol) for symbol in drawing.symbols if any(_is_filled(s) for s in symbol.shapes)),
        *_dots(drawing),
        *(_mark(mark) for mark in drawing.marks),
        *(
            _label(label, marked.get(label.of) if label.kind == "part" else None)
            for label in drawing.labels
        ),
        Markup("</svg>"),
    ]
    return Markup("\n").join(parts)


def share_of_page(drawing: Drawing) -> float:
    """Return the width of a drawing in hundredths of the page's: a wide one is made smaller to fit."""
    return min(100.0, 100.0 * drawing.width / PAGE)


def _lines(drawing: Drawing) -> Markup:
    """Return all lines as one path each for wires and for symbols: quick to read for the PDF's writer."""
    wires = " ".join(
        f"M{_n(w.start[0])} {_n(w.start[1])}L{_n(w.end[0])} {_n(w.end[1])}" for w in drawing.wires
    )
    symbols = " ".join(
        _outline(shape) for symbol in drawing.symbols for shape in symbol.shapes if not _is_filled(shape)
    )
    return Markup(
        '<path class="wire" d="{}" fill="none" stroke="{}" stroke-width="1.2" stroke-linecap="round"/>\n'
        '<path class="symbol" d="{}" fill="none" stroke="{}" stroke-width="1.2" stroke-linecap="round" '
        'stroke-linejoin="round"/>'
    ).format(wires, INK, symbols, INK)


def _solid(symbol: Placed) -> Markup:
    path = " ".join(_outline(shape) for shape in symbol.shapes if _is_filled(shape))
    return Markup('<path class="solid" d="{}" fill="{}" stroke="none"/>').format(path, INK)


def _is_filled(shape: Stroke | Ring) -> bool:
    return shape.filled


def _outline(shape: Stroke | Ring) -> str:
    if isinstance(shape, Ring):
        (x, y), r = shape.centre, shape.radius
        arc = f"A{_n(r)} {_n(r)} 0 1 0"
        return f"M{_n(x - r)} {_n(y)}{arc} {_n(x + r)} {_n(y)}{arc} {_n(x - r)} {_n(y)}Z"
    points = [f"{_n(x)} {_n(y)}" for x, y in shape.points]
    if shape.bend:
        return f"M{points[0]}C{' '.join(points[1:])}"
    return f"M{'L'.join(points)}{'Z' if shape.closed else ''}"


def _dots(drawing: Drawing) -> Iterator[Markup]:
    for x, y in drawing.dots:
        yield Markup('<circle class="solid" cx="{}" cy="{}" r="2.4" fill="{}"/>').format(
            _n(x), _n(y), INK
        )


def _mark(mark: Mark) -> Markup:
    (x, y), colour = mark.at, MARKS[mark.colour % len(MARKS)]
    if mark.sign == "arrow":
        dx, dy = mark.towards
        tail, tip = (x - 7 * dx, y - 7 * dy), (x + 4 * dx, y + 4 * dy)
        barbs = [(x - 1 * dx + 3 * s * dy, y - 1 * dy + 3 * s * dx) for s in (1, -1)]
        path = f"M{_n(tail[0])} {_n(tail[1])}L{_n(tip[0])} {_n(tip[1])}"
        path += "".join(f"M{_n(a)} {_n(b)}L{_n(tip[0])} {_n(tip[1])}" for a, b in barbs)
    else:
        path = f"M{_n(x - 3)} {_n(y)}H{_n(x + 3)}"
        path += f"M{_n(x)} {_n(y - 3)}V{_n(y + 3)}" if mark.sign == "+" else ""
    return Markup('<path class="mark m{}" d="{}" fill="none" stroke="{}" stroke-width="1.6"/>').format(
        mark.colour % len(MARKS), path, colour
    )


def _label(label: Label, mark: int | None) -> Markup:
    """Return words as text; every run is put where the widths of its letters say, for both writers."""
    size = size_of(label.kind)
    x, y = label.at
    whole = width_of(label.words, size)
    x -= {"start": 0.0, "middle": whole / 2, "end": whole}[label.side]
    made = []
    for run in label.words:
        made.append(_run(run, x, y, size))
        x += run_width(run, size)
    shade = SOFT if label.kind != "part" else INK if mark is None else MARKS[mark]
    kind = label.kind if mark is None else f"{label.kind} m{mark}"
    return Markup('<text class="{}" font-size="{}" fill="{}">{}</text>').format(
        kind, _n(size), shade, Markup("").join(made)
    )


def _run(run: Run, x: float, y: float, size: float) -> Markup:
    slant = Markup(' font-style="italic"') if run.slanted else Markup("")
    if run.lowered:
        lower = Markup(' font-size="{}"').format(_n(size * SUBSCRIPT))
        return Markup('<tspan x="{}" y="{}"{}{}>{}</tspan>').format(
            _n(x), _n(y + DROP * size), lower, slant, escape(run.text)
        )
    return Markup('<tspan x="{}" y="{}"{}>{}</tspan>').format(_n(x), _n(y), slant, escape(run.text))


def _n(number: float) -> str:
    text = f"{number:.2f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text
