"""A result at the nominal values in one line: its level in the pass band, its gain, poles and zeros."""

from __future__ import annotations

from fractions import Fraction

from derive.expressions.tree import Name
from derive.normalise.form import CertifiedRoot, NominalNumbers
from derive.quantities.dimension import RATIO
from derive.sheet.bandwidth import peak_of
from derive.sheet.document import Inline, Line, Maths, Text
from derive.sheet.figures import decibels, figure, hertz, root_in_hertz
from derive.sheet.final import CORNER, PASS_BAND, Final
from derive.sheet.view import View, far_value, gain_dimension, gain_name, is_constant, power_of_s

FOLD = {1: "", 2: "double ", 3: "triple "}


def at_nominal(view: View, found: Final) -> Line:
    """Give gain, poles and zeros at the nominal values: of the quantity itself wherever it has a level."""
    numbers = view.result.solution.numbers
    if numbers is None:
        return (Text("A value was left open, so this sheet is symbolic only."),)
    pieces = _levels(view, found, numbers)
    if not is_constant(view):
        pieces += [(Text(_poles(view, numbers)),), (Text(_zeros(view, numbers)),)]
    line: list[Inline] = [Text("At the nominal values ")]
    for place, piece in enumerate(pieces):
        line += [Text("; "), *piece] if place else piece
    return (*line, Text("."))


def _levels(view: View, found: Final, numbers: NominalNumbers) -> list[Line]:
    """Give the quantity in its pass band, and the K of the normal form where that is something else."""
    names = {entry.name for entry in found.named}
    power, far, peak = view.result.solution.form.power_of_s, _far(view, numbers), peak_of(view)
    own = Maths(Name(view.name))
    if CORNER in names and far:
        if PASS_BAND in names:
            return [(Maths(Name(PASS_BAND)), Text(f" = {far}"))]
        return [(own, Text(f" = {far} far above the corner"))]
    if is_constant(view):
        return [(own, Text(f" = {_level(view, numbers.gain)}"))]
    gain, label = _level(view, numbers.gain), Maths(Name(gain_name(view)))
    if power:
        factor: Line = (label, Text(f" = {gain}, the factor of "), Maths(power_of_s(power)))
    elif gain_name(view) in names:
        factor = (label, Text(f" = {gain}"))
    else:
        # There is no K in a box where the coefficients are written out.
        factor = (own, Text(f" = {gain} at zero frequency"))
    if peak is not None:
        size, at = _level(view, Fraction(peak[0]), -power), hertz(peak[1])
        return [(Text("|"), own, Text(f"| = {size} at its peak, {at}")), factor]
    if not far:
        return [factor]
    above = (own, Text(f" = {far} far above all corners"))
    return [above, factor] if power else [factor, above]


def _level(view: View, value: Fraction | None, extra: int = 0) -> str:
    dimension = gain_dimension(view, extra)
    level = decibels(value) if dimension == RATIO else ""
    return figure(value, dimension) + (f" ({level})" if level else "")


def _far(view: View, numbers: NominalNumbers) -> str:
    value = far_value(view, numbers)
    return "" if value is None else _level(view, value, -view.result.solution.form.power_of_s)


def _poles(view: View, numbers: NominalNumbers) -> str:
    return _with_origin("pole", -view.result.solution.form.power_of_s, numbers.poles)


def _zeros(view: View, numbers: NominalNumbers) -> str:
    return _with_origin("zero", view.result.solution.form.power_of_s, numbers.zeros)


def _with_origin(word: str, power: int, roots: tuple[CertifiedRoot, ...]) -> str:
    others = _roots(word, roots)
    if power <= 0:
        return others
    origin = f"{FOLD.get(power, f'{power}-fold ')}{word} at the origin"
    return f"{origin}, {others}" if roots else origin


def _roots(word: str, roots: tuple[CertifiedRoot, ...]) -> str:
    shown = [_root(root) for root in roots if root.imaginary >= 0]
    if not shown:
        return f"no {word}s"
    single = len(shown) == 1 and roots[0].multiplicity == 1 and roots[0].imaginary == 0
    return f"{word if single else word + 's'} at {', '.join(shown)}"


def _root(root: CertifiedRoot) -> str:
    words = root_in_hertz(root)
    if root.imaginary:
        quality = root.quality
        words += f" (pair, Q = {quality:.3g})" if quality else " (pair on the imaginary axis)"
    if root.multiplicity > 1:
        words += f" ({root.multiplicity}-fold)"
    return words + (" (right half-plane)" if root.real > 0 else "")
