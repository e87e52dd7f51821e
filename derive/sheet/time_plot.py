"""Plots against time: what follows a step, first the rise, then the sag of a circuit with a low-frequency corner."""

from __future__ import annotations

import math

from derive.normalise.exact_response import ratio_at
from derive.quantities.dimension import RATIO, TIME
from derive.quantities.format import engineering
from derive.quantities.units import unit_of
from derive.response.step import StepResponse, curve_of_step, rise_of, step_response
from derive.response.traces import Rise
from derive.sheet.document import Axis, Curve, Panel, Plot, Spot
from derive.sheet.responses import WHOLE, Shown

# Of the time constant that is waited for: within e^-6 of the end.
SETTLED = 6.0
# What swings further beyond its end than the end is large has no rise to speak of.
MOST_OVERSHOOT = 1.0
PREFIXES = ((1.0, "s"), (1e-3, "ms"), (1e-6, "µs"), (1e-9, "ns"), (1e-12, "ps"))


def step_plots(shown: Shown) -> tuple[Plot, ...]:
    """Give the plots of the rise and, where the circuit has a corner below its band, of the sag."""
    step = step_response(shown.whole)
    if step is None or not step.poles or unstable(step):
        return ()
    slow, fast = _sorted(step, shown)
    if not fast:
        return (_plot(shown, step, _window(slow), f"Step response of {shown.name}", ()),)
    first, rise = _rise(shown, step, _window(fast), slow)
    # Where nothing settles between the two, there is no level to sag from.
    if not slow or rise is None:
        return (first,)
    return first, _plot(shown, step, _window(slow), f"Step response of {shown.name}: the sag", ())


def unstable(step: StepResponse) -> bool:
    """Whether what follows a step grows without end."""
    return any(pole.real > 0 for pole in step.poles)


def _window(poles: list[complex]) -> float:
    """Give the time after which the slowest of these has settled; what does not settle is given some periods."""
    return SETTLED / min(abs(pole.real) or abs(pole) / 10 for pole in poles)


def _sorted(step: StepResponse, shown: Shown) -> tuple[list[complex], list[complex]]:
    """Part the poles of the sag from those of the rise, at the middle of the pass band where there is a sag."""
    middle = 2 * math.pi * shown.mid_hz
    sags = _sags(shown)
    slow = [pole for pole in step.poles if sags and abs(pole) < middle]
    return slow, [pole for pole in step.poles if pole not in slow]


def _sags(shown: Shown) -> bool:
    """Whether a step falls back: at zero frequency there is less than half the power of the pass band."""
    top, bottom = shown.whole.top[0], shown.whole.bottom[0]
    within = ratio_at((shown.whole,), (), shown.mid_hz)
    return bool(bottom and within) and abs(float(top / bottom)) < abs(within or 0) / math.sqrt(2)


def _end(step: StepResponse, slow: list[complex]) -> float:
    """Give the level that the rise goes to: the poles of the sag stand still meanwhile."""
    total = 0j
    for pole, power, residue in step.terms:
        if not power and (pole == 0 or pole in slow):
            total += residue
    return total.real


def _rise(
    shown: Shown, step: StepResponse, window: float, slow: list[complex]
) -> tuple[Plot, Rise | None]:
    stable = all(pole.real < 0 for pole in step.poles)
    rise = rise_of(step, _end(step, slow), window) if stable else None
    if rise is not None and rise.overshoot > MOST_OVERSHOOT:
        rise = None
    caption = f"Step response of {shown.name}"
    if rise is None:
        caption += "" if stable else "; it does not settle"
        return _plot(shown, step, window, caption, ()), None
    caption += ": the rise, " if slow else ", "
    caption += f"10 to 90 % in {engineering(rise.seconds, TIME, 4)}"
    caption += f", overshoot {100 * rise.overshoot:.3g} %" if rise.overshoot > 1e-3 else ""
    # A rise of a few per cent of the window is looked at closer.
    window = min(window, max(8 * rise.finish, 3 * rise.seconds))
    return _plot(shown, step, window, caption, _spots(rise, window)), rise


def _spots(rise: Rise, window: float) -> tuple[Spot, ...]:
    size, _ = _unit(window)
    return (
        Spot(WHOLE, rise.begin / size, 0.1 * rise.end, "dot"),
        Spot(WHOLE, rise.finish / size, 0.9 * rise.end, "dot"),
    )


def _unit(window: float) -> tuple[float, str]:
    return next(((size, name) for size, name in PREFIXES if window >= size), PREFIXES[-1])


def _plot(shown: Shown, step: StepResponse, window: float, caption: str, spots: tuple[Spot, ...]) -> Plot:
    size, unit = _unit(window)
    curve = curve_of_step(WHOLE, step, window)
    points = tuple((t / size, value) for t, value in curve.points if math.isfinite(value))
    up = Axis(shown.name, "" if shown.dimension == RATIO else unit_of(shown.dimension))
    panel = Panel(up, (Curve(WHOLE, points),), spots, (0.0,))
    last = points[-1]
    words = (
        f"{caption}. One curve against time from 0 to {last[0]:.4g} {unit}: it begins at {_short(points[0][1])} and is "
        f"at {_short(last[1])} at the right end."
    )
    return Plot(caption, Axis("Time", unit, ends=(0.0, window / size)), (panel,), words, narrow=True)


def _short(value: float) -> str:
    return engineering(value, RATIO, 4) if abs(value) > 1e-12 else "0"
