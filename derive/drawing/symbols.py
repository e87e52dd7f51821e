"""The symbols: what each look is drawn with, where its pins are, and how it is turned into its place.

Shapes are those of IEC 60617 where it is followed in practice, from memory; the zigzag resistor and the
diamond of controlled sources are common practice.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from derive.drawing.drawing import Box, Placed, Point, Ring, Stroke
from derive.drawing.scene import TRANSISTORS, Item, Look

HALF = 28.0  # from the middle of a symbol to its pins, and from one row to the next
WIDE = 42.0  # the same across an op amp
GROUND_HEIGHT = 13.0


@dataclass(frozen=True, slots=True)
class Sign:
    """A plus or minus within a symbol, which stays upright however the symbol is turned."""

    centre: Point
    plus: bool


Shape = Stroke | Ring | Sign


@dataclass(frozen=True, slots=True)
class Pose:
    """How a symbol lies: quarter turns clockwise, then left and right exchanged, or plus above minus."""

    turns: int = 0
    mirrored: bool = False
    plus_above: bool = False


@dataclass(frozen=True, slots=True)
class Template:
    """A symbol about its own middle, before it is turned."""

    pins: tuple[Point, ...]
    box: Box
    shapes: tuple[Shape, ...]


def template(item: Item, pose: Pose, *, rectangles: bool) -> Template:
    """Give an item's symbol as it is before it is turned."""
    look = item.look
    if look in TRANSISTORS:
        return _transistor(item)
    if look == "opamp":
        return _opamp(pose.plus_above)
    if look == "ground":
        return Template(((0, 0),), Box(-9, 0, 9, GROUND_HEIGHT), _GROUND)
    if look == "supply":
        return Template(((0, 0),), Box(-8, -4, 0, 4), (Ring((-4, 0), 4),))
    half, shapes = _TWO_PINS[look]
    if rectangles and look == "resistor":
        shapes = _RECTANGLE
    if item.dotted:
        shapes = (*shapes, Ring((-20, -6), 2, filled=True))
    return Template(((-HALF, 0), (HALF, 0)), Box(-HALF, -half, HALF, half), shapes)


def placed(item: Item, centre: Point, pose: Pose, *, rectangles: bool = False) -> Placed:
    """Give an item's symbol turned and in its place."""
    shape = template(item, pose, rectangles=rectangles)

    def put(point: Point) -> Point:
        x, y = point
        for _ in range(pose.turns):
            x, y = -y, x
        return (round(centre[0] + (-x if pose.mirrored else x), 3), round(centre[1] + y, 3))

    corners = [put((shape.box.left, shape.box.top)), put((shape.box.right, shape.box.bottom))]
    xs, ys = sorted(x for x, _ in corners), sorted(y for _, y in corners)
    pins = tuple((name, put(at)) for (name, _), at in zip(item.pins, shape.pins, strict=True))
    shapes = tuple(made for part in shape.shapes for made in _moved(part, put))
    return Placed(item.name, item.look, pins, Box(xs[0], ys[0], xs[1], ys[1]), shapes)


def _moved(shape: Shape, put: Callable[[Point], Point]) -> tuple[Stroke | Ring, ...]:
    match shape:
        case Stroke(points, closed, filled, bend):
            return (Stroke(tuple(map(put, points)), closed, filled, bend),)
        case Ring(centre, radius, filled):
            return (Ring(put(centre), radius, filled),)
        case Sign(centre, plus):
            x, y = put(centre)
            across = Stroke(((x - 3, y), (x + 3, y)))
            return (across, Stroke(((x, y - 3), (x, y + 3)))) if plus else (across,)


def _line(*points: Point) -> Stroke:
    return Stroke(points)


def _arrow(tip: Point, back: Point, half: float = 2.8) -> Stroke:
    """Give a filled head whose base has its middle at `back`."""
    (x, y), (u, v) = tip, back
    length = ((x - u) ** 2 + (y - v) ** 2) ** 0.5
    across, down = (y - v) / length * half, (u - x) / length * half
    return Stroke((tip, (u + across, v + down), (u - across, v - down)), closed=True, filled=True)


def _leads(reach: float) -> tuple[Stroke, ...]:
    return _line((-HALF, 0), (-reach, 0)), _line((reach, 0), (HALF, 0))


def _coil() -> tuple[Shape, ...]:
    """Draw four half turns, each as two curves that are nearly quarters of a circle."""
    points: list[Point] = [(-16, 0)]
    for turn in range(4):
        left = -16 + 8 * turn
        points += [(left, -2.2), (left + 1.8, -5), (left + 4, -5)]
        points += [(left + 6.2, -5), (left + 8, -2.2), (left + 8, 0)]
    return (*_leads(16), Stroke(tuple(points), bend=True))


def _zigzag() -> tuple[Shape, ...]:
    middle = [(-15 + 2.5 + 5 * k, 5.0 if k % 2 else -5.0) for k in range(6)]
    return (Stroke(((-HALF, 0), (-15, 0), *middle, (15, 0), (HALF, 0))),)


def _diamond(*inside: Shape) -> tuple[Shape, ...]:
    return (*_leads(14), Stroke(((-14, 0), (0, -12), (14, 0), (0, 12)), closed=True), *inside)


def _circle(*inside: Shape) -> tuple[Shape, ...]:
    return (*_leads(12), Ring((0, 0), 12), *inside)


