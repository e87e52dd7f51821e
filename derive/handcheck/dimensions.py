"""The dimensions of a line, term by term: where unlike things are added, or set equal."""

from __future__ import annotations

from dataclasses import dataclass, field

from derive.check.roads.dimensions import in_words
from derive.expressions.tree import (
    Expression,
    Name,
    Negative,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Root,
    Sum,
)
from derive.expressions.walk import children_of
from derive.handcheck.names import NameRefused, Names
from derive.handcheck.report import DimensionRemark, Way
from derive.quantities.dimension import RATIO, Dimension

# A definition within a definition, and so on, is followed so far.
DEEPEST = 40


@dataclass(slots=True)
class Dimensions:
    """What names are in, and the remarks on the lines that were looked at."""

    names: Names
    remarks: list[DimensionRemark] = field(default_factory=list)
    known: dict[str, Dimension | None] = field(default_factory=dict)

    def of_name(self, name: str, depth: int = 0) -> Dimension | None:
        """Give what a name is in, None where that is not known."""
        if name in self.known:
            return self.known[name]
        try:
            meaning = self.names.look(name)
        except NameRefused:
            return None
        found = meaning.dimension
        if found is None and meaning.definition is not None and depth < DEEPEST:
            self.known[name] = None
            found = Dimensions(self.names, [], self.known).of(meaning.definition, (), depth + 1)
        self.known[name] = found
        return found

    def of(self, node: Expression, way: Way = (), depth: int = 0) -> Dimension | None:
        """Give what an expression is in, with remarks on what is wrong in it; None for zero or not known."""
        if isinstance(node, Number):
            return None if node.value == 0 else RATIO
        if isinstance(node, Name):
            return self.of_name(node.text, depth)
        parts = [self.of(c, (*way, place), depth) for place, c in enumerate(children_of(node))]
        if isinstance(node, Sum | Parallel):
            return self._alike(node, parts, way)
        if isinstance(node, Product):
            total = RATIO
            for part in parts:
                if part is None:
                    return None
                total = total * part
            return total
        if isinstance(node, Negative):
            return parts[0]
        first = parts[0]
        if first is None:
            return None
        if isinstance(node, Quotient):
            return None if parts[1] is None else first / parts[1]
        if isinstance(node, Power):
            return first**node.exponent
        return self._root(first, way) if isinstance(node, Root) else None

    def _alike(self, node: Expression, parts: list[Dimension | None], way: Way) -> Dimension | None:
        known = [(place, part) for place, part in enumerate(parts) if part is not None]
        if not known:
            return None
        groups: dict[Dimension, list[int]] = {}
        for place, part in known:
            groups.setdefault(part, []).append(place)
        first = max(groups, key=lambda part: len(groups[part]))
        for part, at in groups.items():
            if part == first:
                continue
            what = "stands in parallel with" if isinstance(node, Parallel) else "is added to"
            for place in at:
                says = f"this is in {in_words(part)}, and {what} {in_words(first)}"
                self.remarks.append(DimensionRemark((*way, place), says))
        return first if len(groups) == 1 else None

    def _root(self, inside: Dimension, way: Way) -> Dimension | None:
        powers = (inside.volt, inside.ohm, inside.second)
        if any(power % 2 for power in powers):
            self.remarks.append(DimensionRemark(way, f"this is the root of {in_words(inside)}"))
            return None
        return Dimension(*(power // 2 for power in powers))


def dimension_remarks(names: Names, left: Expression, right: Expression) -> tuple[DimensionRemark, ...]:
    """Give where a line adds unlike things or sets them equal; () where it does not."""
    dimensions = Dimensions(names)
    first, second = dimensions.of(left, (0,)), dimensions.of(right, (1,))
    if not dimensions.remarks and first is not None and second is not None and first != second:
        says = f"the left side is in {in_words(first)}, the right side in {in_words(second)}"
        dimensions.remarks.append(DimensionRemark((), says))
    return tuple(dimensions.remarks)
