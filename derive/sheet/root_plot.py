"""The poles and zeros of every quantity, each in a plane of its own."""

from __future__ import annotations

from fractions import Fraction

from derive.algebra.roots import roots
from derive.sheet.document import RootMap, RootMaps
from derive.sheet.figures import hertz
from derive.sheet.response_plot import corners
from derive.sheet.responses import Shown

Roots = tuple[tuple[float, float, int], ...]


def root_plot(found: tuple[Shown, ...]) -> RootMaps | None:
    """Give the figure; None where no quantity has a pole or a zero."""
    maps = tuple(_map(shown) for shown in found)
    maps = tuple(one for one in maps if one.poles or one.zeros)
    if not maps:
        return None
    names = ", ".join(one.name for one in maps)
    words = " ".join(_words(shown) for shown in found if any(shown.name == one.name for one in maps))
    return RootMaps(f"Poles and zeros of the whole circuit: {names}", maps, words)


def _map(shown: Shown) -> RootMap:
    poles, at_origin = _roots(shown.whole.bottom)
    zeros, origin = _roots(shown.whole.top)
    return RootMap(shown.name, poles, zeros, origin - at_origin)


def _roots(polynomial: tuple[Fraction, ...]) -> tuple[Roots, int]:
    """Give the roots, and how many there are at the origin."""
    found = roots(polynomial) if any(polynomial) else ()
    elsewhere = tuple((r.real, r.imaginary, r.multiplicity) for r in found if r.real or r.imaginary)
    return elsewhere, sum(r.multiplicity for r in found if not (r.real or r.imaginary))


def _words(shown: Shown) -> str:
    parts = []
    for kind, polynomial in (("poles", shown.whole.bottom), ("zeros", shown.whole.top)):
        at = ", ".join(hertz(frequency) for frequency in corners(polynomial))
        parts.append(f"{kind} at {at}" if at else f"no {kind} away from the origin")
    return f"{shown.name}: {'; '.join(parts)}."
