"""The plot of a comparison: all magnitudes over all phases, a curve for each stage."""

from __future__ import annotations

from derive.compare.comparison import Comparison, Stage
from derive.compare.figures import decibel_words, frequency, level_words
from derive.quantities.dimension import RATIO, Dimension
from derive.quantities.units import unit_of
from derive.quantities.words import listed
from derive.sheet.document import Axis, Curve, Panel, Plot, Spot

# What lies further below the highest point is of no use to a reader, and flattens all the rest.
MOST_DECIBELS = 140.0


def plot_of(comparison: Comparison) -> Plot | None:
    """Give the plot; None where no stage has a curve."""
    stages = [stage for stage in comparison.stages if stage.curve]
    if not stages:
        return None
    frequencies = [point.hertz for stage in stages for point in stage.curve]
    across = Axis("Frequency", "Hz", "decades", (min(frequencies), max(frequencies)))
    magnitudes = tuple(
        Curve(stage.name, tuple((point.hertz, point.decibels) for point in stage.curve))
        for stage in stages
    )
    phases = tuple(
        Curve(stage.name, tuple((point.hertz, point.degrees) for point in stage.curve))
        for stage in stages
    )
    spots = tuple(spot for stage in stages for spot in _edges(stage))
    dimension = stages[0].dimension
    guides = (0.0,) if dimension == RATIO else ()
    names = listed(stage.name for stage in stages)
    rings = "; rings at the −3 dB frequencies of the bands" if spots else ""
    return Plot(
        f"Magnitude and phase of {names}{rings}" if len(stages) <= 4 else f"Magnitude and phase{rings}",
        across,
        (
            Panel(
                Axis("Magnitude", _decibels(dimension), ends=_ends(magnitudes)), magnitudes, spots, guides
            ),
            Panel(Axis("Phase", "degrees", "degrees"), phases),
        ),
        _alternative(stages, frequencies),
    )


def _decibels(dimension: Dimension) -> str:
    return "dB" if dimension == RATIO else f"dB above 1 {unit_of(dimension)}"


def _ends(curves: tuple[Curve, ...]) -> tuple[float, float] | None:
    """Give the ends of the magnitude's axis where some of it is too far down to be shown."""
    values = [up for curve in curves for _, up in curve.points]
    top = 20.0 * -(-max(values) // 20.0)
    return (top - MOST_DECIBELS, top) if min(values) < top - MOST_DECIBELS else None


def _edges(stage: Stage) -> tuple[Spot, ...]:
    """Give the points at which the bands' responses fall by 3 dB, on the curve of the whole circuit."""
    found = []
    for hertz in (stage.low_hz, stage.high_hz):
        if hertz is not None and stage.curve[0].hertz <= hertz <= stage.curve[-1].hertz:
            found.append(Spot(stage.name, hertz, _decibels_at(stage, hertz)))
    return tuple(found)


def _decibels_at(stage: Stage, hertz: float) -> float:
    """Give the curve's height at a frequency, between its points in a straight line as it is drawn."""
    pairs = zip(stage.curve, stage.curve[1:], strict=False)
    left, right = next((a, b) for a, b in pairs if a.hertz <= hertz <= b.hertz)
    share = (hertz - left.hertz) / (right.hertz - left.hertz) if right.hertz > left.hertz else 0.0
    return left.decibels + share * (right.decibels - left.decibels)


def _alternative(stages: list[Stage], frequencies: list[float]) -> str:
    span = f"{frequency(min(frequencies))} to {frequency(max(frequencies))}"
    lead = f"Two panels against frequency from {span}: magnitude in dB above, phase in degrees below. "
    return lead + ". ".join(map(_curve_words, stages)) + "."


def _curve_words(stage: Stage) -> str:
    level = (
        decibel_words(stage.gain)
        if stage.dimension == RATIO
        else level_words(stage.gain, stage.dimension)
    )
    words = f"{stage.name}: {level} in the mid band"
    if stage.low_hz is not None:
        words += f", down by 3 dB at {frequency(stage.low_hz)} below it"
    if stage.high_hz is not None:
        words += f", down by 3 dB at {frequency(stage.high_hz)} above it"
    highest = max(stage.curve, key=lambda point: point.decibels)
    # Rounded first, so that no level reads −0.0 dB.
    level = f"{round(highest.decibels, 1) + 0.0:.1f}".replace("-", "−")
    return f"{words}; highest {level} dB at {frequency(highest.hertz)}"
