"""Formulas as images in WeasyPrint's cache: vector glyphs, with their words beneath to copy.

WeasyPrint documents the cache, but not what stands in it: an object with `get_intrinsic_size` and
`draw`, and for each shared form one with `id` and `get_x_object`. The version is pinned for that,
and a contract test holds it.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import pydyf

from derive.render.hidden_text import HiddenText
from derive.render.outline import Drawing
from derive.render.text_lines import TextLine
from derive.render.typesetter import POINTS_AN_EM


@dataclass(slots=True)
class GlyphForm:
    """One glyph's outline, kept once in the document whatever the number of its uses."""

    id: str
    operators: str
    reach: float = 60.0

    def get_x_object(self, interpolate: bool, dpi_ratio: float) -> Any:
        """Return the form that WeasyPrint writes into the document."""
        box = pydyf.Array([-self.reach, -self.reach, self.reach, self.reach])
        extra = pydyf.Dictionary({"Type": "/XObject", "Subtype": "/Form", "FormType": 1, "BBox": box})
        return pydyf.Stream([self.operators.encode()], extra, compress=True)


@dataclass(slots=True)
class FormulaImage:
    """A formula that WeasyPrint takes for an image: it says its size and draws itself."""

    drawing: Drawing
    forms: dict[str, GlyphForm]
    hidden: HiddenText
    lines: tuple[TextLine, ...] = ()

    def get_intrinsic_size(self, resolution: float, font_size: float) -> tuple[float, float, float]:
        """Return width and height in CSS pixels for this size of text, and their ratio."""
        em = font_size / POINTS_AN_EM
        width, height = self.drawing.width * em, self.drawing.height * em
        return width, height, width / height if height else 1.0

    def draw(self, stream: Any, width: float, height: float, style: Any) -> None:
        """Draw the formula into a box of this size, y downwards."""
        if not self.drawing.width or not self.drawing.height:
            return
        used = dict.fromkeys(placed.glyph for placed in self.drawing.glyphs)
        names = {glyph: stream.add_image(self.forms[glyph], False, 1) for glyph in used}
        with stream.stacked():
            stream.transform(a=width / self.drawing.width, d=height / self.drawing.height)
            stream.stream.append(self._operators(names))
            for line in self.lines:
                box = self.drawing.width * line.width, self.drawing.height * line.height
                top = self.drawing.height * line.top
                stream.stream.append(self.hidden.operators(line.text, *box, top))

    def _operators(self, names: dict[str, str]) -> bytes:
        """Return all that is drawn, in black, as one run of operators."""
        made = ["0 g 0 G"]
        for placed in self.drawing.glyphs:
            made.append(f"q {_numbers(placed.matrix)} cm /{names[placed.glyph]} Do Q")
        for rule in self.drawing.rules:
            made.append(f"q {_numbers(rule.matrix)} cm {rule.stroke:g} w {rule.operators} S Q")
        return "\n".join(made).encode()


def _numbers(matrix: tuple[float, ...]) -> str:
    return " ".join(f"{number:.5g}" for number in matrix)
