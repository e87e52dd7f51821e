"""The one door to Typst: measures formulas, draws them as SVG and writes them as MathML.

Typst wins over every other road that was timed because all formulas of a sheet go through it in
one document: the start-up is paid once, and each formula then costs well under a millisecond.
"""

from __future__ import annotations

import json
import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import Any

from derive.errors import OutputError
from derive.render import templates

POINTS_AN_EM = 10.0

# Fractions within fractions stay at the size of the text: small ones are the first to be misread.
_FULL_SIZE = """\
#show math.equation.where(block: true): it => { show math.frac: x => math.display(x); it }
"""

_PREAMBLE = (
    """\
#set page(width: auto, height: auto, margin: 0pt, fill: none)
#set text(font: "STIX Two Math", size: 10pt, top-edge: "bounds", bottom-edge: "bounds")
#set par(leading: 0pt)
#show math.equation: set text(font: "STIX Two Math")
#show math.equation.where(block: true): set par(leading: .62em)
#set math.mat(row-gap: .6em, column-gap: 1.1em)
"""
    + _FULL_SIZE
)

# A box of known height set on the same baseline tells what hangs below that baseline.
_MEASURE = """\
#let size(x) = context {
  let m = measure(x)
  let raised = measure(box(width: 0pt, height: 200pt) + x)
  [#metadata((m.width.pt(), m.height.pt(), raised.height.pt() - 200)) <size>]
}
"""

_MATHML_PREAMBLE = '#show math.equation: set text(font: "STIX Two Math")\n' + _FULL_SIZE


@dataclass(frozen=True, slots=True)
class Formula:
    """Typst maths to be set as one picture, on a line of its own or within words."""

    source: str
    display: bool

    def markup(self) -> str:
        """Return the formula as it stands in a Typst document."""
        gap = " " if self.display else ""
        return f"${gap}{self.source}{gap}$"


@dataclass(frozen=True, slots=True)
class Size:
    """Width, height and depth below the baseline, each in em."""

    width: float
    height: float
    depth: float


class Measurer:
    """Measures formulas, each once, many in one run."""

    def __init__(self) -> None:
        self._known: dict[Formula, Size] = {}

    def __getitem__(self, formula: Formula) -> Size:
        if formula not in self._known:
            self.measure((formula,))
        return self._known[formula]

    def measure(self, formulas: Iterable[Formula]) -> None:
        """Measure all formulas that are not known yet."""
        new = [f for f in dict.fromkeys(formulas) if f not in self._known]
        if not new:
            return
        lines = [f"#size({f.markup()})" if f.display else f"#size[{f.markup()}]" for f in new]
        document = _PREAMBLE + _MEASURE + "\n".join(lines)
        for formula, found in zip(new, _query(document), strict=True):
            width, height, depth = (points / POINTS_AN_EM for points in found)
            self._known[formula] = Size(width, height, depth)


def draw(formulas: Sequence[Formula]) -> list[bytes]:
    """Return one SVG page for each formula, in order."""
    if not formulas:
        return []
    body = "\n#pagebreak()\n".join(f.markup() for f in formulas)
    pages = _compile(_PREAMBLE + body, "svg")
    return pages if isinstance(pages, list) else [pages]


def mathml(formulas: Sequence[Formula]) -> list[str]:
    """Return one `<math>` element for each formula, in order."""
    if not formulas:
        return []
    body = "\n".join(f'#html.elem("section")[{f.markup()}]' for f in formulas)
    page = _compile(_MATHML_PREAMBLE + body, "html")
    text = (page[0] if isinstance(page, list) else page).decode("utf-8")
    found = re.findall(r"<section>(?:<p>)?(<math.*?</math>)(?:</p>)?</section>", text, re.DOTALL)
    if len(found) != len(formulas):
        raise _refused(f"{len(formulas)} formulas gave {len(found)} elements")
    return found


def _query(document: str) -> list[list[float]]:
    typst = _typst()
    try:
        compiler = typst.Compiler(
            document.encode(), font_paths=[str(templates.fonts())], ignore_system_fonts=True
        )
        answer = compiler.query("<size>", field="value")
    except RuntimeError as problem:  # typst.TypstError is one
        raise _refused(problem) from problem
    found: list[list[float]] = json.loads(answer)
    return found


def _compile(document: str, form: str) -> bytes | list[bytes]:
    typst = _typst()
    try:
        made: bytes | list[bytes] = typst.compile(
            document.encode(),
            format=form,
            font_paths=[str(templates.fonts())],
            ignore_system_fonts=True,
        )
    except RuntimeError as problem:
        raise _refused(problem) from problem
    return made


def _typst() -> Any:
    """Import Typst only when a formula is to be set: a start of a tenth of a second."""
    import typst

    return typst


def _refused(problem: object) -> OutputError:
    return OutputError(
        f"the formulas could not be typeset: {problem}",
        cure="please report this with the topology file",
    )