_THROUGH: tuple[Shape, ...] = (_line((-8, 0), (4, 0)), _arrow((8, 0), (2, 0)))
_POLES: tuple[Shape, ...] = (Sign((-6, 0), plus=True), Sign((6, 0), plus=False))
_RECTANGLE: tuple[Shape, ...] = (
    *_leads(15),
    Stroke(((-15, -5.5), (15, -5.5), (15, 5.5), (-15, 5.5)), closed=True),
)
_GROUND: tuple[Shape, ...] = (
    _line((0, 0), (0, 5)),
    _line((-9, 5), (9, 5)),
    _line((-5.5, 9), (5.5, 9)),
    _line((-2, 13), (2, 13)),
)
# Half of what the symbol takes up across, and its lines.
_TWO_PINS: dict[Look, tuple[float, tuple[Shape, ...]]] = {
    "resistor": (6, _zigzag()),
    "capacitor": (9, (*_leads(3), _line((-3, -9), (-3, 9)), _line((3, -9), (3, 9)))),
    "inductor": (8, _coil()),
    "diode": (
        8,
        (*_leads(7), Stroke(((-7, -7), (-7, 7), (7, 0)), closed=True), _line((7, -7), (7, 7))),
    ),
    "box": (8, (*_leads(16), Stroke(((-16, -8), (16, -8), (16, 8), (-16, 8)), closed=True))),
    "voltage drive": (12, _circle(*_POLES)),
    "current drive": (12, _circle(*_THROUGH)),
    "controlled voltage": (12, _diamond(*_POLES)),
    "controlled current": (12, _diamond(*_THROUGH)),
}


def _transistor(item: Item) -> Template:
    pins: list[Point] = [(-HALF, 0), (0, -HALF), (0, HALF)]
    box = Box(-HALF, -HALF, 3, HALF)
    n_type = item.look in ("npn", "n-channel mosfet", "n-channel jfet")
    if item.look in ("npn", "pnp"):
        return Template(tuple(pins), box, _bipolar(n_type))
    if item.look.endswith("jfet"):
        return Template(tuple(pins), box, _jfet(n_type))
    low = 1 if n_type else -1
    source = 2 if n_type else 1
    if len(item.pins) == 3:
        return Template(tuple(pins), box, _mosfet(n_type, _bare_arrow(n_type)))
    inner = (_line((-9, 0), (0, 0)), _arrow((-8, 0), (-2, 0)) if n_type else _arrow((-1, 0), (-7, 0)))
    if item.node(3) == item.node(source):
        pins.append(pins[source])
        return Template(tuple(pins), box, _mosfet(n_type, (*inner, _line((0, 0), (0, 9 * low)))))
    pins.append((HALF, 0))
    return Template(
        tuple(pins),
        Box(-HALF, -HALF, HALF, HALF),
        _mosfet(n_type, (*inner, _line((0, 0), (HALF, 0)))),
    )


def _bare_arrow(n_type: bool) -> tuple[Shape, ...]:
    """Mark the source of a transistor whose bulk is not shown."""
    return (_arrow((0, 9), (-6, 9)),) if n_type else (_arrow((-7, -9), (-1, -9)),)


def _bipolar(n_type: bool) -> tuple[Shape, ...]:
    bar = _line((-12, -12), (-12, 12))
    upper, lower = ((-12, -5), (0, -14), (0, -HALF)), ((-12, 5), (0, 14), (0, HALF))
    arrow = _arrow((-1, 13.25), (-5.8, 9.65)) if n_type else _arrow((-11, -5.75), (-6.2, -9.35))
    return (_line((-HALF, 0), (-12, 0)), bar, Stroke(upper), Stroke(lower), arrow)


def _jfet(n_type: bool) -> tuple[Shape, ...]:
    return (*_channel(), _line((-HALF, 0), (-9, 0)), *_gate_arrow(n_type))


def _gate_arrow(n_type: bool) -> tuple[Shape, ...]:
    return (_arrow((-10, 0), (-16, 0)),) if n_type else (_arrow((-17, 0), (-11, 0)),)


def _channel() -> tuple[Shape, ...]:
    return (
        _line((-9, -13), (-9, 13)),
        _line((-9, -9), (0, -9), (0, -HALF)),
        _line((-9, 9), (0, 9), (0, HALF)),
    )


def _mosfet(n_type: bool, bulk: tuple[Shape, ...]) -> tuple[Shape, ...]:
    gate = (_line((-HALF, 0), (-14, 0)), _line((-14, -11), (-14, 11)))
    return (*gate, *_channel(), *bulk)


def _opamp(plus_above: bool) -> Template:
    plus, minus = (-HALF, HALF) if plus_above else (HALF, -HALF)
    shapes = (
        Stroke(((-30, -38), (-30, 38), (32, 0)), closed=True),
        _line((-WIDE, plus), (-30, plus)),
        _line((-WIDE, minus), (-30, minus)),
        _line((32, 0), (WIDE, 0)),
        Sign((-23, plus * 0.78), plus=True),
        Sign((-23, minus * 0.78), plus=False),
    )
    pins = ((-WIDE, plus), (-WIDE, minus), (WIDE, 0))
    return Template(pins, Box(-WIDE, -38, WIDE, 38), shapes)
