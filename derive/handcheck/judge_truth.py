"""The truth of every line, in order; names that lines define are learned on the way."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from derive.errors import DeriveError
from derive.expressions.tree import Expression, Name
from derive.expressions.walk import names_of
from derive.handcheck.bounds import Bounds
from derive.handcheck.dimensions import Dimensions
from derive.handcheck.names import NameRefused, Names
from derive.handcheck.points import Point, UndecidedError, holds, points_of, stream_of
from derive.handcheck.report import HandLine
from derive.handcheck.roots import has_root, holds_with_roots
from derive.handcheck.solved import Solved
from derive.handcheck.ties import Ties

State = Literal["true", "false", "definition", "approximate", "unread", "refused", "undecided"]


@dataclass(frozen=True, slots=True)
class Judged:
    """A line with its truth; `why` and `cure` where it was not judged, `proof` where it was."""

    line: HandLine
    state: State
    proof: str = ""
    why: str = ""
    cure: str = ""
    name: str = ""

    @property
    def sides(self) -> tuple[Expression, Expression]:
        """Both sides of a line that could be read."""
        left, right = self.line.left, self.line.right
        if left is None or right is None:
            raise ValueError("this line could not be read")
        return left, right


class Truth:
    """Judges lines at random points of the circuit."""

    def __init__(self, names: Names, ties: Ties, text: str, solved: Solved) -> None:
        self.names = names
        self.ties = ties
        self._text = text
        self._solved = solved
        self._bounds = Bounds(names, ties)
        self.points = points_of(names, ties, stream_of(names, text, "truth"))
        self._alive: tuple[Point, ...] | None = None
        try:
            agrees = all(point.agrees() for point in self.points)
        except ZeroDivisionError:
            raise UndecidedError("under these ties the response has no value") from None
        if not agrees:
            raise UndecidedError("the machine's own result does not agree with the circuit")

    @property
    def quiet(self) -> frozenset[str]:
        """The drives that the wanted quantity is not taken per."""
        return frozenset(n for n in self.names.drives if n not in dict(self.names.system.weights))

    def points_for(self, left: Expression, right: Expression) -> tuple[Point, ...]:
        """Give the points for a line: with all drives at work where it names one that is else at zero."""
        if not self.quiet & {*names_of(left), *names_of(right)}:
            return self.points
        if self._alive is None:
            numbers = stream_of(self.names, self._text, "all drives")
            self._alive = points_of(self.names, self.ties, numbers, all_drives=True)
        return self._alive

    def judge(self, line: HandLine) -> Judged:
        """Judge one line; the names that it may define are known afterwards."""
        if line.fault is not None or line.left is None or line.right is None:
            fault = line.fault
            return Judged(
                line, "unread", why=fault.what if fault else "", cure=fault.cure if fault else ""
            )
        if line.relation == "~":
            return Judged(line, "approximate")
        new = self._defined(line.left, line.right)
        if new is not None:
            name, meaning = new
            try:
                dimension = Dimensions(self.names).of(meaning)
                for used in names_of(meaning):
                    self.names.look(used)
            except NameRefused as refused:
                return Judged(line, "refused", why=refused.what, cure=refused.cure)
            self.names.learn(name, meaning, dimension)
            return Judged(line, "definition", name=name)
        return self._tried(line, line.left, line.right)

    def _defined(self, left: Expression, right: Expression) -> tuple[str, Expression] | None:
        for side, other in ((left, right), (right, left)):
            if (
                isinstance(side, Name)
                and side.text not in names_of(other)
                and self.names.is_new(side.text)
            ):
                return side.text, other
        return None

    def _tried(self, line: HandLine, left: Expression, right: Expression) -> Judged:
        try:
            if has_root(self.names, left) or has_root(self.names, right):
                verdict, how = holds_with_roots(self._solved, self._text, left, right)
                if verdict is None:
                    return Judged(line, "undecided", why=how)
                return Judged(line, "true" if verdict else "false", proof=how)
            points = self.points_for(left, right)
            found = holds(left, right, points)
        except NameRefused as refused:
            return Judged(line, "refused", why=refused.what, cure=refused.cure)
        except (UndecidedError, DeriveError) as error:
            return Judged(line, "undecided", why=str(error))
        if found is None:
            return Judged(line, "undecided", why="a divisor in it is zero for all values")
        if found:
            return Judged(line, "true", proof=self._bounds.said(left, right, len(points)))
        if self.ties.pivots and self._holds_reduced(left, right, points):
            proof = f"with the coefficients in lowest terms under the ties: equal at {len(points)} random points"
            return Judged(line, "true", proof=proof)
        return Judged(line, "false", proof="the sides differ at a random point modulo 2⁶¹ − 1")

    def _holds_reduced(self, left: Expression, right: Expression, points: Sequence[Point]) -> bool:
        """Whether a line on K, a_k or b_k holds once what top and bottom share under the ties is cancelled."""
        used = {*names_of(left), *names_of(right)}
        wanted = [name for name in used if self.names.look(name).kind == "coefficient"]
        if not wanted:
            return False
        for point in points:
            found = point.reduced_coefficients()
            if found is None:
                return False
            values = {name: point[name] for name in used} | {name: found.get(name, 0) for name in wanted}
            if holds(left, right, [values]) is not True:
                return False
        return True

    def proves(self, left: Expression, right: Expression) -> bool:
        """Whether a changed line is true."""
        try:
            return bool(holds(left, right, self.points_for(left, right)))
        except (NameRefused, DeriveError, UndecidedError):
            return False
