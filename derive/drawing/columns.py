"""The columns of a drawing as they fill: which rows of each are taken."""

from __future__ import annotations

Span = tuple[float, float, str, str]  # lowest row, highest row, the node there and there


class Columns:
    """Rows that are taken, column by column; two items may touch where both ends are on one node."""

    def __init__(self) -> None:
        self._taken: dict[int, list[Span]] = {}

    @property
    def end(self) -> int:
        """The first column to the right of all that are in use."""
        return max(self._taken, default=-1) + 1

    def is_used(self, column: int) -> bool:
        """Say whether anything stands in a column."""
        return column in self._taken

    def is_free(self, column: int, low: float, high: float, nodes: tuple[str, str] = ("", "")) -> bool:
        """Say whether rows of a column are free for an item whose lower and upper end are on these nodes."""
        for lo, hi, lower, upper in self._taken.get(column, []):
            if low < hi and lo < high:
                return False
            if (low == hi and nodes[0] != upper) or (lo == high and nodes[1] != lower):
                return False
        return True

    def lies_free(self, column: int, row: float) -> bool:
        """Say whether an item may lie on a row of a column."""
        return self.is_free(column, row - LYING, row + LYING)

    def first_free(self, begin: int, low: float, high: float, nodes: tuple[str, str] = ("", "")) -> int:
        """Give the first column from `begin` on where rows are free."""
        column = begin
        while not self.is_free(column, low, high, nodes):
            column += 1
        return column

    def take(self, column: int, low: float, high: float, nodes: tuple[str, str] = ("", "")) -> None:
        """Take rows of a column."""
        self._taken.setdefault(column, []).append((low, high, *nodes))

    def last_on(self, row: float) -> int:
        """Give the last column in which something is on a row; −1 where there is none."""
        used = (c for c, spans in self._taken.items() if any(lo <= row <= hi for lo, hi, *_ in spans))
        return max(used, default=-1)

    def blocked(self, row: float, begin: int, end: int) -> int:
        """Count the columns between in which something stands in the way along a row."""
        return sum(not self.is_free(column, row - 0.3, row + 0.3) for column in range(begin, end))


LYING = 0.9  # rows above and below its own that an item takes when it lies
