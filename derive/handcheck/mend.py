"""The bench on which changes to wrong lines are tried, made ready once for a derivation."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

from derive.errors import DeriveError
from derive.expressions.tree import Expression, Name, Negative, Sum
from derive.expressions.walk import names_of
from derive.handcheck.causes import Causes
from derive.handcheck.differ import Finding, looked_up
from derive.handcheck.dimensions import Dimensions, dimension_remarks
from derive.handcheck.judge_truth import Judged, Truth
from derive.handcheck.lexicon import STRANGE, Lexicon, add_parts, build
from derive.handcheck.names import NameRefused
from derive.handcheck.points import UndecidedError, holds
from derive.handcheck.report import Edit, HandFile
from derive.handcheck.search import Bench, find_edits, multipliers_of
from derive.quantities.dimension import RESISTANCE
from derive.readable.measure import leaves

MOST_TERMS = 400


class Mender:
    """Finds the changes that mend the wrong lines of one derivation."""

    def __init__(self, truth: Truth, causes: Causes, judged: Sequence[Judged], hand: HandFile) -> None:
        self._truth = truth
        self._causes = causes
        self._judged = judged
        self._hand = hand
        self._names = truth.names
        self._dimensions = Dimensions(truth.names)
        self._base: Lexicon | None = None
        self._values: dict[str, int] = {}

    def edits(self, left: Expression, right: Expression, number: int) -> tuple[Edit, ...]:
        """Give the changes that make a line true; where lines above are wrong, also those that make it follow."""
        points = self._truth.points_for(left, right)
        values = self._known(points[0].values, left, right)
        bench = self._bench(values, number, left, right)
        found = find_edits(left, right, values, bench)
        if any(item.state == "false" and item.line.number < number for item in self._judged):
            known = {edit.line for edit in found}
            more = self._following(left, right, number)
            found = (*found, *(edit for edit in more if edit.line not in known))
        return found

    def differ(self, left: Expression, right: Expression, number: int) -> Finding:
        """Say how the sides of a line differ, unknowns left in it."""
        values = self._known(self._truth.points_for(left, right)[0].values, left, right)
        used = dict.fromkeys((*names_of(left), *names_of(right)))
        unknown = [n for n in used if n in self._causes.unknown or n.startswith("v_")]
        lexicon = self._lexicon(values, number)
        return looked_up(left, right, values, lexicon, unknown, self._truth.proves)

    def _following(self, left: Expression, right: Expression, number: int) -> tuple[Edit, ...]:
        points = self._causes.after(number)
        if len(points) < 2:
            return ()
        values = self._known(points[0], left, right)

        def proved(first: Expression, second: Expression) -> bool:
            known = [self._known(point, first, second) for point in points]
            try:
                return bool(holds(first, second, known))
            except (DeriveError, KeyError):
                return False

        bench = self._bench(values, number, left, right)
        wrong = Bench(
            bench.lexicon,
            bench.multipliers,
            proved,
            bench.idle,
            lambda a, b: self._causes.sources(a, b, number, wrong=True) is not None,
            bench.consistent,
            bench.dimension,
            bench.pool,
            bench.is_resistance,
        )
        found: list[Edit] = []
        for edit in find_edits(left, right, values, wrong):
            line = edit.line
            true = self._causes.sources(line.left, line.right, number, wrong=False) is not None
            found.append(edit if true else replace(edit, makes="follow"))
        return tuple(found)

    def _known(self, values: Mapping[str, int], left: Expression, right: Expression) -> dict[str, int]:
        """Give the values of all names that may be needed; what the circuit leaves open is left out."""
        known = dict(values)
        point = self._truth.points_for(left, right)[0]
        wanted = [
            *self._names.pool(),
            *self._names.voltages(),
            *names_of(left),
            *names_of(right),
            "s",
            "pi",
        ]
        for name in wanted:
            if name in known:
                continue
            try:
                known[name] = point[name]
            except (NameRefused, ZeroDivisionError, UndecidedError, DeriveError):
                continue
        return known

    def _bench(
        self, values: Mapping[str, int], number: int, left: Expression, right: Expression
    ) -> Bench:
        lexicon = self._lexicon(values, number)
        used = {*names_of(left), *names_of(right)}
        familiar = [n for n in self._familiar() if n in values and n not in self._causes.unknown]
        factors = [n for n in familiar if n in used] + [n for n in familiar if n not in used]
        multipliers = multipliers_of(["s", *[n for n in factors if n != "s"]][:12], values)
        pool = tuple(dict.fromkeys((*familiar, *self._names.pool(), *self._names.voltages())))
        return Bench(
            lexicon,
            multipliers,
            self._truth.proves,
            self._causes.says_nothing,
            lambda a, b: self._causes.sources(a, b, number, wrong=False) is not None,
            self._usual,
            self._dimensions.of_name,
            pool,
            lambda a: Dimensions(self._names).of(a) == RESISTANCE,
        )

    def _usual(self, left: Expression, right: Expression) -> bool:
        """Whether a line adds like to like, in units that lines are written in: not in 1/A, say."""
        if dimension_remarks(self._names, left, right):
            return False
        found = Dimensions(self._names).of(left)
        return found is None or found.volt >= 0

    def _familiar(self) -> list[str]:
        """Give the names that the derivation uses, in order of appearance."""
        found: dict[str, None] = {}
        for line in self._hand.lines:
            for side in (line.left, line.right):
                for name in names_of(side) if side is not None else ():
                    found[name] = None
        for each in self._hand.define:
            found[each.name] = None
        return list(found)

    def _lexicon(self, values: Mapping[str, int], number: int) -> Lexicon:
        """Give the short expressions at a point: those of the symbols, and those that hold unknowns."""
        unknown = self._causes.unknown
        familiar = self._familiar()
        if self._base is None:
            names = [
                (name, self._dimensions.of_name(name))
                for name in self._names.pool()
                if name in values and name not in unknown
            ]
            self._base = build(names, values, familiar, self._written(number))
        lexicon = self._base.copy()
        voltages = [name for name in self._names.voltages() if values.get(name)]
        voltages.sort(key=lambda name: name not in familiar)
        for name in self._names.drives:
            if values.get(name):
                # A node that a drive ties goes by the drive's name rather.
                lexicon.add(Name(name), values[name], -STRANGE)
        for name in voltages:
            lexicon.add(Name(name), values[name])
        for name in familiar:
            if name.startswith("i_") and values.get(name):
                lexicon.add(Name(name), values[name])
        for place, a in enumerate(voltages[:12]):
            for b in voltages[place + 1 : 12]:
                lexicon.add(Sum((Name(a), Negative(Name(b)))), values[a] - values[b])
        for law in self._names.system.equations:
            for term in law.terms:
                lexicon_part = term.current
                add_parts(lexicon, Sum((lexicon_part, lexicon_part)), values)
        return lexicon

    def _written(self, number: int) -> list[Expression]:
        """Give what the derivation and the machine's result are made of."""
        found: list[Expression] = []
        for line in self._hand.lines:
            found += [side for side in (line.left, line.right) if side is not None]
        for each in self._hand.define:
            found.append(each.meaning)
        solution = self._names.solution
        form, readable = solution.form, solution.readable
        found += [form.gain, *form.numerator, *form.denominator]
        if readable is not None:
            found += readable.expressions
        return [expression for expression in found if leaves(expression) <= MOST_TERMS * 10]
