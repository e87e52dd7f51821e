"""What each step says: one sentence a rule, with the equations and names that it is about."""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping

from derive.bias import steps as bias_steps
from derive.eliminate.derivation import Derivation, Step
from derive.eliminate.rules import (
    cancel,
    clear,
    current_law,
    form_ratio,
    multiply_out,
    name_entry,
    name_ratio,
    solve_for,
    substitute,
    take_off,
    wanted,
    weigh,
    write_short,
)
from derive.expressions.text import to_text
from derive.expressions.tree import ONE, Expression, Name, Negative
from derive.expressions.walk import term_count
from derive.normalise import normalise
from derive.sheet.document import Inline, Line, Maths, Reference, Text

NAME_LIKE = re.compile(r"([(|]?)([A-Za-z]+[0-9]*_[A-Za-z0-9_]+)([|),.;:]*)")
# A divisor of more terms than this stands in the equation above anyway; it is not repeated.
STATED_TERMS = 6
Sentence = Callable[["Wording", Step], Line]


class Wording:
    """The sentences of one derivation; `label` turns a step's number into what the sheet prints.

    `place` tells derivations of one quantity apart, such as by the band.
    """

    def __init__(self, derivation: Derivation, prefix: str = "", place: str = "") -> None:
        self.derivation = derivation
        self.prefix = prefix
        self.place = place
        system = derivation.system
        names = [symbol.name for symbol in system.small_signal.symbols]
        names += [drive.name for drive in system.small_signal.drives]
        names += [unknown.name for unknown in system.unknowns]
        self.names = frozenset([*names, system.input, system.find.name])

    def label(self, number: int) -> str:
        """Give a step's number as printed."""
        return f"{self.prefix}{number}"

    def anchor(self, number: int) -> str:
        """Give the anchor of a step's equation."""
        name = self.derivation.system.find.name
        return f"{name}-{self.place}-{number}" if self.place else f"{name}-{number}"

    def reference(self, number: int) -> Reference:
        """Refer to a step's equation."""
        return Reference(self.anchor(number), self.label(number))

    def says(self, step: Step) -> Line:
        """Give the sentence of a step."""
        if step.rule in bias_steps.SENTENCES:
            return marked(bias_steps.SENTENCES[step.rule])
        return joined(SENTENCES[step.rule](self, step))

    def with_names(self, words: str) -> Line:
        """Set the names of symbols among words as maths."""
        line: list[Inline] = []
        for word in words.split(" "):
            bare = word.rstrip(",")
            if bare in self.names:
                line += [Maths(Name(bare)), Text(word[len(bare) :] + " ")]
            else:
                line.append(Text(word + " "))
        last = line.pop()
        return (*line, Text(last.text.rstrip(" "))) if isinstance(last, Text) else (*line, last)


def marked(words: str) -> Line:
    """Set every word that is written like a name with a subscript, such as V_CC, as maths."""
    line: list[Inline] = []
    for word in re.split(r"( )", words):
        found = NAME_LIKE.fullmatch(word)
        if found:
            line += [Text(found[1]), Maths(Name(found[2])), Text(found[3])]
        else:
            line.append(Text(word))
    return joined(tuple(line))


def told(words: str) -> Line:
    """Set the origin of a device's parameter: as `marked`, and a current gain by its letter."""
    before, sign, after = words.partition("beta = ")
    if not sign:
        return marked(words)
    return joined((*marked(before), Maths(Name("beta")), Text(" = "), *marked(after)))


def joined(line: Line) -> Line:
    """Join neighbouring words into one piece, and leave out empty ones."""
    result: list[Inline] = []
    for piece in line:
        if isinstance(piece, Text) and result and isinstance(result[-1], Text):
            result[-1] = Text(result[-1].text + piece.text)
        elif not (isinstance(piece, Text) and not piece.text):
            result.append(piece)
    return tuple(result)


def plain_line(line: Line) -> str:
    """Give a line as plain text; maths in the user's own language."""
    return "".join(_plain(piece) for piece in line)


def _plain(piece: Inline) -> str:
    if isinstance(piece, Maths):
        return to_text(piece.content)
    if isinstance(piece, Reference):
        return f"({piece.number})"
    return piece.text


def _used(wording: Wording, step: Step, place: int = 0) -> Reference:
    certificate = step.certificate
    return wording.reference(certificate.uses[place][0] if certificate else step.number)


def _not_zero(expression: Expression | None) -> Line:
    if expression is None:
        return ()
    if term_count(expression) > STATED_TERMS:
        return (Text(" The divisor is not zero."),)
    return (Text(" Divisor, not zero: "), Maths(expression), Text("."))


def _wanted(wording: Wording, step: Step) -> Line:
    system = wording.derivation.system
    tail = ""
    if system.find.quantity == "impedance":
        tail = " (a test current, all drives at zero)"
    return (
        Text("Sought: "),
        Maths(Name(system.find.name)),
        Text(", that is "),
        Maths(Name(system.wanted)),
        Text(" per "),
        Maths(Name(system.input)),
        Text(f"{tail}."),
    )


def _weigh(wording: Wording, step: Step) -> Line:
    drive, common = Name(step.subject or ""), Name(wording.derivation.system.input)
    return Text("Drive "), Maths(drive), Text(" in terms of the common input "), Maths(common), Text(".")


