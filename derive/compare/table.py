"""The table of a comparison: a row for each figure, a column for each stage."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from typing import Literal

from derive.bands.choose import bands_of
from derive.check.verdict import Solution
from derive.compare.choose import asked
from derive.compare.comparison import Comparison, Stage
from derive.compare.figures import (
    NONE,
    decibel_words,
    frequency,
    impedance_words,
    level_words,
    roots_of,
    roots_words,
    where_words,
)
from derive.expressions.tree import Name
from derive.quantities.dimension import RATIO
from derive.sheet.document import Column, Line, Mark, Maths, Table, Text
from derive.topology.topology import BandName

MOST_STAGES = 4  # side by side in one table: more would leave no room for their figures
BANDS: tuple[BandName, ...] = ("low", "mid", "high", "full")
Row = tuple[str, tuple[Line, ...]]
CAPTION = "Figures at the nominal values"


def tables(comparison: Comparison, most: int = MOST_STAGES) -> tuple[Table, ...]:
    """Give the table, or several where there are more stages than stand side by side."""
    rows = rows_of(comparison)
    found = []
    for first in range(0, len(comparison.stages), most):
        stages = comparison.stages[first : first + most]
        heads = (Column((Text("Stage"),), leads=True), *(Column((Text(stage.name),)) for stage in stages))
        body = tuple(((Text(label),), *cells[first : first + most]) for label, cells in rows)
        more = f", stages {first + 1} to {first + len(stages)}" if len(comparison.stages) > most else ""
        found.append(Table(CAPTION + more, heads, body))
    return tuple(found)


def rows_of(comparison: Comparison) -> tuple[Row, ...]:
    """Give the rows; those that would be empty for every stage are left out where they can be."""
    stages = comparison.stages
    impedance = stages[0].find.quantity == "impedance"
    gain = "Impedance in the mid band" if impedance else "Gain in the mid band"
    rows: list[Row] = [
        _row("Title", stages, lambda stage: _words(stage.topology.title_block.title)),
        _row("Quantity", stages, _quantity),
        _row("Worked in", stages, lambda stage: _words(_bands(stage))),
        _row("Taken as mid band", stages, lambda stage: _words(where_words(stage))),
        _row(gain, stages, lambda stage: _words(_gain(stage))),
    ]
    ratio, ports = stages[0].dimension == RATIO, not impedance
    if ratio:
        rows.append(_row("… in decibels", stages, lambda stage: _words(decibel_words(stage.gain))))
    rows += [
        _row("−3 dB frequency, low", stages, lambda stage: _words(_edge(stage, "low"))),
        _row("−3 dB frequency, high", stages, lambda stage: _words(_edge(stage, "high"))),
    ]
    if ratio:
        rows.append(
            _row("Gain-bandwidth product", stages, lambda s: _words(frequency(s.gain_bandwidth_hz)))
        )
    rows += _port_rows(stages) if ports else []
    rows += [row for band in BANDS for row in _roots(stages, band)]
    return (*rows, _row("Checks", stages, _checks))


def _port_rows(stages: Sequence[Stage]) -> list[Row]:
    rows = [_row("Input impedance", stages, lambda stage: _words(impedance_words(stage.input.level)))]
    if any(stage.past_source for stage in stages):
        rows.append(_row("… past the series resistor", stages, _past))
    rows.append(_row("Output impedance", stages, lambda s: _words(impedance_words(s.output.level))))
    return rows


def _row(label: str, stages: Sequence[Stage], cell: Callable[[Stage], Line]) -> Row:
    return label, tuple(cell(stage) for stage in stages)


def _words(text: str) -> Line:
    return (Text(text),)


def _quantity(stage: Stage) -> Line:
    return (Maths(Name(stage.find.name)), Text(", "), *asked(stage.find))


def _bands(stage: Stage) -> str:
    return "full" if stage.bands == ("full",) else ", ".join(stage.bands)


def _gain(stage: Stage) -> str:
    return "left open" if stage.main.numbers is None else level_words(stage.gain, stage.dimension)


def _edge(stage: Stage, side: Literal["low", "high"]) -> str:
    found = stage.low_hz if side == "low" else stage.high_hz
    missing = found is None and side in left_out(stage)
    return f"not asked for (no {side} band in the file)" if missing else frequency(found)


def left_out(stage: Stage) -> tuple[BandName, ...]:
    """Give the bands that the parts' roles call for and that the topology leaves out."""
    circuit = stage.outcome.circuit
    called = bands_of(replace(circuit, topology=replace(circuit.topology, bands=())))
    return tuple(band for band in called if band not in stage.bands) if "full" not in stage.bands else ()


def _past(stage: Stage) -> Line:
    found = stage.past_source
    if found is None:
        return _words(NONE)
    return (Text(f"{impedance_words(found.level)} past "), Maths(Name(found.resistor)))


def _roots(stages: Sequence[Stage], band: BandName) -> list[Row]:
    """Give the poles and zeros of one band, where any stage has some."""
    found: list[Row] = []
    label = "full circuit" if band == "full" else f"{band} band"
    for kind in ("pole", "zero"):
        words = [_roots_of(_solution(stage, band), kind) for stage in stages]
        if any(words):
            cells = tuple(_words("\n".join(w) if w else NONE if w is None else "none") for w in words)
            found.append((f"{kind.capitalize()}s, {label}", cells))
    return found


def _roots_of(solution: Solution | None, kind: str) -> tuple[str, ...] | None:
    roots = None if solution is None else roots_of(solution, kind)
    return None if roots is None else roots_words(roots)


def _solution(stage: Stage, band: BandName) -> Solution | None:
    solutions = (result.solution for result in stage.outcome.results)
    return next((s for s, name in zip(solutions, stage.bands, strict=True) if name == band), None)


def _checks(stage: Stage) -> Line:
    verdicts = [verdict for _, result in stage.results for verdict in result.verdicts]
    passed = sum(verdict.passed is True for verdict in verdicts)
    failed = sum(verdict.passed is False for verdict in verdicts)
    words = f"{passed} of {passed + failed} passed"
    return (Mark(stage.passed, words),)
