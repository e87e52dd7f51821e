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
    text: str = ""

    def get_intrinsic_size(self, resolution: float, font_size: float) -> tuple[float, float, float]:
        """Return width and height in CSS pixels for this size of text, and their ratio."""
        em = font_size / POINTS_AN_EM
        width, height = self.drawing.width * em, self.drawing.height * em
        return width, height, width / height if height else 1.0

    def draw(self, stream: Any, width: float, height: float, style: Any) -> None:
        """Draw the formula into a box of this size, y downwards."""
        if not self.drawing.width or not self.drawing.height:
            return
        x, y = width / self.drawing.width, height / self.drawing.height
        with stream.stacked():
            stream.set_color_rgb(0, 0, 0)
            stream.set_color_rgb(0, 0, 0, stroke=True)
            stream.transform(a=x, d=y)
            for placed in self.drawing.glyphs:
                with stream.stacked():
                    stream.transform(*placed.matrix)
                    stream.draw_x_object(stream.add_image(self.forms[placed.glyph], False, 1))
            for rule in self.drawing.rules:
                with stream.stacked():
                    stream.transform(*rule.matrix)
                    stream.set_line_width(rule.stroke)
                    stream.stream.append(f"{rule.operators} S".encode())
            if self.text:
                stream.stream.append(
                    self.hidden.operators(self.text, self.drawing.width, self.drawing.height)
                )