def _current_law(wording: Wording, step: Step) -> Line:
    equation = wording.derivation.system.equations[step.row or 0]
    words = equation.meaning
    return (*wording.with_names(words[:1].upper() + words[1:]), Text(": their sum is zero."))


def _law(wording: Wording, step: Step) -> Line:
    words = wording.derivation.system.equations[step.row or 0].meaning
    return (*wording.with_names(words[:1].upper() + words[1:]), Text("."))


def _multiply_out(wording: Wording, step: Step) -> Line:
    used = _used(wording, step)
    head = (used, *_times(step.factor, "a factor"), Text(" multiplied out and collected."))
    return (*head, *_not_zero(step.nonzero))


def _times(factor: Expression | None, otherwise: str) -> Line:
    """Say by what was multiplied; a long factor is not repeated."""
    if factor is None:
        return ()
    if term_count(factor) > STATED_TERMS:
        return (Text(f" times {otherwise},"),)
    return Text(" times "), Maths(factor), Text(",")


def _factor(factor: Expression) -> Line:
    """Name a common factor; one too long for a sentence by its number of terms."""
    count = term_count(factor)
    if count > 2 * STATED_TERMS:
        return (Text(f"common factor, which has {count} terms and stands in the step's proof"),)
    return Text("common factor "), Maths(factor)


def _solve_for(wording: Wording, step: Step) -> Line:
    head = (_used(wording, step), Text(" solved for "), Maths(Name(step.subject or "")), Text("."))
    return (*head, *_not_zero(step.nonzero))


def _substitute(wording: Wording, step: Step) -> Line:
    solved, target = _used(wording, step, 1), _used(wording, step)
    return solved, Text(" put into "), target, Text(" for "), Maths(Name(step.subject or "")), Text(".")


def _clear(wording: Wording, step: Step) -> Line:
    head = (_used(wording, step), *_times(step.factor, "its denominator"))
    head = (*head, Text(" multiplied out and collected"))
    divisor = step.certificate.divisor if step.certificate else ONE
    if divisor == ONE:
        return (*head, Text("."))
    if divisor == Negative(ONE):
        return (*head, Text(", with all signs turned."))
    return (*head, Text("; the "), *_factor(divisor), Text(" cancelled."))


def _cancel(wording: Wording, step: Step) -> Line:
    return (
        _used(wording, step),
        Text(" divided by its "),
        *_factor(ONE if step.factor is None else step.factor),
        Text("."),
    )


def _form_ratio(wording: Wording, step: Step) -> Line:
    system = wording.derivation.system
    if step.certificate and step.certificate.divisor == Name(system.input):
        return _used(wording, step), Text(" divided by "), Maths(Name(system.input)), Text(".")
    divided = Text(" divided by the coefficient of ")
    head: Line = (_used(wording, step), divided, Maths(Name(system.wanted)), Text(" and by "))
    return (*head, Maths(Name(system.input)), Text("."), *_not_zero(step.nonzero))


def _reduce(wording: Wording, step: Step) -> Line:
    return _used(wording, step), Text(" with the factors cancelled that top and bottom share.")


def _name_entry(wording: Wording, step: Step) -> Line:
    return (Text("A short name for an entry of the equations."),)


def _name_ratio(wording: Wording, step: Step) -> Line:
    return (Text("The multiple that takes an unknown out."), *_not_zero(step.nonzero))


def _write_short(wording: Wording, step: Step) -> Line:
    return _used(wording, step), Text(" collected by its unknowns, with these names.")


def _take_off(wording: Wording, step: Step) -> Line:
    head: Line = (_used(wording, step), Text(" less "))
    if step.factor not in (None, ONE):
        head = (*head, Maths(step.factor or ONE), Text(" times "))
    falls = (Text(": "), Maths(Name(step.subject or "")), Text(" falls out"))
    turned = step.certificate is not None and step.certificate.divisor == Negative(ONE)
    return (*head, _used(wording, step, 1), *falls, Text(", all signs turned." if turned else "."))


def _gain(wording: Wording, step: Step) -> Line:
    return (Text("The gain: the lowest coefficient of the numerator over that of the denominator."),)


def _coefficient(wording: Wording, step: Step) -> Line:
    name = step.subject or ""
    which = "numerator" if name.startswith("a_") else "denominator"
    return (Text(f"Coefficient of the {which}, divided by its lowest one."),)


def _normal(wording: Wording, step: Step) -> Line:
    return _used(wording, step), Text(" in normal form, with the names just given.")


SENTENCES: Mapping[str, Sentence] = {
    wanted.NAME: _wanted,
    weigh.NAME: _weigh,
    current_law.NAME: _current_law,
    current_law.LAW: _law,
    multiply_out.NAME: _multiply_out,
    solve_for.NAME: _solve_for,
    substitute.NAME: _substitute,
    clear.NAME: _clear,
    cancel.NAME: _cancel,
    form_ratio.NAME: _form_ratio,
    form_ratio.REDUCE: _reduce,
    name_entry.NAME: _name_entry,
    name_ratio.NAME: _name_ratio,
    write_short.NAME: _write_short,
    take_off.NAME: _take_off,
    normalise.GAIN: _gain,
    normalise.COEFFICIENT: _coefficient,
    normalise.NORMAL: _normal,
}
