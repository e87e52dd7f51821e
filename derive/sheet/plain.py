"""An outcome as plain text, for a terminal or a notebook."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

from derive.check.verdict import Outcome, Verdict
from derive.expressions.tree import Equation
from derive.expressions.unicode_text import to_unicode
from derive.handcheck.report import HandReport
from derive.normalise.form import NominalNumbers
from derive.sheet.assumed import failed_assumptions
from derive.sheet.bandwidth import peak_of
from derive.sheet.compose import section_modules
from derive.sheet.document import (
    Block,
    Display,
    Folded,
    Inline,
    Line,
    Maths,
    Matrix,
    Paragraph,
    Reference,
    Section,
    SourceText,
    Table,
    Text,
)
from derive.sheet.figures import figure, hertz, newton_difference
from derive.sheet.hand.words import failures, summary
from derive.sheet.tally import NOTHING_TO_JUDGE, kind_of, tally_of
from derive.sheet.view import View, far_value, gain_dimension, power_of_s, views

# What a terminal shows of a result, by the files of the sections; the rest with the steps.
FIRST = ("glance",)
CIRCUIT = ("operating_point", "parameters", "bands")
RESULT = ("time_constants", "poles_and_zeros", "miller", "limits", "assumptions", "simplified")
STEPS = ("equations", "elimination", "normal_form", "values", *RESULT)
MARKS = {True: "✓", False: "✗", None: "–"}


def plain_outcome(outcome: Outcome, *, steps: bool = False) -> str:
    """Give title, result and checks; with `steps` the whole derivation as well."""
    block = outcome.circuit.topology.title_block
    lines = [block.title + (f"  ({block.number})" if block.number else ""), ""]
    lines += _whole(FIRST, outcome, steps)
    # Who asks for the steps reads from the circuit to the result; others want the result.
    lines += _whole(CIRCUIT, outcome, steps) if steps else []
    for view in views(outcome):
        lines += _sections(view.headline, steps)
        lines += _whole(STEPS if steps else RESULT, view, steps)
        lines += list(_verdicts(view))
    lines += _whole(("separation",), outcome, steps)
    lines += [] if steps else _whole(CIRCUIT, outcome, steps)
    lines += list(_bias_verdicts(outcome))
    lines += list(_hand(outcome))
    return "\n".join(lines).rstrip() + "\n"


def _whole(names: tuple[str, ...], of: Outcome | View, steps: bool) -> list[str]:
    modules = {module.__name__.rpartition(".")[2]: module for module in section_modules()}
    lines: list[str] = []
    for name in names:
        sections = modules[name].compose(of)
        # Parts of a section on the circuit are derivations: they are for those who asked for the steps.
        wanted = steps or isinstance(of, View)
        lines += _sections(sections if wanted else tuple(s for s in sections if s.level == 1), steps)
    return lines


def _sections(sections: tuple[Section, ...], steps: bool) -> list[str]:
    lines = []
    for section in sections:
        title = section.title + (f" {_inline(section.about)}" if section.about else "")
        lines += [title, "-" * len(title)]
        for block in section.blocks if steps else _brief(section.blocks):
            lines += list(_block(block))
        lines.append("")
    return lines


def _brief(blocks: tuple[Block, ...]) -> Iterator[Block]:
    """Leave out what is for those who asked for the steps: folded blocks, and the numbers of equations."""
    for block in blocks:
        if isinstance(block, Display) and block.number is None:
            yield replace(block, reason=_without_source(block.reason))
        elif not isinstance(block, Folded):
            yield block


def _without_source(line: Line) -> Line:
    """Take the equation that a reason refers to off its end: "; from (3.20)"."""
    match line:
        case (*before, Text(words), Reference()) if words.endswith("from "):
            kept = words.removesuffix("from ").rstrip("; ")
            return (*before, Text(kept)) if kept else tuple(before)
    return line


def _block(block: object) -> Iterator[str]:
    if isinstance(block, Paragraph):
        yield line_text(block.line)
    elif isinstance(block, Display):
        yield from _display(block)
    elif isinstance(block, Table):
        yield from _table(block)
    elif isinstance(block, SourceText):
        yield block.text
    elif isinstance(block, Folded):
        yield line_text(block.title)
        for inner in block.blocks:
            yield from _block(inner)


def _display(block: Display) -> Iterator[str]:
    content = block.content
    label = f"({block.number})" if block.number else ""
    if isinstance(content, Matrix):
        return
    text = equation_text(content) if isinstance(content, Equation) else to_unicode(content)
    reason = line_text(block.reason)
    if block.boxed:
        yield reason
    yield f"{label:<5} {text}" if label else f"  {text}"
    if reason and not block.boxed:
        yield f"      {reason}"


def _table(table: Table) -> Iterator[str]:
    rows = [[line_text(column.heading) for column in table.columns]]
    rows += [[line_text(cell) for cell in row] for row in table.rows]
    widths = [max(len(row[place]) for row in rows) for place in range(len(table.columns))]
    for row in rows:
        cells = [
            cell.rjust(width) if column.numeric else cell.ljust(width)
            for cell, width, column in zip(row, widths, table.columns, strict=True)
        ]
        yield ("  " + "  ".join(cells)).rstrip()


def _verdicts(view: View) -> Iterator[str]:
    yield "Checks" if view.alone else f"Checks on {view.title}"
    yield from (_verdict(verdict) for verdict in view.result.verdicts)
    yield from (f"  ✗ step {number}: {why}" for number, why in view.result.broken_steps)
    yield ""


def _verdict(verdict: Verdict) -> str:
    lead = f"{NOTHING_TO_JUDGE}, " if kind_of(verdict) == NOTHING_TO_JUDGE else ""
    return f"  {MARKS[verdict.passed]} {verdict.name}: {lead}{verdict.measured}"


def line_text(line: Line) -> str:
    """Give a line of words and maths as plain text."""
    return "".join(_inline(piece) for piece in line)


def _inline(piece: Inline) -> str:
    if isinstance(piece, Maths):
        content = piece.content
        return equation_text(content) if isinstance(content, Equation) else to_unicode(content)
    if isinstance(piece, Reference):
        return f"({piece.number})"
    return piece.text


def equation_text(equation: Equation) -> str:
    """Give an equation as plain text."""
    return to_unicode(equation)


def _bias_verdicts(outcome: Outcome) -> Iterator[str]:
    point = outcome.point
    if point is None:
        return
    yield "Checks on the operating point"
    for region in point.regions:
        wanted = "" if region.passed else f"; limit: {region.limit}"
        yield f"  {MARKS[region.passed]} {region.part}: {region.measured}{wanted}"
    for check in point.newton:
        yield f"  {MARKS[check.passed]} {check.part}: by Newton's method {newton_difference(check)}"
    for found in point.derivations:
        yield from (f"  ✗ {found.symbol}, step {number}: {why}" for number, why in found.broken)


def _hand(outcome: Outcome) -> Iterator[str]:
    report = outcome.hand
    if not isinstance(report, HandReport):
        return
    yield ""
    title = f"Derivation by hand of {report.find}, {report.band} band: {report.file}"
    yield from (title, "-" * len(title), f"  {MARKS[report.passed]} {summary(report)}")
    yield from (f"  ✗ {words}" for words in failures(report))


def _gain(view: View, numbers: NominalNumbers) -> str:
    """Word the gain in the pass band: far above all corners, at a peak, or at zero frequency."""
    power = view.result.solution.form.power_of_s
    far, peak = far_value(view, numbers), peak_of(view)
    if peak is not None:
        return f"{figure(peak[0], gain_dimension(view, -power))} at {hertz(peak[1])}"
    if far is not None:
        return figure(far, gain_dimension(view, -power))
    factor = f", the factor of {to_unicode(power_of_s(power))}" if power else ""
    return figure(numbers.gain, gain_dimension(view)) + factor


def summary_rows(outcome: Outcome) -> list[tuple[str, str, str]]:
    """Give one row a result: what was sought, its gain, and how its checks went."""
    rows = []
    for view in views(outcome):
        result = view.result
        numbers = result.solution.numbers
        gain = "symbolic" if numbers is None else _gain(view, numbers)
        if result.solution.form.is_zero:
            gain = "0"
        failed = [verdict.name for verdict in result.verdicts if verdict.passed is False]
        failed += [f"step {number}" for number, _ in result.broken_steps]
        failed += failed_assumptions(result)
        count = tally_of(result.verdicts).brief
        rows.append((view.title, gain, f"FAILED: {', '.join(failed)}" if failed else count))
    if outcome.point is not None:
        passed = "passed" if outcome.point.passed else "FAILED"
        rows.append(("operating point", "", passed))
    if isinstance(outcome.hand, HandReport):
        report = outcome.hand
        words = summary(report)
        rows.append((f"{report.find} by hand", "", words if report.passed else f"FAILED: {words}"))
    return rows
