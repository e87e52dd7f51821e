"""Draws a plot as SVG, for screen and paper alike.

Written here and not by a plotting library: a plot of a few curves needs lines and words only, is drawn
in milliseconds, takes the fonts of the page and, on a screen, its colours by night, and keeps the same
bytes whatever is installed.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass

from markupsafe import Markup, escape

from derive.expressions.unicode_text import name_to_unicode
from derive.render.plot_scale import Scale, scale_of
from derive.sheet.document import Area, Axis, Curve, Panel, Plot, Spot

# All lengths in units of which the figure is 640 wide: 174 mm on paper.
WIDTH, LEFT, RIGHT = 640.0, 46.0, 26.0
FIELD = WIDTH - LEFT - RIGHT
NARROW = 312.0  # of a plot that has another beside it
HEIGHTS = {1: (250.0,), 2: (140.0, 94.0)}
NARROW_HEIGHT = 130.0
OTHER_HEIGHT = 140.0
TITLE, GAP, FOOT = 20.0, 10.0, 38.0
LEGEND_ROW, SAMPLE, LETTER = 19.0, 34.0, 5.7
SIZE, SMALL = 12.0, 11.0
FONT = "STIX Two Text, STIX Two Math, Georgia, serif"

_NAME = re.compile(r"\b([A-Za-z]+)_(\w+)")
SHADE = "#7f9cc0"  # of what lies between two curves
INK, SOFT, LINE, FAINT, PAPER = "#14181d", "#46505a", "#c3cad1", "#e6eaee", "#ffffff"
# Told apart by those who see no red or no green, dark enough for thin lines on white, and of different
# lightness; style.css holds their like for the night.
COLOURS = ("#03265e", "#a63d03", "#399e7c", "#823ba3", "#be8500", "#4e5a68")
# Told apart without any colour; one more of these than of the colours, so that pairs do not repeat soon.
DASHES = ("", "10 4", "2.2 3", "12 3.5 2.2 3.5", "5.5 2.5", "10 3 2.2 3 2.2 3", "18 4")


@dataclass(frozen=True, slots=True)
class _Field:
    """A panel's place on the figure with its two scales."""

    panel: Panel
    top: float
    height: float
    width: float
    across: Scale
    up: Scale

    @property
    def right(self) -> float:
        """Where the field ends."""
        return LEFT + self.width

    def x(self, value: float) -> float:
        return LEFT + self.width * self.across.place(value)

    def y(self, value: float) -> float:
        return self.top + self.height * (1 - self.up.place(value))


def plot_svg(plot: Plot, number: int) -> Markup:
    """Return a plot as one `<svg>` element with its title and its words for those who do not see it.

    Given: the figure's number on the page, which makes its identifiers its own.
    """
    names = _names(plot)
    areas = tuple(dict.fromkeys(area.name for panel in plot.panels for area in panel.areas))
    width = NARROW if plot.narrow else WIDTH
    room = NARROW - LEFT - RIGHT if plot.narrow else FIELD
    rows = _legend_rows(names, areas, room)
    fields = _fields(plot, LEGEND_ROW * len(rows) + (4.0 if rows else 0.0), room)
    height = fields[-1].top + fields[-1].height + FOOT if fields else FOOT
    parts = [
        Markup(
            '<svg xmlns="http://www.w3.org/2000/svg" class="plot" role="img" viewBox="0 0 {} {}" '
            'width="{}" height="{}" aria-labelledby="plot-{}-title plot-{}-words" font-family="{}"{}>'
        ).format(
            *(_n(width), _n(height), _n(width), _n(height)), number, number, FONT, _data(plot, fields)
        ),
        Markup('<title id="plot-{}-title">{}</title>').format(number, plot.caption),
        Markup('<desc id="plot-{}-words">{}</desc>').format(number, plot.words),
        *_legend(rows, names, room),
    ]
    for place, field in enumerate(fields):
        parts += _field(field, names, f"plot-{number}-field-{place}")
    if fields:
        parts += _across(plot.across, fields[-1])
    return Markup("\n").join([*parts, Markup("</svg>")])


def _data(plot: Plot, fields: list[_Field]) -> Markup:
    """Return what a script needs to read the curves off: the axis across, and where it lies."""
    if not fields:
        return Markup("")
    return Markup(' data-across="{}" data-span="{} {}" data-unit="{}" data-title="{}"').format(
        _scale(fields[0].across), _n(LEFT), _n(fields[0].width), plot.across.unit, plot.across.title
    )


def _scale(scale: Scale) -> str:
    return f"{scale.low!r} {scale.high!r} {'decades' if scale.decades else 'linear'}"


def _names(plot: Plot) -> dict[str, int]:
    """Give each curve's name its place, which is its look."""
    names = dict.fromkeys(curve.name for panel in plot.panels for curve in panel.curves)
    return {name: place for place, name in enumerate(names)}


