"""Short lines: what is too long for one is given in several, each with a name that says what it is."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field

from derive.approximate.dimensions import UnlikeError, dimension_of
from derive.expressions.tree import Expression, Name, Number
from derive.expressions.unicode_text import to_unicode
from derive.expressions.walk import children_of, with_children
from derive.quantities.dimension import CAPACITANCE, CONDUCTANCE, RATIO, RESISTANCE, TIME, Dimension

# The letter of a name by its dimension: common practice.
INITIALS = {RESISTANCE: "R", CONDUCTANCE: "G", CAPACITANCE: "C", RATIO: "A", TIME: "tau"}
OTHER = "X"
LETTERS = "abcdefghijklmnopqrstuvwxyz"
# So many characters are one printed line, with what stands left of them.
WIDTH = 88
# What is shorter is read where it stands.
WORTH = 12
# A name for a resistance is understood sooner than one for a number.
WEIGHTS = {RESISTANCE: 3, CONDUCTANCE: 3, CAPACITANCE: 3, TIME: 2, RATIO: 1}
NUMERALS = ((10, "X"), (9, "IX"), (5, "V"), (4, "IV"), (1, "I"))


@dataclass(slots=True)
class Lines:
    """Lines in the order in which they are defined; each may use the circuit's symbols and earlier names.

    `taken` are names that have a meaning already; `dimensions` those of all names. `words` say what a name means.
    """

    taken: set[str]
    dimensions: dict[str, Dimension]
    lines: list[tuple[str, Expression]] = field(default_factory=list)
    words: dict[str, str] = field(default_factory=dict)

    def name(self, value: Expression, stem: str, words: str = "") -> Name:
        """Give a value a name, in as many lines as it needs."""
        name = self._fresh(f"{self._initial(value)}_{stem}")
        short = self.fitted(value, stem)
        self.lines.append((name, short))
        dimension = self.dimension(value)
        if dimension is not None:
            self.dimensions[name] = dimension
        if words:
            self.words[name] = words
        return Name(name)

    def fitted(self, value: Expression, stem: str) -> Expression:
        """Give a value that fits one line, with names for as much of it as need be."""
        while len(to_unicode(value)) > WIDTH:
            part = self._best_part(value)
            if part is None:
                break
            value = replaced(value, part, self.part(part, stem))
        return value

    def part(self, value: Expression, stem: str, words: str = "") -> Name:
        """Give a part of a value a name: the value's own, with the next letter behind."""
        initial = self._initial(value)
        free = (letter for letter in LETTERS if f"{initial}_{stem}{letter}" not in self.taken)
        return self.name(value, stem + next(free, "z"), words)

    def dimension(self, value: Expression) -> Dimension | None:
        """Give the dimension of a value; None where it has none to be said."""
        try:
            return dimension_of(value, self.dimensions)
        except (UnlikeError, KeyError):
            return None

    def _initial(self, value: Expression) -> str:
        dimension = self.dimension(value)
        return OTHER if dimension is None else INITIALS.get(dimension, OTHER)

    def _fresh(self, name: str) -> str:
        while name in self.taken:
            name += "_j"
        self.taken.add(name)
        return name

    def _best_part(self, value: Expression) -> Expression | None:
        """Give the part of a value that is worth a name most: long, often met, and of a known kind."""
        counts: dict[Expression, int] = {}
        for part in _parts(value):
            counts[part] = counts.get(part, 0) + 1
        best, most = None, 0
        for part, count in counts.items():
            length = len(to_unicode(part))
            if not WORTH <= length <= WIDTH:
                continue
            dimension = self.dimension(part)
            weight = 0 if dimension is None else WEIGHTS.get(dimension, 0)
            worth = weight * (length - WORTH // 2) * count
            if worth > most:
                best, most = part, worth
        return best


def numeral(number: int) -> str:
    """Give a Roman numeral, up to 39."""
    found = ""
    for value, letters in NUMERALS:
        while number >= value:
            found, number = found + letters, number - value
    return found


def replaced(value: Expression, part: Expression, name: Expression) -> Expression:
    """Put a name wherever a part stands."""
    if value == part:
        return name
    return with_children(value, tuple(replaced(child, part, name) for child in children_of(value)))


def _parts(value: Expression) -> Iterator[Expression]:
    """Give every part below a value that is more than a name or a number."""
    for child in children_of(value):
        if not isinstance(child, Name | Number):
            yield child
            yield from _parts(child)
