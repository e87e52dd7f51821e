"""The register of assumptions: what each one strikes, the result that is left, and what it costs."""

from __future__ import annotations

import re
from fractions import Fraction
from typing import Literal

from derive.approximate.register import Entry, Errors, Register, RootError
from derive.expressions.tree import Equation, Expression, Name, Power
from derive.quantities.dimension import FREQUENCY, RATIO
from derive.quantities.format import engineering
from derive.readable.measure import leaves
from derive.sheet.assumed import PASSED, statement, written
from derive.sheet.definitions import used_in, with_words
from derive.sheet.document import (
    Block,
    Column,
    Display,
    Inline,
    Line,
    Mark,
    Maths,
    Paragraph,
    Section,
    Table,
    Text,
)
from derive.sheet.figures import hertz, signed_percent, times
from derive.sheet.view import MOST_LEAVES, View
from derive.sheet.wording import marked
from derive.topology.topology import Budget

ORDER = 71
SCOPE = "result"
# So many struck terms are listed one by one.
MOST_LISTED = 4


def compose(view: View) -> tuple[Section, ...]:
    """Give the section; nothing where no assumption is made for the result."""
    register = view.result.solution.register
    if register is None:
        return ()
    if register.remark:
        words = f"The assumptions were {register.remark}."
        return (view.section("Assumptions", (Paragraph((Text(words),), "alarm"),)),)
    blocks: list[Block] = [Paragraph((Text(_lead(register)),))]
    for entry in register.entries:
        blocks += _step(view, entry, first=entry is register.entries[0])
    shown = [written(entry) for entry in register.entries]
    words_used = with_words(used_in(shown, register.definitions))
    blocks += [Paragraph(words_used)] if words_used else []
    if register.entries:
        blocks += [_terms(register), *(_reason(entry) for entry in register.entries), _price(register)]
        blocks += [table for table in (_price_at(register), _roots(register)) if table]
        blocks.append(Paragraph(marked(_method(register)), "note"))
    if register.idle:
        numbers = ", ".join(map(str, register.idle))
        one = len(register.idle) == 1
        words = (
            f"Assumption{'' if one else 's'} {numbers} change{'s' if one else ''} nothing in this result."
        )
        blocks.append(Paragraph((Text(words),)))
    return (view.section("Assumptions", tuple(blocks)),)


def _lead(register: Register) -> str:
    return (
        "The exact result stands as it is; here it is reduced, each assumption on top of those before it. "
        f"An assumption holds as long as the errors stay within {limits(register.budget)}."
    )


def limits(budget: Budget) -> str:
    """Word the limits of errors."""
    gain = engineering(100 * budget.gain, RATIO, 3)
    magnitude, phase = (engineering(each, RATIO, 3) for each in (budget.magnitude_db, budget.phase_deg))
    return f"{gain} % of the gain, {magnitude} dB and {phase}°"


def _step(view: View, entry: Entry, *, first: bool) -> list[Block]:
    """Give one assumption as a step: what is assumed and why, what is struck, what is left."""
    assumption = entry.assumption
    line: list[Inline] = [Text(f"Assumption {entry.number}: "), *statement(assumption)]
    if assumption.because:
        line.append(Text(f", because: {assumption.because}"))
    blocks: list[Block] = [Paragraph((*line, Text(". "), *_said(entry)))]
    for coefficient in entry.reduced.shown:
        where: Line = (Text(f"{coefficient.of}, terms without "), Maths(Name("s")))
        if coefficient.power:
            s = Name("s") if coefficient.power == 1 else Power(Name("s"), coefficient.power)
            where = (Text(f"{coefficient.of}, terms of "), Maths(s))
        blocks.append(Display(coefficient.expression, where))
    if entry.reduced.struck and not entry.reduced.shown:
        blocks.append(Paragraph(_struck(entry)))
    found = written(entry)
    words = f"With assumption {entry.number}" + ("" if first else " and those before it")
    if leaves(found) <= MOST_LEAVES:
        blocks.append(Display(Equation(Name(view.name), found, "~"), (Text(words),)))
    else:
        reason: Line = (Text(f"{words} "), Maths(Name(view.name)))
        words = f" is too long to print: {leaves(found):,} names and numbers; the ledger holds it."
        blocks.append(Paragraph((*reason, Text(words))))
    return blocks


def _struck(entry: Entry) -> Line:
    struck = entry.reduced.struck
    line: list[Inline] = [Text("Struck: ")]
    for place, term in enumerate(struck[:MOST_LISTED]):
        line += [Text(", " if place else ""), Maths(term.term)]
        if term.against is not None:
            line += [Text(" beside "), Maths(term.against)]
    more = len(struck) - MOST_LISTED
    return (*line, Text(f" and {more} more." if more > 0 else "."))


def _terms(register: Register) -> Table:
    headings = ("No.", "Assumption", "Smaller", "Larger", "Ratio", "At worst corner", "Status")
    columns = tuple(Column((Text(heading),), place in (4, 5)) for place, heading in enumerate(headings))
    rows = tuple(
        (
            (Text(str(entry.number)),),
            statement(entry.assumption),
            _short(entry.smaller),
            _short(entry.larger),
            (Text(_times(entry.ratio)),),
            (Text(_times(entry.worst.ratio if entry.worst else None)),),
            (Mark(PASSED[entry.status], entry.status),),
        )
        for entry in register.entries
    )
    return Table("Register of assumptions", columns, rows)


