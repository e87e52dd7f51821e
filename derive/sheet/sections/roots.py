"""Poles and zeros at the nominal values, with proven error bounds."""

from __future__ import annotations

from derive.normalise.form import CertifiedRoot
from derive.sheet.document import Block, Column, Line, Paragraph, Section, Table, Text
from derive.sheet.figures import error_bound, root_in_hertz, root_value, side
from derive.sheet.view import View

ORDER = 65
SCOPE = "result"
FOLD = {1: "", 2: "double ", 3: "triple "}


def compose(view: View) -> tuple[Section, ...]:
    """Give the section; nothing where values are open or the response is a constant."""
    numbers = view.result.solution.numbers
    power = view.result.solution.form.power_of_s
    if numbers is None:
        return ()
    blocks: list[Block] = []
    if power:
        kind = "zero" if power > 0 else "pole"
        count = f"a {FOLD.get(abs(power), f'{abs(power)}-fold ')}{kind}"
        words = f"The factor s to the power {power} is {count} at the origin, besides those below."
        blocks.append(Paragraph((Text(words.replace("-1 is", "−1 is").replace("-2 is", "−2 is")),)))
    rows = [_row("pole", root) for root in numbers.poles if root.imaginary >= 0]
    rows += [_row("zero", root) for root in numbers.zeros if root.imaginary >= 0]
    if rows:
        headings = ("", "Value", "Distance from the origin", "Q", "Where", "Error bound, relative")
        columns = tuple(
            Column((Text(heading),), place in (1, 2, 3, 5)) for place, heading in enumerate(headings)
        )
        blocks.append(Table("Poles and zeros at the nominal values", columns, tuple(rows)))
    for root in numbers.coincident:
        if root.imaginary >= 0:
            words = (
                f"A pole and a zero coincide at {root_value(root)} at these values and cancel: without "
                "them the response is simpler, but only as long as the values match exactly."
            )
            blocks.append(Paragraph((Text(words),), "note"))
    return (view.section("Poles and zeros", tuple(blocks)),) if blocks else ()


def _row(kind: str, root: CertifiedRoot) -> tuple[Line, ...]:
    name = f"{kind} pair" if root.imaginary else kind
    name += f", {root.multiplicity}-fold" if root.multiplicity > 1 else ""
    quality = f"{root.quality:.4g}" if root.quality is not None else "–"
    cells = (name, root_value(root), root_in_hertz(root), quality, side(root), error_bound(root))
    return tuple((Text(cell),) for cell in cells)
