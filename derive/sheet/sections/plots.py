"""The responses drawn: magnitude and phase, poles and zeros, what follows a step, and group delay on request."""

from __future__ import annotations

from derive.check.verdict import Outcome
from derive.response.step import step_response
from derive.sheet.delay_plot import delay_plot
from derive.sheet.document import Block, Paragraph, Section, Text
from derive.sheet.response_plot import response_plot
from derive.sheet.responses import shown_responses
from derive.sheet.root_plot import root_plot
from derive.sheet.time_plot import step_plots, unstable

ORDER = 12
SCOPE = "sheet"
LEAD = (
    "Drawn at the nominal values. The whole circuit has every part in place, no band and no assumption taken; where a "
    "band's curve leaves it, the band is at its end."
)
GROWS = "not drawn, as a pole lies in the right half-plane: it grows without end, and the circuit is not stable."


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section; nothing where values are open, or nothing depends on frequency."""
    wanted = outcome.circuit.topology.plots
    found = [shown for shown in shown_responses(outcome) if shown.traces[0].points] if wanted else []
    moving = tuple(s for s in found if len(s.whole.top) > 1 or len(s.whole.bottom) > 1)
    blocks: list[Block] = []
    if "response" in wanted:
        blocks += [response_plot(shown) for shown in moving]
    if "poles" in wanted:
        figure = root_plot(moving)
        blocks += [figure] if figure else []
    for shown in moving:
        # A step of current into a port is asked for less often than one of a drive.
        if "step" in wanted and shown.find.quantity != "impedance":
            blocks += step_plots(shown)
            step = step_response(shown.whole)
            if step is not None and unstable(step):
                blocks.append(Paragraph((Text(f"Step response of {shown.name}: {GROWS}"),), "alarm"))
        if "delay" in wanted and shown.find.quantity != "impedance":
            plot = delay_plot(shown)
            blocks += [plot] if plot else []
    if not blocks:
        return ()
    return (Section("Response", (*blocks, Paragraph((Text(LEAD),), "note"))),)