def _reason(entry: Entry) -> Paragraph:
    """Say why an assumption has the status that it has."""
    tone: Literal["plain", "alarm"] = "alarm" if PASSED[entry.status] is False else "plain"
    verb = entry.status if entry.status != "not checked" else "is not checked"
    return Paragraph((Text(f"Assumption {entry.number} {verb}: {entry.reason}."),), tone)


def _said(entry: Entry) -> Line:
    """Give what was done in words, the symbols in it set as maths."""
    known = {name for name in entry.reduced.ring.names if "_" in name}
    says = f"{entry.reduced.says[:1].upper()}{entry.reduced.says[1:]}."
    pieces = re.split(r"(\w+)", says)
    return tuple(Maths(Name(piece)) if piece in known else Text(piece) for piece in pieces if piece)


def _short(expression: Expression | None) -> Line:
    if expression is None:
        return (Text("–"),)
    return (Maths(expression),) if leaves(expression) <= MOST_LEAVES // 3 else (Text("long"),)


def _times(ratio: float | None) -> str:
    return "–" if ratio is None else times(ratio)


def _price(register: Register) -> Table:
    headings = ["No.", "Errors", "Gain", "Low −3 dB", "High −3 dB", "Worst magnitude", "Worst phase"]
    rows: list[tuple[Line, ...]] = []
    for entry in register.entries:
        rows += [_errors(str(entry.number), words, errors) for words, errors in _kinds_of(entry)]
        worst = entry.worst
        if worst is not None:
            cells = ["", "at worst corner", _percent(worst.gain), "", ""]
            cells += [_decibels(worst.magnitude_db), _degrees(worst.phase_deg)]
            rows.append(tuple((Text(cell),) for cell in cells))
    columns = tuple(Column((Text(heading),), place > 1) for place, heading in enumerate(headings))
    return Table("Price: (approximate − exact)/exact", columns, tuple(rows))


def _price_at(register: Register) -> Table | None:
    """Give the errors at the named frequencies; None where there are none."""
    named = next((e.together.at for e in register.entries if e.together), ())
    if not named:
        return None
    headings = ["No.", "Errors", *(f"At {hertz(each.hertz, 3)}" for each in named)]
    rows = [
        _errors_at(str(entry.number), words, errors)
        for entry in register.entries
        for words, errors in _kinds_of(entry)
    ]
    columns = tuple(Column((Text(heading),), place > 1) for place, heading in enumerate(headings))
    return Table("Price at single frequencies: magnitude and phase", columns, tuple(rows))


def _errors_at(number: str, words: str, errors: Errors) -> tuple[Line, ...]:
    at = [f"{_decibels(each.magnitude_db)}, {_degrees(each.phase_deg)}" for each in errors.at]
    return tuple((Text(cell),) for cell in (number, words, *at))


def _kinds_of(entry: Entry) -> list[tuple[str, Errors]]:
    """Give the errors of an assumption: by itself, and together with those before it where that differs."""
    found = []
    if entry.alone is not None and entry.alone is not entry.together:
        found.append(("alone", entry.alone))
    if entry.together is not None:
        found.append(("alone" if entry.alone is entry.together else "with those before", entry.together))
    return found


def _errors(number: str, words: str, errors: Errors) -> tuple[Line, ...]:
    cells = [number, words, _percent(errors.gain), _percent(errors.low_edge), _percent(errors.high_edge)]
    cells += [_decibels(errors.magnitude_db), _degrees(errors.phase_deg)]
    return tuple((Text(cell),) for cell in cells)


def _percent(error: float | None) -> str:
    return "–" if error is None else signed_percent(error)


def _decibels(value: float) -> str:
    return f"{_signed(value)} dB"


def _degrees(value: float) -> str:
    return f"{_signed(value)}°"


def _signed(value: float) -> str:
    if value == 0 or abs(value) < 1e-9:
        return "0"
    return f"{'+' if value > 0 else ''}{engineering(value, RATIO, 3)}"


def _roots(register: Register) -> Table | None:
    """Give what becomes of every pole and zero."""
    rows: list[tuple[Line, ...]] = []
    for entry in register.entries:
        errors = entry.together
        if errors is None:
            continue
        kinds = (("pole", errors.poles, errors.lost_poles), ("zero", errors.zeros, errors.lost_zeros))
        for kind, found, lost in kinds:
            cells = [_root(root) for root in found if root.approximate.imag >= 0]
            cells += [f"{_hertz(root)} is gone" for root in lost if root.imag >= 0]
            if cells:
                rows.append(((Text(str(entry.number)),), (Text(f"{kind}s"),), (Text("; ".join(cells)),)))
    if not rows:
        return None
    columns = tuple(
        Column((Text(heading),)) for heading in ("No.", "Roots", "Exact, and the error of the reduced")
    )
    return Table("Poles and zeros under the assumptions", columns, tuple(rows))


def _root(root: RootError) -> str:
    if root.exact is None or root.error is None:
        return f"{_hertz(root.approximate)} is new"
    return f"{_hertz(root.exact)}: {signed_percent(root.error)}"


def _hertz(root: complex) -> str:
    words = engineering(Fraction(abs(root)) / Fraction("6.283185307179586"), FREQUENCY, 4, unit="Hz")
    return f"{words} (pair)" if root.imag else words


def _method(register: Register) -> str:
    low, high = register.range_hz
    where = f"{hertz(low)} to {hertz(high)}" if low < high else ""
    spans = (
        f"Range of frequencies: {where} ({register.range_says})." if where else f"{register.range_says}."
    )
    return f"{spans} Corners: {register.corners}. Sampling: {register.sampling}."
