"""Where each line comes from: which of those above it follows from, as they are written."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from derive.algebra.modular import PRIME
from derive.errors import DeriveError
from derive.expressions.tree import Expression, Name
from derive.expressions.walk import evaluate_modulo, names_of
from derive.handcheck.facts import circuit_facts, same_nodes
from derive.handcheck.follow import Fact, Follower
from derive.handcheck.judge_truth import Judged, Truth
from derive.handcheck.names import COEFFICIENT, UNKNOWN, NameRefused, Names
from derive.handcheck.points import Point, UndecidedError, stream_of
from derive.handcheck.series import coefficients_modulo
from derive.handcheck.ties import written_out

# At so many points of the symbols a line must follow.
POINTS = 2


class Causes:
    """What the lines of one derivation follow from."""

    def __init__(self, truth: Truth, judged: Sequence[Judged], text: str) -> None:
        self.names = truth.names
        self._truth = truth
        self._usable = [item for item in judged if item.state in ("true", "false", "definition")]
        self._read = [(item, *self._normal(item)) for item in self._usable]
        used = {n for _, left, right in self._read for side in (left, right) for n in names_of(side)}
        self.used = self._closed(used)
        points = truth.points
        if truth.quiet & self.used:
            name = next(iter(sorted(truth.quiet & self.used)))
            points = truth.points_for(Name(name), Name(name))
        self.points = points[:POINTS]
        unknown = self._unknown(self.used)
        numbers = stream_of(self.names, text, "follow")
        facts = self._facts()
        self.followers = [
            Follower(unknown, _values(point, self.used, unknown), facts, numbers) for point in self.points
        ]
        self.unknown = frozenset(unknown)

    def _normal(self, item: Judged) -> tuple[Expression, Expression]:
        left, right = item.sides
        return same_nodes(self.names, left), same_nodes(self.names, right)

    def _closed(self, used: Iterable[str]) -> set[str]:
        """Add what definitions use, and the unknowns of the circuit's own equations."""
        found: set[str] = set()
        pending = [*used, self.names.system.find.name, *(u.name for u in self.names.system.unknowns)]
        pending += [f"v_{node}" for node, _ in self.names.system.known]
        for law in self.names.system.equations:
            pending += [*names_of(law.equation.left), *names_of(law.equation.right)]
        for _, value in self.names.system.known:
            pending += names_of(value)
        while pending:
            name = pending.pop()
            if name in found or not self.names.knows(name):
                continue
            found.add(name)
            meaning = self.names.look(name)
            if meaning.definition is not None:
                pending += names_of(meaning.definition)
            if meaning.kind == "coefficient":
                pending += _coefficient_names(self.names)
        return found

    def _unknown(self, used: set[str]) -> list[str]:
        """Give the names that are left free, without those that are zero in this circuit."""
        found = [name for name in sorted(used) if self._is_unknown(name)]
        return [name for name in found if not _vanishes(name, self.points)]

    def _is_unknown(self, name: str) -> bool:
        meaning = self.names.look(name)
        if meaning.kind == "meaning":
            try:
                inner = names_of(written_out(self.names, Name(name)))
                return any(self.names.look(each).kind in UNKNOWN for each in inner)
            except NameRefused:
                return False
        if meaning.kind == "quantity":
            return name == self.names.system.find.name
        return meaning.kind in UNKNOWN

    def _facts(self) -> list[Fact]:
        facts = circuit_facts(self.names, self.used)
        for name in sorted(self.used):
            meaning = self.names.look(name)
            if meaning.kind == "meaning" and meaning.definition is not None and self._is_unknown(name):
                right = same_nodes(self.names, meaning.definition)
                facts.append(Fact(0, Name(name), right, True, free=True))
        for item, left, right in self._read:
            free = item.state == "definition"
            facts.append(Fact(item.line.number, left, right, item.state != "false", free=free))
        return facts

    def sources(
        self, left: Expression, right: Expression, above: int, *, wrong: bool
    ) -> tuple[int, ...] | None:
        """Give the numbers of the lines above from which a line follows; None where it does not.

        Given: whether it is to follow from wrong lines, or from right ones only.
        """
        left, right = same_nodes(self.names, left), same_nodes(self.names, right)
        if not {*names_of(left), *names_of(right)} <= self.used:
            return None
        found = self.followers[0].sources(left, right, above, wrong=wrong)
        if found is not None and self.followers[1].sources(left, right, above, wrong=wrong) is not None:
            return found
        return self._by_comparison(left, right, above, wrong=wrong)

    def _by_comparison(
        self, left: Expression, right: Expression, above: int, *, wrong: bool
    ) -> tuple[int, ...] | None:
        """Compare coefficients: K, a_k and b_k read off a line for the wanted quantity."""
        names = {*names_of(left), *names_of(right)}
        wanted = {name for name in names & self.unknown if self.names.look(name).kind == "coefficient"}
        if not wanted or wanted != names & self.unknown:
            return None
        for item, *sides in reversed(self._read):
            if item.line.number >= above or (item.state == "false") != wrong:
                continue
            response = self._response(sides)
            if response is None:
                continue
            if all(self._compared(point, response, wanted, (left, right)) for point in self.points):
                return (item.line.number,)
        return None

    def _response(self, sides: Sequence[Expression]) -> Expression | None:
        """Give what a line says that the wanted quantity is, in symbols and s; None for another line."""
        for side, other in (sides, sides[::-1]):
            if side == Name(self.names.system.find.name):
                try:
                    written = written_out(self.names, other)
                except NameRefused:
                    return None
                if not set(names_of(written)) & self.unknown:
                    return written
        return None

    def _compared(
        self, point: Point, response: Expression, wanted: set[str], sides: tuple[Expression, Expression]
    ) -> bool:
        values = {name: point[name] for name in names_of(response)}
        found = coefficients_modulo(response, values)
        if found is None:
            return False
        known = {name: point[name] for side in sides for name in names_of(side) if name not in wanted}
        known |= {name: found.get(name, 0) for name in wanted}
        try:
            left, right = (evaluate_modulo(side, known, PRIME) for side in sides)
        except (ZeroDivisionError, DeriveError):
            return False
        return left == right

    def says_nothing(self, left: Expression, right: Expression) -> bool:
        """Whether a line holds whatever its unknowns are, though it has some."""
        left, right = same_nodes(self.names, left), same_nodes(self.names, right)
        names = {*names_of(left), *names_of(right)}
        if left == right:
            return True
        if not names & self.unknown or not names <= self.used:
            return False
        polynomial = self.followers[0].polynomial(left, right)
        return polynomial is not None and bool(polynomial == 0)

    def after(self, above: int) -> list[dict[str, int]]:
        """Give points at which the lines above hold as written, node voltages under all their names."""
        found = []
        for follower in self.followers:
            values = follower.point_after(above)
            if values is None:
                return []
            for old, new in self.names.moved.items():
                values.setdefault(f"v_{old}", values.get(f"v_{new}", 0))
            found.append(values)
        return found


def _coefficient_names(names: Names) -> list[str]:
    form = names.solution.form
    found = ["K"]
    found += [f"a_{k}" for k in range(1, len(form.numerator))]
    found += [f"b_{k}" for k in range(1, len(form.denominator))]
    return [n for n in found if n == "K" or COEFFICIENT.fullmatch(n)]


def _vanishes(name: str, points: Sequence[Point]) -> bool:
    try:
        return all(point[name] == 0 for point in points)
    except (NameRefused, ZeroDivisionError, UndecidedError, DeriveError):
        return False


def _values(point: Point, used: Iterable[str], unknown: Sequence[str]) -> dict[str, int]:
    values = dict(point.values)
    for name in used:
        if name in unknown:
            continue
        try:
            values[name] = point[name]
        except (NameRefused, ZeroDivisionError, UndecidedError, DeriveError):
            continue
    return {name: value for name, value in values.items() if name not in unknown}
