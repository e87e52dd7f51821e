"""Draws poles and zeros in the plane of s: the angle as it is, the distance from the origin by decades of frequency.

A linear plane shows the largest root alone. Here rings are decades, so that a corner of 40 Hz and one of 400 MHz have
their places; left is left, and the angle from the negative real axis is still that of the damping.
"""

from __future__ import annotations

import math
from collections.abc import Iterator

from markupsafe import Markup

from derive.quantities.dimension import FREQUENCY
from derive.quantities.format import engineering
from derive.render.plot import COLOURS, FAINT, FONT, INK, LINE, NARROW, PAPER, SOFT, WIDTH, lowered
from derive.sheet.document import RootMap, RootMaps

IN_A_ROW = 3
CELL = WIDTH / IN_A_ROW
RADIUS = 82.0
TOP, FOOT = 16.0, 26.0
HEIGHT = TOP + 2 * RADIUS + FOOT
INNER = 0.6  # of a decade: the room round the origin
MOST_LABELS = 4
POLE, ZERO = COLOURS[1], COLOURS[0]
# The direction in which rings are labelled: roots are seldom there.
LABELS_AT = -math.radians(52)


def root_maps_svg(figure: RootMaps, number: int) -> Markup:
    """Return the maps as one `<svg>` element with its title and its words for those who do not see it."""
    alone = len(figure.maps) == 1
    width = NARROW if alone else WIDTH
    rows = math.ceil(len(figure.maps) / IN_A_ROW)
    height = rows * HEIGHT + 20
    parts = [
        Markup(
            '<svg xmlns="http://www.w3.org/2000/svg" class="plot rootmap" role="img" viewBox="0 0 {} {}" '
            'width="{}" height="{}" aria-labelledby="plot-{}-title plot-{}-words" font-family="{}">'
        ).format(_n(width), _n(height), _n(width), _n(height), number, number, FONT),
        Markup('<title id="plot-{}-title">{}</title>').format(number, figure.caption),
        Markup('<desc id="plot-{}-words">{}</desc>').format(number, figure.words),
    ]
    low, high = _decades(figure)
    for place, one in enumerate(figure.maps):
        x = width / 2 if alone else CELL * (place % IN_A_ROW) + CELL / 2
        y = HEIGHT * (place // IN_A_ROW) + TOP + RADIUS
        parts += _map(one, x, y, low, high)
    parts += _legend(height - 8, width)
    return Markup("\n").join([*parts, Markup("</svg>")])


def _decades(figure: RootMaps) -> tuple[int, int]:
    """Give the decades of frequency that all maps share."""
    found = [
        math.log10(math.hypot(re, im) / (2 * math.pi))
        for one in figure.maps
        for re, im, _ in (*one.poles, *one.zeros)
        if re or im
    ]
    low = math.floor(min(found, default=0.0) + 1e-9)
    return low, max(math.ceil(max(found, default=1.0) - 1e-9), low + 1)


def _map(one: RootMap, x: float, y: float, low: int, high: int) -> Iterator[Markup]:
    stride = math.ceil((high - low + 1) / MOST_LABELS)
    for power in range(low, high + 1):
        labelled = (high - power) % stride == 0
        radius = _distance(power, low, high)
        colour = LINE if labelled else FAINT
        yield Markup(
            '<circle class="{}" cx="{}" cy="{}" r="{}" fill="none" stroke="{}" stroke-width="0.8"/>'
        ).format("grid" if labelled else "fine", _n(x), _n(y), _n(radius), colour)
    for dx, dy in ((RADIUS, 0.0), (0.0, RADIUS)):
        yield Markup(
            '<line class="guide" x1="{}" y1="{}" x2="{}" y2="{}" stroke="{}" stroke-width="0.9"/>'
        ).format(_n(x - dx), _n(y - dy), _n(x + dx), _n(y + dy), SOFT)
    for power in range(low, high + 1):
        if (high - power) % stride == 0:
            radius = _distance(power, low, high)
            words = engineering(10.0**power, FREQUENCY, 3, unit="Hz")
            place = x + radius * math.cos(LABELS_AT) + 2, y - radius * math.sin(LABELS_AT) + 3
            yield _text(words, *place, "start", "tick", SOFT, 9)
    yield _text("σ", x + RADIUS + 4, y + 3.5, "start", "name", INK, 11)
    yield _text("jω", x + 3, y - RADIUS - 4, "start", "name", INK, 11)
    yield _text(lowered(one.name), x, y + RADIUS + 17, "middle", "name", INK, 12)
    yield from _roots(one, x, y, low, high)


def _roots(one: RootMap, x: float, y: float, low: int, high: int) -> Iterator[Markup]:
    roots = [("zero", root) for root in one.zeros] + [("pole", root) for root in one.poles]
    if one.origin:
        roots.append(("zero" if one.origin > 0 else "pole", (0.0, 0.0, abs(one.origin))))
    for kind, (re, im, count) in roots:
        size = math.hypot(re, im)
        where = x, y
        if size:
            radius = _distance(math.log10(size / (2 * math.pi)), low, high)
            where = x + radius * re / size, y - radius * im / size
        yield Markup("<g>{}{}</g>").format(_title(kind, re, im, count), _mark(kind, *where))
        if count > 1:
            yield _text(f"{count}×", where[0] + 5, where[1] - 5, "start", "tick", INK, 9)


def _title(kind: str, re: float, im: float, count: int) -> Markup:
    size = math.hypot(re, im) / (2 * math.pi)
    what = {1: "", 2: "double "}.get(count, f"{count}-fold ") + kind
    if not size:
        return Markup("<title>{} at the origin</title>").format(what)
    side = "left" if re < 0 else "right"
    words = f"{what}, {engineering(size, FREQUENCY, 5, unit='Hz')}, " + (
        f"{side} half-plane" if re else "on the imaginary axis"
    )
    return Markup("<title>{}</title>").format(words)


def _mark(kind: str, x: float, y: float) -> Markup:
    if kind == "pole":
        a = 4
        arms = f"M{_n(x - a)} {_n(y - a)}L{_n(x + a)} {_n(y + a)}M{_n(x - a)} {_n(y + a)}L{_n(x + a)} {_n(y - a)}"
        return Markup(
            '<path class="spot cross c1" d="{}" fill="none" stroke="{}" stroke-width="1.8"/>'
        ).format(arms, POLE)
    return Markup(
        '<circle class="spot ring c0" cx="{}" cy="{}" r="4.2" fill="{}" stroke="{}" stroke-width="1.6"/>'
    ).format(_n(x), _n(y), PAPER, ZERO)


def _distance(power: float, low: int, high: int) -> float:
    return RADIUS * (power - low + INNER) / (high - low + INNER)


def _legend(y: float, width: float) -> Iterator[Markup]:
    yield _mark("pole", 12, y - 4)
    yield _text("pole", 22, y, "start", "name", INK, 12)
    yield _mark("zero", 62, y - 4)
    yield _text("zero", 72, y, "start", "name", INK, 12)
    words = "rings: decades of frequency; angle true"
    yield _text(words, width - 4, y, "end", "name", SOFT, 11)


def _text(
    words: str | Markup, x: float, y: float, anchor: str, kind: str, colour: str, size: float
) -> Markup:
    return Markup(
        '<text class="{}" x="{}" y="{}" text-anchor="{}" font-size="{}" fill="{}">{}</text>'
    ).format(kind, _n(x), _n(y), anchor, _n(size), colour, words)


def _n(number: float) -> str:
    text = f"{number:.2f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text
