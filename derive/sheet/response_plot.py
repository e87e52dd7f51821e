"""The plot of one quantity against frequency: magnitude over phase, corners and spans marked."""

from __future__ import annotations

import math
from collections.abc import Sequence
from fractions import Fraction
from itertools import pairwise

from derive.algebra.roots import roots
from derive.quantities.dimension import RATIO, Dimension
from derive.quantities.units import unit_of
from derive.response.traces import Point, Trace
from derive.sheet.document import Area, Axis, Curve, Panel, Plot, Spot
from derive.sheet.figures import hertz
from derive.sheet.responses import WHOLE, Shown

# What lies further below the highest point is of no use to a reader, and flattens all the rest.
MOST_DECIBELS = 100.0
SPAN = "span over the tolerances"


def response_plot(shown: Shown) -> Plot:
    """Give the plot."""
    exact = shown.traces[0]
    across = Axis("Frequency", "Hz", "decades", (exact.points[0].hertz, exact.points[-1].hertz))
    up = tuple(Curve(t.name, tuple((p.hertz, p.decibels) for p in t.points)) for t in shown.traces)
    turned = tuple(Curve(t.name, tuple((p.hertz, p.degrees) for p in t.points)) for t in shown.traces)
    areas, angles = _areas(shown, exact)
    magnitude = Panel(
        Axis("Magnitude", decibel_unit(shown.dimension), ends=_ends(exact)),
        up,
        _spots(shown, exact),
        (0.0,) if shown.dimension == RATIO else (),
        areas,
    )
    phase = Panel(Axis("Phase", "degrees", "degrees"), turned, areas=angles)
    return Plot(_caption(shown), across, (magnitude, phase), _words(shown, exact))


def decibel_unit(dimension: Dimension) -> str:
    """Give the unit of a magnitude in decibels."""
    return "dB" if dimension == RATIO else f"dB above 1 {unit_of(dimension)}"


def _caption(shown: Shown) -> str:
    marks = "; rings at −3 dB" if shown.edges else ""
    marks += ", crosses at poles, dots at zeros" if marks else "; crosses at poles, dots at zeros"
    says = f"; {SPAN}: {shown.span.says}" if shown.span else ""
    return f"Magnitude and phase of {shown.name}{marks}{says}"


def _ends(exact: Trace) -> tuple[float, float] | None:
    """Give the ends of the magnitude's axis: those of the exact response, with room; approximations may leave it."""
    values = [point.decibels for point in exact.points]
    high = 10.0 * math.ceil((max(values) + 2) / 10.0)
    low = 10.0 * math.floor((max(min(values), high - MOST_DECIBELS) - 2) / 10.0)
    return low, max(high, low + 20.0)


def _areas(shown: Shown, exact: Trace) -> tuple[tuple[Area, ...], tuple[Area, ...]]:
    if shown.span is None:
        return (), ()
    inside = [p for p in shown.span.points if exact.points[0].hertz <= p.hertz <= exact.points[-1].hertz]
    up = tuple((p.hertz, *p.decibels) for p in inside)
    turned = []
    for p in inside:
        middle = sum(p.degrees) / 2
        # Whole turns are of no account: the span lies about the curve.
        turns = 360.0 * round((at(exact.points, p.hertz).degrees - middle) / 360.0)
        turned.append((p.hertz, p.degrees[0] + turns, p.degrees[1] + turns))
    return (Area(SPAN, up),), (Area(SPAN, tuple(turned)),)


def at(points: Sequence[Point], frequency: float) -> Point:
    """Give the curve at a frequency within it, between its points in a straight line as it is drawn."""
    pairs = pairwise(points)
    left, right = next(
        (a, b)
        for a, b in pairs
        if a.hertz <= frequency * (1 + 1e-12) and frequency <= b.hertz * (1 + 1e-12)
    )
    share = (frequency - left.hertz) / (right.hertz - left.hertz) if right.hertz > left.hertz else 0.0
    return Point(
        frequency,
        left.decibels + share * (right.decibels - left.decibels),
        left.degrees + share * (right.degrees - left.degrees),
    )


def corners(polynomial: Sequence[Fraction]) -> tuple[float, ...]:
    """Give the frequencies of the roots of a polynomial in Hz, those at the origin left out and pairs once."""
    found = roots(polynomial) if any(polynomial) else ()
    sizes = (math.hypot(r.real, r.imaginary) / (2 * math.pi) for r in found if r.imaginary >= 0)
    return tuple(size for size in sizes if size > 0)


def _spots(shown: Shown, exact: Trace) -> tuple[Spot, ...]:
    first, last = exact.points[0].hertz, exact.points[-1].hertz
    marks = [("cross", f) for f in corners(shown.whole.bottom)]
    marks += [("dot", f) for f in corners(shown.whole.top)]
    marks += [("ring", f) for f in shown.edges]
    found = []
    for shape, frequency in marks:
        if first <= frequency <= last:
            height = at(exact.points, frequency).decibels
            spot: Spot = Spot(WHOLE, frequency, height, shape)  # type: ignore[arg-type]
            found.append(spot)
    return tuple(found)


def _words(shown: Shown, exact: Trace) -> str:
    first, last = exact.points[0], exact.points[-1]
    highest = max(exact.points, key=lambda point: point.decibels)
    unit = decibel_unit(shown.dimension)
    words = (
        f"Two panels against frequency from {hertz(first.hertz, 3)} to {hertz(last.hertz, 3)}, magnitude in {unit} "
        f"above and phase in degrees below. {shown.name} of the whole circuit: highest {_one(highest.decibels)} "
        f"{unit} at {hertz(highest.hertz, 3)}; {_one(first.decibels)} at the left end, "
        f"{_one(last.decibels)} at the right"
    )
    if shown.edges:
        words += f"; −3 dB at {' and '.join(hertz(edge) for edge in shown.edges)}"
    others = ", ".join(trace.name for trace in shown.traces[1:])
    words += f". Beside it: {others}" if others else ""
    if shown.span:
        widest = max(high - low for p in shown.span.points for low, high in (p.decibels,))
        words += f". Shaded: {SPAN}, up to {_one(widest)} dB wide"
    return f"{words}."


def _one(value: float) -> str:
    # Rounded first, so that no level reads −0.0.
    return f"{round(value, 1) + 0.0:.1f}".replace("-", "−")
