"""Reads one page of Typst's SVG as glyph outlines and rules, in PDF's own operators.

The SVG that Typst writes for a formula knows few elements: a symbol for each glyph, uses of it, and
stroked lines for bars and roots. Anything else is refused rather than lost.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from xml.etree import ElementTree

_SVG = "{http://www.w3.org/2000/svg}"
_HREF = "{http://www.w3.org/1999/xlink}href"
_STEP = re.compile(r"([A-Za-z])|(-?[0-9.]+(?:e-?[0-9]+)?)")

Matrix = tuple[float, float, float, float, float, float]


@dataclass(frozen=True, slots=True)
class Placed:
    """A glyph, by the key of its outline, and where it stands on the page."""

    glyph: str
    matrix: Matrix


@dataclass(frozen=True, slots=True)
class Rule:
    """A stroked path and its width."""

    operators: str
    stroke: float
    matrix: Matrix


@dataclass(frozen=True, slots=True)
class Drawing:
    """A formula as drawn: its size in points, y downwards from the top, and what stands in it."""

    width: float
    height: float
    glyphs: tuple[Placed, ...]
    rules: tuple[Rule, ...]


def read_page(svg: bytes, outlines: dict[str, str]) -> Drawing:
    """Return the drawing of a page; its glyphs' outlines are added to `outlines`."""
    root = ElementTree.fromstring(svg)
    glyphs: list[Placed] = []
    rules: list[Rule] = []
    for child in root:
        if child.tag == f"{_SVG}defs":
            _read_symbols(child, outlines)
        else:
            _read(child, (1.0, 0.0, 0.0, 1.0, 0.0, 0.0), glyphs, rules)
    width, height = (float(part) for part in root.attrib["viewBox"].split()[2:])
    return Drawing(width, height, tuple(glyphs), tuple(rules))


def _read_symbols(defs: ElementTree.Element, outlines: dict[str, str]) -> None:
    for symbol in defs:
        key = symbol.attrib["id"]
        if key not in outlines:
            outlines[key] = " ".join(path_operators(path.attrib["d"]) for path in symbol) + " f"


def _read(element: ElementTree.Element, outer: Matrix, glyphs: list[Placed], rules: list[Rule]) -> None:
    matrix = _times(_transform(element.attrib.get("transform", "")), outer)
    if element.tag == f"{_SVG}g":
        for child in element:
            _read(child, matrix, glyphs, rules)
    elif element.tag == f"{_SVG}use":
        shift = (float(element.attrib.get("x", 0)), float(element.attrib.get("y", 0)))
        glyphs.append(Placed(element.attrib[_HREF][1:], _times((1, 0, 0, 1, *shift), matrix)))
    elif element.tag == f"{_SVG}path" and element.attrib.get("stroke", "none") != "none":
        stroke = float(element.attrib["stroke-width"])
        rules.append(Rule(path_operators(element.attrib["d"]), stroke, matrix))
    else:
        raise ValueError(f"a formula's drawing holds an unknown element: {element.tag}")


def _transform(text: str) -> Matrix:
    numbers = [float(part) for part in re.findall(r"-?[0-9.]+(?:e-?[0-9]+)?", text)]
    if text.startswith("translate"):
        return (1, 0, 0, 1, numbers[0], numbers[1] if len(numbers) > 1 else 0.0)
    if text.startswith("matrix"):
        a, b, c, d, e, f = numbers
        return (a, b, c, d, e, f)
    if text:
        raise ValueError(f"a formula's drawing holds an unknown transform: {text}")
    return (1, 0, 0, 1, 0, 0)


def _times(inner: Matrix, outer: Matrix) -> Matrix:
    a, b, c, d, e, f = inner
    g, h, i, j, k, m = outer
    return (
        a * g + b * i,
        a * h + b * j,
        c * g + d * i,
        c * h + d * j,
        e * g + f * i + k,
        e * h + f * j + m,
    )


def path_operators(path: str) -> str:
    """Return the PDF operators of an SVG path; quadratic curves become the equal cubic ones."""
    made: list[str] = []
    x = y = start_x = start_y = 0.0
    letter = ""
    numbers: list[float] = []
    steps = [m.groups() for m in _STEP.finditer(path)]
    for i, (command, number) in enumerate(steps):
        if command:
            letter = command
            numbers = []
        else:
            numbers.append(float(number))
        if len(numbers) < _ARGUMENTS[letter.upper()]:
            continue
        if letter in "Zz":
            made.append("h")
            x, y = start_x, start_y
            continue
        points = _absolute(letter, numbers, x, y)
        numbers = []
        end = points[-1]
        if letter in "Mm":
            start_x, start_y = end
            # A move that another move follows at once draws nothing.
            if i + 1 < len(steps) and steps[i + 1][0] not in ("M", "m"):
                made.append(f"{_points([end])} m")
        elif letter in "LlHhVv":
            made.append(f"{_points([end])} l")
        else:
            made.append(f"{_points(points if letter in 'Cc' else _raised((x, y), points))} c")
        x, y = end
    return " ".join(made)


_ARGUMENTS = {"M": 2, "L": 2, "H": 1, "V": 1, "Q": 4, "C": 6, "Z": 0}
_Point = tuple[float, float]


def _absolute(letter: str, numbers: list[float], x: float, y: float) -> list[_Point]:
    left, up = (x, y) if letter.islower() else (0.0, 0.0)
    if letter in "Hh":
        return [(left + numbers[0], y)]
    if letter in "Vv":
        return [(x, up + numbers[0])]
    pairs = zip(numbers[::2], numbers[1::2], strict=True)
    return [(left + a, up + b) for a, b in pairs]


def _raised(start: _Point, points: list[_Point]) -> list[_Point]:
    (x0, y0), (x1, y1), (x2, y2) = start, *points
    return [
        ((x0 + 2 * x1) / 3, (y0 + 2 * y1) / 3),
        ((x2 + 2 * x1) / 3, (y2 + 2 * y1) / 3),
        (x2, y2),
    ]


def _points(points: list[_Point]) -> str:
    return " ".join(f"{_short(a)} {_short(b)}" for a, b in points)


def _short(number: float) -> str:
    text = f"{number:.3f}".rstrip("0").rstrip(".")
    return "0" if text in ("-0", "") else text
