"""The plot of group delay against frequency, on request."""

from __future__ import annotations

import math

from derive.quantities.dimension import TIME
from derive.quantities.format import engineering
from derive.response.delay import group_delay
from derive.sheet.document import Axis, Curve, Panel, Plot
from derive.sheet.figures import hertz
from derive.sheet.responses import WHOLE, Shown

PREFIXES = ((1.0, "s"), (1e-3, "ms"), (1e-6, "µs"), (1e-9, "ns"), (1e-12, "ps"))


def delay_plot(shown: Shown) -> Plot | None:
    """Give the plot; None where the delay is zero everywhere."""
    frequencies = [point.hertz for point in shown.traces[0].points]
    found = [(f, group_delay(shown.whole, f)) for f in frequencies]
    delays = [(f, delay) for f, delay in found if delay is not None and math.isfinite(delay)]
    most = max((abs(delay) for _, delay in delays), default=0.0)
    if not most:
        return None
    size, unit = next(((size, name) for size, name in PREFIXES if most >= size), PREFIXES[-1])
    points = tuple((f, delay / size) for f, delay in delays)
    where, largest = max(delays, key=lambda each: abs(each[1]))
    caption = f"Group delay of {shown.name}"
    words = (
        f"{caption} against frequency: {engineering(delays[0][1], TIME, 3)} at {hertz(delays[0][0], 3)}, largest "
        f"{engineering(largest, TIME, 3)} at {hertz(where, 3)}."
    )
    across = Axis("Frequency", "Hz", "decades", (frequencies[0], frequencies[-1]))
    return Plot(
        caption,
        across,
        (Panel(Axis("Delay", unit), (Curve(WHOLE, points),), (), (0.0,)),),
        words,
        narrow=True,
    )