def _fields(plot: Plot, top: float, room: float) -> list[_Field]:
    heights = HEIGHTS.get(len(plot.panels), (OTHER_HEIGHT,) * len(plot.panels))
    if plot.narrow:
        heights = (NARROW_HEIGHT,) * len(plot.panels)
    everywhere = [x for panel in plot.panels for curve in panel.curves for x, _ in curve.points]
    across = scale_of(plot.across, everywhere)
    made = []
    for panel, height in zip(plot.panels, heights, strict=True):
        top += TITLE
        ups = [y for curve in panel.curves for _, y in curve.points]
        ups += [y for area in panel.areas for _, *pair in area.points for y in pair]
        made.append(_Field(panel, top, height, room, across, scale_of(panel.up, ups)))
        top += height + GAP
    return made


def _field(field: _Field, names: dict[str, int], clip: str) -> Iterator[Markup]:
    bottom, right = field.top + field.height, field.right
    yield _text(lowered(axis_title(field.panel.up)), LEFT, field.top - 7, "start", "name", INK, SIZE)
    for value in field.across.fine:
        yield _line(field.x(value), field.top, field.x(value), bottom, "fine", FAINT, 0.7)
    for value, _ in field.across.ticks:
        yield _line(field.x(value), field.top, field.x(value), bottom, "grid", LINE, 0.8)
    for value, label in field.up.ticks:
        y = field.y(value)
        yield _line(LEFT, y, right, y, "grid", LINE, 0.8)
        yield _text(label, LEFT - 6, y + 3.8, "end", "tick", SOFT, SMALL)
    for value in field.panel.guides:
        if field.up.low < value < field.up.high:
            y = field.y(value)
            yield _line(LEFT, y, right, y, "guide", SOFT, 1.0)
    yield Markup(
        '<rect class="frame" x="{}" y="{}" width="{}" height="{}" fill="none" stroke="{}" stroke-width="1"/>'
    ).format(_n(LEFT), _n(field.top), _n(field.width), _n(field.height), INK)
    # A little wider than the frame, so that a curve along an edge keeps its full width.
    yield Markup('<clipPath id="{}"><rect x="{}" y="{}" width="{}" height="{}"/></clipPath>').format(
        clip, _n(LEFT), _n(field.top - 1), _n(field.width), _n(field.height + 2)
    )
    yield _open(field, clip)
    for area in field.panel.areas:
        yield _area(area, field)
    for curve in field.panel.curves:
        yield from _curve(curve, field, names[curve.name])
    yield Markup("</g>")
    for spot in field.panel.spots:
        if _inside(spot, field):
            yield _spot(spot, field, names.get(spot.curve, 0))


def _open(field: _Field, clip: str) -> Markup:
    """Return the beginning of the group of a field's curves, with what a script needs to read them off."""
    up = field.panel.up
    return Markup(
        '<g class="field" clip-path="url(#{})" data-top="{}" data-height="{}" data-up="{}" data-title="{}" '
        'data-unit="{}">'
    ).format(
        *(clip, _n(field.top), _n(field.height), _scale(field.up), up.title),
        "°" if up.scale == "degrees" else up.unit,
    )


def _area(area: Area, field: _Field) -> Markup:
    shown = [p for p in area.points if field.across.shows(p[0]) and all(map(field.up.shows, p[1:]))]
    there = [f"{_n(field.x(x))},{_n(field.y(low))}" for x, low, _ in shown]
    back = [f"{_n(field.x(x))},{_n(field.y(high))}" for x, _, high in reversed(shown)]
    return Markup('<polygon class="area" points="{}" fill="{}" fill-opacity="0.35"/>').format(
        " ".join([*there, *back]), SHADE
    )


def _curve(curve: Curve, field: _Field, look: int) -> Iterator[Markup]:
    shown = [(x, y) for x, y in curve.points if field.across.shows(x) and field.up.shows(y)]
    if len(shown) > 1:
        points = " ".join(f"{_n(field.x(x))},{_n(field.y(y))}" for x, y in shown)
        yield Markup('<polyline points="{}" {} data-name="{}"/>').format(points, _look(look), curve.name)


def _spot(spot: Spot, field: _Field, look: int) -> Markup:
    x, y, colour = field.x(spot.across), field.y(spot.up), COLOURS[look % len(COLOURS)]
    kind = Markup('class="spot {} c{}"').format(spot.shape, look % len(COLOURS))
    if spot.shape == "cross":
        arms = f"M{_n(x - 4)} {_n(y - 4)}L{_n(x + 4)} {_n(y + 4)}M{_n(x - 4)} {_n(y + 4)}L{_n(x + 4)} {_n(y - 4)}"
        return Markup('<path {} d="{}" fill="none" stroke="{}" stroke-width="1.8"/>').format(
            kind, arms, colour
        )
    fill = colour if spot.shape == "dot" else PAPER
    return Markup('<circle {} cx="{}" cy="{}" r="3.6" fill="{}" stroke="{}" stroke-width="1.6"/>').format(
        kind, _n(x), _n(y), fill, colour
    )


def _inside(spot: Spot, field: _Field) -> bool:
    if not (field.across.shows(spot.across) and field.up.shows(spot.up)):
        return False
    return all(0 <= p <= 1 for p in (field.across.place(spot.across), field.up.place(spot.up)))


def _across(axis: Axis, field: _Field) -> Iterator[Markup]:
    """Give what stands under the lowest panel."""
    bottom = field.top + field.height
    for value, label in field.across.ticks:
        yield _text(label, field.x(value), bottom + 15, "middle", "tick", SOFT, SMALL)
    yield _text(_under(axis), LEFT + field.width / 2, bottom + 32, "middle", "name", INK, SIZE)


def _under(axis: Axis) -> str:
    # On a logarithmic axis every division is labelled with its unit.
    return axis.title if axis.scale == "decades" else axis_title(axis)


def axis_title(axis: Axis) -> str:
    """Return what is written at an axis: "Magnitude in dB"."""
    return f"{axis.title} in {axis.unit}" if axis.unit else axis.title


def _legend_rows(names: dict[str, int], areas: tuple[str, ...], room: float) -> list[list[str]]:
    """Fill rows with names, each after a sample of its line or shade; one curve needs no legend."""
    if len(names) + len(areas) < 2:
        return []
    rows: list[list[str]] = [[]]
    taken = 0.0
    for name in (*names, *areas):
        width = _entry(name, room)
        if rows[-1] and taken + width > room:
            rows.append([])
            taken = 0.0
        rows[-1].append(name)
        taken += width
    return rows


def _entry(name: str, room: float) -> float:
    return SAMPLE + 8 + LETTER * len(_short(name, room)) + 16


def _short(name: str, room: float) -> str:
    """Return a name that fits a row by itself."""
    most = int((room - SAMPLE - 30) / LETTER)
    return name if len(name) <= most else name[: most - 1] + "…"


def _legend(rows: list[list[str]], names: dict[str, int], room: float) -> Iterator[Markup]:
    for place, row in enumerate(rows):
        x, y = LEFT, LEGEND_ROW * place + 11
        for name in row:
            if name in names:
                ends = f"{_n(x)},{_n(y)} {_n(x + SAMPLE)},{_n(y)}"
                yield Markup('<polyline points="{}" {}/>').format(ends, _look(names[name]))
            else:
                yield Markup(
                    '<rect class="area" x="{}" y="{}" width="{}" height="9" fill="{}" fill-opacity="0.35"/>'
                ).format(_n(x), _n(y - 5), _n(SAMPLE), SHADE)
            yield _text(_short(name, room), x + SAMPLE + 8, y + 4, "start", "name", INK, SIZE)
            x += _entry(name, room)


def _look(place: int) -> Markup:
    """Return colour and dashes of a curve by its place among the names."""
    colour, dashes = place % len(COLOURS), DASHES[place % len(DASHES)]
    dashed = Markup(' stroke-dasharray="{}"').format(dashes) if dashes else ""
    return Markup(
        'class="curve c{}" fill="none" stroke="{}" stroke-width="2" stroke-linejoin="round"{}'
    ).format(colour, COLOURS[colour], dashed)


def _line(x1: float, y1: float, x2: float, y2: float, kind: str, colour: str, width: float) -> Markup:
    return Markup(
        '<line class="{}" x1="{}" y1="{}" x2="{}" y2="{}" stroke="{}" stroke-width="{}"/>'
    ).format(kind, _n(x1), _n(y1), _n(x2), _n(y2), colour, _n(width))


def _text(
    words: str | Markup, x: float, y: float, anchor: str, kind: str, colour: str, size: float
) -> Markup:
    return Markup(
        '<text class="{}" x="{}" y="{}" text-anchor="{}" font-size="{}" fill="{}">{}</text>'
    ).format(kind, _n(x), _n(y), anchor, _n(size), colour, words)


def lowered(words: str) -> Markup:
    """Return words with what follows the first _ of a name set lower: A with v below it for "A_v"."""
    parts = _NAME.split(words)
    made = [escape(parts[0])]
    for base, below, rest in zip(parts[1::3], parts[2::3], parts[3::3], strict=True):
        made.append(
            Markup('{}<tspan dy="2.5" font-size="75%">{}</tspan>').format(
                name_to_unicode(base), name_to_unicode(below)
            )
        )
        made.append(Markup('<tspan dy="-2.5">{}</tspan>').format(rest) if rest else Markup(""))
    return Markup("").join(made)


def _n(number: float) -> str:
    text = f"{number:.2f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text
